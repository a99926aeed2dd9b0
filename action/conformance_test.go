package action_test

import (
	"fmt"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/action/actiontest"
	"gonum.org/v1/gonum/num/hyperdual"
)

// named is a potential with the name of its test.
type named struct {
	name string
	p    action.Potential
}

// catalogue lists every potential of the catalogue.
func catalogue() []named {
	return []named{
		{"mass", action.Mass(1.3)},
		{"polynomial", action.Polynomial{0.3, -0.2, 0.5, 0.1, -0.25, 0, 0.125}},
		{"φ⁴", action.Phi4{}},
		{"φ⁶", action.Phi6{}},
		{"sine-Gordon", action.SineGordon{}},
		{"double sine-Gordon", action.DoubleSineGordon{Eta: 0.7}},
	}
}

// combinations lists the ways to make a potential from others and from
// functions.
func combinations() []named {
	morse := func(p hyperdual.Number) hyperdual.Number { // ½(1 − e^−φ)²
		d := hyperdual.Add(hyperdual.Number{Real: 1}, hyperdual.Scale(-1, hyperdual.Exp(hyperdual.Scale(-1, p))))
		return hyperdual.Scale(0.5, hyperdual.Mul(d, d))
	}
	coupling := action.Bilinear{{1, -0.5, 0.25}, {-0.5, 2, 0}, {0.25, 0, -1}}
	return []named{
		{"scalar", action.Scalar{V: math.Cosh, D1: math.Sinh, D2: math.Cosh}},
		{"auto", action.Auto(morse)},
		{"each of 1", action.Each{Potential: action.Phi4{}, N: 1}},
		{"each of 2", action.Each{Potential: action.SineGordon{}, N: 2}},
		{"bilinear of 3", coupling},
		{"sum of 1", action.Sum{action.SineGordon{}, action.Mass(0.5), action.Polynomial{0, 0.25}}},
		{"sum of 3", action.Sum{action.Each{Potential: action.Phi6{}, N: 3}, coupling}},
	}
}

func TestPotentialsConform(t *testing.T) {
	for _, c := range append(catalogue(), combinations()...) {
		t.Run(c.name, func(t *testing.T) {
			if err := actiontest.Potential(c.p, actiontest.Settings{}); err != nil {
				t.Error(err)
			}
		})
	}
}

var everyLinks = []action.Links{action.Nearest, action.Fourth, action.Sixth}

// TestDensitiesConform puts potentials on blocks with every kind of end, for
// every order of the links.
func TestDensitiesConform(t *testing.T) {
	for _, c := range append(catalogue(), combinations()...) {
		for _, links := range everyLinks {
			t.Run(fmt.Sprintf("%s/%d", c.name, links), func(t *testing.T) {
				for _, sig := range []action.Signature{action.Lorentzian, action.Euclidean} {
					if err := actiontest.Density(action.Wave{Potential: c.p, Links: links, Signature: sig}, actiontest.Settings{}); err != nil {
						t.Errorf("%v: %v", sig, err)
					}
				}
			})
		}
	}
}

// TestCoefficientsConform puts every coefficient, of every kind that fits all
// blocks, on blocks with every kind of end; tables are in TestTablesConform.
func TestCoefficientsConform(t *testing.T) {
	wave := func(base float64) action.Coefficient {
		return action.Over(func(x, t float64) float64 { return base + 0.25*math.Sin(x-0.5*t) })
	}
	along := func(base float64) action.Coefficient {
		return action.Along(func(x float64) float64 { return base + 0.25*math.Cos(2*x) })
	}
	u := func(v float64) action.Coefficient { return action.Uniform(v) }
	two := action.Each{Potential: action.Phi4{}, N: 2}
	for _, c := range []struct {
		name string
		w    action.Wave
	}{
		{"uniform", action.Wave{Rho: u(1.5), Kappa: u(0.75), Sigma: u(2), Source: u(-0.3)}},
		{"along", action.Wave{Rho: along(1), Kappa: along(2), Sigma: along(1), Source: along(0)}},
		{"over", action.Wave{Rho: wave(1), Kappa: wave(2), Sigma: wave(1), Source: wave(0)}},
		{"over but ρ", action.Wave{Rho: along(1), Kappa: wave(2), Sigma: wave(1), Source: wave(0)}},
		{"κ alone", action.Wave{Kappa: wave(2)}},
		{"steady flux", action.Wave{LeftFlux: u(0.5), RightFlux: u(-0.25)}},
		{"driven flux", action.Wave{LeftFlux: wave(0), Kappa: along(1)}},
		{"α", action.Wave{Alpha: u(0.5)}},
		{"β", action.Wave{Beta: u(0.5)}},
		{"α, β over", action.Wave{Alpha: wave(0.5), Beta: wave(0.5)}},
		{"all", action.Wave{Rho: along(1), Kappa: wave(2), Sigma: wave(1), Source: wave(0), LeftFlux: wave(0), RightFlux: u(0.5), Alpha: along(0.5), Beta: wave(1)}},
		{"per component", action.Wave{Potential: two,
			Rho:    action.PerComponent{u(1.5), along(1)},
			Kappa:  action.PerComponent{nil, wave(2)},
			Source: action.PerComponent{nil, u(0.5)},
			Alpha:  action.PerComponent{u(0.25), nil},
			Beta:   action.PerComponent{nil, along(0.5)}}},
	} {
		if c.w.Potential == nil {
			c.w.Potential = action.SineGordon{}
		}
		for _, links := range everyLinks {
			c.w.Links = links
			t.Run(fmt.Sprintf("%s/%d", c.name, links), func(t *testing.T) {
				if err := actiontest.Density(c.w, actiontest.Settings{}); err != nil {
					t.Error(err)
				}
			})
		}
	}
}
