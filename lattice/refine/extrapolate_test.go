package refine_test

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/lattice/refine"
)

// levels returns f at 1, 1/factor, 1/factor², …
func levels(n int, factor float64, f func(h float64) float64) []float64 {
	v := make([]float64, n)
	for j := range v {
		v[j] = f(math.Pow(factor, -float64(j)))
	}
	return v
}

// A pure power is extrapolated to its limit, whatever the order, the factor and
// the number of levels.
func TestPurePowers(t *testing.T) {
	for _, p := range []float64{1, 2, 4, 1.5} {
		for _, factor := range []float64{2, 3} {
			for n := 3; n <= 5; n++ {
				for _, expected := range []float64{0, p} {
					v := levels(n, factor, func(h float64) float64 { return 2 - 0.3*math.Pow(h, p) })
					e := refine.Extrapolate(v, factor, expected)
					name := fmt.Sprintf("order %g, factor %g, %d levels, expected %g", p, factor, n, expected)
					if e.Status != refine.Asymptotic || e.Reason != "" {
						t.Errorf("%s: %v, %s", name, e.Status, e.Reason)
						continue
					}
					// ulp(2) against a last difference of 0.3·3^(−16) = 7e-9 at worst: the
					// order is good to 1e-7 and the limit to a few ulps.
					if math.Abs(e.Order-p) > 1e-6 {
						t.Errorf("%s: observed order %v", name, e.Order)
					}
					if math.Abs(e.Value-2) > 1e-14 {
						t.Errorf("%s: value %.17g, want 2", name, e.Value)
					}
					// The stated formula: 1.25·|f₃ − f₀|, all other terms being smaller.
					want := 1.25 * math.Abs(v[n-1]-2)
					if math.Abs(e.Error-want) > 1e-13 {
						t.Errorf("%s: error bar %.6g, want %.6g", name, e.Error, want)
					}
				}
			}
		}
	}
}

// Where the next power pollutes the leading one, the truth must lie within the
// bar, and the bar may not be a hundred times too wide for order p on h = ¼.
func TestPollutedPowers(t *testing.T) {
	const truth = 0.7
	for _, p := range []float64{1, 2, 4} {
		for _, a := range []float64{-0.6, -0.3, 0.3, 1} { // of the next power, in units of the leading one
			for _, n := range []int{3, 4, 5} {
				for _, expected := range []float64{0, p} {
					v := levels(n, 2, func(h float64) float64 { return truth + 0.2*math.Pow(h/2, p)*(1+a*h/2) })
					e := refine.Extrapolate(v, 2, expected)
					name := fmt.Sprintf("order %g + %g·next, %d levels, expected %g", p, a, n, expected)
					if e.Status != refine.Asymptotic {
						t.Errorf("%s: %v, %s", name, e.Status, e.Reason)
						continue
					}
					if off := math.Abs(e.Value - truth); !(off <= e.Error) {
						t.Errorf("%s: off by %.3g, error bar %.3g", name, off, e.Error)
					}
					if finest := math.Abs(v[n-1] - truth); e.Error > 3*finest {
						t.Errorf("%s: error bar %.3g, though the finest level is only off by %.3g", name, e.Error, finest)
					}
				}
			}
		}
	}
}

// Where the order overshoots, the extrapolated value moves by more than the last
// correction, and the bar follows it. Differences 22, 5.5, 1.
func TestBarFollowsTheExtrapolatedValue(t *testing.T) {
	v := []float64{0, 22, 27.5, 28.5}
	for _, tt := range []struct{ order, before, last float64 }{
		{2, 27.5 + 5.5/3, 28.5 + 1./3},
		{0, 27.5 + 5.5/3, 28.5 + 1/4.5}, // observed r^p = 4, then 5.5
	} {
		e := refine.Extrapolate(v, 2, tt.order)
		want := 1.25 * math.Abs(tt.last-tt.before)
		if e.Status != refine.Asymptotic || math.Abs(e.Value-tt.last) > 1e-13 || math.Abs(e.Error-want) > 1e-13 { // rounding at 28
			t.Errorf("order %g: %v, %.6g ± %.6g, want %.6g ± %.6g", tt.order, e.Status, e.Value, e.Error, tt.last, want)
		}
	}
}

// With four levels the bar knows the change of the extrapolated value.
func TestFourthLevelWidensTheBar(t *testing.T) {
	v := []float64{2.4, 1.4, 1.11, 1.02} // differences −1, −0.29, −0.09
	e := refine.Extrapolate(v, 2, 2)
	before := 1.11 - 0.29/3
	last := 1.02 - 0.09/3
	p := math.Log2(0.29 / 0.09)
	want := 1.25 * max(math.Abs(last-before), 0.09/3, 0.09/(math.Pow(2, p)-1))
	if e.Status != refine.Asymptotic || math.Abs(e.Value-last) > 1e-15 || math.Abs(e.Error-want) > 1e-15 {
		t.Errorf("%v: %.6g ± %.6g, want %.6g ± %.6g", e.Status, e.Value, e.Error, last, want)
	}
	// A coarse level outside of the asymptotic range costs |Δ₂|.
	v[0] = 1.39
	e = refine.Extrapolate(v, 2, 2)
	if want := 1.25 * 0.09; e.Status != refine.Asymptotic || math.Abs(e.Error-want) > 1e-14 {
		t.Errorf("coarse level off: %v, error bar %.6g, want 1.25·|Δ₂| = %.6g", e.Status, e.Error, want)
	}
}

