package constraint

import (
	"slices"
	"testing"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

func TestWithout(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 0.5, Sites: 5}, Space: lattice.Axis{Step: 1, Sites: 4}}
	held := On(b)
	held.Slice(0, field.NewSlice(1, 4))
	held.Event(1, 2, 7)
	held.Left(func(t float64) float64 { return 0 })
	held.Mean(3, 1)
	fewer := held.Without(func(at lattice.Event, component int, kind string) bool {
		return kind == "event" && at == lattice.Event{T: 1, X: 2} && component == 0 || kind == "left end" && at.T > 1
	})
	start := field.NewHistory(b, 1)
	count := func(s *Set) (fixed, rows int) {
		u, err := s.Free(start)
		if err != nil {
			t.Fatal(err)
		}
		return u.Fixed(), len(u.HardRows())
	}
	// 4 of the slice, the event, 4 of the left end besides slice 0, which two
	// conditions pin alike and the slice pins first
	if fixed, rows := count(held); fixed != 9 || rows != 1 {
		t.Errorf("%d values fixed and %d rows before; want 9 and 1", fixed, rows)
	}
	if fixed, rows := count(fewer); fixed != 6 || rows != 1 {
		t.Errorf("%d values fixed and %d rows after; want 6 and 1", fixed, rows)
	}
	// The copy may take a pin where one was dropped, and the set does not hear
	// of it.
	fewer.Event(1, 2, 8)
	if err := fewer.Err(); err != nil {
		t.Error(err)
	}
	if u, err := held.Free(start); err != nil {
		t.Error(err)
	} else if _, v := u.At(start.Index(2, 0, 2)); v != 7 {
		t.Errorf("the set's own pin became %v; want 7", v)
	}
}

func TestJoined(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 1, Sites: 7}, Space: lattice.Axis{Step: 1, Sites: 3}}
	held := On(b)
	held.Rate(1, field.NewSlice(1, 3)) // 0 with 2
	held.Rate(3, field.NewSlice(1, 3)) // 2 with 4
	held.Rate(2, field.NewSlice(1, 3)) // 1 with 3
	for _, c := range []struct {
		n    int
		want []int
	}{{0, []int{0, 2, 4}}, {4, []int{0, 2, 4}}, {1, []int{1, 3}}, {6, []int{6}}} {
		if got := held.Joined(c.n, 0, 1); !slices.Equal(got, c.want) {
			t.Errorf("joined to slice %d: %v; want %v", c.n, got, c.want)
		}
	}
}
