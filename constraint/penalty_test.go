package constraint

import (
	"math"
	"strings"
	"testing"
)

func TestPenalties(t *testing.T) {
	values := []float64{-7, -1.2, 0, 0.3, math.Pi / 2, 2, 40}
	for _, p := range []Penalty{
		Quadratic{Centre: 0.4, Sigma: 0.3},
		Cosine{Around: 0.7},
		RapiniPapoular{W: 2.5, Easy: -0.3},
		mixture{Cosine{0.2}, Quadratic{1, 2}, 0.25, 3},
	} {
		if err := CheckPenalty(p, values...); err != nil {
			t.Errorf("%#v: %v", p, err)
		}
	}
	// by hand, at the far side of the period and at the steepest point
	for _, tc := range []struct {
		p                      Penalty
		phi                    float64
		cost, slope, curvature float64
	}{
		{Quadratic{1, 2}, 5, 2, 1, 0.25},
		{Cosine{1}, 1 + math.Pi, 2, 0, -1},
		{RapiniPapoular{3, 1}, 1 + math.Pi/2, 1.5, 0, -3},
		{RapiniPapoular{3, 1}, 1 + math.Pi/4, 0.75, 1.5, 0},
	} {
		cost, slope, curvature := tc.p.At(tc.phi)
		if d := max(math.Abs(cost-tc.cost), math.Abs(slope-tc.slope), math.Abs(curvature-tc.curvature)); d > 4e-15 { // rounding of the angle
			t.Errorf("%#v at %v: %v, %v, %v; want %v, %v, %v", tc.p, tc.phi, cost, slope, curvature, tc.cost, tc.slope, tc.curvature)
		}
	}
}

// bent is a penalty whose slope or curvature is off by a factor.
type bent struct{ slope, curvature float64 }

func (b bent) At(phi float64) (cost, slope, curvature float64) {
	return phi * phi * phi, b.slope * 3 * phi * phi, b.curvature * 6 * phi
}

func TestCheckPenaltyFindsMistakes(t *testing.T) {
	if err := CheckPenalty(bent{1, 1}, -2, 0, 3); err != nil {
		t.Errorf("a right penalty: %v", err)
	}
	for want, p := range map[string]Penalty{
		"slope":                 bent{1.00001, 1},
		"curvature":             bent{1, 0.9999},
		"want finite numbers":   bent{math.NaN(), 1},
		"at φ = 3 has the slop": bent{-1, 1},
	} {
		if err := CheckPenalty(p, 0, 3); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%v: error %v does not say %q", p, err, want)
		}
	}
}
