package minimize

import (
	"context"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// Steady combustion −Δv = 5eᵛ on the unit square, lower branch [MINPACK-2,
// Averick, Carter, Moré & Xue 1992]: ∫½|∇v|² − 5eᵛ with n interior points a side,
// the exponential counted on the rim too. The corners of the triangulation have
// ⅙, ⅓, ⅙ and ⅓ of a cell where the lattice has ¼ each, which is the same sum of
// e⁰. Energies and largest values: independent computation, to rounding of the
// fixed-grid problem.
func TestSteadyCombustion(t *testing.T) {
	flame := action.Scalar{V: func(v float64) float64 { return -5 * math.Exp(v) }}
	flame.D1, flame.D2 = flame.V, flame.V
	for _, c := range []struct {
		n             int
		energy, value float64
	}{
		{49, -5.610821981892, 0.556860819168},
		{50, -5.610847889837, 0.556445405978},
		{99, -5.611322765035, 0.556935033967},
		{199, -5.611448097142, 0.556953605004},
		{200, -5.611448511905, 0.556926666510},
	} {
		b := unitSquare(c.n, c.n)
		s, held := rimmedOn(t, b, action.Wave{Potential: flame})
		found, err := Minimum(context.Background(), s, held, field.NewHistory(b, 1), nil)
		if err != nil {
			t.Errorf("n = %d: %v", c.n, err)
			continue
		}
		// 2e-12 is the tolerance of the reference.
		if d := found.Report.CostAfter - c.energy; math.Abs(d) > 2e-12 {
			t.Errorf("n = %d: energy %.13f, want %.12f", c.n, found.Report.CostAfter, c.energy)
		}
		// The last digit given, with the gradient at 1e-10 of its terms.
		if v := found.History.MaxAbs(); math.Abs(v-c.value) > 2e-11 {
			t.Errorf("n = %d: largest value %.12f, want %.12f", c.n, v, c.value)
		}
		t.Logf("n = %d: %d steps, %.3f s", c.n, found.Report.Iterations, found.Report.Wall.Seconds())
	}
}
