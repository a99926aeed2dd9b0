package minimize

import (
	"context"
	"errors"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A membrane sinks on an obstacle, is observed, keeps means: flows of either kind
// end where Minimum does, and never leave the conditions.
func TestRelaxationUnderConditions(t *testing.T) {
	clock, line := square(10, lattice.Held, lattice.Held)
	s := newAction(t, clock, line, action.Wave{Signature: action.Euclidean, Source: action.Uniform(-4)})
	floor := func(x, y float64) float64 { return -0.1 - 0.4*math.Hypot(x-0.5, y-0.5) }
	for name, hold := range map[string]func(*constraint.Set){
		"obstacle":          func(h *constraint.Set) { h.Bounds(floor, nil) },
		"observation":       func(h *constraint.Set) { h.Observe(0.5, 0.5, 0.2, 0.05) },
		"hard mean":         func(h *constraint.Set) { h.Mean(5, -0.05) },
		"soft mean":         func(h *constraint.Set) { h.Mean(5, 0.1).Soft(0.02) },
		"obstacle and mean": func(h *constraint.Set) { h.Bounds(floor, nil); h.Mean(5, -0.05) },
	} {
		held := frame(s.Block())
		hold(held)
		start := field.NewHistory(s.Block(), 1)
		best := lowest(t, s, held, start, nil)
		touching := 0
		for way, set := range map[string]RelaxSettings{
			"explicit": {}, "implicit": {Implicit: true, Step: 0.02}, "explicit with friction": {Friction: 8}, "implicit with friction": {Friction: 8, Implicit: true, Step: 0.02},
		} {
			set.Tolerance, set.Every = 1e-9, 1
			set.Watch = func(f Frame) {
				touching = 0
				for n := 1; n < 10; n++ {
					for i := 1; i < 10; i++ {
						e := s.Block().At(n, i)
						gap := f.History.At(n, 0, i) - floor(e.X, e.T)
						if gap < 0 && (name == "obstacle" || name == "obstacle and mean") {
							t.Fatalf("%s, %s: the membrane is %.3g below the obstacle at %v, τ = %g", name, way, -gap, e, f.Tau)
						}
						if gap == 0 {
							touching++
						}
					}
				}
			}
			run, err := Relax(context.Background(), s, held, start, &set)
			if err != nil {
				t.Fatalf("%s, %s: %v", name, way, err)
			}
			// 1e-9 over the smallest eigenvalue, 20 and what soft conditions add
			if d := run.History.MaxDifference(best.History); d > 1e-9 {
				t.Errorf("%s, %s: off the minimum by %.3g", name, way, d)
			}
			if name == "obstacle" && touching < 5 {
				t.Errorf("%s, %s: %d events touch the obstacle", name, way, touching)
			}
			if a, b := run.Reactions[0], best.Reactions[0]; math.Abs(a.Push-b.Push) > 1e-9 {
				t.Errorf("%s, %s: %v, want %v", name, way, a, b)
			}
		}
	}
}

// The same for the squared residual, whose minimum is that of LeastResidual.
func TestResidualRelaxesUnderConditions(t *testing.T) {
	clock, line := lattice.Axis{Step: 0.2, Sites: 8}, lattice.Axis{Step: 0.3, Sites: 9}
	s := newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}})
	held := constraint.On(s.Block())
	first := field.NewSlice(1, 9)
	for i := range first.Data {
		first.Data[i] = 0.3 * math.Cos(float64(i))
	}
	held.Slice(0, first)
	held.Slice(1, first)
	held.Observe(1, 0.9, 0.5, 0.1)
	held.Mean(5, 0.4)
	held.Mean(7, 0.1).Soft(0.3)
	start := field.Repeat(s.Block(), first)
	best, err := LeastResidual(context.Background(), s, held, start, nil)
	if err != nil {
		t.Fatal(err)
	}
	run, err := RelaxResidual(context.Background(), s, held, start, &RelaxSettings{Implicit: true, Step: 1e4})
	if err != nil {
		t.Fatal(err)
	}
	// a flat cost to 1e-8 of its terms
	if d := run.History.MaxDifference(best.History); d > 1e-5 {
		t.Errorf("off the least residual by %.3g after %d steps\n%v\n%v", d, run.Report.Iterations, run.Report, best.Report)
	}
	bounded := constraint.On(s.Block())
	bounded.Bounds(func(x, t float64) float64 { return -1 }, nil)
	var refusal *Refusal
	if _, err := RelaxResidual(context.Background(), s, bounded, start, nil); !errors.As(err, &refusal) {
		t.Errorf("%v", err)
	}
	mean := constraint.On(s.Block())
	mean.Mean(3, 0.1)
	family := func(float64) (Functional, *constraint.Set, error) { return s, mean, nil }
	if _, err := Continue(context.Background(), family, 0, start, nil); !errors.As(err, &refusal) {
		t.Errorf("%v", err)
	}
}
