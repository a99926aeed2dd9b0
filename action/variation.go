package action

import "github.com/tenter-go/tenter/field"

// SecondVariation writes the second variation of S at the history h times a
// direction, Σ_F ∂²S/∂φ(E)∂φ(F) η(F), to dst and returns it; a nil dst is
// allocated. The direction is a change of the history: jumps do not apply to
// it.
func (s *Discrete) SecondVariation(dst, h, direction *field.History) *field.History {
	s.mustFit(h)
	s.mustFit(direction)
	dst = s.fit(dst)
	w := s.newScratch()
	for n := range s.block.Slices() {
		t := s.block.Time.At(n)
		eta := direction.Slice(n)
		s.curve(w.slope, w, h.Slice(n), eta, t)
		for c := range s.wave.Components {
			d := dst.Slice(n).Component(c)
			clear(d)
			s.addLinearForce(d, w, eta.Component(c), w.slope.Component(c), c, n, t, s.sign()*s.block.Time.Weight(n))
			s.addInertia(d, w, direction, c, n, false)
			s.scale(d)
		}
	}
	return dst
}

// curve writes Σ_b ∂²V/∂φ_a∂φ_b η_b to component a of dst.
func (s *Discrete) curve(dst field.Slice, w *scratch, phi, eta field.Slice, t float64) {
	n := s.wave.Components
	s.wave.Potential.Curvature(w.curve, phi, s.at(t))
	dst.Zero()
	for a := range n {
		d := dst.Component(a)
		for b := range n {
			v, e := w.curve.Component(a*n+b), eta.Component(b)
			for i := range d {
				d[i] += v[i] * e[i]
			}
		}
	}
}

// addLinearForce is addForce for a change of the field: no source, flux or
// jump.
func (s *Discrete) addLinearForce(dst []float64, w *scratch, eta, slope []float64, c, n int, t, scale float64) {
	s.elastic.addForce(dst, eta, s.kappaAt(w, c, n, t), 0, scale)
	for i, sigma := range s.sigma.row(w.sigma, c, n, t) {
		dst[i] -= scale * s.u[i] * sigma * slope[i]
	}
}

// SecondVariationMatrix writes the matrix ∂²S/∂φ(E)∂φ(F) at the history h to
// dst and returns it; a nil dst is allocated. The pattern does not depend on h,
// so that a second call with the same dst allocates nothing large.
func (s *Discrete) SecondVariationMatrix(dst *Matrix, h *field.History) *Matrix {
	s.mustFit(h)
	if dst == nil {
		dst = new(Matrix)
	}
	dst.reset()
	w := s.newScratch()
	band := make([]float64, len(s.xs)*s.elastic.width())
	hk := s.block.Space.Step * s.block.Time.Step
	for n := range s.block.Slices() {
		t := s.block.Time.At(n)
		s.wave.Potential.Curvature(w.curve, h.Slice(n), s.at(t))
		for c := range s.wave.Components {
			s.elastic.fillBand(band, s.kappaAt(w, c, n, t))
			before, after := s.rhoAround(w, c, n)
			sigma := s.sigma.row(w.sigma, c, n, t)
			for i := range s.xs {
				s.inertiaRow(dst, h, c, n, i, hk*before[i], hk*after[i])
				s.forceRow(dst, w, h, band, sigma[i], c, n, i, hk*s.sign()*s.block.Time.Weight(n))
				dst.endRow()
			}
		}
	}
	return dst
}

// inertiaRow adds the time links of event (n, i) to the row being written.
func (s *Discrete) inertiaRow(m *Matrix, h *field.History, c, n, i int, before, after float64) {
	clock := s.block.Time
	u := s.u[i] / (clock.Step * clock.Step)
	last := clock.Sites - 1
	self := h.Index(n, c, i)
	link := func(to int, rho float64) {
		m.add(self, u*rho)
		m.add(h.Index(to, c, i), -u*rho)
	}
	switch {
	case n > 0:
		link(n-1, before)
	case clock.Periodic:
		link(last, before)
	}
	switch {
	case n < last:
		link(n+1, after)
	case clock.Periodic:
		link(0, after)
	}
}

// forceRow adds scale·∂f/∂φ at event (n, i) to the row being written; the
// curvature of slice n stands in w.
func (s *Discrete) forceRow(m *Matrix, w *scratch, h *field.History, band []float64, sigma float64, c, n, i int, scale float64) {
	r, sites := s.elastic.radius, len(s.xs)
	width := s.elastic.width()
	for off := -r; off <= r; off++ {
		j := i + off
		if s.block.Space.Periodic {
			j = (j + sites) % sites
		} else if j < 0 || j >= sites {
			continue
		}
		m.add(h.Index(n, c, j), scale*band[i*width+off+r])
	}
	u := scale * s.u[i] * sigma
	for b := range s.wave.Components {
		m.add(h.Index(n, b, i), -u*w.curve.Component(c*s.wave.Components + b)[i])
	}
}
