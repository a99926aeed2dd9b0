package action

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/internal/kernel"
	"github.com/tenter-go/tenter/lattice"
)

// Energy is the energy of a state in parts. Kinetic + Elastic + Potential is
// the energy of the field; Source is the energy −∫Jφ of the bias and of
// prescribed end fluxes, which is part of what an action with steady sources
// conserves.
type Energy struct {
	Kinetic   float64 // h Σ u ½ρφ_t²
	Elastic   float64 // ½κφ_x² by the links
	Potential float64 // h Σ u σV
	Source    float64 // −h Σ u Jφ − (fφ)|ends
}

// Field returns Kinetic + Elastic + Potential.
func (e Energy) Field() float64 { return e.Kinetic + e.Elastic + e.Potential }

// Total returns the field's energy and that of the sources.
func (e Energy) Total() float64 { return e.Field() + e.Source }

// Energy returns the energy of a state at time t. In a history of leapfrog the
// rate of slice n is (φ(n+1) − φ(n−1))/2k, and the energy then oscillates by
// O(k²) around a conserved value.
func (s *Discrete) Energy(st field.State, t float64) Energy {
	w := s.borrow()
	defer s.giveBack(w)
	line, n := s.block.Space, s.rowAt(t)
	last := len(s.xs) - 1
	var e Energy
	v := w.tmp
	s.wave.Potential.Value(v, st.Field, s.at(t))
	v[0] *= s.u[0]
	v[last] *= s.u[last]
	e.Potential = kernel.Dot(s.sigma.row(w.sigma, 0, n, t), v)
	for c := range s.wave.Components {
		phi := st.Field.Component(c)
		e.Kinetic += float64(0.5 * s.weightedSquares(s.rhoAt(w, c, n, t), st.Rate.Component(c)))
		e.Elastic += s.elastic.energy(phi, s.kappaAt(w, c, n, t), line.JumpOf(c))
		e.Source += s.sourceEnergy(w, phi, c, n, t)
	}
	h := line.Step
	return Energy{Kinetic: h * e.Kinetic, Elastic: h * e.Elastic, Potential: h * e.Potential, Source: h * e.Source}
}

// weightedSquares returns Σ uwv².
func (s *Discrete) weightedSquares(w, v []float64) float64 {
	last := len(v) - 1
	inside := kernel.WeightedSquares(w[1:last], v[1:last])
	return inside + (float64(s.u[0]*w[0]*v[0]*v[0]) + float64(s.u[last]*w[last]*v[last]*v[last]))
}

// weightedProduct returns Σ uwv.
func (s *Discrete) weightedProduct(w, v []float64) float64 {
	last := len(v) - 1
	return kernel.Dot(w[1:last], v[1:last]) + (float64(s.u[0]*w[0]*v[0]) + float64(s.u[last]*w[last]*v[last]))
}

// EnergyDensity writes the energy of the field per length at each site to dst,
// one value a site, and returns it; a nil dst is allocated. The energy of a
// link counts half at each of its ends, so that h Σ u_i dst[i] is
// Energy.Field().
func (s *Discrete) EnergyDensity(dst []float64, st field.State, t float64) []float64 {
	dst = s.fitRow(dst, len(s.xs))
	w := s.borrow()
	defer s.giveBack(w)
	line, n := s.block.Space, s.rowAt(t)
	clear(dst)
	for c := range s.wave.Components {
		s.elastic.share(dst, st.Field.Component(c), s.kappaAt(w, c, n, t), line.JumpOf(c))
	}
	for i := range dst {
		dst[i] /= s.u[i]
	}
	s.wave.Potential.Value(w.tmp, st.Field, s.at(t))
	for i, sigma := range s.sigma.row(w.sigma, 0, n, t) {
		dst[i] += sigma * w.tmp[i]
	}
	for c := range s.wave.Components {
		for i, r := range s.rhoAt(w, c, n, t) {
			q := st.Rate.Component(c)[i]
			dst[i] += 0.5 * r * q * q
		}
	}
	return dst
}

// EnergyFlux writes the power that crosses each nearest-neighbour link to the
// right, −κφ_xφ_t by all links that span it, to dst, one value a link, and
// returns it; a nil dst is allocated. With EnergyDensity it satisfies the
// balance u h ∂e/∂t = (flux from the left) − (flux to the right) at every site
// of a slice without losses and sources, exactly in the limit k → 0.
func (s *Discrete) EnergyFlux(dst []float64, st field.State, t float64) []float64 {
	line, n := s.block.Space, s.rowAt(t)
	dst = s.fitRow(dst, line.Links())
	w := s.borrow()
	defer s.giveBack(w)
	clear(dst)
	for c := range s.wave.Components {
		s.elastic.power(dst, st.Field.Component(c), st.Rate.Component(c), s.kappaAt(w, c, n, t), line.JumpOf(c))
	}
	for i := range dst {
		dst[i] *= line.Step
	}
	return dst
}

// Momentum returns P = −∫ρφ_tφ_x, with φ_x as in MomentumDensity.
func (s *Discrete) Momentum(st field.State, t float64) float64 {
	w := s.borrow()
	defer s.giveBack(w)
	var sum float64
	for c := range s.wave.Components {
		rate := st.Rate.Component(c)
		rho := s.momentumSlope(w, st, c, t)
		if v, ok := s.rho.coef.uniform(c); ok {
			sum -= float64(v * s.weightedProduct(rate, w.tmp))
			continue
		}
		for i, r := range rho {
			w.tmp[i] *= r
		}
		sum -= s.weightedProduct(rate, w.tmp)
	}
	return sum * s.block.Space.Step
}

