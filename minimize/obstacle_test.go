package minimize

import (
	"context"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// A double well between bounds, from a start at its top where the second variation
// is indefinite. What a minimum under bounds must satisfy, from the gradient of the
// action alone [Nocedal & Wright 2006, Numerical Optimization, theorem 12.1]: it
// vanishes between the bounds and points out of them where they hold. Symmetric
// square, symmetric minimum.
func TestBoundsOnADoubleWell(t *testing.T) {
	const low, high = -0.3, 0.8 // the free minimum goes up to 0.93
	b := unitSquare(63, 63)
	s, held := rimmedOn(t, b, action.Wave{Potential: action.Phi4{}, Sigma: action.Uniform(50)})
	held.Bounds(func(float64, float64) float64 { return low }, func(float64, float64) float64 { return high })
	start := field.NewHistory(b, 1)
	for n := range b.Slices() {
		for i := range b.Sites() {
			e := b.At(n, i)
			start.Set(n, 0, i, 0.05+0.2*math.Sin(40*e.X)*math.Cos(31*e.T))
		}
	}
	found, err := Minimum(context.Background(), s, held, start, nil)
	if err != nil {
		t.Fatal(err)
	}
	h := found.History
	g := s.Gradient(nil, h)
	cell := b.Time.Step * b.Space.Step
	atBound := 0
	for n := 1; n < b.Slices()-1; n++ {
		for i := 1; i < b.Sites()-1; i++ {
			slope, v := g.At(n, 0, i)/cell, h.At(n, 0, i)
			switch {
			case v < low || v > high:
				t.Errorf("%g at %v, out of bounds", v, b.At(n, i))
			case v == high && slope < 0 || v == low && slope > 0:
				atBound++
			case math.Abs(slope) > found.Report.Tolerance:
				t.Errorf("%g at %v has the slope %.2g, want 0 within %.1g", v, b.At(n, i), slope, found.Report.Tolerance)
			}
			// The curvature is at least of order 10, the slope 1e-10 of terms of 1e4.
			if d := v - h.At(i, 0, n); math.Abs(d) > 1e-7 {
				t.Errorf("%g at %v, %.1g more than at its mirror image", v, b.At(n, i), d)
			}
		}
	}
	if atBound < 100 {
		t.Errorf("%d values at a bound, want a plateau", atBound)
	}
	t.Logf("%d values at a bound, %d steps, %d factorisations", atBound, found.Report.Iterations, found.Report.Factorisations)
}
