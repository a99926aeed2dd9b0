package action_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/action/actiontest"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"gonum.org/v1/gonum/num/hyperdual"
)

// bornInfeld is the scalar density of Born and Infeld, 1 − √(1 − φ_t² + φ_x²).
var bornInfeld = action.AutoLagrangian{L: func(_, rate, tilt []hyperdual.Number, _ lattice.Event) hyperdual.Number {
	one := hyperdual.Number{Real: 1}
	root := hyperdual.Sub(one, hyperdual.Mul(rate[0], rate[0]))
	root = hyperdual.Add(root, hyperdual.Mul(tilt[0], tilt[0]))
	return hyperdual.Sub(one, hyperdual.Sqrt(root))
}}

// largestEquationOf returns the largest |∂S/∂φ|/hk at interior events.
func largestEquationOf(s actiontest.Action, h *field.History) (most float64) {
	g := s.Gradient(nil, h)
	b := s.Block()
	for k, v := range g.Data {
		n, _, i := g.Place(k)
		if n > 0 && n < b.Slices()-1 && (b.Space.Periodic || i > 0 && i < b.Sites()-1) {
			most = max(most, math.Abs(v)/(b.Space.Step*b.Time.Step))
		}
	}
	return most
}

// fill writes f to component c of every event.
func fill(h *field.History, c int, f func(x, t float64) float64) {
	for n := range h.Block.Slices() {
		for i := range h.Block.Sites() {
			e := h.Block.At(n, i)
			h.Set(n, c, i, f(e.X, e.T))
		}
	}
}

// TestBornInfeldWaves asks that waves of any shape that run to one side solve the
// Born–Infeld equation (1 − φ_t²)φ_xx + 2φ_xφ_tφ_xt − (1 + φ_x²)φ_tt = 0, with an
// error of order 2: with φ = f(x ∓ t) every term is a multiple of f″ and they
// cancel [Barbashov & Chernikov 1966, Sov. Phys. JETP 23, 861; from memory, and
// by hand].
func TestBornInfeldWaves(t *testing.T) {
	for name, f := range map[string]func(x, t float64) float64{
		"right": func(x, t float64) float64 { return 0.8 * math.Exp(-(x-t)*(x-t)) },
		"left":  func(x, t float64) float64 { return 0.6 * math.Sin(x+t) / (1 + (x+t)*(x+t)) },
	} {
		var errs []float64
		for _, m := range []int{1, 2, 4} {
			b := block(8*m+1, 0.1/float64(m), 60*m+1, 0.125/float64(m))
			b.Space.From = -3.5
			h := field.NewHistory(b, 1)
			fill(h, 0, f)
			errs = append(errs, largestEquationOf(mustCells(t, mustRegion(t, b, nil), bornInfeld), h))
		}
		// The largest error may move between events; the next order is (2h)² of it.
		slopes(t, "Born–Infeld, to the "+name, 2, 0.2, errs...)
	}
	b := block(5, 0.1, 9, 0.125)
	h := field.NewHistory(b, 1)
	fill(h, 0, func(x, t float64) float64 { return 0.5 * math.Sin(x-0.3*t) })
	// Steps in φ of 0.002 change φ_x by 0.02: the root stays away from zero.
	if err := actiontest.Functional(mustCells(t, mustRegion(t, b, nil), bornInfeld), actiontest.Settings{Step: 0.002}, h); err != nil {
		t.Error(err)
	}
}

// TestVaryingCells asks for order 2 where the density varies in x and t and mixes
// φ_t with φ_x: L = ½aφ_t² + bφ_tφ_x − ½cφ_x² − φφ_t·d with a, b, c, d functions of x
// and t has the equation (aφ_t + bφ_x)_t + (bφ_t − cφ_x)_x = φ·d_t (by hand: the
// terms φ_t·d cancel). Here a = 1 + x/4, b = t/4, c = 1 + tx/8 and d = t.
func TestVaryingCells(t *testing.T) {
	l := action.AutoLagrangian{L: func(phi, rate, tilt []hyperdual.Number, e lattice.Event) hyperdual.Number {
		sum := hyperdual.Scale(0.5*(1+e.X/4), hyperdual.Mul(rate[0], rate[0]))
		sum = hyperdual.Add(sum, hyperdual.Scale(e.T/4, hyperdual.Mul(rate[0], tilt[0])))
		sum = hyperdual.Sub(sum, hyperdual.Scale(0.5*(1+e.T*e.X/8), hyperdual.Mul(tilt[0], tilt[0])))
		return hyperdual.Sub(sum, hyperdual.Scale(e.T, hyperdual.Mul(phi[0], rate[0])))
	}}
	// ∂S/∂φ/hk → φd_t − (aφ_t + bφ_x)_t − (bφ_t − cφ_x)_x for φ = sin x sin t.
	want := func(x, t float64) float64 {
		phi, px, pxt := math.Sin(x)*math.Sin(t), math.Cos(x)*math.Sin(t), math.Cos(x)*math.Cos(t)
		ptt, pxx := -phi, -phi
		a, b, k := 1+x/4, t/4, 1+t*x/8
		return phi - (a*ptt + px/4 + b*pxt) - (b*pxt - k*pxx - t/8*px)
	}
	var errs []float64
	for _, m := range []int{1, 2, 4} {
		b := block(8*m+1, 0.125/float64(m), 8*m+1, 0.2/float64(m))
		b.Space.From, b.Time.From = -0.7, 0.3
		h := field.NewHistory(b, 1)
		fill(h, 0, func(x, t float64) float64 { return math.Sin(x) * math.Sin(t) })
		g := mustCells(t, mustRegion(t, b, nil), l).Gradient(nil, h)
		var most float64
		for n := m; n < 8*m; n += m { // the interior events of the coarsest block
			for i := m; i < 8*m; i += m {
				e := b.At(n, i)
				most = max(most, math.Abs(g.At(n, 0, i)/(b.Time.Step*b.Space.Step)-want(e.X, e.T)))
			}
		}
		errs = append(errs, most)
	}
	slopes(t, "varying coefficients", 2, 0.1, errs...) // the next order is h²/10 of it
}

