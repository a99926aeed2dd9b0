package action

import (
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A March computes one slice from the two before it: it solves the residual of
// slice n for slice n+1,
//
//	(uρ₊/k² + a)(φ(n+1) − φ(n)) = (uρ₋/k² − a)(φ(n) − φ(n−1)) + f(φ(n)),
//
// with the force f per hk and the losses a = uα/2k (+ √(ρκ)/2kh at an open end),
// centred and solved at the site; with β, a holds −β times the second
// difference as well and the step is one tridiagonal solve. Without losses it
// is the leapfrog (Störmer–Verlet) method [Hairer, Lubich & Wanner 2003, Acta
// Numerica 12, 399].
//
// A March has working memory and serves one goroutine at a time; its methods
// allocate nothing. It belongs to a Lorentzian density.
type March struct {
	s       *Discrete
	w       *scratch
	last    field.Slice // φ(n) − φ(n−1)
	rhs     []float64
	damp    []float64
	viscous []*tridiagonal // of each component; nil without β
	steady  bool           // the matrices do not depend on time
	plain   []plain        // nil unless the coefficients are the same everywhere
}

// March returns the march of a Lorentzian density. It panics for a Euclidean
// one, whose two-slice recursion is not an initial-value problem.
func (s *Discrete) March() *March {
	if s.wave.Signature == Euclidean {
		panic("action: march of a Euclidean density; want a Lorentzian one")
	}
	n := len(s.xs)
	m := &March{s: s, w: s.newScratch(), last: field.NewSlice(s.wave.Components, n), rhs: make([]float64, n), damp: make([]float64, n), plain: s.plainLines()}
	if !s.beta.zero() {
		for range s.wave.Components {
			m.viscous = append(m.viscous, newTridiagonal(n))
		}
		m.steady = s.rho.fixed != nil && s.alpha.fixed != nil && s.beta.fixed != nil && s.kappa.fixed != nil
	}
	return m
}

// Step writes slice n+1 to next, given the slices n and n−1. At held and odd
// ends next must hold the value of slice n+1 already; it is left alone.
func (m *March) Step(next, now, before field.Slice, n int) {
	s := m.s
	s.wave.Potential.Slope(m.w.slope, now, s.at(s.block.Time.At(n)))
	m.advance(next, now, before, n, true)
}

// Tangent writes the change of slice n+1 to next, given the changes of the
// slices n and n−1 around the history whose slice n is phi. It is the exact
// derivative of Step.
func (m *March) Tangent(next, now, before, phi field.Slice, n int) {
	s := m.s
	s.curve(m.w.slope, m.w, phi, now, s.block.Time.At(n))
	m.advance(next, now, before, n, false)
}

func (m *March) advance(next, now, before field.Slice, n int, full bool) {
	s := m.s
	if m.plain != nil {
		m.advancePlain(next, now, before, n, full)
		return
	}
	t := s.block.Time.At(n)
	for c := range s.wave.Components {
		to, at, from := next.Component(c), now.Component(c), before.Component(c)
		gain := m.last.Component(c)
		for i, p := range at {
			gain[i] = p - from[i]
		}
		m.solve(to, at, gain, c, n, t, full)
	}
}

// Start writes slice n+1 to next, given Cauchy data at slice n: the slice for
// which (φ(n+1) − φ(n−1))/2k is the rate, φ(n−1) being the slice that the
// equation implies. At held and odd ends next must hold its value already.
func (m *March) Start(next field.Slice, st field.State, n int) {
	s := m.s
	k := s.block.Time.Step
	t := s.block.Time.At(n)
	s.wave.Potential.Slope(m.w.slope, st.Field, s.at(t))
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
			u := s.u[i]
			to[i] = at[i] + (2*before[i]*v[i]*k+k*k*f[i]/u)/(before[i]+after[i])
		}
	}
}

func (m *March) held(i int) bool {
	return i == 0 && m.s.HeldLeft() || i == len(m.s.xs)-1 && m.s.HeldRight()
}

// solve writes component c of slice n+1 to next, gain being φ(n) − φ(n−1).
func (m *March) solve(next, now, gain []float64, c, n int, t float64, full bool) {
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
	lo, hi := 0, len(f)
	if s.HeldLeft() {
		lo = 1
	}
	if s.HeldRight() {
		hi--
	}
	if s.lossy() == "" {
		for i := lo; i < hi; i++ {
			next[i] = now[i] + (before[i]*gain[i]+k*k/s.u[i]*f[i])/after[i]
		}
		return
	}
	if m.viscous != nil {
		m.solveViscous(next, now, gain, before, after, c, n, t)
		return
	}
	for i := lo; i < hi; i++ {
		u, a := s.u[i]/(k*k), m.damp[i]
		next[i] = now[i] + ((u*before[i]-a)*gain[i]+f[i])/(u*after[i]+a)
	}
}

// solveViscous solves
//
//	(uρ₊/k² + a − B/2k)δ = (uρ₋/k² − a + B/2k)gain + f,
//
// B the second difference that β carries, for δ = φ(n+1) − φ(n). f and a stand
// in the working memory.
func (m *March) solveViscous(next, now, gain, before, after []float64, c, n int, t float64) {
	s, f, a := m.s, m.rhs, m.damp
	k := s.block.Time.Step
	beta := stiffness{links: s.beta.row(m.w.be, c, n, t)}
	matrix := m.viscous[c]
	if !m.steady || !matrix.factored {
		for i := range f {
			matrix.diagonal[i] = s.u[i]/(k*k)*after[i] + a[i]
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
		f[i] += (u/(k*k)*before[i] - a[i]) * gain[i]
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
func (m *March) damping(a []float64, c, n int, t float64) {
	s := m.s
	line := s.block.Space
	half := 1 / (2 * s.block.Time.Step)
	if s.lossy() == "" {
		return
	}
	for i, v := range s.alpha.row(m.w.al, c, n, t) {
		a[i] = half * s.u[i] * v
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
