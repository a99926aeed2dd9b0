package constraint

import (
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

func TestWrongConditions(t *testing.T) {
	row := field.SliceOf([]float64{1, 2, 3, 4})
	bad := field.SliceOf([]float64{1, 2, math.NaN(), 4})
	two := field.NewSlice(2, 4)
	zero := func(float64) float64 { return 0 }
	for _, tc := range []struct {
		name string
		hold func(*Set)
		says []string
	}{
		{"slice off the block", func(s *Set) { s.Slice(5, row) }, []string{"slice 5", "0 to 4"}},
		{"slice of too many sites", func(s *Set) { s.Slice(0, field.NewSlice(1, 9)) }, []string{"slice 0", "9 sites", "want 4"}},
		{"slice with NaN", func(s *Set) { s.Slice(3, bad) }, []string{"slice 3", "NaN", "site 2"}},
		{"slice without values", func(s *Set) { s.Slice(3, field.Slice{}) }, []string{"slice 3", "0 components"}},
		{"part off the slice", func(s *Set) { s.Part(1, 3, 5, row) }, []string{"[3, 5)", "slice 1"}},
		{"part of another length", func(s *Set) { s.Part(1, 0, 3, row) }, []string{"[0, 3)", "4 sites", "want 3"}},
		{"event between sites", func(s *Set) { s.Event(1, 0.25, 0) }, []string{"(0.25, 1)", "0.25 steps"}},
		{"event after the end", func(s *Set) { s.Event(2.5, 0, 0) }, []string{"(0, 2.5)", "off the axis"}},
		{"event at NaN", func(s *Set) { s.Event(math.NaN(), 0, 0) }, []string{"NaN"}},
		{"event with an infinite value", func(s *Set) { s.Event(1, 0, math.Inf(1)) }, []string{"+Inf", "(0, 1)"}},
		{"event without a value", func(s *Set) { s.Event(1, 0) }, []string{"(0, 1)", "no components"}},
		{"two components after one", func(s *Set) { s.Slice(0, row); s.Slice(1, two) }, []string{"2 components", "set of 1"}},
		{"component beyond the field", func(s *Set) { s.Slice(0, row); s.Component(1).Event(1, 0, 0) }, []string{"component 1", "has 1"}},
		{"negative component", func(s *Set) { s.Component(-1) }, []string{"component -1"}},
		{"component of a component", func(s *Set) { s.Component(1).Component(0) }, []string{"component 0", "view"}},
		{"end given NaN", func(s *Set) {
			s.Left(math.Sqrt, nil)
			s.Right(func(t float64) float64 { return math.Log(t - 1) }, zero)
		}, []string{"NaN", "(2, 0)", "right end"}},
		{"rate with NaN", func(s *Set) { s.Rate(2, bad) }, []string{"rate at slice 2", "NaN"}},

		{"observation without deviation", func(s *Set) { s.Observe(1, 0, 2, 0) }, []string{"observation at (x, t) = (0, 1)", "deviation 0", "> 0"}},
		{"observation of NaN deviation", func(s *Set) { s.Observe(1, 0, 2, math.NaN()) }, []string{"(0, 1)", "deviation NaN"}},
		{"observation of nothing", func(s *Set) { s.Observe(1, 0, math.Inf(1), 1) }, []string{"(0, 1)", "+Inf"}},
		{"observation between sites", func(s *Set) { s.Observe(1, 0.25, 0, 1) }, []string{"(0.25, 1)", "0.25 steps"}},
		{"observed slice with negative deviation", func(s *Set) { s.ObserveSlice(2, row, -1) }, []string{"slice 2", "(-1, 1)", "deviation -1"}},
		{"observed part off the slice", func(s *Set) { s.ObservePart(2, 3, 6, row, 1) }, []string{"part [3, 6) of slice 2", "≤ 4"}},
		{"observation of one of two components", func(s *Set) { s.Slice(0, two); s.Observe(1, 0, 2, 1) }, []string{"(0, 1)", "field of 2", "Component(c)"}},

		{"cost without a penalty", func(s *Set) { s.Cost(1, 0, nil) }, []string{"cost without a penalty"}},
		{"cost off the block", func(s *Set) { s.Cost(1, 7, Cosine{}) }, []string{"(7, 1)", "off the axis"}},
		{"penalty without deviation", func(s *Set) { s.Cost(1, 0, Quadratic{Centre: 1}) }, []string{"cost", "deviation 0"}},
		{"penalty around NaN", func(s *Set) { s.CostSlice(1, nil, Cosine{math.NaN()}) }, []string{"cost of slice 1", "NaN"}},
		{"negative anchoring", func(s *Set) { s.CostLeft(nil, RapiniPapoular{W: -1}) }, []string{"left wall", "strength -1"}},
		{"negative weight", func(s *Set) { s.CostRight(func(x, t float64) float64 { return 1 - t }, Cosine{}) }, []string{"right wall", "weight -0.5", "(2, 1.5)"}},
		{"wall without events", func(s *Set) { s.CostAlong(nil, nil, Cosine{}) }, []string{"no events"}},
		{"wall of one site", func(s *Set) { s.CostPart(1, 2, 3, nil, Cosine{}) }, []string{"part [2, 3) of slice 1", "at least two"}},

		{"mean of no slice", func(s *Set) { s.Mean(-1, 0) }, []string{"mean of slice -1", "0 to 4"}},
		{"mean of NaN", func(s *Set) { s.Mean(1, math.NaN()) }, []string{"mean of slice 1", "NaN"}},
		{"soft without deviation", func(s *Set) { s.Mean(1, 0).Soft(0) }, []string{"mean of slice 1 at (x, t) = (-1, 0.5)", "deviation 0"}},
		{"linear without terms", func(s *Set) { s.Linear(1) }, []string{"linear condition without terms"}},
		{"linear whose terms cancel", func(s *Set) {
			at := lattice.Event{T: 1, X: 2}
			s.Linear(1, Coefficient{at, 0, 2}, Coefficient{at, 0, -2})
		}, []string{"(2, 1)", "no coefficient other than zero"}},
		{"linear with an infinite coefficient", func(s *Set) { s.Linear(1, Coefficient{lattice.Event{T: 1, X: 2}, 0, math.Inf(1)}) }, []string{"+Inf", "(2, 1)"}},
		{"linear on a component beyond", func(s *Set) { s.Slice(0, row); s.Linear(1, Coefficient{lattice.Event{T: 1, X: 2}, 3, 1}) }, []string{"(2, 1)", "component 3", "has 1"}},
		{"linear on another component of a view", func(s *Set) { s.Component(1).Linear(1, Coefficient{lattice.Event{T: 1, X: 2}, 2, 1}) }, []string{"(2, 1)", "component 2", "view of component 1"}},
		{"between outside", func(s *Set) { s.Between(1, 2.5, 0, field.Linear) }, []string{"(2.5, 1)", "space", "-1 to 2"}},
		{"between by nothing", func(s *Set) { s.Between(1, 0.5, 0, 7) }, []string{"(0.5, 1)", "interpolation(7)"}},

		{"average of no width", func(s *Set) { s.Average(1, 0.5, 0, Window{}) }, []string{"(0.5, 1)", "above 0"}},
		{"average of negative width", func(s *Set) { s.Average(1, 0.5, 0, Window{Width: -1}) }, []string{"(0.5, 1)", "-1 × 0"}},
		{"average off the block", func(s *Set) { s.Average(1, 1.5, 0, Window{Width: 1.25}) }, []string{"(1.5, 1)", "space", "-1 to 2"}},
		{"average before the block", func(s *Set) { s.Average(0.25, 1, 0, Window{Disc, 1, 1}) }, []string{"(1, 0.25)", "time", "0 to 2"}},
		{"average over no site", func(s *Set) { s.Average(1, 0.5, 0, Window{Width: 0.75}) }, []string{"(0.5, 1)", "covers no event"}},
		{"disc over no site", func(s *Set) { s.Average(1.25, 0.5, 0, Window{Disc, 1.25, 0.625}) }, []string{"(0.5, 1.25)", "covers no event"}},
		{"average between slices", func(s *Set) { s.Average(1.25, 0, 0, Window{Width: 1}) }, []string{"(0, 1.25)", "time", "0.5 steps"}},
		{"average of no shape", func(s *Set) { s.Average(1, 0, 0, Window{Shape(4), 1, 1}) }, []string{"shape(4)", "Box or Disc"}},

		{"collective without profile", func(s *Set) { s.Collective(1, field.NewSlice(1, 4), row) }, []string{"collective coordinate of slice 1", "no coefficient"}},
		{"collective about another field", func(s *Set) { s.Collective(1, row, two) }, []string{"1 components about a field of 2"}},
		{"collective by a short profile", func(s *Set) { s.Collective(1, field.NewSlice(1, 3), row) }, []string{"profile", "3 sites", "want 4"}},
		{"collective without a history", func(s *Set) { s.CollectiveBlock(nil, nil) }, []string{"collective coordinate", "no history"}},
		{"phase of a clock with ends", func(s *Set) { s.Phase(constant(s.Block(), 1, 0)) }, []string{"periodic time axis"}},

		{"bound by NaN", func(s *Set) { s.Bound(1, 0, math.NaN(), 1) }, []string{"(0, 1)", "NaN"}},
		{"bound from below by +∞", func(s *Set) { s.Bound(1, 2, math.Inf(1), math.Inf(1)) }, []string{"(2, 1)", "+Inf"}},
		{"bounds of nothing", func(s *Set) { s.BoundSlice(1, nil, nil) }, []string{"bounds of slice 1", "from below or from above"}},
		{"crossing bounds", func(s *Set) { s.Bound(1, 0, 0, 2); s.Bound(1, 0, 3, 4) }, []string{"(0, 1)", "below by 3", "above by 2"}},

		{"bound between sites", func(s *Set) { s.Bound(1, 0.25, 0, 1) }, []string{"bound", "(0.25, 1)", "0.25 steps"}},
		{"linear between sites", func(s *Set) { s.Linear(1, Coefficient{lattice.Event{T: 1, X: 0.25}, 0, 1}) }, []string{"linear condition", "(0.25, 1)"}},
		{"cubic on three slices", func(s *Set) {
			*s = *On(lattice.Block{Time: lattice.Axis{Step: 1, Sites: 3}, Space: s.Block().Space})
			s.Between(0.5, 0, 1, field.Cubic)
		}, []string{"(0, 0.5)", "3 sites", "at least 4"}},
		{"observed part after the end", func(s *Set) { s.ObserveSlice(7, row, 1) }, []string{"slice 7", "0 to 4"}},
		{"collective by a history of another size", func(s *Set) {
			s.CollectiveBlock(field.NewHistory(lattice.Block{Time: s.Block().Time, Space: s.Block().Time}, 1), nil)
		}, []string{"5 slices × 5 sites", "5 × 4"}},
		{"no region", func(s *Set) { s.Within(nil) }, []string{"no region"}},
	} {
		t.Run(tc.name, func(t *testing.T) {
			s := On(small(t))
			tc.hold(s)
			err := s.Err()
			if err == nil {
				t.Fatal("no error")
			}
			for _, word := range tc.says {
				if !strings.Contains(err.Error(), word) {
					t.Errorf("%q does not say %q", err, word)
				}
			}
			if strings.Contains(err.Error(), "\n") {
				t.Errorf("%q is longer than a line", err)
			}
			if _, free := s.Free(constant(s.Block(), 1, 0)); free == nil {
				t.Error("Free did not return the error")
			}
		})
	}
}

func TestWrongSets(t *testing.T) {
	if err := On(lattice.Block{}).Err(); err == nil {
		t.Error("no error from an empty block")
	}
	odd := On(lattice.Block{Time: lattice.Axis{Step: 1, Sites: 3}, Space: lattice.Axis{Step: 1, Sites: -3}})
	odd.Left(math.Sqrt)
	odd.Event(0, 0, 1)
	if odd.Err() == nil {
		t.Error("no error from a block of -3 sites")
	}
	short := On(block(t, lattice.Axis{Step: 1, Sites: 2}, lattice.Axis{Step: 1, Sites: 4}))
	short.Rate(1, field.NewSlice(1, 4))
	if err := short.Err(); err == nil || !strings.Contains(err.Error(), "rate at slice 1 (t = 1)") || !strings.Contains(err.Error(), "at least 3") {
		t.Errorf("rate on two slices: %v", err)
	}
	ring := On(block(t, lattice.Axis{Step: 1, Sites: 3}, lattice.Axis{Step: 1, Sites: 4, Periodic: true}))
	ring.Right(math.Sqrt)
	if err := ring.Err(); err == nil || !strings.Contains(err.Error(), "right end of a periodic axis") {
		t.Errorf("end of a ring: %v", err)
	}
	for name, c := range map[string]struct {
		hold func(*Set)
		says string
	}{
		"wall":       {func(s *Set) { s.CostLeft(nil, Cosine{}) }, "CostAlong"},
		"difference": {func(s *Set) { s.EndToEnd(1, 2) }, "Jump of the axis"},
		"average":    {func(s *Set) { s.Average(1, 0, 2, Window{Width: 4.5}) }, "longer than the periodic axis"},
	} {
		s := On(ring.Block())
		c.hold(s)
		if err := s.Err(); err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s on a ring: %v; want one that says %q", name, err, c.says)
		}
	}
	held := On(small(t))
	held.Event(1, 0, 1)
	nan := constant(held.Block(), 1, 0)
	nan.Set(3, 0, 2, math.NaN())
	for name, h := range map[string]*field.History{
		"no history":           nil,
		"NaN":                  nan,
		"two components":       constant(held.Block(), 2, 0),
		"another block's size": constant(block(t, lattice.Axis{Step: 1, Sites: 3}, lattice.Axis{Step: 1, Sites: 4}), 1, 0),
	} {
		if _, err := held.Free(h); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
}

// Nothing is lost: the first error is what the text shows, the others are found.
func TestErrorsAreKept(t *testing.T) {
	s := On(small(t))
	s.Event(1, 0.5, 0)
	s.Event(1, 0, 1)
	s.Event(1, 0, 2)
	s.Slice(9, field.NewSlice(1, 4))
	err := s.Err()
	var c *Conflict
	if !errors.As(err, &c) || c.Second != 2 {
		t.Errorf("conflict not found in %v", err)
	}
	if !strings.Contains(err.Error(), "(0.5, 1)") || !strings.Contains(err.Error(), "and 2 more") {
		t.Errorf("%q", err)
	}
}
