package constraint

import (
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

func block(t *testing.T, clock, line lattice.Axis) lattice.Block {
	t.Helper()
	b, err := lattice.NewBlock(clock, line)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// small is 5 slices of 4 sites, t = 0, 0.5, …, 2 and x = −1, 0, 1, 2.
func small(t *testing.T) lattice.Block {
	return block(t, lattice.Axis{Step: 0.5, Sites: 5}, lattice.Axis{From: -1, Step: 1, Sites: 4})
}

// constant is the history of one number everywhere.
func constant(b lattice.Block, components int, v float64) *field.History {
	h := field.NewHistory(b, components)
	for e := range h.Data {
		h.Data[e] = v
	}
	return h
}

func resolve(t *testing.T, s *Set, start *field.History) *Unknowns {
	t.Helper()
	u, err := s.Free(start)
	if err != nil {
		t.Fatal(err)
	}
	return u
}

func adjusted(u *Unknowns, h *field.History) []float64 {
	h = h.Clone()
	u.Scatter(h, u.Gather(nil, h))
	return h.Data
}

func TestPins(t *testing.T) {
	b := small(t)
	held := On(b)
	held.Slice(0, field.SliceOf([]float64{1, 2, 3, 4}))
	held.Part(2, 1, 3, field.SliceOf([]float64{5, 6}))
	held.Event(2, 2, 7)
	held.Left(func(t float64) float64 { return 1 + t })
	held.Event(0, 0, 2) // pinned already, to the same number
	start := constant(b, 1, -1)
	u := resolve(t, held, start)
	want := []float64{
		1, 2, 3, 4,
		1.5, -1, -1, -1,
		2, 5, 6, -1,
		2.5, -1, -1, -1,
		3, -1, -1, 7,
	}
	if d := cmp.Diff(want, adjusted(u, start)); d != "" {
		t.Error(d)
	}
	// the slice, two of the part, the event, and four of the left end beside
	// the slice: 11 of 20; the end meets the slice once, the last event once
	if u.N != 9 || u.Fixed() != 11 || u.Redundant != 2 {
		t.Errorf("%d unknowns, %d fixed, %d redundant; want 9, 11, 2", u.N, u.Fixed(), u.Redundant)
	}
	events := held.Events()
	if len(events) != 11 || events[4] != (lattice.Event{T: 0.5, X: -1}) || events[10] != (lattice.Event{T: 2, X: 2}) {
		t.Errorf("pinned events %v", events)
	}
	if e := u.Lead(0); e != 5 {
		t.Errorf("first unknown is value %d, want 5", e)
	}
	if k, v := u.At(9); k != -1 || v != 5 {
		t.Errorf("value 9 follows %d with %v, want fixed at 5", k, v)
	}
}

func TestOneComponent(t *testing.T) {
	b := small(t)
	held := On(b)
	held.Component(1).Event(1, 0, 8)
	held.Component(0).Slice(4, field.SliceOf([]float64{1, 2, 3, 4}))
	held.Right(nil, func(float64) float64 { return 9 })
	u := resolve(t, held, field.NewHistory(b, 2))
	h := field.NewHistory(b, 2)
	u.Scatter(h, u.Gather(nil, h))
	for _, tc := range []struct {
		n, c, i int
		want    float64
		fixed   bool
	}{
		{2, 1, 1, 8, true}, {2, 0, 1, 0, false}, {4, 0, 2, 3, true}, {4, 1, 2, 0, false},
		{3, 1, 3, 9, true}, {3, 0, 3, 0, false},
	} {
		k, _ := u.At(h.Index(tc.n, tc.c, tc.i))
		if got := h.At(tc.n, tc.c, tc.i); got != tc.want || (k < 0) != tc.fixed {
			t.Errorf("component %d of (%d, %d) is %v, fixed %v; want %v, %v", tc.c, tc.n, tc.i, got, k < 0, tc.want, tc.fixed)
		}
	}
}

// Once around a ring the field gains the jump, so the pin 2π + 1 one lap on is
// the pin 1.
func TestEventOnRing(t *testing.T) {
	b := block(t, lattice.Axis{Step: 1, Sites: 4, Periodic: true, Jump: []float64{10}}, lattice.Axis{Step: 1, Sites: 3, Periodic: true, Jump: []float64{100}})
	held := On(b)
	held.Event(1, 4, 101)  // site 1, one lap on
	held.Event(6, -1, -85) // slice 2, one lap on; site 2, one lap back
	u := resolve(t, held, field.NewHistory(b, 1))
	if _, v := u.At(1*3 + 1); v != 1 {
		t.Errorf("pinned at %v, want 1", v)
	}
	if _, v := u.At(2*3 + 2); v != 5 {
		t.Errorf("pinned at %v, want 5", v)
	}
}

func TestHeldEnds(t *testing.T) {
	b := block(t, lattice.Axis{Step: 0.5, Sites: 4}, lattice.Axis{Step: 1, Sites: 3, Left: lattice.Held, Right: lattice.Odd})
	held := On(b)
	held.Left(func(t float64) float64 { return 2 * t })
	held.Rate(1, field.SliceOf([]float64{2, 1, 3})) // slices 0 and 2; 2k = 1
	start := constant(b, 1, 7)
	start.Set(2, 0, 2, 50) // not used: the chain starts at slice 0
	u := resolve(t, held, start)
	want := []float64{
		0, 7, 7,
		1, 7, 7,
		2, 8, 10,
		3, 7, 7,
	}
	if d := cmp.Diff(want, adjusted(u, start)); d != "" {
		t.Error(d)
	}
	if u.N != 3 {
		t.Errorf("%d unknowns, want 3: site 1 of four slices, two of them tied", u.N)
	}
}

func TestCauchyPair(t *testing.T) {
	b := small(t)
	row := field.SliceOf([]float64{1, 2, 3, 4})
	held := On(b)
	held.Slice(0, row)
	held.Slice(2, row)
	if n, ok := resolve(t, held, constant(b, 1, 0)).CauchyPair(); ok {
		t.Errorf("pair at %d of slices 0 and 2", n)
	}
	// the rate at slice 2 fixes nothing; that at slice 1 agrees with both slices
	held.Rate(2, row)
	held.Rate(1, field.NewSlice(1, 4))
	if n, ok := resolve(t, held, constant(b, 1, 0)).CauchyPair(); ok {
		t.Errorf("pair at %d of slices 0 and 2 with rates", n)
	}
	held.Part(3, 0, 4, row)
	if n, ok := resolve(t, held, constant(b, 1, 0)).CauchyPair(); !ok || n != 0 {
		// slice 1 = slice 3 − 2k·rate is fixed through the tie
		t.Errorf("pair %d, %v; want 0", n, ok)
	}
}

// Reduce is the transpose of Expand: ⟨g, dx⟩ over unknowns is ⟨by, dh⟩ over
// values.
func TestReduceIsTransposeOfExpand(t *testing.T) {
	b := small(t)
	held := On(b)
	held.Event(1, 0, 3)
	held.Rate(1, field.SliceOf([]float64{1, 1, 1, 1}))
	held.Rate(3, field.SliceOf([]float64{2, 0, 1, 1}))
	u := resolve(t, held, constant(b, 1, 0))
	dx, by, dh := make([]float64, u.N), constant(b, 1, 0), constant(b, 1, 0)
	for k := range dx {
		dx[k] = float64(k + 1)
	}
	for e := range by.Data {
		by.Data[e] = float64(e * e % 7)
	}
	u.Expand(dh, dx)
	var left, right float64
	for k, g := range u.Reduce(nil, by) {
		left += g * dx[k]
	}
	for e, v := range by.Data {
		right += v * dh.Data[e]
	}
	if left != right || left == 0 { // sums of small integers, exact
		t.Errorf("⟨Eᵀb, x⟩ = %v, ⟨b, Ex⟩ = %v", left, right)
	}
}

func TestReactionsAreSorted(t *testing.T) {
	b := small(t)
	held := On(b)
	held.Event(1, 0, 3)
	held.Event(2, 1, 4)
	held.Component(0).Rate(1, field.NewSlice(1, 4))
	start := constant(b, 1, 0)
	u := resolve(t, held, start)
	push := constant(b, 1, 0)
	push.Set(2, 0, 1, -5)
	push.Set(4, 0, 2, 2)
	push.Set(3, 0, 0, 99) // free and not tied: no reaction
	h := start.Clone()
	u.Scatter(h, u.Gather(nil, h))
	r := u.Reactions(h, push)
	if len(r) != 9 { // the tied values of slices 0 and 2, one of them pinned, and the event
		t.Fatalf("%d reactions, want 9", len(r))
	}
	if r[0].Push != -5 || r[0].Kind != "event" || r[0].Value != 3 || r[1].Push != 2 || r[1].Event != (lattice.Event{T: 2, X: 1}) || r[2].Kind != "rate" {
		t.Errorf("reactions %v", r[:3])
	}
}

func TestConflicts(t *testing.T) {
	for _, tc := range []struct {
		name          string
		hold          func(*Set)
		at            lattice.Event
		first, second float64
		above         bool
	}{
		{"event over slice", func(s *Set) {
			s.Slice(2, field.SliceOf([]float64{1, 2, 3, 4}))
			s.Event(1, 1, 3.5)
		}, lattice.Event{T: 1, X: 1}, 3, 3.5, false},
		{"one unit in the last place", func(s *Set) {
			s.Event(1, 1, 1)
			s.Event(1, 1, math.Nextafter(1, 2))
		}, lattice.Event{T: 1, X: 1}, 1, math.Nextafter(1, 2), false},
		{"end over event", func(s *Set) {
			s.Event(1.5, 2, 1)
			s.Right(func(float64) float64 { return 0 })
		}, lattice.Event{T: 1.5, X: 2}, 1, 0, false},
		{"rate between pins", func(s *Set) {
			s.Event(0.5, 0, 1)
			s.Event(1.5, 0, 3)
			s.Rate(2, field.SliceOf([]float64{0, 1, 0, 0}))
		}, lattice.Event{T: 1.5, X: 0}, 3, 2, false},
		{"chain of rates between pins", func(s *Set) {
			s.Event(0, 2, 1)
			s.Event(2, 2, 3)
			s.Rate(1, field.SliceOf([]float64{0, 0, 0, 0.5}))
			s.Rate(3, field.SliceOf([]float64{0, 0, 0, 0.25}))
		}, lattice.Event{T: 2, X: 2}, 3, 1.75, false},
		{"two rates", func(s *Set) {
			s.Rate(1, field.SliceOf([]float64{0, 0, 1, 0}))
			s.Rate(1, field.SliceOf([]float64{0, 0, 1.5, 0}))
		}, lattice.Event{T: 1, X: 1}, 1, 1.5, true},
	} {
		t.Run(tc.name, func(t *testing.T) {
			s := On(small(t))
			tc.hold(s)
			_, err := s.Free(constant(s.Block(), 1, 0))
			var c *Conflict
			if !errors.As(err, &c) {
				t.Fatalf("error %v, want a *Conflict", err)
			}
			if c.Event != tc.at || c.First != tc.first || c.Second != tc.second || (c.Above != nil) != tc.above {
				t.Errorf("conflict %+v; want %v, %v against %v", *c, tc.at, tc.first, tc.second)
			}
			if !strings.Contains(err.Error(), tc.at.String()) {
				t.Errorf("%q does not name the event", err)
			}
		})
	}
}

// Rates worked out from values agree with them to rounding only; that is a
// redundancy.
func TestRatesFromValuesAgree(t *testing.T) {
	b := block(t, lattice.Axis{Step: 0.1, Sites: 41}, lattice.Axis{Step: 0.3, Sites: 7})
	h := field.NewHistory(b, 1)
	for e := range h.Data {
		h.Data[e] = 3 + math.Sin(float64(e))/3
	}
	held := On(b)
	held.Slice(0, h.Slice(0))
	held.Slice(40, h.Slice(40))
	for n := 1; n < 40; n += 2 {
		v := h.Slice(n + 1).Clone()
		v.Axpy(-1, h.Slice(n-1))
		for i := range v.Data {
			v.Data[i] /= 2 * b.Time.Step
		}
		held.Rate(n, v)
	}
	u := resolve(t, held, h)
	if u.Redundant != 7 || u.N != 20*7 {
		t.Errorf("%d redundant, %d unknowns; want 7, 140", u.Redundant, u.N)
	}
	if k, v := u.At(h.Index(40, 0, 3)); k >= 0 || v != h.At(40, 0, 3) {
		t.Errorf("a pinned value is %v, want its own %v", v, h.At(40, 0, 3))
	}
}
