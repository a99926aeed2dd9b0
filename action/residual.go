package action

import (
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Residual writes the residual of the field equation to dst and returns it; a
// nil dst is allocated. At the interior slices (all of them if the block is
// periodic in time) it is
//
//	r = ∂S/∂φ/hk − uαφ_t + (βφ_xt)_x − √(ρκ)φ_t/h at an open end,
//
// with the rate φ_t = (φ(n+1) − φ(n−1))/2k. The first and last slice, and held
// and odd ends, have no equation: r is zero there.
func (s *Discrete) Residual(dst, h *field.History) *field.History {
	s.mustFit(h)
	dst = s.fit(dst)
	w := s.newScratch()
	for n := range s.block.Slices() {
		r := dst.Slice(n)
		if !s.Interior(n) {
			r.Zero()
			continue
		}
		t := s.block.Time.At(n)
		s.wave.Potential.Slope(w.slope, h.Slice(n), s.at(t))
		for c := range s.wave.Components {
			d := r.Component(c)
			clear(d)
			s.addForce(d, w, h.Slice(n).Component(c), w.slope.Component(c), c, n, t, s.sign())
			s.addInertia(d, w, h, c, n, true)
			if s.lossy() != "" {
				s.rate(w.tmp, h, c, n)
				s.addLoss(d, w, w.tmp, c, n, t, 1)
			}
			s.clearHeld(d)
		}
	}
	return dst
}

// Interior reports whether slice n has a field equation: all slices but the
// first and last, and all of a block that is periodic in time.
func (s *Discrete) Interior(n int) bool {
	return s.block.Time.Periodic || n > 0 && n < s.block.Slices()-1
}

// rate writes (φ(n+1) − φ(n−1))/2k of an interior slice to dst.
func (s *Discrete) rate(dst []float64, h *field.History, c, n int) {
	clock := s.block.Time
	var jump float64
	before := n - 1
	if before < 0 {
		before, jump = clock.Sites-1, jump+clock.JumpOf(c)
	}
	after, wraps := s.next(n)
	if wraps {
		jump += clock.JumpOf(c)
	}
	a, b := h.Slice(after).Component(c), h.Slice(before).Component(c)
	for i := range dst {
		dst[i] = (a[i] - b[i] + jump) / (2 * clock.Step)
	}
}

// addLoss adds scale times the force of the losses and open ends, per hk, at
// the rate v.
func (s *Discrete) addLoss(dst []float64, w *scratch, v []float64, c, n int, t, scale float64) {
	line := s.block.Space
	if !s.alpha.zero() {
		for i, a := range s.alpha.row(w.al, c, n, t) {
			dst[i] -= float64(scale * s.u[i] * a * v[i])
		}
	}
	if !s.beta.zero() {
		s.viscous.addForce(dst, v, stiffness{links: s.beta.row(w.be, c, n, t)}, 0, scale)
	}
	if line.Periodic {
		return
	}
	if line.Left == lattice.Open {
		dst[0] -= scale * s.impedance(w, c, n, t, false) * v[0] / line.Step
	}
	if last := len(dst) - 1; line.Right == lattice.Open {
		dst[last] -= scale * s.impedance(w, c, n, t, true) * v[last] / line.Step
	}
}

// clearHeld sets the values at ends without an equation to zero.
func (s *Discrete) clearHeld(d []float64) {
	if s.HeldLeft() {
		d[0] = 0
	}
	if s.HeldRight() {
		d[len(d)-1] = 0
	}
}

// HeldLeft reports whether the first site has no equation of its own.
func (s *Discrete) HeldLeft() bool {
	return !s.block.Space.Periodic && !s.block.Space.Left.Unknown()
}

// HeldRight reports whether the last site has no equation of its own.
func (s *Discrete) HeldRight() bool {
	return !s.block.Space.Periodic && !s.block.Space.Right.Unknown()
}

// ResidualJacobian writes the matrix ∂r(E)/∂φ(F) of Residual at the history h
// to dst and returns it; a nil dst is allocated. Rows without an equation are
// empty. The pattern does not depend on h.
func (s *Discrete) ResidualJacobian(dst *Matrix, h *field.History) *Matrix {
	s.mustFit(h)
	if dst == nil {
		dst = new(Matrix)
	}
	dst.reset()
	w := s.newScratch()
	band := make([]float64, len(s.xs)*s.elastic.width())
	loss := make([]float64, len(s.xs)*s.viscous.width())
	for n := range s.block.Slices() {
		t := s.block.Time.At(n)
		s.wave.Potential.Curvature(w.curve, h.Slice(n), s.at(t))
		for c := range s.wave.Components {
			s.elastic.fillBand(band, s.kappaAt(w, c, n, t))
			if s.lossy() != "" {
				s.lossBand(loss, w, c, n, t)
			}
			before, after := s.rhoAround(w, c, n)
			sigma := s.sigma.row(w.sigma, c, n, t)
			for i := range s.xs {
				if s.Interior(n) && !(i == 0 && s.HeldLeft()) && !(i == len(s.xs)-1 && s.HeldRight()) {
					s.inertiaRow(dst, h, c, n, i, before[i], after[i])
					s.forceRow(dst, w, h, band, sigma[i], c, n, i, s.sign())
					if s.lossy() != "" {
						s.lossRow(dst, h, loss, c, n, i)
					}
				}
				dst.endRow()
			}
		}
	}
	return dst
}

// lossBand writes ∂(loss force)/∂(rate) of one slice, laid out as the band of
// the viscous links.
func (s *Discrete) lossBand(band []float64, w *scratch, c, n int, t float64) {
	line := s.block.Space
	clear(band)
	if !s.beta.zero() {
		s.viscous.fillBand(band, stiffness{links: s.beta.row(w.be, c, n, t)})
	}
	width := s.viscous.width()
	for i, a := range s.alpha.row(w.al, c, n, t) {
		band[i*width+1] -= s.u[i] * a
	}
	if line.Periodic {
		return
	}
	if line.Left == lattice.Open {
		band[1] -= s.impedance(w, c, n, t, false) / line.Step
	}
	if last := len(s.xs) - 1; line.Right == lattice.Open {
		band[last*width+1] -= s.impedance(w, c, n, t, true) / line.Step
	}
}

// lossRow adds the losses of event (n, i) to the row being written.
func (s *Discrete) lossRow(m *Matrix, h *field.History, band []float64, c, n, i int) {
	clock, sites := s.block.Time, len(s.xs)
	slices := clock.Sites
	after, before := (n+1)%slices, (n-1+slices)%slices
	for off := -1; off <= 1; off++ {
		j := i + off
		if s.block.Space.Periodic {
			j = (j + sites) % sites
		} else if j < 0 || j >= sites {
			continue
		}
		v := band[i*s.viscous.width()+off+1] / (2 * clock.Step)
		m.add(h.Index(after, c, j), v)
		m.add(h.Index(before, c, j), -v)
	}
}