// MomentumDensity writes −ρφ_tφ_x at each site to dst and returns it; a nil dst
// is allocated. φ_x is the central difference of the order of the links, with
// the mirror images beyond the ends. Lattice momentum is conserved up to that
// order only.
func (s *Discrete) MomentumDensity(dst []float64, st field.State, t float64) []float64 {
	dst = s.fitRow(dst, len(s.xs))
	w := s.borrow()
	defer s.giveBack(w)
	clear(dst)
	for c := range s.wave.Components {
		rate := st.Rate.Component(c)
		for i, r := range s.momentumSlope(w, st, c, t) {
			dst[i] -= float64(r * rate[i] * w.tmp[i])
		}
	}
	return dst
}

// momentumSlope writes φ_x of component c, as the momentum has it, to w.tmp and
// returns ρ.
func (s *Discrete) momentumSlope(w *scratch, st field.State, c int, t float64) (rho []float64) {
	line, n := s.block.Space, s.rowAt(t)
	var stretch [2]float64
	if !line.Periodic {
		stretch = s.endSlopes(w, st.Rate.Component(c), c, n, t)
	}
	s.elastic.slope(w.tmp, w.part.Component(0), st.Field.Component(c), line.JumpOf(c), stretch)
	return s.rhoAt(w, c, n, t)
}

// endSlopes returns φ_x at ends where it is not zero: the prescribed flux over κ
// at a free end, ±√(ρ/κ)φ_t at an open one.
func (s *Discrete) endSlopes(w *scratch, rate []float64, c, n int, t float64) (stretch [2]float64) {
	line := s.block.Space
	left, right := s.fluxAt(w, c, n, t)
	if line.Left == lattice.Open {
		left = s.impedance(w, c, n, t, false) * rate[0]
	}
	if line.Right == lattice.Open {
		right = -s.impedance(w, c, n, t, true) * rate[len(rate)-1]
	}
	k := s.kappa.row(w.kl, c, n, t)
	if left != 0 {
		stretch[0] = left / k[0]
	}
	if right != 0 {
		stretch[1] = right / k[len(k)-1]
	}
	return stretch
}

// Charge returns the topological charge of component c of a slice: what the
// field gains from the first site to the last (once around a ring), divided by
// the distance of neighbouring vacua. It is an error if the potential declares
// no such distance; a potential of one's own does so by a method
// VacuumSpacing() float64.
func (s *Discrete) Charge(phi field.Slice, c int) (float64, error) {
	unit := vacuumSpacing(s.wave.Potential)
	if !(math.Abs(unit) > 0) {
		return 0, fmt.Errorf("action: potential %T declares no distance of vacua; give it a method VacuumSpacing() float64", s.wave.Potential)
	}
	if s.block.Space.Periodic {
		return s.block.Space.JumpOf(c) / unit, nil
	}
	v := phi.Component(c)
	return (v[len(v)-1] - v[0]) / unit, nil
}

// Power is the power that enters the field of a state; each part is negative
// where energy leaves.
type Power struct {
	Source      float64 // h Σ u Jφ_t
	Loss        float64 // −h Σ u αφ_t² − h Σ βφ_xt²
	Left, Right float64 // prescribed flux, or −√(ρκ)φ_t² at an open end
}

// Power returns the power that enters the field at a state at time t. A held end
// that moves does work as well; it is the EnergyFlux of the link beside it and
// not counted here.
func (s *Discrete) Power(st field.State, t float64) Power {
	w := s.borrow()
	defer s.giveBack(w)
	line, n := s.block.Space, s.rowAt(t)
	h := line.Step
	var p Power
	for c := range s.wave.Components {
		v := st.Rate.Component(c)
		if !s.source.zero() {
			p.Source += float64(h * s.weightedProduct(s.source.row(w.src, c, n, t), v))
		}
		if !s.alpha.zero() {
			p.Loss -= float64(h * s.weightedSquares(s.alpha.row(w.al, c, n, t), v))
		}
		if !s.beta.zero() {
			p.Loss -= float64(2 * h * s.viscous.energy(v, stiffness{links: s.beta.row(w.be, c, n, t)}, 0))
		}
		if line.Periodic {
			continue
		}
		last := len(v) - 1
		left, right := s.fluxAt(w, c, n, t)
		for j, g := range s.elastic.flux[0] {
			p.Left -= float64(g * left * v[j])
		}
		for j, g := range s.elastic.flux[1] {
			p.Right += float64(g * right * v[last-j])
		}
		if line.Left == lattice.Open {
			p.Left -= float64(s.impedance(w, c, n, t, false) * v[0] * v[0])
		}
		if line.Right == lattice.Open {
			p.Right -= float64(s.impedance(w, c, n, t, true) * v[last] * v[last])
		}
	}
	return p
}

func (s *Discrete) fitRow(dst []float64, n int) []float64 {
	if dst == nil {
		return make([]float64, n)
	}
	if len(dst) != n {
		panic(fmt.Sprintf("action: %d values for %d places", len(dst), n))
	}
	return dst
}
