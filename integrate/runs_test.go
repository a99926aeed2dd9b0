package integrate_test

import (
	"context"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// discrete puts a density on a block.
func discrete(t testing.TB, clock, line lattice.Axis, w action.Wave) *action.Discrete {
	t.Helper()
	s, err := action.New(lattice.Block{Time: clock, Space: line}, w)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// evolve runs to the end of the block.
func evolve(t testing.TB, s *action.Discrete, start field.State, set integrate.Settings) *integrate.Run {
	t.Helper()
	run, err := integrate.Evolve(context.Background(), s, start, set)
	if err != nil {
		t.Fatal(err)
	}
	return run
}

// exact returns a profile that cannot be refused.
func exact(t testing.TB, p field.Profile, err error) field.Profile {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// span returns an axis of the given length and number of links, closed at both
// ends.
func span(from, length float64, links int) lattice.Axis {
	return lattice.Axis{From: from, Step: length / float64(links), Sites: links + 1}
}

// between returns a line with the given ends.
func between(a lattice.Axis, left, right lattice.End) lattice.Axis {
	a.Left, a.Right = left, right
	return a
}

// wantOrder checks the slope of the errors of three levels, each at half the
// steps of the one before, and logs them.
func wantOrder(t *testing.T, name string, errs []float64, want, slack float64) {
	t.Helper()
	n := len(errs) - 1
	p := math.Log2(errs[0]/errs[n]) / float64(n)
	t.Logf("%s: errors %.3g, order %.3f", name, errs, p)
	if !(math.Abs(p-want) <= slack) {
		t.Errorf("%s: errors %.3g, order %.3f; want %g ± %g", name, errs, p, want, slack)
	}
}

// line fitted through points: returns its slope.
func fittedSlope(x, y []float64) float64 {
	var mx, my float64
	for i := range x {
		mx += x[i] / float64(len(x))
		my += y[i] / float64(len(y))
	}
	var sxy, sxx float64
	for i := range x {
		sxy += (x[i] - mx) * (y[i] - my)
		sxx += (x[i] - mx) * (x[i] - mx)
	}
	return sxy / sxx
}

// outermost returns the largest x at which the field passes through level, by
// cubic interpolation of the four sites around, or NaN.
func outermost(line lattice.Axis, phi []float64, level float64) float64 {
	for i := len(phi) - 2; i >= 0; i-- {
		if (phi[i]-level)*(phi[i+1]-level) > 0 {
			continue
		}
		if i < 1 || i+2 >= len(phi) {
			return line.At(i) + line.Step*(level-phi[i])/(phi[i+1]-phi[i])
		}
		lo, hi := 0.0, 1.0
		at := func(s float64) float64 { // Lagrange on −1, 0, 1, 2
			return -s*(s-1)*(s-2)/6*phi[i-1] + (s+1)*(s-1)*(s-2)/2*phi[i] - (s+1)*s*(s-2)/2*phi[i+1] + (s+1)*s*(s-1)/6*phi[i+2] - level
		}
		for range 60 {
			mid := 0.5 * (lo + hi)
			if (at(lo) > 0) == (at(mid) > 0) {
				lo = mid
			} else {
				hi = mid
			}
		}
		return line.At(i) + line.Step*lo
	}
	return math.NaN()
}
