package constraint

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A Row is a linear condition of a resolved problem. Over the values of a
// history, Index as in field.History.Data, it is
//
//	Σ_j Coefficient[j]·φ[Index[j]] = Target,
//
// over the unknowns, with what is fixed on the right-hand side,
//
//	Σ_j Weight[j]·x[Unknown[j]] = Value.
//
// Both lists ascend. A hard row has unknowns and has to be met; hard rows that
// follow from others are not among those that a solver gets. A soft one costs
// Precision·(Σ Weight·x − Value)²/2, with the strength of the condition in
// Precision; it may have no unknowns. The slices belong to the resolved problem.
type Row struct {
	Name      string
	Event     lattice.Event
	Component int

	Unknown []int32
	Weight  []float64
	Value   float64

	Index       []int32
	Coefficient []float64
	Target      float64

	Precision float64 // Strength/σ²; 0 for a hard row

	asked, shift float64 // what was asked of Σ Coefficient·φ + shift
	sigma        float64
	scale        float64 // Σ |terms of Value| before they cancel
}

// Miss returns Σ Weight·x − Value.
func (r *Row) Miss(x []float64) float64 {
	sum := -r.Value
	for j, k := range r.Unknown {
		sum += r.Weight[j] * x[k]
	}
	return sum
}

// of returns Σ Coefficient·φ.
func (r *Row) of(h *field.History) float64 {
	var sum float64
	for j, e := range r.Index {
		sum += r.Coefficient[j] * h.Data[e]
	}
	return sum
}

// HardRows returns the hard linear conditions, without those that follow from
// others. They belong to u. The order is that in which they were placed.
func (u *Unknowns) HardRows() []Row { return u.hard }

// SoftRows returns the soft linear conditions. They belong to u.
func (u *Unknowns) SoftRows() []Row { return u.soft }

// linear resolves the linear conditions of a set.
func (u *Unknowns) linear(s *Set) error {
	for _, l := range s.linears {
		r, err := u.row(l)
		if err != nil {
			return err
		}
		switch {
		case l.sigma > 0:
			if !finite(l.Strength) || l.Strength < 0 {
				return fmt.Errorf("constraint: %s at %v has the strength %v; want a finite number ≥ 0", l.Name, l.at, l.Strength)
			}
			r.Precision = l.Strength / (l.sigma * l.sigma)
			u.soft = append(u.soft, *r)
		case len(r.Unknown) == 0:
			// The fixed values decide; Value is what they leave over.
			const ulp = 0x1p-52
			if math.Abs(r.Value) > 8*ulp*float64(1+len(r.Index))*r.scale {
				return &Contradiction{Condition: l.Name, Event: l.at, Component: l.component, Asked: l.asked, Forced: l.asked - r.Value}
			}
			u.repeat(fmt.Sprintf("%s at %v, which pins and rates meet", l.Name, l.at))
		default:
			u.hard = append(u.hard, *r)
		}
	}
	return u.dropDependent()
}

// repeat counts a condition that others imply.
func (u *Unknowns) repeat(what string) {
	u.Redundant++
	u.Repeats = append(u.Repeats, what)
}

// row writes a linear condition over values and unknowns.
func (u *Unknowns) row(l *Linear) (*Row, error) {
	r := &Row{
		Name: l.Name, Event: l.at, Component: l.component, Target: l.asked - l.shift, asked: l.asked, shift: l.shift, sigma: l.sigma,
		Index: make([]int32, len(l.terms)), Coefficient: make([]float64, len(l.terms)),
	}
	r.Value, r.scale = r.Target, math.Abs(l.asked)+math.Abs(l.shift)
	type entry struct {
		unknown   int32
		sum, size float64 // Σ a and Σ |a|
	}
	entries := make([]entry, 0, len(l.terms))
	for j, t := range l.terms {
		e := u.index(t.place, t.site)
		if u.by[e] == byRegion {
			return nil, outside(l.Name, t.component, u.block.At(t.slice, t.site))
		}
		r.Index[j], r.Coefficient[j] = int32(e), t.a
		k, offset := u.At(e)
		r.Value -= t.a * offset
		r.scale += math.Abs(t.a * offset)
		if k >= 0 {
			entries = append(entries, entry{int32(k), t.a, math.Abs(t.a)})
		}
	}
	slices.SortStableFunc(entries, func(a, b entry) int { return cmp.Compare(a.unknown, b.unknown) })
	for from := 0; from < len(entries); {
		to, m := from+1, entries[from]
		for ; to < len(entries) && entries[to].unknown == m.unknown; to++ {
			m.sum += entries[to].sum
			m.size += entries[to].size
		}
		// Coefficients of tied values may cancel, up to rounding.
		if math.Abs(m.sum) > 1e-14*float64(to-from)*m.size || to-from == 1 {
			r.Unknown, r.Weight = append(r.Unknown, m.unknown), append(r.Weight, m.sum)
		}
		from = to
	}
	return r, nil
}

// index returns the place of a value in the history.
func (u *Unknowns) index(p place, site int) int {
	return (p.slice*u.components+p.component)*u.block.Sites() + site
}
