package action

import "github.com/tenter-go/tenter/field"

// Value returns the action of a history,
//
//	S = hk { Σ_links Σ_i u_i ½ρ[Δ_tφ/k]² ∓ Σ_n w_n [ Σ_d b_d Σ_i ½κ(Δ_dφ/h)²
//	                                     + Σ_i u_i (σV − Jφ) − (fφ)|ends/h ] },
//
// − for the Lorentzian and + for the Euclidean signature, f the prescribed end
// flux. Losses and open ends do not enter.
func (s *Discrete) Value(h *field.History) float64 {
	s.mustFit(h)
	w := s.borrow()
	defer s.giveBack(w)
	line, clock := s.block.Space, s.block.Time
	v := make([]float64, len(s.xs))
	var sum float64
	for n := range clock.Sites {
		t := clock.At(n)
		phi := h.Slice(n)
		s.wave.Potential.Value(v, phi, s.at(t))
		var u float64
		for c := range s.wave.Components {
			u += s.elastic.energy(phi.Component(c), s.kappaAt(w, c, n, t), line.JumpOf(c))
			sigma := s.sigma.row(w.sigma, c, n, t)
			if c == 0 {
				u += s.weightedProduct(sigma, v)
			}
			u += s.sourceEnergy(w, phi.Component(c), c, n, t)
		}
		sum -= s.sign() * clock.Weight(n) * u
		if n == clock.Sites-1 && !clock.Periodic {
			break
		}
		m, wraps := s.next(n)
		for c := range s.wave.Components {
			var jump float64
			if wraps {
				jump = clock.JumpOf(c)
			}
			_, rho := s.rhoAround(w, c, n)
			after := h.Slice(m).Component(c)
			var kin float64
			for i, p := range phi.Component(c) {
				d := after[i] + jump - p
				kin += s.u[i] * rho[i] * d * d
			}
			sum += 0.5 * kin / (clock.Step * clock.Step)
		}
	}
	return sum * line.Step * clock.Step
}

// sourceEnergy returns −Σ uJφ − (fφ)|ends/h, per hk.
func (s *Discrete) sourceEnergy(w *scratch, phi []float64, c, n int, t float64) float64 {
	var u float64
	if !s.source.zero() {
		u = -s.weightedProduct(s.source.row(w.src, c, n, t), phi)
	}
	if s.block.Space.Periodic {
		return u
	}
	left, right := s.fluxAt(w, c, n, t)
	last, h := len(phi)-1, s.block.Space.Step
	for j, g := range s.elastic.flux[0] {
		u += float64(g*left*phi[j]) / h
	}
	for j, g := range s.elastic.flux[1] {
		u -= float64(g*right*phi[last-j]) / h
	}
	return u
}

// Gradient writes ∂S/∂φ at every event to dst and returns it; a nil dst is
// allocated.
func (s *Discrete) Gradient(dst, h *field.History) *field.History {
	s.mustFit(h)
	dst = s.fit(dst)
	w := s.newScratch()
	for n := range s.block.Slices() {
		phi := h.Slice(n)
		t := s.block.Time.At(n)
		s.wave.Potential.Slope(w.slope, phi, s.at(t))
		for c := range s.wave.Components {
			d := dst.Slice(n).Component(c)
			clear(d)
			s.addForce(d, w, phi.Component(c), w.slope.Component(c), c, n, t, s.sign()*s.block.Time.Weight(n))
			s.addInertia(d, w, h, c, n, true)
			s.scale(d)
		}
	}
	return dst
}

// addInertia adds u{ρ(φ(n) − φ(n−1)) − ρ(φ(n+1) − φ(n))}/k² to d, with the time
// jump if jumps is set.
func (s *Discrete) addInertia(d []float64, w *scratch, h *field.History, c, n int, jumps bool) {
	clock := s.block.Time
	before, after := s.rhoAround(w, c, n)
	phi := h.Slice(n).Component(c)
	kk := 1 / (clock.Step * clock.Step)
	last := clock.Sites - 1
	link := func(m int, rho []float64, jump float64) {
		if !jumps {
			jump = 0
		}
		other := h.Slice(m).Component(c)
		for i, p := range phi {
			d[i] += s.u[i] * kk * rho[i] * (p - other[i] - jump)
		}
	}
	switch {
	case n > 0:
		link(n-1, before, 0)
	case clock.Periodic:
		link(last, before, -clock.JumpOf(c))
	}
	switch {
	case n < last:
		link(n+1, after, 0)
	case clock.Periodic:
		link(0, after, clock.JumpOf(c))
	}
}

func (s *Discrete) scale(d []float64) {
	hk := s.block.Space.Step * s.block.Time.Step
	for i := range d {
		d[i] *= hk
	}
}

// fit returns dst, or a new history of the block if dst is nil.
func (s *Discrete) fit(dst *field.History) *field.History {
	if dst == nil {
		return field.NewHistory(s.block, s.wave.Components)
	}
	s.mustFit(dst)
	return dst
}
