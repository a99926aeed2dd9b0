package action

import "github.com/tenter-go/tenter/field"

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
// A March has working memory and serves one goroutine at a time, but for Part;
// its methods allocate nothing, but for the first Tangent. It belongs to a
// Lorentzian density.
type March struct {
	s             *Discrete
	w             *scratch
	last          field.Slice // φ(n) − φ(n−1)
	step, tangent []*chain    // nil with β
	start         []*chain
	viscous       *viscousMarch // nil without β
}

// March returns the march of a Lorentzian density. It panics for a Euclidean
// one, whose two-slice recursion is not an initial-value problem.
func (s *Discrete) March() *March {
	if s.wave.Signature == Euclidean {
		panic("action: march of a Euclidean density; want a Lorentzian one")
	}
	m := &March{s: s, w: s.newScratch(), last: field.NewSlice(s.wave.Components, len(s.xs))}
	if !s.beta.zero() {
		m.viscous = s.newViscousMarch(m.w)
		return m
	}
	m.step = s.newChains(s.leapfrogRecipe(), false)
	m.refresh(m.step, 0)
	return m
}

func (s *Discrete) leapfrogRecipe() recipe {
	kk, half := s.block.Time.Step*s.block.Time.Step, 1/(2*s.block.Time.Step)
	return func(before, after, loss float64) (keep, den float64) {
		l := float64(half * loss)
		return before/kk - l, after/kk + l
	}
}

// startRecipe is that of Start, with φ(n) − φ(n−1) = 2kv − δ, δ = φ(n+1) − φ(n),
// in the formula of March.
func (s *Discrete) startRecipe() recipe {
	k := s.block.Time.Step
	return func(before, after, loss float64) (keep, den float64) {
		return 2*before/k - loss, (before + after) / (k * k)
	}
}

// Step writes slice n+1 to next, given the slices n and n−1. At held and odd
// ends next must hold the value of slice n+1 already; it is left alone. next may
// be before.
func (m *March) Step(next, now, before field.Slice, n int) {
	if m.viscous != nil {
		s := m.s
		s.wave.Potential.Slope(m.w.slope, now, s.at(s.block.Time.At(n)))
		m.viscous.advance(next, now, m.gain(now, before), n, true)
		return
	}
	m.refresh(m.step, n)
	m.Part(next, now, before, n, 0, len(m.s.xs))
}

// Steady reports whether the march is the same at all times, so that Part may be
// used.
func (m *March) Steady() bool { return m.viscous == nil && steady(m.step) }

// Part is Step for the sites from lo to hi−1. It reads slice n up to three sites
// beyond them and the others at these sites only. Several goroutines may call it
// for different sites, of different slices too. The march must be steady.
func (m *March) Part(next, now, before field.Slice, n, lo, hi int) {
	if !m.step[0].given {
		for c, ch := range m.step {
			ch.leap(next.Component(c), now.Component(c), before.Component(c), nil, lo, hi)
		}
		return
	}
	m.s.inStrips(now, m.s.block.Time.At(n), lo, hi, func(slope field.Slice, lo, hi int) {
		for c, ch := range m.step {
			ch.leap(next.Component(c), now.Component(c), before.Component(c), slope.Component(c), lo, hi)
		}
	})
}

// inStrips calls do for strips of the sites from lo to hi−1 that fit the nearest
// cache, with V′ there.
func (s *Discrete) inStrips(phi field.Slice, t float64, lo, hi int, do func(slope field.Slice, lo, hi int)) {
	const strip = 1024
	memory := borrow(s.wave.Components, strip)
	defer memory.giveBack()
	for ; lo < hi; lo += strip {
		to := min(lo+strip, hi)
		slope := memory.Part(0, to-lo)
		s.wave.Potential.Slope(slope, phi.Part(lo, to), Sites{T: t, X: s.xs[lo:to]})
		do(slope, lo, to)
	}
}

// Tangent writes the change of slice n+1 to next, given the changes of the
// slices n and n−1 around the history whose slice n is phi. It is the exact
// derivative of Step.
func (m *March) Tangent(next, now, before, phi field.Slice, n int) {
	s := m.s
	s.curve(m.w.slope, m.w, phi, now, s.block.Time.At(n))
	if m.viscous != nil {
		m.viscous.advance(next, now, m.gain(now, before), n, false)
		return
	}
	if m.tangent == nil {
		m.tangent = s.newChains(s.leapfrogRecipe(), true)
	}
	m.refresh(m.tangent, n)
	for c, ch := range m.tangent {
		ch.leap(next.Component(c), now.Component(c), before.Component(c), m.w.slope.Component(c), 0, len(s.xs))
	}
}

// Start writes slice n+1 to next, given Cauchy data at slice n: the slice for
// which (φ(n+1) − φ(n−1))/2k is the rate, φ(n−1) being the slice that the
// equation implies. At held and odd ends next must hold its value already.
func (m *March) Start(next field.Slice, st field.State, n int) {
	s := m.s
	s.wave.Potential.Slope(m.w.slope, st.Field, s.at(s.block.Time.At(n)))
	if m.viscous != nil {
		m.viscous.start(next, st, n)
		return
	}
	if m.start == nil {
		m.start = s.newChains(s.startRecipe(), false)
	}
	m.refresh(m.start, n)
	for c, ch := range m.start {
		to, at, gain := next.Component(c), st.Field.Component(c), m.last.Component(c)
		ch.accelerate(gain, at, st.Rate.Component(c), m.w.slope.Component(c), 0, len(s.xs))
		for i := ch.first; i < ch.last; i++ {
			to[i] = at[i] + gain[i]
		}
	}
}

func (m *March) refresh(chains []*chain, n int) {
	for _, ch := range chains {
		ch.refresh(m.w, n, m.s.block.Time.At(n))
	}
}

func steady(chains []*chain) bool {
	for _, ch := range chains {
		if !ch.steady {
			return false
		}
	}
	return true
}

func (m *March) gain(now, before field.Slice) field.Slice {
	m.last.CopyFrom(now)
	m.last.Axpy(-1, before)
	return m.last
}
