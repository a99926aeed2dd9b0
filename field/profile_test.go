package field_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// must returns the profile of a constructor that may not fail here.
func must(t *testing.T) func(field.Profile, error) field.Profile {
	return func(p field.Profile, err error) field.Profile {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
		return p
	}
}

// Central differences of order 8 [Fornberg 1988, Math. Comp. 51, 699; from
// memory, and tested by every profile below].
var (
	firstDifference  = [5]float64{0, 4. / 5, -1. / 5, 4. / 105, -1. / 280}
	secondDifference = [5]float64{-205. / 72, 8. / 5, -1. / 5, 8. / 315, -1. / 560}
)

func derivative(f func(s float64) float64, d float64) float64 {
	var sum float64
	for j := 1; j < 5; j++ {
		s := float64(j) * d
		sum += firstDifference[j] * (f(s) - f(-s))
	}
	return sum / d
}

func secondDerivative(f func(s float64) float64, d float64) float64 {
	sum := secondDifference[0] * f(0)
	for j := 1; j < 5; j++ {
		s := float64(j) * d
		sum += secondDifference[j] * (f(s) + f(-s))
	}
	return sum / (d * d)
}

// sampleEvents covers the middle of every collision and both sides of it.
func sampleEvents(yield func(x, t float64) bool) {
	for i := -12; i <= 12; i++ {
		for n := -6; n <= 6; n++ {
			if !yield(0.61*float64(i), 0.83*float64(n)) {
				return
			}
		}
	}
}

// checkEquation compares φ_tt − c²φ_xx + force(φ) with miss(x, t), and the
// profile's rate with ∂φ/∂t.
func checkEquation(t *testing.T, p field.Profile, c float64, force func(float64) float64, miss func(x, t float64) float64) {
	t.Helper()
	// Step 1/64. Second difference: truncation d⁸/3150·|φ⁽¹⁰⁾| with the poles of
	// these profiles at least 0.9 away, so φ⁽¹⁰⁾ < 4·9!/0.9¹⁰ ≈ 4e6 and the term is
	// 5e-12; rounding 6·ulp(2π)/d² = 2e-11 twice over. First difference: rounding
	// 2·ulp(2π)/d = 1e-13.
	const d, tolerance, rateTolerance = 1. / 64, 1e-10, 2e-12
	for x, at := range sampleEvents {
		value, rate := p(x, at)
		alongX := func(s float64) float64 { v, _ := p(x+s, at); return v }
		alongT := func(s float64) float64 { v, _ := p(x, at+s); return v }
		left := secondDerivative(alongT, d) - c*c*secondDerivative(alongX, d) + force(value)
		if off := left - miss(x, at); !(math.Abs(off) < tolerance) {
			t.Errorf("field equation at (x, t) = (%g, %g) is off by %.3g, want below %g", x, at, off, tolerance)
			return
		}
		if off := derivative(alongT, d) - rate; !(math.Abs(off) < rateTolerance) {
			t.Errorf("rate at (x, t) = (%g, %g) is off by %.3g, want below %g", x, at, off, rateTolerance)
			return
		}
	}
}

func nothing(x, t float64) float64 { return 0 }

// energyOf returns ∫½φ_t² + ½φ_x² + V over [−L, L] at time t by the trapezoid
// rule with the spacing 1/16, which converges exponentially for these profiles.
func energyOf(p field.Profile, t, length float64, v func(float64) float64) float64 {
	const h = 1. / 16
	var sum float64
	for i := -int(length / h); i <= int(length/h); i++ {
		x := float64(i) * h
		value, rate := p(x, t)
		slope := derivative(func(s float64) float64 { v, _ := p(x+s, t); return v }, 1./64)
		sum += (rate*rate+slope*slope)/2 + v(value)
	}
	return sum * h
}

