package minimize

import (
	"cmp"
	"math"
	"slices"

	"github.com/tenter-go/tenter/lattice"
)

// A group is the values that one pinned condition holds.
type group struct {
	kind   string
	values []groupValue
	fixed  bool      // cannot be given up in another solve
	move   []float64 // of the values when the condition is given up
}

// A groupValue is one value of a group, with those that rates join to it.
type groupValue struct {
	at        lattice.Event
	component int
	push      float64 // ∂cost/∂φ, of all of them together
	joined    []int   // places in the history, its own among them
}

// load returns the move of the values by y.
func (g *group) load(y []float64) load {
	var l load
	for i, v := range g.values {
		for _, m := range v.joined {
			l.moved = append(l.moved, entry{m, y[i]})
		}
	}
	return l
}

// holds reports whether the group has a pin; see constraint.Set.Without.
func (g *group) holds(at lattice.Event, component int, kind string) bool {
	if kind != g.kind {
		return false
	}
	for _, v := range g.values {
		if v.at == at && v.component == component {
			return true
		}
	}
	return false
}

// groups returns the pinned conditions that push, in the order of their largest
// reactions. apart makes a group of every event.
func (q *Response) groups(apart bool) []*group {
	push := make([]float64, len(q.p.h.Data))
	for _, r := range q.found.Reactions {
		if _, held := conditionOf(r.Kind); held || r.Kind == "rate" {
			if e, err := q.index(r.Event, r.Component); err == nil {
				push[e] = r.Push
			}
		}
	}
	type key struct {
		kind string
		at   lattice.Event
	}
	lifted := make(map[lattice.Event]bool)
	for _, at := range q.p.set.Lifted {
		if n, i, err := q.p.f.Block().Index(at); err == nil {
			lifted[q.p.f.Block().At(n, i)] = true
		}
	}
	of := make(map[key]*group)
	var all []*group
	for _, r := range q.found.Reactions {
		extent, held := conditionOf(r.Kind)
		e, err := q.index(r.Event, r.Component)
		if !held || err != nil {
			continue
		}
		at := r.Event
		switch {
		case apart || extent == alongNothing:
		case extent == alongSpace:
			at.X = 0
		case extent == alongTime:
			at.T = 0
		}
		g := of[key{r.Kind, at}]
		if g == nil {
			g = &group{kind: r.Kind, fixed: r.Kind == "end of the axis"}
			of[key{r.Kind, at}] = g
			all = append(all, g)
		}
		g.fixed = g.fixed || lifted[r.Event]
		v := groupValue{at: r.Event, component: r.Component}
		for _, m := range q.joined(e, 1) {
			v.joined = append(v.joined, m.index)
			v.push += push[m.index]
		}
		g.values = append(g.values, v)
	}
	var largest float64
	for _, g := range all {
		for _, v := range g.values {
			largest = max(largest, math.Abs(v.push))
		}
	}
	const negligible = 1e-6 // of the largest push; such a condition would have to move a million times as far
	all = slices.DeleteFunc(all, func(g *group) bool {
		return !slices.ContainsFunc(g.values, func(v groupValue) bool { return math.Abs(v.push) > negligible*largest })
	})
	for _, g := range all {
		slices.SortFunc(g.values, func(a, b groupValue) int {
			return cmp.Or(cmp.Compare(a.at.T, b.at.T), cmp.Compare(a.component, b.component), cmp.Compare(a.at.X, b.at.X))
		})
	}
	return all
}

// extent says over what the values of one condition stretch.
type extent uint8

const (
	alongNothing extent = iota
	alongSpace
	alongTime
)

// conditionOf returns how far a condition of a kind stretches; held is false for
// reactions of what is not a pin.
func conditionOf(kind string) (along extent, held bool) {
	switch kind {
	case "slice", "part":
		return alongSpace, true
	case "left end", "right end", "end of the axis":
		return alongTime, true
	case "event":
		return alongNothing, true
	}
	return alongNothing, false
}

// rank sorts the reliefs and counts the tie.
func (v *Verdict) rank(alike float64) {
	all := v.Reliefs
	slices.SortStableFunc(all, func(a, b Relief) int { return cmp.Compare(b.saved(), a.saved()) })
	run := 0 // reliefs that save as the first does
	for run < len(all) && all[0].saved()-all[run].saved() <= alike*v.Cost {
		run++
	}
	slices.SortStableFunc(all[:run], func(a, b Relief) int {
		return cmp.Or(cmp.Compare(a.Values, b.Values), cmp.Compare(math.Abs(a.Move), math.Abs(b.Move)))
	})
	for v.Tied = 0; v.Tied < run && all[v.Tied].Values == all[0].Values; {
		v.Tied++
	}
}

// saved is the saving by the best that is known.
func (r Relief) saved() float64 {
	if r.Settled {
		return r.Confirmed
	}
	return r.Saving
}
