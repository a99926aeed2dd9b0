package constraint

import (
	"fmt"
	"iter"
	"math"

	"github.com/tenter-go/tenter/field"
)

// A Term is the cost that an observation or a cost condition puts on one value
// of a history.
type Term struct {
	Weight  float64 // the strength of the condition included
	Shift   float64 // what jumps of periodic axes add to the value
	Penalty Penalty

	value int
	cost  *Cost
	name  string
}

// At returns the cost Weight·P(φ + Shift) of the value φ, its slope and its
// curvature, which may be negative.
func (t *Term) At(phi float64) (cost, slope, curvature float64) {
	cost, slope, curvature = t.Penalty.At(phi + t.Shift)
	return t.Weight * cost, t.Weight * slope, t.Weight * curvature
}

// Terms returns the terms of all observations and cost conditions, each with the
// index of its value in the history, in the order in which they were placed; a
// value may have several. Fixed values are among them.
func (u *Unknowns) Terms() iter.Seq2[int, *Term] {
	return func(yield func(int, *Term) bool) {
		for i := range u.terms {
			if !yield(u.terms[i].value, &u.terms[i]) {
				return
			}
		}
	}
}

// charge resolves the observations and cost conditions of a set.
func (u *Unknowns) charge(s *Set) error {
	size := 0
	for _, k := range s.penalties {
		size += len(k.parts)
	}
	u.terms = make([]Term, 0, size)
	for _, k := range s.penalties {
		first := k.parts[0]
		if !finite(k.Strength) || k.Strength < 0 {
			return fmt.Errorf("constraint: %s at %v has the strength %v; want a finite number ≥ 0", k.Name, s.block.At(first.slice, first.site), k.Strength)
		}
		for _, p := range k.parts {
			e := u.index(p.place, p.site)
			if u.by[e] == byRegion {
				return outside(k.Name, p.component, s.block.At(p.slice, p.site))
			}
			u.terms = append(u.terms, Term{Weight: k.Strength * p.weight, Shift: p.shift, Penalty: p.penalty, value: e, cost: k, name: k.Name})
		}
	}
	return nil
}

// Cost returns what all soft conditions cost at the history h: observations, cost
// conditions and soft linear conditions. It panics unless the length fits.
func (u *Unknowns) Cost(h *field.History) float64 {
	u.mustHave(h)
	var sum float64
	for i := range u.terms {
		t := &u.terms[i]
		cost, _, _ := t.At(h.Data[t.value])
		sum += cost
	}
	for i := range u.soft {
		r := &u.soft[i]
		d := r.of(h) - r.Target
		sum += 0.5 * r.Precision * d * d
	}
	return sum
}

// CostOf returns what one condition of the set costs at the history h: with it
// one sees which wall yields. It is zero for one that is not in the resolved
// problem. It panics unless the length fits.
func (u *Unknowns) CostOf(k *Cost, h *field.History) float64 {
	u.mustHave(h)
	var sum float64
	for i := range u.terms {
		if t := &u.terms[i]; t.cost == k {
			cost, _, _ := t.At(h.Data[t.value])
			sum += cost
		}
	}
	return sum
}

// AddGradient adds the derivative of Cost by every value of the history h, fixed
// ones too, to g and returns the cost. It panics unless the lengths fit.
func (u *Unknowns) AddGradient(g, h *field.History) float64 {
	u.mustHave(h)
	u.mustHave(g)
	var sum float64
	for i := range u.terms {
		t := &u.terms[i]
		cost, slope, _ := t.At(h.Data[t.value])
		sum += cost
		g.Data[t.value] += slope
	}
	for i := range u.soft {
		r := &u.soft[i]
		d := r.of(h) - r.Target
		sum += 0.5 * r.Precision * d * d
		for j, e := range r.Index {
			g.Data[e] += r.Precision * d * r.Coefficient[j]
		}
	}
	return sum
}

// AddCurvature adds the second derivatives of the terms by every value of the
// history h to d, which holds the diagonal of a matrix; they may be negative. The
// soft linear conditions are not in it: each adds Precision·aaᵀ, a being its
// weights. It panics unless the lengths fit.
func (u *Unknowns) AddCurvature(d, h *field.History) {
	u.mustHave(h)
	u.mustHave(d)
	for i := range u.terms {
		t := &u.terms[i]
		_, _, curvature := t.At(h.Data[t.value])
		d.Data[t.value] += curvature
	}
}

// A Tally says how much a resolved problem has beside pins and ties.
type Tally struct {
	Terms   int // values with a cost or an observation, each counted for each
	Hard    int // hard linear conditions
	Soft    int // soft linear conditions
	Bounded int // unknowns with a bound
}

// Tally counts the conditions beside pins and ties. It is zero if a solver that
// knows only those solves the whole problem.
func (u *Unknowns) Tally() Tally {
	t := Tally{Terms: len(u.terms), Hard: len(u.hard), Soft: len(u.soft)}
	if u.limits != nil {
		for k := range u.N {
			if !math.IsInf(u.limits.low[k], -1) || !math.IsInf(u.limits.high[k], 1) {
				t.Bounded++
			}
		}
	}
	return t
}

func (u *Unknowns) mustHave(h *field.History) {
	if len(h.Data) != len(u.follows) {
		panic(fmt.Sprintf("constraint: history of %d values; want %d", len(h.Data), len(u.follows)))
	}
}
