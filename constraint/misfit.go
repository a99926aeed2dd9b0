package constraint

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A Misfit is how far a history is from what a soft condition asks for.
type Misfit struct {
	Event     lattice.Event
	Component int
	Kind      string  // the name of the condition
	Asked     float64 // NaN if the penalty prefers no value
	Got       float64

	// Sigmas is (Got − Asked)/σ of an observation, a quadratic penalty and a soft
	// linear condition, whatever their weight; of any other penalty it is
	// √(2·Cost), NaN where the cost is negative.
	Sigmas float64
	Cost   float64 // with weight and strength
}

// String returns the misfit in one line.
func (m Misfit) String() string {
	return fmt.Sprintf("%s at %v, component %d: asked %.6g, got %.6g, %.3g σ, cost %.6g", m.Kind, m.Event, m.Component, m.Asked, m.Got, m.Sigmas, m.Cost)
}

// Misfits returns the misfit of every observed or penalised value and of every
// soft linear condition in the history h, the largest |Sigmas| first and NaN
// last. Walls and observed slices have one for each value. It panics unless the
// length fits.
func (u *Unknowns) Misfits(h *field.History) []Misfit {
	u.mustHave(h)
	all := make([]Misfit, 0, len(u.terms)+len(u.soft))
	for i := range u.terms {
		t := &u.terms[i]
		_, c, _, at := u.Event(t.value)
		m := Misfit{Event: at, Component: c, Kind: t.name, Asked: math.NaN(), Got: h.Data[t.value]}
		m.Cost, _, _ = t.At(h.Data[t.value])
		m.Sigmas = math.Sqrt(2 * m.Cost)
		if p, ok := t.Penalty.(interface{ Preferred() float64 }); ok {
			m.Asked = p.Preferred() - t.Shift
		}
		if q, ok := t.Penalty.(Quadratic); ok {
			m.Sigmas = (m.Got - m.Asked) / q.Sigma
		}
		all = append(all, m)
	}
	for i := range u.soft {
		r := &u.soft[i]
		got := r.of(h)
		d := got - r.Target
		all = append(all, Misfit{
			Event: r.Event, Component: r.Component, Kind: r.Name, Asked: r.asked, Got: got + r.shift,
			Sigmas: d / r.sigma, Cost: 0.5 * r.Precision * d * d,
		})
	}
	slices.SortStableFunc(all, func(a, b Misfit) int {
		return cmp.Compare(math.Abs(b.Sigmas), math.Abs(a.Sigmas))
	})
	return all
}
