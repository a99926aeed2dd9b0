package field_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/field"
)

func TestPhi4Equation(t *testing.T) {
	ok := must(t)
	for name, p := range map[string]field.Profile{
		"kink at rest": ok(field.Phi4Kink(field.Moving{})),
		"kink":         ok(field.Phi4Kink(field.Moving{At: 1, Speed: 0.5})),
		"antikink":     ok(field.Phi4Antikink(field.Moving{At: -1, Speed: -0.3})),
	} {
		t.Run(name, func(t *testing.T) {
			checkEquation(t, p, 1, func(u float64) float64 { return u*u*u - u }, nothing)
		})
	}
}

// The mass 2√2/3 of the kink of V = ¼(1 − φ²)² is elementary: ∫√(2V)dφ from −1
// to 1 [Rajaraman 1982, Solitons and Instantons; from memory, confirmed by
// independent computation: quadrature].
func TestPhi4Energy(t *testing.T) {
	v := func(u float64) float64 { return (1 - u*u) * (1 - u*u) / 4 }
	for _, speed := range []float64{0, 0.3, -0.8} {
		gamma := 1 / math.Sqrt(1-speed*speed)
		for _, build := range []func(field.Moving) (field.Profile, error){field.Phi4Kink, field.Phi4Antikink} {
			p := must(t)(build(field.Moving{Speed: speed}))
			want := gamma * 2 * math.Sqrt2 / 3
			// Slopes are good to 1e-13 over some hundred sites.
			if e := energyOf(p, 0, 40, v); math.Abs(e-want) > 1e-11 {
				t.Errorf("speed %g: energy %.15g, want γ·2√2/3 = %.15g", speed, e, want)
			}
		}
	}
}

func TestPhi4Errors(t *testing.T) {
	if _, err := field.Phi4Kink(field.Moving{Speed: 1.5}); err == nil {
		t.Error("kink at the speed 1.5: no error")
	}
	if _, err := field.Phi4Antikink(field.Moving{At: math.NaN()}); err == nil {
		t.Error("antikink at NaN: no error")
	}
}
