package integrate_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// jagged is a profile that no smooth scheme would carry: a triangle, a step and
// a spike, nothing of which is resolved.
func jagged(x float64) float64 {
	switch {
	case x > -3 && x < -1:
		return 1 - math.Abs(x+2)
	case x >= 0 && x < 1:
		return 0.7
	case x == 2:
		return -1
	}
	return 0
}

// d'Alembert: at Courant number 1 the nearest-neighbour leapfrog is
// φ(n+1, i) = φ(n, i+1) + φ(n, i−1) − φ(n−1, i), which f(x − t) and g(x + t)
// solve exactly on the lattice (textbook).
func TestDAlembertFromPair(t *testing.T) {
	const step = 0.25
	line := lattice.Axis{From: -10, Step: step, Sites: 121}
	clock := lattice.Axis{Step: step, Sites: 61}
	s := discrete(t, clock, line, action.Wave{})
	exact := func(x, tt float64) float64 { return jagged(x-tt) + 2*jagged(x-4+tt) }
	start, second := field.NewState(1, line.Sites), field.NewSlice(1, line.Sites)
	for i := range line.Sites {
		start.Field.Data[i] = exact(line.At(i), 0)
		second.Data[i] = exact(line.At(i), step)
	}
	run := evolve(t, s, start, integrate.Settings{Second: second})
	var worst float64
	for n := range clock.Sites {
		for i := range line.Sites {
			// until the left-moving wave meets the end at x = −10
			if tt, x := clock.At(n), line.At(i); tt+0.5 < 10 || x > -10+(tt-9) {
				worst = max(worst, math.Abs(run.History.At(n, 0, i)-exact(x, tt)))
			}
		}
	}
	t.Logf("from a pair: largest error %.3g", worst)
	// Sums and differences of three numbers below 4, most of them exact: a few
	// roundings of 4e-16 each.
	if worst > 1e-14 {
		t.Errorf("largest error %.3g; want rounding", worst)
	}
}

// From rest the solution is ½(f(x − t) + f(x + t)), and the start of leapfrog
// makes slice 1 of it exactly; a free end mirrors.
func TestDAlembertFromRest(t *testing.T) {
	const step = 0.25
	line := lattice.Axis{From: -10, Step: step, Sites: 81}
	clock := lattice.Axis{Step: step, Sites: 161}
	s := discrete(t, clock, line, action.Wave{})
	start := field.NewState(1, line.Sites)
	for i := range line.Sites {
		start.Field.Data[i] = jagged(line.At(i))
	}
	run := evolve(t, s, start, integrate.Settings{})
	folded := func(x float64) float64 { // the mirror images at x = ±10
		x = math.Mod(math.Abs(x+10), 40)
		return jagged(min(x, 40-x) - 10)
	}
	var worst float64
	for n := range clock.Sites {
		for i := range line.Sites {
			tt, x := clock.At(n), line.At(i)
			worst = max(worst, math.Abs(run.History.At(n, 0, i)-0.5*(folded(x-tt)+folded(x+tt))))
		}
	}
	t.Logf("from rest, reflected twice: largest error %.3g", worst)
	if worst > 1e-14 { // as above
		t.Errorf("largest error %.3g; want rounding", worst)
	}
}
