package minimize

import (
	"context"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// allAround pins the whole rim of a block to zero.
func allAround(b lattice.Block) *constraint.Set {
	held := frame(b)
	held.Left(zero)
	held.Right(zero)
	return held
}

// The positive solutions of two problems on the unit square with u = 0 around it.
// Lane–Emden, −Δu = u³: the mountain pass of ∫½|∇u|² − ¼u⁴, number 20 of the COPS
// collection (Dolan, Moré & Munson 2004). Allen–Cahn, Δu + 50(u − u³) = 0: the
// minimum of ∫½|∇u|² + ¼50(1 − u²)². Independent computation: Chebyshev, N = 16,
// 24, 32. Order 2 by slope; extrapolated with h² and h⁴ removed, a fifth of the last
// step at most is left, which falls by 16 a level.
func TestSquare(t *testing.T) {
	for _, tc := range []struct {
		name           string
		wave           action.Wave
		height         float64 // of the start
		solve          func(context.Context, *action.Discrete, *field.History) (*Found, error)
		action, centre float64
		index          int
	}{
		{
			"Lane–Emden", action.Wave{Potential: action.Polynomial{0, 0, 0, 0, -0.25}}, 4,
			func(ctx context.Context, s *action.Discrete, start *field.History) (*Found, error) {
				return Saddle(ctx, s, allAround(s.Block()), start, nil)
			}, 37.7634036, 6.6232532, 1,
		},
		{
			"Allen–Cahn", action.Wave{Potential: action.Phi4{}, Sigma: action.Uniform(50)}, 1,
			func(ctx context.Context, s *action.Discrete, start *field.History) (*Found, error) {
				return Stationary(ctx, s, allAround(s.Block()), start, nil)
			}, 10.1691156358, 0.9320341481, 0,
		},
	} {
		t.Run(tc.name, func(t *testing.T) {
			var value, centre [3]float64
			for k, n := range []int{16, 32, 64} {
				// ends that are pinned but free count with half a cell, as they
				// should where V does not vanish
				clock, line := square(n, lattice.Free, lattice.Free)
				tc.wave.Signature = action.Euclidean
				s := newAction(t, clock, line, tc.wave)
				start := field.Profile(func(x, t float64) (float64, float64) {
					return tc.height * math.Sin(math.Pi*x) * math.Sin(math.Pi*t), 0
				}).Over(s.Block())
				found, err := tc.solve(context.Background(), s, start)
				if err != nil {
					t.Fatalf("n = %d: %v", n, err)
				}
				if i := found.Report.Inertia; i.Index != tc.index || !i.Known || i.Nullity != 0 {
					t.Errorf("n = %d: %v, want index %d", n, i, tc.index)
				}
				value[k], centre[k] = found.Report.CostAfter, found.History.At(n/2, 0, n/2)
			}
			if order := math.Log2((value[1] - tc.action) / (value[2] - tc.action)); math.Abs(order-2) > 0.03 { // h⁴ beside h²
				t.Errorf("order %.3f, want 2", order)
			}
			for name, v := range map[string]struct {
				got  [3]float64
				want float64
			}{"action": {value, tc.action}, "centre": {centre, tc.centre}} {
				first, second := (4*v.got[1]-v.got[0])/3, (4*v.got[2]-v.got[1])/3
				last := (16*second - first) / 15
				if miss, step := math.Abs(last-v.want), math.Abs(last-second); miss > step/5 {
					t.Errorf("%s %.9f, want %.9f: off by %.2g after a step of %.2g", name, last, v.want, miss, step)
				}
				t.Logf("%s %.9f, off by %.2g", name, last, last-v.want)
			}
		})
	}
}
