package action

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
)

// Back writes slice n−1 to before, given the slices n and n+1: it solves the
// residual of slice n for it,
//
//	uρ₋/k² (φ(n−1) − φ(n)) = uρ₊/k² (φ(n) − φ(n+1)) + f(φ(n)).
//
// At held and odd ends before must hold the value of slice n−1 already; it is
// left alone. It panics for an equation with losses or open ends, which forgets
// its past: what Step has damped would grow.
func (m *March) Back(before, now, next field.Slice, n int) {
	s := m.s
	if part := s.lossy(); part != "" {
		panic(fmt.Sprintf("action: march back in time with %s", part))
	}
	t := s.block.Time.At(n)
	kk := s.block.Time.Step * s.block.Time.Step
	s.wave.Potential.Slope(m.w.slope, now, s.at(t))
	lo, hi := 0, len(s.xs)
	if s.HeldLeft() {
		lo = 1
	}
	if s.HeldRight() {
		hi--
	}
	for c := range s.wave.Components {
		to, at, after := before.Component(c), now.Component(c), next.Component(c)
		f := m.w.tmp
		clear(f)
		s.addForce(f, m.w, at, m.w.slope.Component(c), c, n, t, 1)
		rb, ra := s.rhoAround(m.w, c, n)
		for i := lo; i < hi; i++ {
			to[i] = at[i] + (ra[i]*(at[i]-after[i])+kk/s.u[i]*f[i])/rb[i]
		}
	}
}
