package constraint

import (
	"fmt"

	"github.com/tenter-go/tenter/lattice"
)

// A Cost is a condition that may be broken at a price,
//
//	Strength · Σ_j W_j P_j(φ_j),
//
// a sum over one or more values of the field, each with a weight and a penalty.
// Observations are costs too. The methods of [Set] that place one return it, so
// that its fields can be changed; [Set.Free] reads them. One that was in error
// is returned as well, but is not part of the set.
type Cost struct {
	Name     string  // how misfits and errors call it
	Strength float64 // a factor ≥ 0 on the whole cost; 1 unless changed

	parts []part
}

// A part is one value of the field in a cost: weight·penalty(φ), φ being the
// stored value plus shift.
type part struct {
	place
	site          int
	weight, shift float64
	penalty       Penalty
}

// Cost puts a penalty on the field at the event at time t and position x, with
// the weight 1.
func (s *Set) Cost(t, x float64, p Penalty) *Cost {
	return s.CostAlong([]lattice.Event{{T: t, X: x}}, nil, p)
}

// CostAlong puts a penalty on the field at every given event,
//
//	Σ_j W(x_j, t_j) P(φ_j),
//
// W being a weight ≥ 0 such as the length of a wall that belongs to the event. A
// nil function is the weight 1. An event that is given twice counts twice.
func (s *Set) CostAlong(events []lattice.Event, weight func(x, t float64) float64, p Penalty) *Cost {
	name := "wall"
	if len(events) == 1 {
		name = "cost"
	}
	k := newCost(name)
	c, ok := s.costs(name, p)
	if !ok {
		return k
	}
	if len(events) == 0 {
		s.fail(fmt.Errorf("constraint: wall along no events; want at least one"))
		return k
	}
	for _, e := range events {
		spot, err := s.locate(e)
		if err != nil {
			s.fail(fmt.Errorf("constraint: %s: %w", name, err))
			return k
		}
		w, err := weightAt(weight, e)
		if err != nil {
			s.fail(fmt.Errorf("constraint: %s: %w", name, err))
			return k
		}
		k.parts = append(k.parts, part{place: place{spot.slice, c}, site: spot.site, weight: w, shift: s.shift(spot, c), penalty: p})
	}
	return s.add(k)
}

// CostSlice puts a penalty on all of slice n: the integral ∫ W P(φ) dx by the
// trapezoid rule, Σ_i u_i h W(x_i, t) P(φ_i) with u_i = ½ at the two ends of an
// axis that is not periodic and 1 elsewhere. A nil W is 1.
func (s *Set) CostSlice(n int, weight func(x, t float64) float64, p Penalty) *Cost {
	return s.costRow(fmt.Sprintf("cost of slice %d", n), n, 0, s.block.Sites(), s.block.Space.Periodic, weight, p)
}

// CostPart does what CostSlice does on the sites from ≤ i < to of slice n, at
// least two of them; the trapezoid rule has its halves at the first and the last.
func (s *Set) CostPart(n, from, to int, weight func(x, t float64) float64, p Penalty) *Cost {
	return s.costRow(fmt.Sprintf("cost of part [%d, %d) of slice %d", from, to, n), n, from, to, false, weight, p)
}

func (s *Set) costRow(name string, n, from, to int, ring bool, weight func(x, t float64) float64, p Penalty) *Cost {
	k := newCost(name)
	if !s.onBlock(n, "cost of slice") {
		return k
	}
	if from < 0 || to > s.block.Sites() || to-from < 2 {
		s.fail(fmt.Errorf("constraint: %s; want at least two of the sites 0 to %d", name, s.block.Sites()-1))
		return k
	}
	c, ok := s.costs(name, p)
	if !ok {
		return k
	}
	for i := from; i < to; i++ {
		share := s.block.Space.Step
		if !ring && (i == from || i == to-1) {
			share *= 0.5
		}
		if !s.addPart(k, place{n, c}, i, share, weight, p) {
			return k
		}
	}
	return s.add(k)
}

// CostLeft puts a penalty on the first site of every slice: the integral
// ∫ W P(φ) dt by the trapezoid rule, Σ_n w_n k W(x, t_n) P(φ_n) with w_n = ½ on
// the first and last slice of a clock that is not periodic and 1 elsewhere. A
// nil W is 1. A periodic space axis has no ends.
func (s *Set) CostLeft(weight func(x, t float64) float64, p Penalty) *Cost {
	return s.costEnd("left wall", byLeft, 0, weight, p)
}

// CostRight does for the last site what CostLeft does for the first.
func (s *Set) CostRight(weight func(x, t float64) float64, p Penalty) *Cost {
	return s.costEnd("right wall", byRight, s.block.Sites()-1, weight, p)
}

func (s *Set) costEnd(name string, end kind, i int, weight func(x, t float64) float64, p Penalty) *Cost {
	k := newCost(name)
	if s.block.Space.Periodic {
		s.fail(fmt.Errorf("constraint: %s at the %v of a periodic axis; want CostAlong events instead", name, end))
		return k
	}
	c, ok := s.costs(name, p)
	if !ok {
		return k
	}
	for n := range s.block.Slices() {
		share := s.block.Time.Step * trapezoid(s.block.Time, n)
		if !s.addPart(k, place{n, c}, i, share, weight, p) {
			return k
		}
	}
	return s.add(k)
}

func newCost(name string) *Cost { return &Cost{Name: name, Strength: 1} }

// add puts a finished cost into the set.
func (s *Set) add(k *Cost) *Cost {
	s.penalties = append(s.penalties, k)
	return k
}

// costs returns the component that a penalty is on, and false after reporting
// what is wrong with it.
func (s *Set) costs(name string, p Penalty) (c int, ok bool) {
	if p == nil {
		s.fail(fmt.Errorf("constraint: %s without a penalty; want one such as Cosine", name))
		return 0, false
	}
	if checked, has := p.(interface{ Check() error }); has {
		if err := checked.Check(); err != nil {
			s.fail(fmt.Errorf("constraint: %s: %w", name, err))
			return 0, false
		}
	}
	return s.one(name)
}

func (s *Set) addPart(k *Cost, at place, i int, share float64, weight func(x, t float64) float64, p Penalty) bool {
	w, err := weightAt(weight, s.block.At(at.slice, i))
	if err != nil {
		s.fail(fmt.Errorf("constraint: %s: %w", k.Name, err))
		return false
	}
	k.parts = append(k.parts, part{place: at, site: i, weight: share * w, penalty: p})
	return true
}

func weightAt(weight func(x, t float64) float64, e lattice.Event) (float64, error) {
	if weight == nil {
		return 1, nil
	}
	w := weight(e.X, e.T)
	if !finite(w) || w < 0 {
		return 0, fmt.Errorf("weight %v at %v; want a finite number ≥ 0", w, e)
	}
	return w, nil
}

// trapezoid returns the weight of site i in the trapezoid rule on an axis, in
// steps: ½ at the ends, 1 elsewhere and on a periodic axis.
func trapezoid(a lattice.Axis, i int) float64 {
	if !a.Periodic && (i == 0 || i == a.Sites-1) {
		return 0.5
	}
	return 1
}
