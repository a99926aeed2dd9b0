package track_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/field/track"
)

// The data set Norris with its certified values [NIST Statistical Reference
// Datasets, linear regression: slope 1.00211681802045 ± 0.000429796848199937,
// intercept −0.262323073774029; from memory, confirmed by independent
// computation: exact fractions give them from these data].
func TestFit(t *testing.T) {
	x := []float64{0.2, 337.4, 118.2, 884.6, 10.1, 226.5, 666.3, 996.3, 448.6, 777.0, 558.2, 0.4, 0.6, 775.5, 666.9, 338.0, 447.5, 11.6, 556.0, 228.1, 995.8, 887.6, 120.2, 0.3, 0.3, 556.8, 339.1, 887.2, 999.0, 779.0, 11.1, 118.3, 229.2, 669.1, 448.9, 0.5}
	y := []float64{0.1, 338.8, 118.1, 888.0, 9.2, 228.1, 668.5, 998.5, 449.1, 778.9, 559.2, 0.3, 0.1, 778.1, 668.8, 339.3, 448.9, 10.8, 557.7, 228.3, 998.0, 888.8, 119.6, 0.3, 0.6, 557.6, 339.3, 888.0, 998.5, 778.9, 10.2, 117.6, 228.9, 668.4, 449.2, 0.2}
	l, err := track.Fit(x, y)
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"slope", l.Speed, 1.00211681802045},
		{"standard error", l.SpeedError, 0.000429796848199937},
		{"intercept", l.X(0), -0.262323073774029},
	} {
		// Sums of 36 numbers up to 1e6 lose three or four digits of sixteen.
		if math.Abs(c.got-c.want) > 1e-11 {
			t.Errorf("%s %.15g; want %.15g", c.name, c.got, c.want)
		}
	}
}

func TestFitRefuses(t *testing.T) {
	if _, err := track.Fit([]float64{1, 2}, []float64{1, 2}); err == nil {
		t.Error("two points: no error")
	}
	if _, err := track.Fit([]float64{1, 1, 1}, []float64{1, 2, 3}); err == nil {
		t.Error("one time: no error")
	}
}
