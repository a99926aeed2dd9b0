package field

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/lattice"
)

// A quadratic is differentiated exactly, at the ends as well: both differences
// are of order 2. On a ring a linear field with its jump is.
func TestSlopeIsExact(t *testing.T) {
	clock := lattice.Axis{From: -0.3, Step: 0.1, Sites: 6}
	line := lattice.Axis{From: 2, Step: 0.25, Sites: 5}
	quadratic := func(x, t float64) float64 { return 1 - 2*x + 0.5*x*x + 3*t - t*t + 0.7*x*t }
	h := Profile(func(x, t float64) (float64, float64) { return quadratic(x, t), 0 }).Over(lattice.Block{Time: clock, Space: line})
	byTime, bySpace := h.TimeSlope(), h.SpaceSlope()
	ring := lattice.Axis{Step: 0.25, Sites: 8, Periodic: true, Jump: []float64{3}}
	linear := func(x, t float64) (float64, float64) { return 1.5 * x, 0 } // gains 3 over the length 2
	around := Profile(linear).Over(lattice.Block{Time: clock, Space: ring}).SpaceSlope()
	turning := NewHistory(lattice.Block{Time: ring, Space: line}, 1)
	for n := range ring.Sites {
		for i := range line.Sites {
			turning.Set(n, 0, i, 1.5*ring.At(n))
		}
	}
	turned := turning.TimeSlope()
	// rounding of values of order 10 over a step of 0.1
	const tol = 1e-13
	for n := range clock.Sites {
		for i := range line.Sites {
			e := h.Block.At(n, i)
			if d := byTime.At(n, 0, i) - (3 - 2*e.T + 0.7*e.X); math.Abs(d) > tol {
				t.Errorf("∂φ/∂t at %v is off by %.3g", e, d)
			}
			if d := bySpace.At(n, 0, i) - (-2 + e.X + 0.7*e.T); math.Abs(d) > tol {
				t.Errorf("∂φ/∂x at %v is off by %.3g", e, d)
			}
		}
		for i := range ring.Sites {
			if d := around.At(n, 0, i) - 1.5; math.Abs(d) > tol {
				t.Errorf("∂φ/∂x at site %d of the ring is off by %.3g", i, d)
			}
		}
	}
	for k, v := range turned.Data {
		if math.Abs(v-1.5) > tol {
			t.Errorf("∂φ/∂t of value %d on the periodic clock is %v, want 1.5", k, v)
		}
	}
	two := Profile(linear).Over(lattice.Block{Time: lattice.Axis{Step: 0.1, Sites: 2}, Space: line})
	if v := two.TimeSlope().MaxAbs(); v != 0 {
		t.Errorf("∂φ/∂t of two equal slices is %v", v)
	}
}
