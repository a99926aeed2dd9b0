package constraint

import (
	"maps"
	"slices"

	"github.com/tenter-go/tenter/lattice"
)

// Without returns a copy of the set that lacks the pins for which drop returns
// true, those of slices, parts, events and the two ends. It is asked for every
// pinned value with its event, component and the name of the condition that pins
// it, as reactions have it. Everything else is kept: rates, costs, linear
// conditions, bounds and the region, which the copy shares with the set.
//
// A set in error gives a copy in the same error.
func (s *Set) Without(drop func(at lattice.Event, component int, kind string) bool) *Set {
	h := *s.held
	h.rows = make(map[place]*row, len(s.rows))
	for p, r := range s.rows {
		kept := &row{value: slices.Clone(r.value), by: slices.Clone(r.by)}
		for i, by := range r.by {
			if by != unpinned && drop(s.block.At(p.slice, i), p.component, by.String()) {
				kept.by[i] = unpinned
			}
		}
		h.rows[p] = kept
	}
	h.bounds = maps.Clone(s.bounds)
	h.ties, h.penalties = slices.Clip(s.ties), slices.Clip(s.penalties)
	h.linears, h.problems = slices.Clip(s.linears), slices.Clip(s.problems)
	return &Set{held: &h, component: s.component}
}

// Joined returns the slices of the values that rates join to that of slice n,
// component c and site i, n itself among them, in ascending order. Where one of
// them is pinned they move together with its value.
func (s *Set) Joined(n, c, i int) []int {
	var links [][2]int
	for _, t := range s.ties {
		if t.component == c && t.site == i {
			links = append(links, [2]int{t.from, t.to}, [2]int{t.to, t.from})
		}
	}
	reached := []int{n}
	for k := 0; k < len(reached); k++ {
		for _, l := range links {
			if l[0] == reached[k] && !slices.Contains(reached, l[1]) {
				reached = append(reached, l[1])
			}
		}
	}
	slices.Sort(reached)
	return reached
}
