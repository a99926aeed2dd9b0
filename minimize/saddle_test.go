package minimize

import (
	"context"
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// laneEmden is ∫½|∇u|² − ¼u⁴ on the unit square in n × n links, whose mountain pass is
// 6.6 high, and a lopsided start of the given height.
func laneEmden(t *testing.T, n int) (s *action.Discrete, lump func(height float64) *field.History) {
	t.Helper()
	clock, line := square(n, lattice.Held, lattice.Held)
	s = newAction(t, clock, line, action.Wave{Potential: action.Polynomial{0, 0, 0, 0, -0.25}, Signature: action.Euclidean})
	return s, func(height float64) *field.History {
		return field.Profile(func(x, t float64) (float64, float64) {
			return height * math.Sin(math.Pi*x) * math.Sin(math.Pi*t) * (1 + x), 0
		}).Over(s.Block())
	}
}

// One saddle from starts of every index: from below, where it is 0, from near by,
// and from above, where it reaches two dozen.
func TestSaddleFromAfar(t *testing.T) {
	s, lump := laneEmden(t, 16)
	want, err := Saddle(context.Background(), s, allAround(s.Block()), lump(4), nil)
	if err != nil {
		t.Fatal(err)
	}
	far, err := Ridge(s, field.NewHistory(s.Block(), 1), lump(60))
	if err != nil {
		t.Fatal(err)
	}
	for name, start := range map[string]*field.History{"0.3": lump(0.3), "2": lump(2), "12": lump(12), "ridge": far} {
		found, err := Saddle(context.Background(), s, allAround(s.Block()), start, nil)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		// 1e-10 of the largest term, 300, over the smallest eigenvalue, 12
		if d := found.History.MaxDifference(want.History); d > 3e-9 {
			t.Errorf("%s: differs by %.3g", name, d)
		}
	}
}

// On the line through (1 + x) sin πx sin πt the action is as² − bs⁴ with its top at
// s² = a/2b, which is where ∂S/∂s = Σ φ ∂S/∂φ vanishes.
func TestRidge(t *testing.T) {
	s, lump := laneEmden(t, 16)
	none := field.NewHistory(s.Block(), 1)
	h, err := Ridge(s, none, lump(30))
	if err != nil {
		t.Fatal(err)
	}
	a, b := s.Value(lump(1)), s.Value(lump(2)) // a = p − q, b = 4p − 16q
	p, q := (16*a-b)/12, (4*a-b)/12
	want := lump(math.Sqrt(p / (2 * q)))
	if d := h.MaxDifference(want); d > 30*1e-3*2 { // s to 1e-3; the shape is at most 1.6
		t.Errorf("off by %.3g", d)
	}
	if _, err := Ridge(s, none, lump(1)); err == nil || !strings.Contains(err.Error(), "at an end") {
		t.Errorf("%v", err)
	}
	if _, err := Ridge(s, none, field.NewHistory(s.Block(), 2)); err == nil || !strings.Contains(err.Error(), "ridge") {
		t.Errorf("%v", err)
	}
}
