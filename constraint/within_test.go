package constraint

import (
	"strings"
	"testing"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// stem is the block of small without the cells with t > 1 and x > 0: the events
// at t = 1.5 and 2 with x = 1 and 2 are gone.
func stem(t *testing.T) *lattice.Region {
	t.Helper()
	r, err := lattice.NewRegion(small(t), func(e lattice.Event) bool { return e.T < 1 || e.X < 0 })
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func TestWithin(t *testing.T) {
	held := On(small(t))
	held.Within(stem(t))
	held.Within(held.region) // the same once more
	held.Left(func(t float64) float64 { return 1 })
	held.Part(4, 1, 2, field.SliceOf([]float64{6}))
	held.Bounds(func(x, t float64) float64 { return -1 }, nil)
	start := constant(held.Block(), 1, 5)
	u := resolve(t, held, start)
	// 4 are gone, 5 on the left end, 1 at t = 2.
	if u.N != 20-4-5-1 || u.Fixed() != 10 {
		t.Errorf("%d unknowns, %d fixed; want 10 and 10", u.N, u.Fixed())
	}
	for _, e := range []int{14, 15, 18, 19} {
		if k, v := u.At(e); k != -1 || v != 5 {
			t.Errorf("value %d outside follows %d with %v; want fixed at the start's 5", e, k, v)
		}
	}
	if r := u.Reactions(start, start); len(r) != 6 {
		t.Errorf("%d reactions, want those of the 6 pins", len(r))
	}
}

func TestConditionsOutsideOfTheRegion(t *testing.T) {
	for name, hold := range map[string]func(*Set){
		"pin of a slice":         func(s *Set) { s.Slice(3, field.NewSlice(1, 4)) },
		"pin of a right end":     func(s *Set) { s.Right(func(float64) float64 { return 0 }) },
		"rate":                   func(s *Set) { s.Rate(2, field.NewSlice(1, 4)) },
		"observation":            func(s *Set) { s.Observe(1.5, 1, 0, 1) },
		"right wall":             func(s *Set) { s.CostRight(nil, Cosine{}) },
		"mean of slice 3":        func(s *Set) { s.Mean(3, 0) },
		"average":                func(s *Set) { s.Average(1.5, 0, 0, Window{Width: 2}) },
		"bound":                  func(s *Set) { s.Bound(1.5, 1, 0, 1) },
		"collective coordinate ": func(s *Set) { s.CollectiveBlock(constant(s.Block(), 1, 1), nil) },
	} {
		s := On(small(t))
		hold(s)
		s.Within(stem(t)) // the order does not matter
		_, err := s.Free(constant(s.Block(), 1, 0))
		if err == nil {
			t.Errorf("%s: no error", name)
			continue
		}
		for _, word := range []string{name, "not in the region", ", 1.5)"} {
			if !strings.Contains(err.Error(), word) {
				t.Errorf("%s: %q does not say %q", name, err, word)
			}
		}
	}
}

func TestWrongRegions(t *testing.T) {
	s := On(small(t))
	s.Within(stem(t))
	s.Within(stem(t))
	if err := s.Err(); err == nil || !strings.Contains(err.Error(), "a second region") {
		t.Errorf("error %v, want one of a second region", err)
	}
	whole, err := lattice.NewRegion(block(t, lattice.Axis{Step: 0.5, Sites: 5}, lattice.Axis{Step: 1, Sites: 4}), nil)
	if err != nil {
		t.Fatal(err)
	}
	s = On(small(t))
	s.Within(whole)
	if err := s.Err(); err == nil || !strings.Contains(err.Error(), "region on the block from (x, t) = (0, 0)") {
		t.Errorf("error %v, want one that names the block of the region", err)
	}
}
