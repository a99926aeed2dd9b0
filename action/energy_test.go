package action_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// TestMovingKink asks for energy 8γ, momentum 8γv, the flux ∫−φ_xφ_t = 8γv and
// the charge 1 of a moving sine-Gordon kink, with the order of the links.
// [Rajaraman 1982, Solitons and Instantons; from memory]
func TestMovingKink(t *testing.T) {
	const v = 0.6
	g := 1 / math.Sqrt(1-v*v)
	p, err := field.SineGordonKink(field.Moving{At: 0.1, Speed: v})
	kink := mustProfile(t, p, err)
	for _, links := range everyLinks {
		var energy, momentum, flux []float64
		for level := range 3 {
			h := 0.2 / float64(int(1)<<level)
			if links == action.Nearest {
				h /= 2
			}
			b := block(2, 1, int(40/h)+1, h)
			b.Space.From = -20
			s := mustNew(t, b, action.Wave{Potential: action.SineGordon{}, Links: links})
			st := kink.On(b.Space, 0)
			energy = append(energy, s.Energy(st, 0).Total()-8*g)
			momentum = append(momentum, s.Momentum(st, 0)-8*g*v)
			var sum float64
			for _, f := range s.EnergyFlux(nil, st, 0) {
				sum += h * f
			}
			flux = append(flux, sum-8*g*v)
			if q, err := s.Charge(st.Field, 0); err != nil || math.Abs(q-1) > 1e-8 { // tails e^−25 at x = 20
				t.Errorf("charge %g, %v; want 1", q, err)
			}
		}
		// As in TestKinkEnergy, with γ²h² for h².
		slopes(t, "energy 8γ", float64(links), 0.15, energy...)
		slopes(t, "momentum 8γv", float64(links), 0.15, momentum...)
		slopes(t, "energy flux 8γv", float64(links), 0.15, flux...)
	}
}

// TestPowerOfAKink asks for the power of a bias J, −2πvJ, and of the losses,
// −8αγv² and −(8/3)βγ³v², on a moving kink (integrals of sech² and sech²tanh²
// by hand; the first two are those of McLaughlin & Scott 1978, Phys. Rev. A 18,
// 1652, from memory).
func TestPowerOfAKink(t *testing.T) {
	const v, bias, alpha, beta = 0.6, 0.3, 0.2, 0.1
	g := 1 / math.Sqrt(1-v*v)
	p, err := field.SineGordonKink(field.Moving{Speed: v})
	kink := mustProfile(t, p, err)
	var viscous []float64
	for _, h := range []float64{0.1, 0.05, 0.025} {
		b := block(2, 1, int(40/h)+1, h)
		b.Space.From = -20
		at := func(w action.Wave) action.Power {
			w.Potential = action.SineGordon{}
			return mustNew(t, b, w).Power(kink.On(b.Space, 0), 0)
		}
		// Sums over smooth, localised functions converge faster than any power.
		if got := at(action.Wave{Source: action.Uniform(bias)}); math.Abs(got.Source+2*math.Pi*v*bias) > 1e-10 || got.Loss != 0 {
			t.Errorf("power of the bias %+v; want Source %g", got, -2*math.Pi*v*bias)
		}
		want := -8 * alpha * g * v * v
		if got := at(action.Wave{Alpha: action.Uniform(alpha)}); math.Abs(got.Loss-want) > 1e-10 || got.Source != 0 {
			t.Errorf("power of the loss α %+v; want Loss %g", got, want)
		}
		viscous = append(viscous, at(action.Wave{Beta: action.Uniform(beta)}).Loss+8./3*beta*g*g*g*v*v)
	}
	// The links of β are of order 2; the h⁴ term is 2 % at γh = 0.1.
	slopes(t, "power of the loss β", 2, 0.05, viscous...)
}

// TestSourceEnergy asks for −∫Jφ − (fφ)|ends of a constant field, by hand: the
// weights of a flux on wide links add up to 1.
func TestSourceEnergy(t *testing.T) {
	const phi, bias, left, right = 2, 0.3, 0.5, -0.25
	for _, links := range everyLinks {
		b := block(3, 0.1, 9, 0.5)
		s := mustNew(t, b, action.Wave{Links: links, Source: action.Uniform(bias), LeftFlux: action.Uniform(left), RightFlux: action.Uniform(right)})
		st := field.NewState(1, 9)
		for i := range 9 {
			st.Field.Data[i] = phi
			st.Rate.Data[i] = -3
		}
		want := -bias*phi*4 + left*phi - right*phi
		if e := s.Energy(st, 0.1); math.Abs(e.Source-want) > 1e-14 || e.Elastic > 1e-28 || e.Potential != 0 || math.Abs(e.Kinetic-0.5*9*4) > 1e-13 {
			t.Errorf("links of order %d: energies %+v; want Source %g, Kinetic 18, the others 0", links, e, want)
		}
		p := s.Power(st, 0.1)
		if math.Abs(p.Source+3*bias*4) > 1e-14 || math.Abs(p.Left-3*left) > 1e-14 || math.Abs(p.Right+3*right) > 1e-14 {
			t.Errorf("links of order %d: power %+v; want Source %g, Left %g, Right %g", links, p, -3*bias*4, 3*left, -3*right)
		}
	}
}

