package constraint

import (
	"errors"
	"math"
	"testing"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

func TestBoundsOfUnknowns(t *testing.T) {
	b := small(t)
	held := On(b)
	held.Bounds(func(x, t float64) float64 { return x }, nil)
	held.BoundSlice(2, nil, func(x, t float64) float64 { return 10 * t })
	held.Bound(1, 0, math.Inf(-1), 4)
	held.Event(1, 1, 5)
	held.Rate(1, field.SliceOf([]float64{2, 0, 0, 0})) // slice 2 = slice 0 + 2 at x = −1
	u := resolve(t, held, constant(b, 1, 1))
	low, high := u.Bounds()
	inf := math.Inf(1)
	for _, tc := range []struct {
		n, i      int
		low, high float64
	}{
		{0, 0, -1, 8}, // from slice 2: −1 − 2 and 10 − 2
		{0, 1, 0, 4},
		{0, 3, 2, 10},
		{4, 3, 2, inf},
	} {
		k, offset := u.At(tc.n*4 + tc.i)
		if low[k] != tc.low || high[k] != tc.high || offset != 0 {
			t.Errorf("(%d, %d) is bounded by %v and %v, want %v and %v", tc.n, tc.i, low[k], high[k], tc.low, tc.high)
		}
	}
	if n := u.Tally().Bounded; n != u.N {
		t.Errorf("%d unknowns bounded, want all %d", n, u.N)
	}
	x := make([]float64, u.N)
	for k := range x {
		x[k] = 20
	}
	if n := u.Clamp(x); n != 3 || x[0] != 8 || x[1] != 4 { // tied to slice 2: sites 0, 1 and 3
		t.Errorf("clamped %d to %v, want three", n, x)
	}
	if low, high := resolve(t, On(b), constant(b, 1, 1)).Bounds(); low != nil || high != nil {
		t.Errorf("bounds %v, %v of a set without any; want nil", low, high)
	}
}

func TestCrossings(t *testing.T) {
	for _, tc := range []struct {
		name string
		hold func(*Set)
		want Crossing
	}{
		{"bounds", func(s *Set) {
			s.Bounds(func(x, t float64) float64 { return x }, func(x, t float64) float64 { return 2.5 - t })
		}, Crossing{Event: lattice.Event{T: 1, X: 2}, Low: 2, High: 1.5}},
		{"pin", func(s *Set) {
			s.Event(1, 0, 3)
			s.Bound(1, 0, -1, 2)
		}, Crossing{Event: lattice.Event{T: 1, X: 0}, Low: -1, High: 2, By: "event", Value: 3}},
		{"value fixed by a rate", func(s *Set) {
			s.Event(0, 0, 3)
			s.Rate(1, field.SliceOf([]float64{0, 1, 0, 0}))
			s.Bound(1, 0, 4.5, math.Inf(1))
		}, Crossing{Event: lattice.Event{T: 1, X: 0}, Low: 4.5, High: math.Inf(1), By: "rate", Value: 4}},
		{"tied values", func(s *Set) {
			s.Rate(1, field.SliceOf([]float64{0, 0, 0, 3})) // +3 over two half steps
			s.Bound(0, 2, 0, 1)
			s.Bound(1, 2, 0, 2.5)
		}, Crossing{Event: lattice.Event{T: 1, X: 2}, Low: 3, High: 2.5}},
	} {
		s := On(small(t))
		tc.hold(s)
		_, err := s.Free(constant(s.Block(), 1, 0))
		var c *Crossing
		if !errors.As(err, &c) || *c != tc.want {
			t.Errorf("%s: error %v, want %v", tc.name, err, &tc.want)
		}
	}
}

// Bounds that touch, and values at a bound up to the rounding of the rates that
// carry them there, are no crossings.
func TestTouchingBounds(t *testing.T) {
	b := block(t, lattice.Axis{Step: 0.1, Sites: 31}, lattice.Axis{Step: 1, Sites: 2})
	held := On(b)
	held.Event(0, 0, 0.1)
	for n := 1; n < 30; n += 2 {
		held.Rate(n, field.SliceOf([]float64{1. / 3, 1. / 3}))
	}
	held.Bound(3, 0, 0.1+1, 0.1+1)
	held.Bound(0, 1, 1, 1)
	held.Bound(3, 1, 2, 2)
	u := resolve(t, held, constant(b, 1, 1))
	k, _ := u.At(1)
	if low, high := u.Bounds(); low[k] != high[k] || math.Abs(low[k]-1) > 1e-14 {
		t.Errorf("bounds %v and %v, want 1 twice", low[k], high[k])
	}
}

func TestReactionsOfBounds(t *testing.T) {
	b := small(t)
	held := On(b)
	held.Bound(1, 0, 2, 9)
	held.Bound(2, 1, math.Inf(-1), 3)
	held.Event(2, 2, 1)
	l := held.EndToEnd(4, 5)
	l.Name = "one fluxon"
	start := constant(b, 1, 2)
	u := resolve(t, held, start)
	h, push := start.Clone(), constant(b, 1, 0)
	h.Set(4, 0, 2, 3)
	bounds := make([]float64, u.N)
	at := func(n, i int) int { k, _ := u.At(h.Index(n, 0, i)); return k }
	bounds[at(2, 1)], bounds[at(4, 2)] = 4, -6
	push.Set(2, 0, 1, 4)
	push.Set(4, 0, 2, -6)
	push.Set(4, 0, 0, -0.5)
	push.Set(4, 0, 3, 8)
	got := u.ReactionsWith(h, push, Multipliers{Rows: []float64{0.5}, Bounds: bounds})
	want := []Reaction{
		{Event: b.At(4, 3), Value: 2, Push: 7.5, Kind: "event"}, // 8, of which the fluxon does ½
		{Event: b.At(4, 2), Value: 3, Push: -6, Kind: "upper bound"},
		{Event: b.At(2, 1), Value: 2, Push: 4, Kind: "lower bound"},
		{Event: b.At(4, 0), Value: 0, Push: 0.5, Kind: "one fluxon"},
	}
	for i, r := range want {
		if i >= len(got) || got[i] != r {
			t.Errorf("reactions %v, want %v", got, want)
			break
		}
	}
}
