//go:build slow

package minimize

import (
	"context"
	"math"
	"testing"
	"time"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// The bar of long blocks: 1024 × 1024 events of a collision from a start that
// knows the Cauchy pair alone, without any march; max|r| ≤ 1e-10.
func TestWindowsOnMillionEventsSlow(t *testing.T) {
	clock := lattice.Axis{From: -512 * 0.08, Step: 0.08, Sites: 1024}
	line := lattice.Axis{From: -51.15, Step: 0.1, Sites: 1024}
	s := newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}})
	f := profile(field.SineGordonKinkAntikink(field.Collision{Speed: 0.4}))
	first := f.On(line, clock.From).Field
	held := constraint.On(s.Block())
	held.Slice(0, first)
	held.Slice(1, f.On(line, clock.At(1)).Field)
	began := time.Now()
	found, err := LeastResidual(context.Background(), s, held, field.Repeat(s.Block(), first), &Settings{Strategy: Windows})
	if err != nil {
		t.Fatal(err)
	}
	wall := time.Since(began)
	t.Logf("max|r| %.3g in %v\n%v", found.Report.After.Max, wall, found.Report)
	if !(found.Report.After.Max <= 1e-10) {
		t.Errorf("max|r| %.3g; want at most 1e-10", found.Report.After.Max)
	}
}

// The bar of accuracy: the forward error against leapfrog on the massless block
// of 257 × 257 events, where the normal equations alone leave 1e-8.
func TestForwardErrorOnWaveBlockSlow(t *testing.T) {
	bump := func(x, t float64) (float64, float64) { return math.Exp(-x * x), x * math.Exp(-x*x) }
	for _, step := range []float64{0.08, 0.1} { // Courant numbers 0.8 and 1
		clock := lattice.Axis{Step: step, Sites: 257}
		line := lattice.Axis{From: -12.8, Step: 0.1, Sites: 257}
		s := newAction(t, clock, line, action.Wave{})
		want := marched(s, field.Profile(bump).On(line, 0))
		found, err := LeastResidual(context.Background(), s, pairOf(want), field.Repeat(s.Block(), want.Slice(0)), &Settings{Strategy: BlockWide})
		if err != nil {
			t.Fatal(err)
		}
		d := found.History.MaxDifference(want) / want.MaxAbs()
		t.Logf("k = %g: forward error %.3g of max|φ|", step, d)
		if !(d <= 1e-9) {
			t.Errorf("k = %g: forward error %.3g of max|φ|, want at most 1e-9\n%v", step, d, found.Report)
		}
	}
}

// The bar of the two-time problem, and the stretch.
func TestShootingAcrossTwentyUnitsSlow(t *testing.T) { shootsAcross(t, 20) }

func TestShootingAcrossFortyUnitsSlow(t *testing.T) { shootsAcross(t, 40) }

// Where nothing is asked for, block-wide steps that end with a residual are
// followed by shooting, and the report says so.
func TestFittingAcrossFortyUnitsSlow(t *testing.T) {
	s, held, start := twoTime(t, 40)
	found, err := LeastResidual(context.Background(), s, held, start, nil)
	if err != nil {
		t.Fatal(err)
	}
	r := found.Report
	t.Log(r)
	if r.After.Max > 1e-9 || len(r.Stages) != 2 || r.Strategy != Shooting || r.Stages[0].Used || !r.Stages[1].Used {
		t.Errorf("%v", r)
	}
}

// There is more than one history between the two slices: how many shooting finds
// from the straight start and variations of it. Two of them are the same if they
// agree to 1e-6, far above the error of 1e-9 and far below the distance of
// different ones, which is of order one.
func TestSeveralHistoriesAcrossTwoTimesSlow(t *testing.T) {
	for _, span := range []float64{10, 20} {
		s, held, start := twoTime(t, span)
		solve := func(ctx context.Context, start *field.History) (*Found, error) {
			return LeastResidual(ctx, s, held, start, &Settings{Strategy: Shooting, Iterations: 60})
		}
		census, err := TakeCensus(context.Background(), solve, func(yield func(*field.History) bool) {
			for k := range 12 {
				if !yield(Vary(start, k, 0.3)) {
					return
				}
			}
		}, &CensusSettings{Most: 1e-9, Of: s, Held: held})
		if err != nil {
			t.Fatal(err)
		}
		t.Logf("T = %g:\n%v", span, census)
		if len(census.Residents) < 2 {
			t.Errorf("T = %g: %d distinct histories, want more than one", span, len(census.Residents))
		}
	}
}