// TestOpenEndPower asks for −√(ρκ)φ_t² at an open end, the power that a wave
// travelling out through a line of impedance √(ρκ) carries.
func TestOpenEndPower(t *testing.T) {
	b := block(3, 0.1, 9, 0.5)
	b.Space.Right = lattice.Open
	s := mustNew(t, b, action.Wave{Rho: action.Uniform(2), Kappa: action.Uniform(8)})
	st := field.NewState(1, 9)
	st.Rate.Data[8] = 3
	if p := s.Power(st, 0); p.Right != -4*9 || p.Left != 0 || p.Loss != 0 {
		t.Errorf("power %+v; want Right -36 alone", p)
	}
}

// TestMomentumAtAFreeEndWithFlux asks that a linear field with its flux
// prescribed at both ends have the momentum density −ρφ_tφ_x up to the ends.
func TestMomentumAtAFreeEndWithFlux(t *testing.T) {
	const slope, kappa = 0.75, 2
	for _, links := range everyLinks {
		b := block(3, 0.1, 9, 0.5)
		f := action.Uniform(kappa * slope)
		s := mustNew(t, b, action.Wave{Links: links, Rho: action.Uniform(3), Kappa: action.Uniform(kappa), LeftFlux: f, RightFlux: f})
		st := field.NewState(1, 9)
		for i := range 9 {
			st.Field.Data[i] = 1 + slope*b.Space.At(i)
			st.Rate.Data[i] = 0.5
		}
		for i, p := range s.MomentumDensity(nil, st, 0) {
			if math.Abs(p+3*0.5*slope) > 1e-14 { // a few roundings of numbers about 1
				t.Errorf("links of order %d: momentum density %g at site %d; want %g", links, p, i, -3*0.5*slope)
			}
		}
	}
}

// TestMomentumAtAnOpenEnd asks the same of a linear wave, φ = s(x − ct), that
// leaves through an open end on the right, and of its mirror image.
func TestMomentumAtAnOpenEnd(t *testing.T) {
	const slope, rho, kappa = 0.75, 2, 8 // c = 2
	for _, links := range everyLinks {
		for _, sign := range []float64{1, -1} {
			b := block(3, 0.1, 9, 0.5)
			b.Space.Left, b.Space.Right = lattice.Held, lattice.Open
			if sign < 0 {
				b.Space.Left, b.Space.Right = lattice.Open, lattice.Held
			}
			s := mustNew(t, b, action.Wave{Links: links, Rho: action.Uniform(rho), Kappa: action.Uniform(kappa)})
			st := field.NewState(1, 9)
			for i := range 9 {
				st.Field.Data[i] = slope * b.Space.At(i)
				st.Rate.Data[i] = -sign * 2 * slope
			}
			want := sign * rho * 2 * slope * slope
			for i, p := range s.MomentumDensity(nil, st, 0) {
				if math.Abs(p-want) > 1e-13 { // a few roundings of numbers about 10
					t.Errorf("links of order %d: momentum density %g at site %d; want %g", links, p, i, want)
				}
			}
		}
	}
}

// TestMomentumOfAWinding asks for −ρφ_tφ_x at every site of a field that winds
// evenly around a ring.
func TestMomentumOfAWinding(t *testing.T) {
	for _, links := range everyLinks {
		b := ring(3, 0.1, 8, 4)
		b.Space.Jump = []float64{3}
		s := mustNew(t, b, action.Wave{Links: links})
		st := field.NewState(1, 8)
		for i := range 8 {
			st.Field.Data[i] = 0.75 * b.Space.At(i)
			st.Rate.Data[i] = 2
		}
		for i, p := range s.MomentumDensity(nil, st, 0) {
			if math.Abs(p+1.5) > 1e-14 { // a few roundings of numbers about 3
				t.Errorf("links of order %d: momentum density %g at site %d; want -1.5", links, p, i)
			}
		}
	}
}
