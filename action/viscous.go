package action

import (
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A viscousMarch is the march with the loss β, whose step is one tridiagonal
// solve a component.
type viscousMarch struct {
	s         *Discrete
	w         *scratch
	rhs, damp []float64
	matrix    []*tridiagonal // of each component
	steady    bool           // the matrices do not depend on time
}

func (s *Discrete) newViscousMarch(w *scratch) *viscousMarch {
	n := len(s.xs)
	m := &viscousMarch{s: s, w: w, rhs: make([]float64, n), damp: make([]float64, n)}
	for range s.wave.Components {
		m.matrix = append(m.matrix, newTridiagonal(n))
	}
	m.steady = s.rho.fixed != nil && s.alpha.fixed != nil && s.beta.fixed != nil && s.kappa.fixed != nil
	return m
}

// advance writes slice n+1 to next, gain being φ(n) − φ(n−1). The slope or, for
// the tangent, the curvature times the change stands in the working memory.
func (m *viscousMarch) advance(next, now, gain field.Slice, n int, full bool) {
	t := m.s.block.Time.At(n)
	for c := range m.s.wave.Components {
		m.solve(next.Component(c), now.Component(c), gain.Component(c), c, n, t, full)
	}
}

// start is March.Start.
func (m *viscousMarch) start(next field.Slice, st field.State, n int) {
	s := m.s
	k := s.block.Time.Step
	t := s.block.Time.At(n)
	for c := range s.wave.Components {
		to, at, v := next.Component(c), st.Field.Component(c), st.Rate.Component(c)
		f := m.rhs
		clear(f)
		s.addForce(f, m.w, at, m.w.slope.Component(c), c, n, t, 1)
		s.addLoss(f, m.w, v, c, n, t, 1)
		before, after := s.rhoAround(m.w, c, n)
		for i := range to {
			if m.held(i) {
				continue
			}
			// φ(n) − φ(n−1) = 2kv − δ, δ = φ(n+1) − φ(n), in the formula of March
			to[i] = at[i] + (float64(2*before[i]*v[i]*k)+float64(k*k*f[i])/s.u[i])/(before[i]+after[i])
		}
	}
}

func (m *viscousMarch) held(i int) bool {
	return i == 0 && m.s.HeldLeft() || i == len(m.s.xs)-1 && m.s.HeldRight()
}

// solve writes component c of slice n+1 to next, gain being φ(n) − φ(n−1): it
// solves
//
//	(uρ₊/k² + a − B/2k)δ = (uρ₋/k² − a + B/2k)gain + f,
//
// B the second difference that β carries, for δ = φ(n+1) − φ(n).
func (m *viscousMarch) solve(next, now, gain []float64, c, n int, t float64, full bool) {
	s, w := m.s, m.w
	k := s.block.Time.Step
	f := m.rhs
	clear(f)
	slope := w.slope.Component(c)
	if full {
		s.addForce(f, w, now, slope, c, n, t, 1)
	} else {
		s.addLinearForce(f, w, now, slope, c, n, t, 1)
	}
	m.damping(m.damp, c, n, t) // before ρ, whose memory it shares
	before, after := s.rhoAround(w, c, n)
	a := m.damp
	beta := stiffness{links: s.beta.row(m.w.be, c, n, t)}
	matrix := m.matrix[c]
	if !m.steady || !matrix.factored {
		for i := range f {
			matrix.diagonal[i] = float64(s.u[i]/(k*k)*after[i]) + a[i]
		}
		matrix.subtractLinks(beta.links, s.block.Space.Periodic, s.viscous.w[0]/(2*k))
		if s.HeldLeft() {
			matrix.hold(0)
		}
		if s.HeldRight() {
			matrix.hold(1)
		}
		matrix.factor()
	}
	s.viscous.addForce(f, gain, beta, 0, 1/(2*k))
	for i, u := range s.u {
		f[i] += float64((float64(u/(k*k)*before[i]) - a[i]) * gain[i])
	}
	if s.HeldLeft() {
		matrix.set(0, next[0]-now[0], f)
	}
	if last := len(f) - 1; s.HeldRight() {
		matrix.set(1, next[last]-now[last], f)
	}
	matrix.solve(f)
	for i, d := range f {
		if !m.held(i) {
			next[i] = now[i] + d
		}
	}
}

// damping writes uα/2k, and √(ρκ)/2kh at open ends, to a.
func (m *viscousMarch) damping(a []float64, c, n int, t float64) {
	s := m.s
	line := s.block.Space
	half := 1 / (2 * s.block.Time.Step)
	for i, v := range s.alpha.row(m.w.al, c, n, t) {
		a[i] = float64(half * s.u[i] * v)
	}
	if line.Periodic {
		return
	}
	if line.Left == lattice.Open {
		a[0] += half * s.impedance(m.w, c, n, t, false) / line.Step
	}
	if line.Right == lattice.Open {
		a[len(a)-1] += half * s.impedance(m.w, c, n, t, true) / line.Step
	}
}