func TestNoErrorBarIsInvented(t *testing.T) {
	third := 1. / 3
	for _, tt := range []struct {
		name   string
		values []float64
		order  float64
		want   refine.Status
		reason string
	}{
		{"no level", nil, 0, refine.TooFewLevels, "0 levels"},
		{"two levels", []float64{1, 2}, 2, refine.TooFewLevels, "2 levels"},
		{"NaN", []float64{1, math.NaN(), 1}, 2, refine.NotFinite, "level 1 gave NaN"},
		{"infinite", []float64{1, 1, math.Inf(-1)}, 0, refine.NotFinite, "level 2 gave -Inf"},
		{"changing sign", []float64{1, 2, 1.5}, 2, refine.ChangingSign, "1, then -0.5"},
		{"growing", []float64{1, 2, 4}, 2, refine.NotShrinking, "1, then 2"},
		{"swinging ever wider", []float64{1, 2, -1}, 2, refine.NotShrinking, "1, then -3"},
		{"logarithm", []float64{0, 1, 2}, 0, refine.NotShrinking, "1, then 1"},
		{"hardly shrinking", []float64{0, 1, 1.9}, 0, refine.NotShrinking, "order 0.15"},
		{"hardly shrinking, order given", []float64{0, 1, 1.9}, 2, refine.UnexpectedOrder, "observed order 0.15, expected 2"},
		{"order 1 for 2", levels(3, 2, func(h float64) float64 { return 1 + h }), 2, refine.UnexpectedOrder, "observed order 1.00, expected 2"},
		{"order 4 for 2", levels(3, 2, func(h float64) float64 { return 1 + h*h*h*h }), 2, refine.UnexpectedOrder, "observed order 4.00, expected 2"},
		{"two powers in balance", levels(3, 2, func(h float64) float64 { return 1 + h - 1.3*h*h }), 0, refine.ChangingSign, "0.475, then -0.00625"},
		{"too good to be true", []float64{1, 2, 2.001}, 0, refine.UnexpectedOrder, "observed order 9.97"},
		{"order not steady", []float64{0, 1, 1.6, 1.65}, 0, refine.UnexpectedOrder, "from 0.74 to 3.58"},
		{"converged to rounding", []float64{1, third, third * (1 + 1e-15)}, 2, refine.AtRounding, "the last difference is rounding"},
		{"equal at last", []float64{1, third, third}, 0, refine.AtRounding, "no order can be told"},
		{"settled long ago", []float64{1, third, third, third}, 0, refine.AtRounding, "the last two differences"},
	} {
		e := refine.Extrapolate(tt.values, 2, tt.order)
		if e.Status != tt.want || !strings.Contains(e.Reason, tt.reason) {
			t.Errorf("%s: %v, %q; want %v and %q", tt.name, e.Status, e.Reason, tt.want, tt.reason)
		}
		if !math.IsNaN(e.Error) || e.Status.Bounded() {
			t.Errorf("%s: error bar %v", tt.name, e.Error)
		}
		if n := len(tt.values); n > 0 && e.Value != tt.values[n-1] && !math.IsNaN(tt.values[n-1]) {
			t.Errorf("%s: value %v, want that of the finest level, %v", tt.name, e.Value, tt.values[n-1])
		}
	}
}

func TestExact(t *testing.T) {
	e := refine.Extrapolate([]float64{0.25, 0.25, 0.25}, 2, 2)
	if e.Status != refine.Exact || e.Value != 0.25 || e.Error != 0 || !math.IsNaN(e.Order) {
		t.Errorf("equal values: %v, %v ± %v, order %v; want exact, 0.25 ± 0, no order", e.Status, e.Value, e.Error, e.Order)
	}
	// One unit in the last place of ¼ is 2⁻⁵⁴ below it.
	e = refine.Extrapolate([]float64{0.25, math.Nextafter(0.25, 0), 0.25}, 2, 0)
	if e.Status != refine.Exact || e.Error != math.Pow(2, -55) {
		t.Errorf("equal to rounding: %v ± %g, want exact ± 2⁻⁵⁵", e.Status, e.Error)
	}
	e = refine.Extrapolate([]float64{0, 0, 0}, 2, 0)
	if e.Status != refine.Exact || e.Error != 0 {
		t.Errorf("zeros: %v ± %v, want exact", e.Status, e.Error)
	}
}

func TestSlipsPanic(t *testing.T) {
	for _, tt := range []struct{ factor, order float64 }{{1, 2}, {0, 2}, {math.NaN(), 2}, {math.Inf(1), 2}, {2, -1}, {2, math.NaN()}, {2, math.Inf(1)}} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("factor %v, order %v: no panic", tt.factor, tt.order)
				}
			}()
			refine.Extrapolate([]float64{1, 2, 3}, tt.factor, tt.order)
		}()
	}
}
