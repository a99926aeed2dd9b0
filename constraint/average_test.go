package constraint

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// average returns the average of f over a window on the block refined level
// times.
func average(t *testing.T, b lattice.Block, level int, e lattice.Event, w Window, f func(x, t float64) float64) float64 {
	t.Helper()
	return got(t, func(s *Set) *Linear { return s.Average(e.T, e.X, 0, w) }, sampled(b.Refine(1<<level), f))
}

// Weights sum to 1, and a linear function has the average of the centre where
// the window lies evenly on the lattice.
func TestAverageOfLinearFunctions(t *testing.T) {
	b := block(t, lattice.Axis{Step: 0.25, Sites: 17}, lattice.Axis{From: -3, Step: 0.5, Sites: 13})
	for name, w := range map[string]Window{
		"in x": {Width: 1.7}, "in t": {Duration: 0.8}, "box": {Box, 1.7, 0.8}, "disc": {Disc, 1.7, 0.8}, "one step": {Width: 0.5},
	} {
		one := average(t, b, 0, lattice.Event{T: 2, X: 0.5}, w, func(x, t float64) float64 { return 1 })
		if math.Abs(one-1) > 1e-15*50 { // rounding of so many weights
			t.Errorf("%s: the weights sum to %v", name, one)
		}
		got := average(t, b, 0, lattice.Event{T: 2, X: 0.5}, w, func(x, t float64) float64 { return 3*x - 2*t })
		if math.Abs(got+2.5) > 1e-14 {
			t.Errorf("%s: average %v, want −2.5, the value at the centre", name, got)
		}
	}
}

// As the lattice is refined the average of x² + 2t² tends to its integral over
// the window: width²/12 for an interval, radius²/4 for a disc. The error is that
// of the midpoint rule on cells, h²; the 16 lines of a disc add less.
func TestAverageConverges(t *testing.T) {
	b := block(t, lattice.Axis{From: -2, Step: 0.5, Sites: 9}, lattice.Axis{From: -2, Step: 0.5, Sites: 9})
	f := func(x, t float64) float64 { return x*x + 2*t*t }
	e := lattice.Event{}
	for _, tc := range []struct {
		name  string
		w     Window
		exact float64
	}{
		{"in x", Window{Width: 2.2}, 2.2 * 2.2 / 12},
		{"in t", Window{Duration: 2.2}, 2 * 2.2 * 2.2 / 12},
		{"box", Window{Box, 2.2, 1.8}, 2.2*2.2/12 + 2*1.8*1.8/12},
		{"disc", Window{Disc, 2.2, 1.8}, 2.2*2.2/16 + 2*1.8*1.8/16},
	} {
		for level, bound := range []float64{0.5 * 0.5, 0.25 * 0.25, 0.125 * 0.125, 0.0625 * 0.0625} {
			// a cell of width h adds at most h²/12 of each square on its inside, and the
			// cut cells of the rim, a share h/width of all, up to h·width of each
			if off := math.Abs(average(t, b, level, e, tc.w, f) - tc.exact); off > bound {
				t.Errorf("%s, level %d: off by %.3g, want within h² = %.3g", tc.name, level, off, bound)
			}
		}
	}
}

// A window may reach around a ring; with the jump, a straight line stays one.
func TestAverageAroundARing(t *testing.T) {
	b := block(t, lattice.Axis{Step: 0.5, Sites: 4, Periodic: true, Jump: []float64{-4}}, lattice.Axis{Step: 1, Sites: 6, Periodic: true, Jump: []float64{12}})
	line := func(x, t float64) float64 { return 2*x - 2*t }
	for _, w := range []Window{{Width: 3}, {Width: 6}, {Box, 4, 1.5}, {Disc, 4, 1.5}} {
		if got := average(t, b, 0, lattice.Event{T: 2, X: -1}, w, line); math.Abs(got+6) > 1e-14 {
			t.Errorf("%+v: average %v, want −6", w, got)
		}
	}
}

// The shares of a disc add up to its area, to the accuracy of 16 lines a cell.
func TestDiscShares(t *testing.T) {
	b := block(t, lattice.Axis{Step: 0.5, Sites: 41}, lattice.Axis{Step: 0.25, Sites: 81})
	var area float64
	On(b).eachShare(lattice.Event{T: 10, X: 10.1}, Window{Disc, 8, 12}, func(n, i int, share float64) {
		area += share
	})
	area *= b.Time.Step / 16 // lines are a sixteenth of a slice apart
	if want := math.Pi * 4 * 6; math.Abs(area-want) > 1e-3*want {
		t.Errorf("area %v, want %v", area, want)
	}
}

// A window of two steps takes half of the cells at its rim.
func TestAverageIsHeld(t *testing.T) {
	b := small(t)
	held := On(b)
	held.Average(1, 0, 3, Window{Width: 2})
	u := resolve(t, held, field.NewHistory(b, 1))
	r := u.HardRows()[0]
	if u.N != 20 || len(r.Weight) != 3 || r.Weight[0] != 0.25 || r.Weight[1] != 0.5 || r.Weight[2] != 0.25 || r.Value != 3 {
		t.Errorf("row %+v; want ¼, ½, ¼", r)
	}
}
