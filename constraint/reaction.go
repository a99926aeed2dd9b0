package constraint

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A Reaction is what a condition must do at one event so that it holds. What
// Push measures depends on the problem and is said by the solver that gives it.
type Reaction struct {
	Event     lattice.Event
	Component int
	Value     float64 // of the field there
	Push      float64
	Kind      string // which condition: slice, part, event, left end, right end, rate, end of the axis
}

// String returns the reaction in one line.
func (r Reaction) String() string {
	return fmt.Sprintf("%s at %v, component %d: value %.6g, push %.6g", r.Kind, r.Event, r.Component, r.Value, r.Push)
}

// Reactions returns the reaction of every fixed or tied value of the history h,
// the hardest-working first, given the push at every value.
//
// A tied value that is free has a push as well: the pushes of the values that
// follow one unknown add up to zero at a solution. It panics unless h and push
// have the shape of the history that Free was given.
func (u *Unknowns) Reactions(h, push *field.History) []Reaction {
	if len(h.Data) != len(u.by) || len(push.Data) != len(u.by) {
		panic(fmt.Sprintf("constraint: reactions of %d values with %d pushes; want %d of each", len(h.Data), len(push.Data), len(u.by)))
	}
	var all []Reaction
	for e, by := range u.by {
		if by == unpinned && !u.tied[e] {
			continue
		}
		if by == unpinned {
			by = byRate
		}
		_, c, _, at := u.Event(e)
		all = append(all, Reaction{Event: at, Component: c, Value: h.Data[e], Push: push.Data[e], Kind: by.String()})
	}
	slices.SortStableFunc(all, func(a, b Reaction) int {
		return cmp.Compare(math.Abs(b.Push), math.Abs(a.Push))
	})
	return all
}