// TestSchroedingerPlaneWaves asks that L = ½(φ₁φ₀_t − φ₀φ₁_t) − ½(φ₀_x² + φ₁_x²)
// have plane waves with ω = p² and order 2 (by hand: with ψ = φ₀ + iφ₁ the equation
// is iψ_t = −ψ_xx).
func TestSchroedingerPlaneWaves(t *testing.T) {
	l := action.AutoLagrangian{N: 2, L: func(phi, rate, tilt []hyperdual.Number, _ lattice.Event) hyperdual.Number {
		turn := hyperdual.Sub(hyperdual.Mul(phi[1], rate[0]), hyperdual.Mul(phi[0], rate[1]))
		elastic := hyperdual.Add(hyperdual.Mul(tilt[0], tilt[0]), hyperdual.Mul(tilt[1], tilt[1]))
		return hyperdual.Scale(0.5, hyperdual.Sub(turn, elastic))
	}}
	var errs []float64
	for _, m := range []int{1, 2, 4} {
		b := ring(8*m+1, 0.05/float64(m), 16*m, 2*math.Pi)
		h := field.NewHistory(b, 2)
		const p = 2
		fill(h, 0, func(x, t float64) float64 { return math.Cos(p*x - p*p*t) })
		fill(h, 1, func(x, t float64) float64 { return math.Sin(p*x - p*p*t) })
		errs = append(errs, largestEquationOf(mustCells(t, mustRegion(t, b, nil), l), h))
	}
	slopes(t, "Schrödinger", 2, 0.1, errs...) // the next order is (ph)²/30 of it
}

// hat is ¼(|φ|² − 1)² of two components.
type hat struct{}

func (hat) Components() int { return 2 }

func (hat) Value(dst []float64, phi field.Slice, _ action.Sites) {
	a, b := phi.Component(0), phi.Component(1)
	for i := range dst {
		w := a[i]*a[i] + b[i]*b[i] - 1
		dst[i] = 0.25 * w * w
	}
}

func (hat) Slope(dst, phi field.Slice, _ action.Sites) {
	a, b := phi.Component(0), phi.Component(1)
	for i := range a {
		w := a[i]*a[i] + b[i]*b[i] - 1
		dst.Component(0)[i], dst.Component(1)[i] = w*a[i], w*b[i]
	}
}

func (hat) Curvature(dst, phi field.Slice, _ action.Sites) {
	a, b := phi.Component(0), phi.Component(1)
	for i := range a {
		w := a[i]*a[i] + b[i]*b[i] - 1
		dst.Component(0)[i], dst.Component(3)[i] = w+2*a[i]*a[i], w+2*b[i]*b[i]
		dst.Component(1)[i] = 2 * a[i] * b[i]
		dst.Component(2)[i] = dst.Component(1)[i]
	}
}

// TestComplexPhi4 asks that complex φ⁴ written once be the Wave of the potential
// written by hand.
func TestComplexPhi4(t *testing.T) {
	if err := actiontest.Potential(hat{}, actiontest.Settings{}); err != nil {
		t.Fatal(err)
	}
	l := action.AutoLagrangian{N: 2, L: func(phi, rate, tilt []hyperdual.Number, _ lattice.Event) hyperdual.Number {
		square := func(v []hyperdual.Number) hyperdual.Number {
			return hyperdual.Add(hyperdual.Mul(v[0], v[0]), hyperdual.Mul(v[1], v[1]))
		}
		w := hyperdual.Sub(square(phi), hyperdual.Number{Real: 1})
		kinetic := hyperdual.Scale(0.5, hyperdual.Sub(square(rate), square(tilt)))
		return hyperdual.Sub(kinetic, hyperdual.Scale(0.25, hyperdual.Mul(w, w)))
	}}
	for name, b := range grounds() {
		h := field.NewHistory(b, 2)
		scatter(7, 1.5, h.Data)
		sameAction(t, name, mustCells(t, mustRegion(t, b, nil), l), mustNew(t, b, action.Wave{Potential: hat{}}), h, 1e-13) // a hundred roundings
	}
}
