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
	Value     float64 // of the field there, or of a linear condition
	Push      float64

	// Kind says which condition: slice, part, event, left end, right end, rate,
	// end of the axis, lower bound, upper bound, or the name of a linear
	// condition.
	Kind string
}

// String returns the reaction in one line.
func (r Reaction) String() string {
	return fmt.Sprintf("%s at %v, component %d: value %.6g, push %.6g", r.Kind, r.Event, r.Component, r.Value, r.Push)
}

// Multipliers are what a solver finds beside the history: the pushes of the hard
// rows and of the bounds. With push the history-shaped quantity that Reactions is
// given, summed over the values that follow unknown k, a solution has
//
//	push[k] = Σ_r Rows[r]·Weight_r[k] + Bounds[k].
type Multipliers struct {
	Rows   []float64 // one for each of HardRows; nil if there are none
	Bounds []float64 // one for each unknown, zero where no bound is active; nil without bounds
}

// Reactions returns the reaction of every fixed or tied value of the history h,
// the hardest-working first, given the push at every value: ReactionsWith without
// multipliers.
func (u *Unknowns) Reactions(h, push *field.History) []Reaction {
	return u.ReactionsWith(h, push, Multipliers{})
}

// ReactionsWith returns the reactions of all hard conditions in the history h,
// the largest |Push| first, given the push at every value and the multipliers of
// the solve:
//
//   - of every fixed or tied value, its push less what linear conditions and
//     bounds do there. A tied value that is free has one as well: the reactions of
//     the values that follow one unknown add up to zero at a solution;
//   - of every hard linear condition that the solver got, its multiplier λ, named
//     by its first event: it does λ·a at each of its events, a being the
//     coefficient there, and Value is Σ a φ;
//   - of every active bound, its multiplier, at the event whose bound it is.
//
// It panics unless h and push have the shape of the history that Free was given,
// and unless there are as many multipliers as rows and unknowns, or none.
func (u *Unknowns) ReactionsWith(h, push *field.History, m Multipliers) []Reaction {
	if len(h.Data) != len(u.by) || len(push.Data) != len(u.by) {
		panic(fmt.Sprintf("constraint: reactions of %d values with %d pushes; want %d of each", len(h.Data), len(push.Data), len(u.by)))
	}
	if m.Rows != nil && len(m.Rows) != len(u.hard) || m.Bounds != nil && len(m.Bounds) != u.N {
		panic(fmt.Sprintf("constraint: multipliers of %d rows and %d unknowns; want %d and %d, or none", len(m.Rows), len(m.Bounds), len(u.hard), u.N))
	}
	own := push.Data
	if len(m.Rows) > 0 || len(m.Bounds) > 0 {
		own = slices.Clone(push.Data)
	}
	var all []Reaction
	for i, lambda := range m.Rows {
		r := &u.hard[i]
		for j, e := range r.Index {
			own[e] -= lambda * r.Coefficient[j]
		}
		all = append(all, Reaction{Event: r.Event, Component: r.Component, Value: r.of(h) + r.shift, Push: lambda, Kind: r.Name})
	}
	for k, lambda := range m.Bounds {
		if lambda == 0 || u.limits == nil {
			continue
		}
		e, kind := u.active(k, h)
		own[e] -= lambda
		_, c, _, at := u.Event(e)
		all = append(all, Reaction{Event: at, Component: c, Value: h.Data[e], Push: lambda, Kind: kind})
	}
	for e, by := range u.by {
		if by == byRegion || by == unpinned && !u.tied[e] {
			continue
		}
		if by == unpinned {
			by = byRate
		}
		_, c, _, at := u.Event(e)
		all = append(all, Reaction{Event: at, Component: c, Value: h.Data[e], Push: own[e], Kind: by.String()})
	}
	slices.SortStableFunc(all, func(a, b Reaction) int {
		return cmp.Compare(math.Abs(b.Push), math.Abs(a.Push))
	})
	return all
}

// active returns the value whose bound unknown k is nearer to, and which bound.
func (u *Unknowns) active(k int, h *field.History) (e int, kind string) {
	l := u.limits
	x := h.Data[u.lead[k]]
	if x-l.low[k] <= l.high[k]-x {
		return l.lowAt[k], "lower bound"
	}
	return l.highAt[k], "upper bound"
}