// momentumOf returns −∫φ_tφ_x like energyOf.
func momentumOf(p field.Profile, t, length float64) float64 {
	const h = 1. / 16
	var sum float64
	for i := -int(length / h); i <= int(length/h); i++ {
		x := float64(i) * h
		_, rate := p(x, t)
		sum -= rate * derivative(func(s float64) float64 { v, _ := p(x+s, t); return v }, 1./64)
	}
	return sum * h
}

// root returns where f changes sign in [a, b], by bisection.
func root(t *testing.T, f func(float64) float64, a, b float64) float64 {
	t.Helper()
	fa := f(a)
	if fa*f(b) > 0 {
		t.Fatalf("no sign change between %g and %g", a, b)
	}
	for range 60 {
		m := (a + b) / 2
		if fm := f(m); fa*fm <= 0 {
			b = m
		} else {
			a, fa = m, fm
		}
	}
	return (a + b) / 2
}

func TestProfileOnLattice(t *testing.T) {
	p := must(t)(field.SineGordonKink(field.Moving{At: 1, Speed: 0.5}))
	line := lattice.Axis{From: -3, Step: 0.5, Sites: 13}
	block := lattice.Block{Time: lattice.Axis{From: 2, Step: 0.25, Sites: 5}, Space: line}
	h := p.Over(block)
	s := p.On(line, 2.5)
	for i := range line.Sites {
		value, rate := p(line.At(i), 2.5)
		if s.Field.At(0, i) != value || s.Rate.At(0, i) != rate {
			t.Errorf("On at site %d: (%v, %v), want (%v, %v)", i, s.Field.At(0, i), s.Rate.At(0, i), value, rate)
		}
		if h.At(2, 0, i) != value {
			t.Errorf("Over at slice 2, site %d: %v, want %v", i, h.At(2, 0, i), value)
		}
	}
}

// Every profile is finite far outside of where its formula, taken literally,
// overflows, and settles on a vacuum at rest there.
func TestProfilesStayFinite(t *testing.T) {
	ok := must(t)
	fast := field.Moving{Speed: 0.999999}
	for name, p := range map[string]field.Profile{
		"kink":           ok(field.SineGordonKink(fast)),
		"antikink":       ok(field.SineGordonAntikink(fast)),
		"breather":       ok(field.SineGordonBreather(field.Breather{Moving: fast, Frequency: 0.3})),
		"slow breather":  ok(field.SineGordonBreather(field.Breather{Frequency: 1e-200})),
		"kink antikink":  ok(field.SineGordonKinkAntikink(field.Collision{Speed: 0.4})),
		"slow collision": ok(field.SineGordonKinkAntikink(field.Collision{Speed: 1e-200})),
		"kink kink":      ok(field.SineGordonKinkKink(field.Collision{Speed: 0.9999})),
		"slow kinks":     ok(field.SineGordonKinkKink(field.Collision{Speed: 1e-200})),
		"phi4":           ok(field.Phi4Kink(fast)),
		"phi6":           ok(field.Phi6Kink(-1, 0, fast)),
		"packet":         ok(field.GaussianPacket(field.Packet{Wave: field.Wave{Amplitude: 1, Wavenumber: 2, Mass: 1}, Width: 0.1})),
	} {
		for _, x := range []float64{-1e4, -710, -30, 0, 30, 710, 1e4} {
			for _, at := range []float64{-1e4, -710, 0, 710, 1e4} {
				value, rate := p(x, at)
				if math.IsNaN(value-value) || math.IsNaN(rate-rate) {
					t.Errorf("%s at (x, t) = (%g, %g): value %v, rate %v", name, x, at, value, rate)
				}
				if math.Abs(value) > 2*math.Pi {
					t.Errorf("%s at (x, t) = (%g, %g): value %v beyond 2π", name, x, at, value)
				}
				if math.Abs(math.Abs(x)-math.Abs(at)) > 1000 && math.Abs(x) > math.Abs(at) && math.Abs(rate) > 1e-12 {
					t.Errorf("%s at (x, t) = (%g, %g): rate %v outside of every light cone, want 0", name, x, at, rate)
				}
			}
		}
	}
}
