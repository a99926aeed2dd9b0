package action_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"gonum.org/v1/gonum/num/hyperdual"
)

// evaluate returns V, V′ and V″ of a potential of one component at φ.
func evaluate(p action.Potential, phi float64) (v, d1, d2 float64) {
	at := action.Sites{X: []float64{0}}
	one := field.SliceOf([]float64{phi})
	value, slope, curve := make([]float64, 1), field.NewSlice(1, 1), field.NewSlice(1, 1)
	p.Value(value, one, at)
	p.Slope(slope, one, at)
	p.Curvature(curve, one, at)
	return value[0], slope.Data[0], curve.Data[0]
}

// TestCatalogueFormulas holds the catalogue against its formulas as the papers
// write them, differentiated by hyperdual numbers (independent computation:
// gonum's hyperdual arithmetic on the formulas, exact to rounding).
func TestCatalogueFormulas(t *testing.T) {
	num := func(v float64) hyperdual.Number { return hyperdual.Number{Real: v} }
	add, mul, scale := hyperdual.Add, hyperdual.Mul, hyperdual.Scale
	oneLess := func(p hyperdual.Number) hyperdual.Number { return add(num(1), scale(-1, p)) }
	coefficients := []float64{0.3, -0.2, 0.5, 0.1, -0.25, 0, 0.125}
	for _, c := range []struct {
		name    string
		p       action.Potential
		formula func(p hyperdual.Number) hyperdual.Number
	}{
		{"mass ½m²φ²", action.Mass(1.3), func(p hyperdual.Number) hyperdual.Number { return scale(0.5*1.3*1.3, mul(p, p)) }},
		{"polynomial Σcₖφᵏ", action.Polynomial(coefficients), func(p hyperdual.Number) hyperdual.Number {
			sum, power := num(0), num(1)
			for _, c := range coefficients {
				sum = add(sum, scale(c, power))
				power = mul(power, p)
			}
			return sum
		}},
		{"constant polynomial", action.Polynomial{2}, func(hyperdual.Number) hyperdual.Number { return num(2) }},
		{"φ⁴ ¼(1−φ²)²", action.Phi4{}, func(p hyperdual.Number) hyperdual.Number {
			w := oneLess(mul(p, p))
			return scale(0.25, mul(w, w))
		}},
		{"φ⁶ ½φ²(1−φ²)²", action.Phi6{}, func(p hyperdual.Number) hyperdual.Number {
			w := oneLess(mul(p, p))
			return scale(0.5, mul(mul(p, p), mul(w, w)))
		}},
		{"sine-Gordon 1−cos φ", action.SineGordon{}, func(p hyperdual.Number) hyperdual.Number { return oneLess(hyperdual.Cos(p)) }},
		{"double sine-Gordon (1−cos φ)+η(1−cos ½φ)", action.DoubleSineGordon{Eta: 0.7}, func(p hyperdual.Number) hyperdual.Number {
			return add(oneLess(hyperdual.Cos(p)), scale(0.7, oneLess(hyperdual.Cos(scale(0.5, p)))))
		}},
	} {
		t.Run(c.name, func(t *testing.T) {
			for phi := -3.5; phi <= 3.5; phi += 0.34375 {
				v, d1, d2 := evaluate(c.p, phi)
				n := c.formula(hyperdual.Number{Real: phi, E1mag: 1, E2mag: 1})
				// Some ten roundings of terms up to φ⁶/2 ≈ 900, and V near a vacuum is a
				// small difference in the formula.
				size := 1 + math.Abs(n.Real) + math.Abs(n.E1mag) + math.Abs(n.E1E2mag)
				for name, d := range map[string]float64{"V": v - n.Real, "V′": d1 - n.E1mag, "V″": d2 - n.E1E2mag} {
					if !(math.Abs(d) <= 4e-15*size) {
						t.Errorf("%s at φ = %g is off by %g of %g", name, phi, d, size)
					}
				}
			}
		})
	}
}

