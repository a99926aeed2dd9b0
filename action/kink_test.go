package action_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"gonum.org/v1/gonum/mat"
)

// TestKinkEnergy asks for the energies of the exact kinks with the order of the
// links: the sum over sites of a smooth kink converges faster than any power of
// h, the links have an error of the order 2, 4 or 6 [Rajaraman 1982, Solitons
// and Instantons: sine-Gordon 8, φ⁴ 2√2/3 in these units; from memory. φ⁶ 1/4:
// ∫√(2V)dφ = ∫φ(1 − φ²)dφ].
func TestKinkEnergy(t *testing.T) {
	still := field.Moving{At: 0.1}
	sg, err1 := field.SineGordonKink(still)
	phi4, err2 := field.Phi4Kink(still)
	phi6, err3 := field.Phi6Kink(0, 1, still)
	for _, c := range []struct {
		name string
		p    action.Potential
		kink field.Profile
		mass float64
	}{
		{"sine-Gordon", action.SineGordon{}, mustProfile(t, sg, err1), 8},
		{"φ⁴", action.Phi4{}, mustProfile(t, phi4, err2), 2 * math.Sqrt2 / 3},
		{"φ⁶", action.Phi6{}, mustProfile(t, phi6, err3), 0.25},
	} {
		for _, links := range everyLinks {
			var errs []float64
			for level := range 3 {
				h := 0.3 / float64(int(1)<<level)
				if links == action.Nearest {
					h /= 4 // its h⁴ error is 3 % of the h² one at 0.3
				}
				// Tails e^−20 leave the energy unchanged by e^−40.
				b := block(2, 1, int(40/h)+1, h)
				b.Space.From = -20
				s := mustNew(t, b, action.Wave{Potential: c.p, Links: links})
				e := s.Energy(c.kink.On(b.Space, 0), 0)
				if e.Kinetic != 0 || e.Source != 0 {
					t.Errorf("%s at rest has the energies %+v", c.name, e)
				}
				errs = append(errs, e.Total()-c.mass)
			}
			// The next term of the error is about h² of the leading one: 0.1 of an order.
			slopes(t, c.name, float64(links), 0.15, errs...)
		}
	}
}

// staticEnergy relaxes a static chain by Newton's method and returns its energy.
// The chain is a Euclidean block of two equal slices, periodic in time, whose
// action is 2k times the energy.
func staticEnergy(t *testing.T, p action.Potential, line lattice.Axis, start field.Slice) float64 {
	t.Helper()
	b := lattice.Block{Time: lattice.Axis{Step: 1, Sites: 2, Periodic: true}, Space: line}
	s := mustNew(t, b, action.Wave{Potential: p, Signature: action.Euclidean})
	h := field.Repeat(b, start)
	n := line.Sites - 2 // the ends stay in the vacua
	var g *field.History
	var m *action.Matrix
	for range 20 {
		g = s.Gradient(g, h)
		m = s.SecondVariationMatrix(m, h)
		a := mat.NewDense(n, n, nil)
		for i := range n {
			columns, values := m.Row(i + 1)
			for k, c := range columns { // the time links cancel between equal slices
				if j := c%line.Sites - 1; j >= 0 && j < n {
					a.Set(i, j, a.At(i, j)+values[k])
				}
			}
		}
		var step mat.VecDense
		if err := step.SolveVec(a, mat.NewVecDense(n, append([]float64(nil), g.Slice(0).Data[1:n+1]...))); err != nil {
			if _, rough := err.(mat.Condition); !rough { // the translation mode is soft
				t.Fatal(err)
			}
		}
		for slice := range 2 {
			row := h.Slice(slice).Data
			for i := range n {
				row[i+1] -= step.AtVec(i)
			}
		}
		if mat.Norm(&step, math.Inf(1)) < 1e-9 {
			return s.Value(h) / 2
		}
	}
	t.Fatalf("Newton's method does not settle: |∂S/∂φ| = %g", g.MaxAbs())
	return 0
}

// TestLatticeKinks asks for the energies of static lattice kinks centred on a
// site (saddle) and half way between sites (minimum). Independent computation:
// 45-digit Newton on E = Σ[(φ(i+1) − φ(i))²/2h + hV(φ(i))].
func TestLatticeKinks(t *testing.T) {
	sg, err1 := field.SineGordonKink(field.Moving{})
	phi4, err2 := field.Phi4Kink(field.Moving{})
	for _, c := range []struct {
		name       string
		p          action.Potential
		kink       field.Profile
		h          float64
		site, bond float64
	}{
		{"sine-Gordon", action.SineGordon{}, mustProfile(t, sg, err1), 0.5, 7.971742449940722, 7.97173932394522},
		{"sine-Gordon", action.SineGordon{}, sg, 0.8, 7.926839366643161, 7.923963629106246},
		{"sine-Gordon", action.SineGordon{}, sg, 1.0, 7.891928862101299, 7.866564706529581},
		{"sine-Gordon", action.SineGordon{}, sg, 1.2, 7.868215517700156, 7.765869603009891},
		{"sine-Gordon", action.SineGordon{}, sg, 1.6, 7.902795355894928, 7.38561044654975},
		{"φ⁴", action.Phi4{}, mustProfile(t, phi4, err2), 0.5, 0.9388132821158356, 0.9388132639551826},
		{"φ⁴", action.Phi4{}, phi4, 0.8, 0.9323323279278687, 0.9322089205401778},
		{"φ⁴", action.Phi4{}, phi4, 1.0, 0.9267019810974103, 0.9248700674367372},
		{"φ⁴", action.Phi4{}, phi4, 1.2, 0.9219232562353615, 0.9121134470946991},
		{"φ⁴", action.Phi4{}, phi4, 1.6, 0.9233352834782989, 0.8597608089196205},
	} {
		half := int(24 / c.h) // tails e^−24, energies off by their square
		onSite := lattice.Axis{From: -float64(half) * c.h, Step: c.h, Sites: 2*half + 1}
		onBond := lattice.Axis{From: -(float64(half) - 0.5) * c.h, Step: c.h, Sites: 2 * half}
		for _, v := range []struct {
			name string
			line lattice.Axis
			want float64
		}{{"site", onSite, c.site}, {"bond", onBond, c.bond}} {
			got := staticEnergy(t, c.p, v.line, c.kink.On(v.line, 0).Field)
			// A hundred terms of a sum of 8, each rounded: 1e-14 relative.
			if !(math.Abs(got-v.want) <= 1e-14*v.want) {
				t.Errorf("%s kink centred on a %s, h = %g: energy %.16g; want %.16g", c.name, v.name, c.h, got, v.want)
			}
		}
	}
}
