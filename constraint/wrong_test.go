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
		{"rate at the first slice", func(s *Set) { s.Rate(0, row) }, []string{"slice 0", "slices 0 and 1", "March.Start"}},
		{"rate at the last slice", func(s *Set) { s.Rate(4, row) }, []string{"slice 4 (t = 2)", "slices 3 and 4"}},
		{"rate with NaN", func(s *Set) { s.Rate(2, bad) }, []string{"rate at slice 2", "NaN"}},
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
	ring := On(block(t, lattice.Axis{Step: 1, Sites: 3}, lattice.Axis{Step: 1, Sites: 4, Periodic: true}))
	ring.Right(math.Sqrt)
	if err := ring.Err(); err == nil || !strings.Contains(err.Error(), "right end of a periodic axis") {
		t.Errorf("end of a ring: %v", err)
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
