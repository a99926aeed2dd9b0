package refine_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/lattice/refine"
)

// unit is the block [0, 1] × [0, 1] with 4 × 4 cells.
var unit = lattice.Block{Time: lattice.Axis{Step: 0.25, Sites: 5}, Space: lattice.Axis{Step: 0.25, Sites: 5}}

// trapezoid measures ∫eˣ over the space axis, ∫cos t over the time axis and the
// number of ends.
func trapezoid(_ context.Context, b lattice.Block) ([]refine.Quantity, error) {
	rule := func(a lattice.Axis, f func(float64) float64) float64 {
		var sum float64
		for i := range a.Sites {
			sum += a.Weight(i) * f(a.At(i))
		}
		return sum * a.Step
	}
	return []refine.Quantity{
		{Name: "growth", Value: rule(b.Space, math.Exp)},
		{Name: "swing", Value: rule(b.Time, math.Cos), Unit: "rad", Order: 2},
		{Name: "ends", Value: 2},
	}, nil
}

// The trapezoid rule has the order 2 and its error is h²/12·(f′(1) − f′(0)) + O(h⁴)
// (Euler–Maclaurin); the integrals are e − 1 and sin 1.
func TestStudyOfTheTrapezoidRule(t *testing.T) {
	for _, n := range []int{0, 4, 5} {
		table, err := refine.Study{Block: unit, Levels: n}.Run(t.Context(), trapezoid)
		if err != nil {
			t.Fatal(err)
		}
		want := max(n, 3)
		if len(table.Blocks) != want {
			t.Errorf("%d levels, want %d", len(table.Blocks), want)
		}
		for name, truth := range map[string]float64{"growth": math.E - 1, "swing": math.Sin(1)} {
			e, ok := table.Get(name)
			if !ok || e.Status != refine.Asymptotic {
				t.Fatalf("%s: %v, %s", name, e.Status, e.Reason)
			}
			// The h⁴ term is h²/60 of the leading one: the order is 2 to 0.01 at h = 1/16.
			if math.Abs(e.Order-2) > 0.01 {
				t.Errorf("%s: order %v, want 2", name, e.Order)
			}
			off := math.Abs(e.Value - truth)
			if off > e.Error {
				t.Errorf("%s: off by %.3g, error bar %.3g", name, off, e.Error)
			}
			if finest := math.Abs(e.Values[len(e.Values)-1] - truth); off > finest/50 {
				t.Errorf("%s: extrapolation is off by %.3g, the finest level by %.3g; want a fiftieth", name, off, finest)
			}
		}
		if e, _ := table.Get("ends"); e.Status != refine.Exact || e.Value != 2 || e.Error != 0 {
			t.Errorf("ends: %v, %v ± %v", e.Status, e.Value, e.Error)
		}
	}
}

func TestStudyAlongOneAxis(t *testing.T) {
	for along, want := range map[refine.Along][2]refine.Status{
		refine.TimeAxis:  {refine.Exact, refine.Asymptotic},
		refine.SpaceAxis: {refine.Asymptotic, refine.Exact},
	} {
		table, err := refine.Study{Block: unit, Along: along}.Run(t.Context(), trapezoid)
		if err != nil {
			t.Fatal(err)
		}
		got := [2]refine.Status{table.Estimates[0].Status, table.Estimates[1].Status}
		if got != want {
			t.Errorf("along %d: statuses %v, want %v", along, got, want)
		}
	}
}

func TestStudyBlocks(t *testing.T) {
	blocks, err := refine.Study{Block: unit, Levels: 3, Factor: 3}.Blocks()
	if err != nil {
		t.Fatal(err)
	}
	want := []lattice.Block{unit, unit.Refine(3), unit.Refine(3).Refine(3)}
	if diff := cmp.Diff(want, blocks); diff != "" {
		t.Errorf("blocks (-want +got):\n%s", diff)
	}
}

// The order of the study is expected of quantities that have none of their own.
func TestExpectedOrder(t *testing.T) {
	table, err := refine.Study{Block: unit, Order: 4}.Run(t.Context(), trapezoid)
	if err != nil {
		t.Fatal(err)
	}
	if e, _ := table.Get("growth"); e.Status != refine.UnexpectedOrder || !strings.Contains(e.Reason, "expected 4") {
		t.Errorf("growth: %v, %q; want the order 4 missed", e.Status, e.Reason)
	}
	if e, _ := table.Get("swing"); e.Status != refine.Asymptotic {
		t.Errorf("swing: %v; its own order 2 should hold", e.Status)
	}
}