// TestVacua asks that the vacua be zeros and minima of V, with the masses of
// small oscillations that the textbooks give [Rajaraman 1982, Solitons and
// Instantons; Lohe 1979, Phys. Rev. D 20, 3120; from memory].
func TestVacua(t *testing.T) {
	for _, c := range []struct {
		name   string
		p      action.Potential
		phi    float64
		square float64 // m²
	}{
		{"φ⁴ right", action.Phi4{}, 1, 2},
		{"φ⁴ left", action.Phi4{}, -1, 2},
		{"φ⁶ middle", action.Phi6{}, 0, 1},
		{"φ⁶ right", action.Phi6{}, 1, 4},
		{"φ⁶ left", action.Phi6{}, -1, 4},
		{"sine-Gordon", action.SineGordon{}, 0, 1},
		{"sine-Gordon next", action.SineGordon{}, 2 * math.Pi, 1},
		{"double sine-Gordon", action.DoubleSineGordon{Eta: 0.8}, 0, 1.2},
		{"double sine-Gordon next", action.DoubleSineGordon{Eta: 0.8}, 4 * math.Pi, 1.2},
		{"mass", action.Mass(3), 0, 9},
	} {
		v, d1, d2 := evaluate(c.p, c.phi)
		// 4π is off by 4e-16, which shows in V′ ≈ m²·4e-16 and not in V.
		if !(math.Abs(v) <= 1e-30 && math.Abs(d1) <= 2e-15 && math.Abs(d2-c.square) <= 1e-14) {
			t.Errorf("%s: V, V′, V″ = %g, %g, %g; want 0, 0, %g", c.name, v, d1, d2, c.square)
		}
	}
}

// TestVacuumKeepsItsDigits asks for a small V near a vacuum to full relative
// accuracy: V = ½m²δ² to the order δ² ≈ 1e-12 relative.
func TestVacuumKeepsItsDigits(t *testing.T) {
	const delta = 1e-6
	for _, c := range []struct {
		p      action.Potential
		phi    float64
		square float64
	}{
		{action.SineGordon{}, delta, 1},
		{action.DoubleSineGordon{Eta: 0.8}, delta, 1.2},
		{action.Phi6{}, delta, 1},
	} {
		v, _, _ := evaluate(c.p, c.phi)
		if want := 0.5 * c.square * delta * delta; !(math.Abs(v/want-1) <= 1e-11) {
			t.Errorf("%T: V(%g) = %g; want %g", c.p, c.phi, v, want)
		}
	}
}

func TestVacuumSpacingOfCharge(t *testing.T) {
	for _, c := range []struct {
		name string
		p    action.Potential
		gain float64
	}{
		{"sine-Gordon", action.SineGordon{}, 2 * math.Pi},
		{"double sine-Gordon", action.DoubleSineGordon{Eta: 0.5}, 4 * math.Pi},
		{"double sine-Gordon, η = 0", action.DoubleSineGordon{}, 2 * math.Pi},
		{"φ⁴", action.Phi4{}, 2},
		{"φ⁶", action.Phi6{}, 1},
		{"each", action.Each{Potential: action.Phi4{}, N: 1}, 2},
	} {
		s := mustNew(t, block(3, 0.1, 5, 0.5), action.Wave{Potential: c.p})
		phi := field.SliceOf([]float64{1, 3, 2, 0, 1 - 3*c.gain})
		if q, err := s.Charge(phi, 0); err != nil || math.Abs(q+3) > 1e-14 {
			t.Errorf("%s: charge %g, %v; want -3", c.name, q, err)
		}
	}
	s := mustNew(t, block(3, 0.1, 5, 0.5), action.Wave{Potential: action.Mass(1)})
	if _, err := s.Charge(field.NewSlice(1, 5), 0); err == nil {
		t.Error("charge of a mass term: no error; it has one vacuum")
	}
	ring := block(3, 0.1, 5, 0.5)
	ring.Space.Periodic = true
	ring.Space.Jump = []float64{-4 * math.Pi}
	s = mustNew(t, ring, action.Wave{Potential: action.SineGordon{}})
	if q, err := s.Charge(field.NewSlice(1, 5), 0); err != nil || q != -2 {
		t.Errorf("ring with two antifluxons: charge %g, %v; want -2", q, err)
	}
}
