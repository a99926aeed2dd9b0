package action_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// TestEuclideanIsTheFivePointLaplacian asks that on a square, h = k, the
// gradient of the Euclidean action be −Δφ by the five-point stencil at every
// event inside, and its natural halves at the sides and corners (the energy of
// the stencil is ½Σ(differences)², halved on the rim; by hand).
func TestEuclideanIsTheFivePointLaplacian(t *testing.T) {
	const n, h = 7, 0.25
	s := mustNew(t, block(n, h, n, h), action.Wave{Signature: action.Euclidean})
	phi := field.NewHistory(s.Block(), 1)
	scatter(8, 1, phi.Data)
	g := s.Gradient(nil, phi)
	rim := func(i int) float64 {
		if i == 0 || i == n-1 {
			return 0.5
		}
		return 1
	}
	for a := range n {
		for b := range n {
			var want float64
			for _, d := range [][2]int{{1, 0}, {-1, 0}, {0, 1}, {0, -1}} {
				p, q := a+d[0], b+d[1]
				if p < 0 || p >= n || q < 0 || q >= n {
					continue
				}
				weight := rim(b) // links along time carry the share of their site
				if d[0] == 0 {
					weight = rim(a)
				}
				want += weight * (phi.At(a, 0, b) - phi.At(p, 0, q))
			}
			if got := g.At(a, 0, b); math.Abs(got-want) > 1e-14 { // ten roundings of numbers about 1
				t.Errorf("∂S/∂φ at (%d, %d) is %.16g; want %.16g", a, b, got, want)
			}
		}
	}
	// Inside, hk·residual is the same, and S is half of φ·∂S/∂φ (Euler).
	r := s.Residual(nil, phi)
	var half float64
	for k, v := range g.Data {
		half += 0.5 * v * phi.Data[k]
		slice, _, i := phi.Place(k)
		if rim(slice) == 1 && math.Abs(h*h*r.Data[k]-v) > 1e-14 {
			t.Errorf("hk·residual at (%d, %d) is %g; want %g", slice, i, h*h*r.Data[k], v)
		}
	}
	if v := s.Value(phi); math.Abs(v-half) > 1e-13*half {
		t.Errorf("S = %.16g; want ½Σφ∂S/∂φ = %.16g", v, half)
	}
}

// TestSineGordonActionOfABreather asks for the action of one period of a
// breather at rest, 32π[acos ω − √(1 − ω²)/ω], with order 2. Independent
// computation: J = 16 acos ω and dE/dJ = ω, confirmed by 2-D quadrature;
// ω = 0.8 gives −10.706436295375.
func TestSineGordonActionOfABreather(t *testing.T) {
	const omega, want = 0.8, -10.706436295375
	p, err := field.SineGordonBreather(field.Breather{Frequency: omega})
	breather := mustProfile(t, p, err)
	var errs []float64
	for _, slices := range []int{40, 80, 160} {
		b := ring(slices, 2*math.Pi/omega/float64(slices), 10*slices, 60)
		b.Space.From = -30
		b.Time.Periodic = true
		s := mustNew(t, b, action.Wave{Potential: action.SineGordon{}})
		errs = append(errs, s.Value(breather.Over(b))-want)
	}
	// Differences of order 2 both ways; ωk = 0.16, so that the next term is 1 %.
	slopes(t, "action of a breather", 2, 0.05, errs...)
}
