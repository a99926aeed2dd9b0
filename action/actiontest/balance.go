package actiontest

import (
	"math"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// siteBalance asks that h·u·∂e/∂t of every site with an equation be the energy
// flux from the left less that to the right, along the motion that the
// accelerator gives, for an equation without losses and sources. Ends without
// an equation move at a rate of their own.
func (e *examination) siteBalance() {
	w := e.Density()
	if e.Conservative() != nil || w.Source != nil || w.LeftFlux != nil || w.RightFlux != nil {
		return
	}
	st, rates, t := e.moving(true)
	line := e.Block().Space
	q := e.alongMotion(st, rates, len(st.Field.Component(0)), func(dst []float64, s field.State) {
		e.EnergyDensity(dst, s, t)
		for i := range dst {
			dst[i] *= line.Step * line.Weight(i)
		}
	})
	flux := e.EnergyFlux(nil, st, t)
	given := make([]float64, line.Sites)
	for i := range given {
		switch {
		case e.heldSite(i):
			given[i] = q.value[i]
			continue
		case i > 0:
			given[i] += flux[i-1]
		case line.Periodic:
			given[i] += flux[len(flux)-1]
		}
		if i < len(flux) {
			given[i] -= flux[i]
		}
	}
	j := newJudge(e.s, q, given, flux)
	for i, v := range given {
		if size, text := j.verdict(i, v); size > 0 {
			e.found.add("energy balance", size, "energy that EnergyFlux brings to the site at %v %s of EnergyDensity",
				lattice.Event{T: t, X: line.At(i)}, text)
		}
	}
}

// totalBalance asks that the energy of the field change by the power, with held
// ends at rest.
func (e *examination) totalBalance() {
	st, rates, t := e.moving(false)
	p := e.Power(st, t)
	given := []float64{p.Source + p.Loss + p.Left + p.Right}
	q := e.alongMotion(st, rates, 1, func(dst []float64, s field.State) { dst[0] = e.Energy(s, t).Field() })
	en := e.Energy(st, t)
	// Rates of change are small differences of the powers that links carry.
	j := newJudge(e.s, q, given, []float64{p.Source, p.Loss, p.Left, p.Right}, e.EnergyFlux(nil, st, t))
	if size, text := j.verdict(0, given[0]); size > 0 {
		e.found.add("power", size, "power %+v at t = %g %s of Energy.Field; the energy is %+v", p, t, text, en)
	}
	var sum float64
	line := e.Block().Space
	for i, v := range e.EnergyDensity(nil, st, t) {
		sum += line.Step * line.Weight(i) * v
	}
	if off := math.Abs(sum - en.Field()); !(off <= rounding*(math.Abs(en.Kinetic)+math.Abs(en.Elastic)+math.Abs(en.Potential))) {
		e.found.add("energy density", off, "energy density sums to %.12g at t = %g; want Energy.Field() = %.12g", sum, t, en.Field())
	}
}

// moving returns a random state, the rate at which it moves, (φ_t, φ_tt), and
// its time.
func (e *examination) moving(heldMove bool) (st, rates field.State, t float64) {
	st = field.State{Field: e.h.Slice(1), Rate: e.h.Slice(2).Clone()}
	if !heldMove {
		for c := range st.Rate.Components {
			for i := range st.Rate.Sites {
				if e.heldSite(i) {
					st.Rate.Component(c)[i] = 0
				}
			}
		}
	}
	t = e.Block().Time.At(1)
	rates = field.State{Field: st.Rate, Rate: field.NewSlice(st.Rate.Components, st.Rate.Sites)}
	e.force.At(rates.Rate, st, t)
	return st, rates, t
}

// alongMotion measures the rate of change of a function of the state, its
// explicit dependence on time apart.
func (e *examination) alongMotion(st, rates field.State, n int, f func(dst []float64, s field.State)) quotient {
	// A step that changes neither φ nor φ_t by more than Settings.Step.
	step := e.s.Step / max(1, rates.Field.MaxAbs(), rates.Rate.MaxAbs())
	return slopeOf(n, step, func(dst []float64, eps float64) {
		s := st.Clone()
		s.Field.Axpy(eps, rates.Field)
		s.Rate.Axpy(eps, rates.Rate)
		f(dst, s)
	})
}
