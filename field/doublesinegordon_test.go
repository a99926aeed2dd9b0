package field_test

import (
	"fmt"
	"math"
	"testing"

	"github.com/tenter-go/tenter/field"
)

func TestDoubleSineGordonKinks(t *testing.T) {
	const eta = 2.0
	v := func(u float64) float64 { return (1 - math.Cos(u)) + eta*(1-math.Cos(u/2)) }
	force := func(u float64) float64 { return math.Sin(u) + eta/2*math.Sin(u/2) }
	for _, kind := range []struct {
		build       func(float64, field.Moving) (field.Profile, error)
		left, right float64
	}{
		{field.DoubleSineGordonKink, 0, 4 * math.Pi},
		{field.DoubleSineGordonAntikink, 4 * math.Pi, 0},
	} {
		t.Run(fmt.Sprintf("from %.3g", kind.left), func(t *testing.T) {
			p := must(t)(kind.build(eta, field.Moving{At: 0.5, Speed: 0.6}))
			checkEquation(t, p, 1, force, nothing)
			for _, end := range []struct{ x, want float64 }{{-40, kind.left}, {40, kind.right}} {
				if got, _ := p(end.x, 0); math.Abs(got-end.want) > 1e-14 { // a few roundings of 4π
					t.Errorf("value %v at x = %g, want %v", got, end.x, end.want)
				}
			}
			// Mass ∫√(2V)dφ from 0 to 4π = 16√(1 + η/4) + 4η asinh(2/√η), elementary;
			// γ = 5/4. Slopes are good to 1e-13 over some hundred sites of energies of
			// order 10.
			want := 1.25 * (16*math.Sqrt(1+eta/4) + 4*eta*math.Asinh(2/math.Sqrt(eta)))
			if e := energyOf(p, 0, 40, v); math.Abs(e-want) > 1e-10 {
				t.Errorf("energy %.15g, want %.15g", e, want)
			}
		})
	}
}

func TestDoubleSineGordonErrors(t *testing.T) {
	for _, eta := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		if _, err := field.DoubleSineGordonKink(eta, field.Moving{}); err == nil {
			t.Errorf("η = %g: no error", eta)
		}
	}
	if _, err := field.DoubleSineGordonAntikink(1, field.Moving{Speed: 1}); err == nil {
		t.Error("speed 1: no error")
	}
}
