package action

import "github.com/tenter-go/tenter/field"

// Gradient writes ∂S/∂φ at every event to dst, zero outside of the region, and
// returns it; a nil dst is allocated.
func (s *Shaped) Gradient(dst, h *field.History) *field.History {
	s.mustFit(h)
	dst = s.zeroed(dst)
	w := s.wave.newScratch()
	sites, sign := s.block.Sites(), s.wave.sign()
	for n := range s.block.Slices() {
		part, at, ok := s.part(n, h)
		if !ok {
			continue
		}
		from := s.span[n][0]
		slope := w.slope.Part(from, s.span[n][1])
		s.wave.wave.Potential.Slope(slope, part, at)
		for c := range s.components {
			d := dst.Slice(n).Component(c)
			sigma, source := s.wave.sigma.row(w.sigma, c, n, at.T), s.wave.source.row(w.src, c, n, at.T)
			for k, v := range slope.Component(c) {
				if weight := s.event[n*sites+from+k]; weight > 0 {
					d[from+k] -= sign * weight * (sigma[from+k]*v - source[from+k])
				}
			}
		}
	}
	s.addLinks(dst, w, h, true)
	return dst
}

// SecondVariation writes the second variation of S at the history h times a
// direction, Σ_F ∂²S/∂φ(E)∂φ(F) η(F), to dst and returns it; a nil dst is
// allocated. Jumps do not apply to the direction.
func (s *Shaped) SecondVariation(dst, h, direction *field.History) *field.History {
	s.mustFit(h)
	s.mustFit(direction)
	dst = s.zeroed(dst)
	w := s.wave.newScratch()
	sites, sign := s.block.Sites(), s.wave.sign()
	for n := range s.block.Slices() {
		curve, sigma, ok := s.curvature(w, n, h)
		if !ok {
			continue
		}
		from := s.span[n][0]
		for a := range s.components {
			d := dst.Slice(n).Component(a)
			for b := range s.components {
				eta := direction.Slice(n).Component(b)[from:]
				for k, v := range curve.Component(a*s.components + b) {
					if weight := s.event[n*sites+from+k]; weight > 0 {
						d[from+k] -= sign * weight * sigma[from+k] * v * eta[k]
					}
				}
			}
		}
	}
	s.addLinks(dst, w, direction, false)
	return dst
}

// curvature returns V″ on the span of slice n, and σ on the slice.
func (s *Shaped) curvature(w *scratch, n int, h *field.History) (curve field.Slice, sigma []float64, ok bool) {
	part, at, ok := s.part(n, h)
	if !ok {
		return field.Slice{}, nil, false
	}
	curve = w.curve.Part(s.span[n][0], s.span[n][1])
	s.wave.wave.Potential.Curvature(curve, part, at)
	return curve, s.wave.sigma.row(w.sigma, 0, n, at.T), true
}

// addLinks adds the pull of the links of h to dst, with the jumps of the axes if
// jumps is set, and multiplies all of dst by hk.
func (s *Shaped) addLinks(dst *field.History, w *scratch, h *field.History, jumps bool) {
	sign := s.wave.sign()
	for n := range s.block.Slices() {
		for c := range s.components {
			s.eachSpaceLink(w, n, c, func(i, j int, stiff, jump float64) {
				if !jumps {
					jump = 0
				}
				t := sign * stiff * (h.At(n, c, j) + jump - h.At(n, c, i))
				dst.Data[s.index(n, c, i)] += t
				dst.Data[s.index(n, c, j)] -= t
			})
			s.eachTimeLink(w, n, c, func(m, i int, stiff, jump float64) {
				if !jumps {
					jump = 0
				}
				t := stiff * (h.At(m, c, i) + jump - h.At(n, c, i))
				dst.Data[s.index(n, c, i)] -= t
				dst.Data[s.index(m, c, i)] += t
			})
		}
	}
	hk := s.cellArea()
	for k := range dst.Data {
		dst.Data[k] *= hk
	}
}

// SecondVariationMatrix writes the matrix ∂²S/∂φ(E)∂φ(F) at the history h to
// dst and returns it; a nil dst is allocated. It is the five-point stencil, and
// events outside of the region have empty rows. The pattern does not depend on h,
// so that a second call with the same dst allocates nothing large.
func (s *Shaped) SecondVariationMatrix(dst *Matrix, h *field.History) *Matrix {
	s.mustFit(h)
	if dst == nil {
		dst = new(Matrix)
	}
	dst.reset()
	w := s.wave.newScratch()
	sites, hk := s.block.Sites(), s.cellArea()
	for n := range s.block.Slices() {
		curve, sigma, ok := s.curvature(w, n, h)
		from := s.span[n][0]
		for c := range s.components {
			before, after := s.wave.rhoAround(w, c, n)
			kappa := s.wave.kappa.row(w.kl, c, n, s.block.Time.At(n))
			for i := range sites {
				weight := s.event[n*sites+i]
				if ok && weight > 0 {
					for b := range s.components {
						v := curve.Component(c*s.components + b)[i-from]
						dst.add(s.index(n, b, i), -hk*s.wave.sign()*weight*sigma[i]*v)
					}
					s.linkRow(dst, c, n, i, hk*before[i], hk*after[i], kappa)
				}
				dst.endRow()
			}
		}
	}
	return dst
}

// linkRow adds the links of event (n, i) to the row being written.
func (s *Shaped) linkRow(m *Matrix, c, n, i int, before, after float64, kappa []float64) {
	clock, line := s.block.Time, s.block.Space
	self := s.index(n, c, i)
	link := func(other int, v float64) {
		if v != 0 {
			m.add(self, v)
			m.add(other, -v)
		}
	}
	// A link that leads back past the first slice or site of a ring starts at
	// the last.
	back, left := (n+clock.Sites-1)%clock.Sites, (i+line.Sites-1)%line.Sites
	next, right := (n+1)%clock.Sites, (i+1)%line.Sites
	kk := 1 / (clock.Step * clock.Step)
	link(s.index(back, c, i), s.up[back*line.Sites+i]*before*kk)
	link(s.index(next, c, i), s.up[n*line.Sites+i]*after*kk)
	scale := -s.wave.sign() * s.cellArea() / (line.Step * line.Step)
	if left < len(kappa) {
		link(s.index(n, c, left), scale*s.right[n*line.Sites+left]*kappa[left])
	}
	if i < len(kappa) {
		link(s.index(n, c, right), scale*s.right[n*line.Sites+i]*kappa[i])
	}
}
