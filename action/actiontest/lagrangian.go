package actiontest

import (
	"errors"
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/lattice"
)

// Lagrangian holds the derivatives of a Lagrangian against its value, for jets
// with φ, φ_t and φ_x between Settings.Low and High, −1 and 1 unless set, at the
// positions and times of the settings. It returns what is wrong, or nil; errors
// name the derivative and the place.
func Lagrangian(l action.Lagrangian, s Settings) error {
	if l == nil {
		return errors.New("actiontest: Lagrangian is nil; want a Lagrangian")
	}
	s, err := s.fill(1)
	if err != nil {
		return err
	}
	n := l.Components()
	if n < 1 {
		return fmt.Errorf("actiontest: Components() is %d; want at least 1", n)
	}
	r := s.random()
	var f findings
	for _, t := range s.T {
		for _, x := range s.X {
			q := make([]float64, 3*n)
			s.draw(r, q)
			checkJet(&f, l, s, q, lattice.Event{T: t, X: x})
		}
	}
	return f.err()
}

// checkJet holds slope and curvature at one jet against differences.
func checkJet(f *findings, l action.Lagrangian, s Settings, q []float64, at lattice.Event) {
	m := len(q)
	n := m / 3
	jet := func(q []float64) action.Jet {
		return action.Jet{At: at, Phi: q[:n:n], Rate: q[n : 2*n : 2*n], Tilt: q[2*n:]}
	}
	moved := func(k int, eps float64) action.Jet {
		c := append([]float64(nil), q...)
		c[k] += eps
		return jet(c)
	}
	slope, curve := nans(m), nans(m*m)
	l.Slope(slope, jet(q))
	l.Curvature(curve, jet(q))
	place := fmt.Sprintf("the jet %.4v, %v", q, at)
	first := quotient{}
	for k := range m {
		d := slopeOf(1, s.Step, func(dst []float64, eps float64) { dst[0] = l.Value(moved(k, eps)) })
		first.value, first.spread = append(first.value, d.value[0]), append(first.spread, d.spread[0])
		first.rounding = max(first.rounding, d.rounding)
		second := slopeOf(m, s.Step, func(dst []float64, eps float64) { l.Slope(dst, moved(k, eps)) })
		row := curve[k*m : (k+1)*m]
		j := newJudge(s, second, curve)
		for b, v := range row {
			if size, text := j.verdict(b, v); size > 0 {
				name := fmt.Sprintf("∂²L/∂%s∂%s", jetName(n, k), jetName(n, b))
				f.add("curvature "+name, size, "curvature %s at %s %s of Slope", name, place, text)
			}
			// Both are the same number computed twice; a few roundings are allowed.
			if w := curve[b*m+k]; b < k && math.Abs(v-w) > 1e-12*max(math.Abs(v), math.Abs(w)) {
				f.add("symmetry", math.Abs(v-w), "curvature by %s and %s at %s is %.12g and %.12g; want a symmetric matrix", jetName(n, k), jetName(n, b), place, v, w)
			}
		}
	}
	j := newJudge(s, first, slope)
	for k, v := range slope {
		if size, text := j.verdict(k, v); size > 0 {
			name := "∂L/∂" + jetName(n, k)
			f.add("slope "+name, size, "slope %s at %s %s of Value", name, place, text)
		}
	}
}

func nans(n int) []float64 {
	v := make([]float64, n)
	for i := range v {
		v[i] = math.NaN()
	}
	return v
}

// jetName names entry k of a jet of n components.
func jetName(n, k int) string {
	name := [...]string{"φ", "φ_t", "φ_x"}[k/n]
	if n > 1 {
		name += fmt.Sprintf("[%d]", k%n)
	}
	return name
}
