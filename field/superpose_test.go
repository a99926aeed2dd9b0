package field_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/field"
)

func TestSuperposeVacua(t *testing.T) {
	ok := must(t)
	left, right := field.Moving{At: -20, Speed: 0.3}, field.Moving{At: 20, Speed: -0.3}
	for _, tt := range []struct {
		name string
		p    field.Profile
		want [3]float64 // at x = −40, 0, 40
	}{
		{"nothing", field.Superpose(0.5), [3]float64{0.5, 0.5, 0.5}},
		{"φ⁴ pair", field.Superpose(-1, ok(field.Phi4Kink(left)), ok(field.Phi4Antikink(right))), [3]float64{-1, 1, -1}},
		{"sine-Gordon pair", field.Superpose(-2*math.Pi, ok(field.SineGordonKink(left)), ok(field.SineGordonAntikink(right))), [3]float64{0, 2 * math.Pi, 0}},
		{"φ⁶ pair", field.Superpose(-1, ok(field.Phi6Kink(0, 1, left)), ok(field.Phi6Kink(1, 0, right))), [3]float64{0, 1, 0}},
	} {
		for j, x := range []float64{-40, 0, 40} {
			// Tails: at most 4e^(−γ·20) = 3e-9.
			if got, rate := tt.p(x, 0); math.Abs(got-tt.want[j]) > 1e-8 || math.Abs(rate) > 1e-8 {
				t.Errorf("%s at x = %g: value %v, rate %v; want %v at rest", tt.name, x, got, rate, tt.want[j])
			}
		}
	}
}

// The rate of a sum is the sum of the rates, and changing the caller's list
// afterwards changes nothing.
func TestSuperposeCopiesItsParts(t *testing.T) {
	ok := must(t)
	a, b := ok(field.Phi4Kink(field.Moving{Speed: 0.5})), ok(field.Phi4Antikink(field.Moving{Speed: 0.2}))
	parts := []field.Profile{a, b}
	sum := field.Superpose(3, parts...)
	parts[0] = b
	va, ra := a(0.4, 0.1)
	vb, rb := b(0.4, 0.1)
	if v, r := sum(0.4, 0.1); v != 3+va+vb || r != ra+rb {
		t.Errorf("sum (%v, %v), want (%v, %v)", v, r, 3+va+vb, ra+rb)
	}
}
