package minimize

import (
	"context"
	"fmt"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// rimmedOn is rimmed for any block: the Euclidean action of a wave with the rim
// of the block pinned to zero.
func rimmedOn(t *testing.T, b lattice.Block, w action.Wave) (*action.Discrete, *constraint.Set) {
	t.Helper()
	w.Signature = action.Euclidean
	s, err := action.New(b, w)
	if err != nil {
		t.Fatal(err)
	}
	held := constraint.On(b)
	zero := func(float64) float64 { return 0 }
	held.Left(zero)
	held.Right(zero)
	held.Slice(0, field.NewSlice(1, b.Sites()))
	held.Slice(b.Slices()-1, field.NewSlice(1, b.Sites()))
	return s, held
}

// unitSquare is the square with so many interior points along x and y.
func unitSquare(nx, ny int) lattice.Block {
	return lattice.Block{
		Time:  lattice.Axis{Step: 1 / float64(ny+1), Sites: ny + 2},
		Space: lattice.Axis{Step: 1 / float64(nx+1), Sites: nx + 2},
	}
}

// torsion solves an elastic–plastic torsion problem: the bounds are the distance
// to the rim of the unit square.
func torsion(t *testing.T, b lattice.Block, w action.Wave) *Found {
	t.Helper()
	s, held := rimmedOn(t, b, w)
	dist := func(x, t float64) float64 { return max(0, min(x, 1-x, t, 1-t)) }
	held.Bounds(func(x, t float64) float64 { return -dist(x, t) }, dist)
	found, err := Minimum(context.Background(), s, held, field.NewHistory(b, 1), nil)
	if err != nil {
		t.Fatal(err)
	}
	return found
}

// Elastic–plastic torsion on lattices of unequal steps and with other loads c,
// linear triangles, so many interior points a side. The first four, which the
// report prints to six digits: COPS, Dolan, Moré & Munson 2004, ANL/MCS-TM-273
// (from memory, confirmed by independent computation); the others: independent
// computation, to rounding of the fixed-grid problem.
func TestTorsionOfCOPS(t *testing.T) {
	for _, c := range []struct {
		nx, ny          int
		load            float64
		want, tolerance float64
	}{
		{50, 25, 5, -0.41751073, 1e-9},
		{50, 50, 5, -0.418087632, 1e-9},
		{50, 75, 5, -0.418199401, 1e-9},
		{50, 100, 5, -0.418239213, 1e-9},
		{50, 50, 10, -1.203754743574, 2e-12},
		{50, 50, 20, -2.849295795891, 2e-12},
		{199, 199, 5, -0.41846839918, 2e-12},
		{200, 200, 5, -0.418468664331, 2e-12},
	} {
		t.Run(fmt.Sprintf("%d×%d,c=%g", c.nx, c.ny, c.load), func(t *testing.T) {
			found := torsion(t, unitSquare(c.nx, c.ny), action.Wave{Source: action.Uniform(c.load)})
			if d := found.Report.CostAfter - c.want; math.Abs(d) > c.tolerance {
				t.Errorf("energy %.13f, want %.12f", found.Report.CostAfter, c.want)
			}
			// A rim that moved by one event a step would take 33 and more steps on
			// the finest lattice; sweeps bring that below half.
			if n := found.Report.Iterations; n > 14 {
				t.Errorf("%d steps, want at most 14", n)
			}
			t.Logf("%d steps, %d factorisations, %.3f s", found.Report.Iterations, found.Report.Factorisations, found.Report.Wall.Seconds())
		})
	}
}

// The same name stands for a second discretisation, in which every interior node
// has a quarter for each of its four neighbours, so that links to the rim count
// half. Problem file TORSION1, after Moré & Toraldo 1991, SIAM J. Optim. 1, 93: 2Q
// points a side, rim included; eight digits are printed.
func TestTorsionOfCUTEst(t *testing.T) {
	for _, c := range []struct {
		q    int
		want float64
	}{{2, -0.51851852}, {5, -0.49234185}, {11, -0.45608771}, {37, -0.430275801}} {
		b := unitSquare(2*c.q-2, 2*c.q-2)
		h := b.Space.Step
		half := func(along float64) float64 {
			if along < h || along > 1-h {
				return 0.5
			}
			return 1
		}
		found := torsion(t, b, action.Wave{
			Source: action.Uniform(5),
			Kappa:  action.Along(half),
			Rho:    action.Over(func(_, t float64) float64 { return half(t) }),
		})
		if d := found.Report.CostAfter - c.want; math.Abs(d) > 5e-9 { // half of the last digit
			t.Errorf("Q = %d: energy %.10f, want %.8f", c.q, found.Report.CostAfter, c.want)
		}
	}
}