func TestStudyErrors(t *testing.T) {
	names := func(perLevel ...[]string) refine.Measure {
		level := -1
		return func(context.Context, lattice.Block) ([]refine.Quantity, error) {
			level++
			var qs []refine.Quantity
			for _, n := range perLevel[level] {
				qs = append(qs, refine.Quantity{Name: n})
			}
			return qs, nil
		}
	}
	for _, tt := range []struct {
		name    string
		study   refine.Study
		measure refine.Measure
		want    string
		levels  int // in the table beside the error, −1 for no table
	}{
		{"two levels", refine.Study{Block: unit, Levels: 2}, trapezoid, "study of 2 levels", -1},
		{"negative levels", refine.Study{Block: unit, Levels: -1}, trapezoid, "-1 levels", -1},
		{"factor 1", refine.Study{Block: unit, Factor: 1}, trapezoid, "factor 1", -1},
		{"no such axis", refine.Study{Block: unit, Along: 5}, trapezoid, "along(5)", -1},
		{"order -2", refine.Study{Block: unit, Order: -2}, trapezoid, "order -2", -1},
		{"no block", refine.Study{}, trapezoid, "time axis", -1},
		{"too fine", refine.Study{Block: unit, Levels: 60}, trapezoid, "refine: level", -1},
		{"no name", refine.Study{Block: unit}, names([]string{"a", ""}), "level 0 of 5 slices × 5 sites: quantity 1 has no name", 0},
		{"a name twice", refine.Study{Block: unit}, names([]string{"a", "a"}), `"a" is given twice`, 0},
		{"order NaN", refine.Study{Block: unit}, func(context.Context, lattice.Block) ([]refine.Quantity, error) {
			return []refine.Quantity{{Name: "a", Order: math.NaN()}}, nil
		}, `quantity "a" with the expected order NaN`, 0},
		{"one quantity less", refine.Study{Block: unit}, names([]string{"a", "b"}, []string{"a"}), "level 1 of 9 slices × 9 sites: 1 quantities, level 0 gave 2", 1},
		{"another name", refine.Study{Block: unit}, names([]string{"a"}, []string{"a"}, []string{"b"}), `quantity 0 is "b", on level 0 it was "a"`, 2},
	} {
		table, err := tt.study.Run(t.Context(), tt.measure)
		if err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: error %v does not say %q", tt.name, err, tt.want)
		}
		got := -1
		if table != nil {
			got = len(table.Blocks)
		}
		if got != tt.levels {
			t.Errorf("%s: table of %d levels, want %d", tt.name, got, tt.levels)
		}
	}
}

// A failing measure and a cancelled context keep the levels before them.
func TestStudyKeepsWhatWasDone(t *testing.T) {
	blowUp := errors.New("blow-up")
	ctx, cancel := context.WithCancel(t.Context())
	for _, tt := range []struct {
		name string
		stop func() error
		want error
	}{
		{"failing measure", func() error { return blowUp }, blowUp},
		{"cancelled context", func() error { cancel(); return nil }, context.Canceled},
	} {
		calls := 0
		table, err := refine.Study{Block: unit, Levels: 5}.Run(ctx, func(ctx context.Context, b lattice.Block) ([]refine.Quantity, error) {
			calls++
			qs, err := trapezoid(ctx, b)
			if calls == 4 {
				err = tt.stop()
			}
			return qs, err
		})
		if !errors.Is(err, tt.want) {
			t.Fatalf("%s: error %v, want %v", tt.name, err, tt.want)
		}
		if calls != 4 {
			t.Errorf("%s: %d calls, want 4", tt.name, calls)
		}
		e, ok := table.Get("growth")
		if !ok || e.Status != refine.Asymptotic || len(e.Values) < 3 {
			t.Errorf("%s: %v after %d levels, want the estimate from those that were done", tt.name, e.Status, len(e.Values))
		}
	}
	table, err := refine.Study{Block: unit}.Run(ctx, trapezoid)
	if !errors.Is(err, context.Canceled) || len(table.Estimates) != 0 {
		t.Errorf("cancelled before the start: %v with %d estimates", err, len(table.Estimates))
	}
}
