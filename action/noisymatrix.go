package action

import "github.com/tenter-go/tenter/field"

// SecondVariationMatrix writes the matrix ∂²S/∂φ(E)∂φ(F) at the history h to
// dst and returns it; a nil dst is allocated. It is exact, V‴ included, as far as
// [NoisyFlow.ThirdDerivatives] says, and not positive definite everywhere. An
// event is coupled to three slices, and twice as far along each as the links
// reach. The pattern does not depend on h, so that a second call with the same
// dst allocates nothing large.
func (s *NoisyFlow) SecondVariationMatrix(dst *Matrix, h *field.History) *Matrix {
	return s.matrix(dst, h, true)
}

// GaussNewtonMatrix is SecondVariationMatrix without the terms in V‴·r: the
// matrix hk·(∂r/∂φ)ᵀ(u/M)(∂r/∂φ), which is positive semidefinite at every
// history, has the same pattern, and is the second variation where r vanishes.
func (s *NoisyFlow) GaussNewtonMatrix(dst *Matrix, h *field.History) *Matrix {
	return s.matrix(dst, h, false)
}

func (s *NoisyFlow) matrix(dst *Matrix, h *field.History, full bool) *Matrix {
	s.mustFit(h)
	if dst == nil {
		dst = new(Matrix)
	}
	dst.reset()
	before, after := s.newNormalLink(), s.newNormalLink()
	links := s.block.Time.Links()
	if s.block.Time.Periodic {
		after.at(links-1, h, full)
	}
	for n := range s.block.Slices() {
		before, after = after, before
		if n < links {
			after.at(n, h, full)
		}
		for c := range s.components {
			for i := range s.block.Sites() {
				if n > 0 || s.block.Time.Periodic {
					before.addRow(dst, 1, c, i)
				}
				if n < links {
					after.addRow(dst, 0, c, i)
				}
				dst.endRow()
			}
		}
	}
	return dst
}

// A normalLink is a time link with the elastic part of ∂r/∂φ as a band.
type normalLink struct {
	*timeLink
	band [][]float64 // ½K of each component
}

func (s *NoisyFlow) newNormalLink() *normalLink {
	l := &normalLink{timeLink: s.newTimeLink()}
	for range s.components {
		l.band = append(l.band, make([]float64, s.block.Sites()*s.wave.elastic.width()))
	}
	return l
}

func (l *normalLink) at(n int, h *field.History, full bool) {
	l.timeLink.at(n, h)
	l.bend()
	if full {
		l.twist()
	} else {
		for k := range l.third {
			l.third[k].Zero()
		}
	}
	d := l.s.wave
	for c, band := range l.band {
		d.elastic.fillBand(band, d.kappaAt(l.w, c, n, l.t))
		for k := range band {
			band[k] *= 0.5
		}
	}
}

// addRow adds what the link gives to the row of component c of site i in its
// first (part 0) or second slice: hk Σ_rows ∂r/∂φ·W ∂r/∂φ over the rows of r that
// the event enters, and the twist.
func (l *normalLink) addRow(m *Matrix, part, c, i int) {
	n, radius := l.s.components, l.s.wave.elastic.radius
	for off := -radius; off <= radius; off++ {
		if row, ok := l.site(i - off); ok {
			l.addProducts(m, c, row, l.linked(part, c, row, off))
		}
	}
	for a := range n {
		if a != c {
			l.addProducts(m, a, i, l.curve[part].Component(a*n + c)[i])
		}
	}
	hk := l.s.cellArea()
	for other, slice := range [2]int{l.n, l.m} {
		for b := range n {
			m.add(l.s.index(slice, b, i), hk*l.third[part+other].Component(c*n + b)[i])
		}
	}
}

// addProducts adds hk·enters times every derivative of r of component a at a
// site, enters being W times one of them.
func (l *normalLink) addProducts(m *Matrix, a, site int, enters float64) {
	w := l.weight.Component(a)[site]
	if w == 0 { // no equation, at any history
		return
	}
	n, radius := l.s.components, l.s.wave.elastic.radius
	scale := l.s.cellArea() * enters / w
	for part, slice := range [2]int{l.n, l.m} {
		for off := -radius; off <= radius; off++ {
			if j, ok := l.site(site + off); ok {
				m.add(l.s.index(slice, a, j), scale*l.linked(part, a, site, off))
			}
		}
		for b := range n {
			if b != a {
				m.add(l.s.index(slice, b, site), scale*l.curve[part].Component(a*n + b)[site])
			}
		}
	}
}

// linked returns W times the derivative of r of component a at a site by the
// same component of slice n (part 0) or m (part 1), off sites to the right.
func (l *normalLink) linked(part, a, site, off int) float64 {
	e := l.s.wave.elastic
	v := -l.band[a][site*e.width()+off+e.radius]
	if off == 0 {
		sign := [2]float64{-1, 1}[part]
		v += sign*l.weight.Component(a)[site]/l.s.block.Time.Step + l.curve[part].Component(a*l.s.components + a)[site]
	}
	return v
}

// site returns the place of a site that may lie outside of the axis; ok is false
// if it does and the axis is no ring.
func (l *normalLink) site(i int) (place int, ok bool) {
	line := l.s.block.Space
	if line.Periodic {
		return (i + line.Sites) % line.Sites, true
	}
	return i, i >= 0 && i < line.Sites
}
