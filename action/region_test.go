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

func mustRegion(t testing.TB, b lattice.Block, inside func(lattice.Event) bool) *lattice.Region {
	t.Helper()
	r, err := lattice.NewRegion(b, inside)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func mustCells(t testing.TB, r *lattice.Region, l action.Lagrangian) *action.Cells {
	t.Helper()
	s, err := action.NewCells(r, l)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func mustShaped(t testing.TB, r *lattice.Region, w action.Wave) *action.Shaped {
	t.Helper()
	s, err := action.NewShaped(r, w)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// waveLagrangian writes ½φ_t² ∓ (½c²φ_x² + V − Jφ) with hyperdual numbers.
func waveLagrangian(sign, cc float64, v func(hyperdual.Number) hyperdual.Number, j func(e lattice.Event) float64) action.AutoLagrangian {
	return action.AutoLagrangian{L: func(phi, rate, tilt []hyperdual.Number, e lattice.Event) hyperdual.Number {
		square := func(a hyperdual.Number) hyperdual.Number { return hyperdual.Mul(a, a) }
		u := hyperdual.Add(hyperdual.Scale(0.5*cc, square(tilt[0])), v(phi[0]))
		u = hyperdual.Sub(u, hyperdual.Scale(j(e), phi[0]))
		return hyperdual.Add(hyperdual.Scale(0.5, square(rate[0])), hyperdual.Scale(sign, u))
	}}
}

func sineGordon(p hyperdual.Number) hyperdual.Number {
	return hyperdual.Sub(hyperdual.Number{Real: 1}, hyperdual.Cos(p))
}

// grounds are the blocks on which a region of all cells must be the whole block.
func grounds() map[string]lattice.Block {
	line := block(5, 0.125, 8, 0.25)
	around := ring(5, 0.125, 8, 2)
	around.Space.Jump = []float64{2 * math.Pi}
	torus := around
	torus.Time.Periodic, torus.Time.Jump = true, []float64{-2 * math.Pi}
	small := ring(2, 0.125, 2, 0.5) // two links between the same two sites, and slices
	small.Time.Periodic = true
	return map[string]lattice.Block{"free line": line, "ring": around, "torus": torus, "two by two": small}
}

// sameAction asks for equal value, gradient, second variation and matrix.
func sameAction(t *testing.T, name string, got, want actiontest.Action, h *field.History, tol float64) {
	t.Helper()
	eta := field.NewHistory(h.Block, h.Components)
	scatter(31, 1, eta.Data)
	if v, w := got.Value(h), want.Value(h); !(math.Abs(v-w) <= tol*math.Abs(w)) {
		t.Errorf("%s: value %.16g, want %.16g", name, v, w)
	}
	times := func(a actiontest.Action) *field.History {
		dst := field.NewHistory(h.Block, h.Components)
		a.SecondVariationMatrix(nil, h).MulVec(dst.Data, eta.Data)
		return dst
	}
	for _, c := range []struct {
		what      string
		got, want *field.History
	}{
		{"gradient", got.Gradient(nil, h), want.Gradient(nil, h)},
		{"second variation", got.SecondVariation(nil, h, eta), want.SecondVariation(nil, h, eta)},
		{"matrix", times(got), times(want)},
	} {
		if off := c.got.MaxDifference(c.want); !(off <= tol*c.want.MaxAbs()) {
			t.Errorf("%s: %s differs by %g of %g", name, c.what, off, c.want.MaxAbs())
		}
	}
}

// TestWholeRegionIsTheBlock asks that the sine-Gordon density on all cells be
// that of Discrete, stated as a Wave and written once with hyperdual numbers, for
// both signatures, with a source in x and t.
func TestWholeRegionIsTheBlock(t *testing.T) {
	j := func(x, t float64) float64 { return 0.25 * math.Sin(3*x-t) }
	for name, b := range grounds() {
		for _, sig := range []action.Signature{action.Lorentzian, action.Euclidean} {
			w := action.Wave{Potential: action.SineGordon{}, Signature: sig, Kappa: action.Uniform(2), Source: action.Over(j)}
			sign := map[action.Signature]float64{action.Lorentzian: -1, action.Euclidean: 1}[sig]
			want := mustNew(t, b, w)
			h := field.NewHistory(b, 1)
			scatter(3, 2, h.Data)
			r := mustRegion(t, b, nil)
			// A hundred roundings; values are sums of terms of both signs.
			sameAction(t, name+" shaped "+sig.String(), mustShaped(t, r, w), want, h, 1e-13)
			l := waveLagrangian(sign, 2, sineGordon, func(e lattice.Event) float64 { return j(e.X, e.T) })
			sameAction(t, name+" cells "+sig.String(), mustCells(t, r, l), want, h, 1e-13)
		}
	}
}

// TestShapedCoefficients asks for the same as Discrete where ρ, κ and σ vary and
// two components are coupled.
func TestShapedCoefficients(t *testing.T) {
	over := func(base float64) action.Coefficient {
		return action.Over(func(x, t float64) float64 { return base + 0.5*math.Sin(2*x+3*t) })
	}
	for name, b := range grounds() {
		w := action.Wave{
			Potential: action.Sum{action.Each{Potential: action.Phi4{}, N: 2}, action.Bilinear{{0, 1}, {1, 0.5}}},
			Rho:       over(1), Kappa: action.PerComponent{over(2), action.Uniform(0.5)}, Sigma: over(1), Source: action.PerComponent{nil, over(0)},
		}
		h := field.NewHistory(b, 2)
		scatter(4, 1, h.Data)
		sameAction(t, name, mustShaped(t, mustRegion(t, b, nil), w), mustNew(t, b, w), h, 1e-13) // a hundred roundings
	}
}

// inT tells a T of stem and arms.
func inT(e lattice.Event) bool { return e.T > 1 || math.Abs(e.X-1.5) < 0.5 }

// TestShapesAgree holds the weights of links and events on a T against the sum
// over its cells, for the same density stated in both ways and summed by hand.
func TestShapesAgree(t *testing.T) {
	b := block(9, 0.25, 13, 0.25)
	r := mustRegion(t, b, inT)
	w := action.Wave{Potential: action.SineGordon{}, Signature: action.Euclidean, Kappa: action.Uniform(2)}
	shaped := mustShaped(t, r, w)
	cells := mustCells(t, r, waveLagrangian(1, 2, sineGordon, func(lattice.Event) float64 { return 0 }))
	h := field.NewHistory(b, 1)
	scatter(5, 2, h.Data)
	sameAction(t, "T", cells, shaped, h, 1e-13) // a hundred roundings

	// By hand: each cell has half of its four sides and a quarter of its four
	// corners.
	var want float64
	for n := range b.Slices() - 1 {
		for i := range b.Sites() - 1 {
			if !inT(lattice.Event{T: b.Time.Between(n), X: b.Space.Between(i)}) {
				continue
			}
			a, c, d, e := h.At(n, 0, i), h.At(n, 0, i+1), h.At(n+1, 0, i), h.At(n+1, 0, i+1)
			rate := ((d-a)*(d-a) + (e-c)*(e-c)) / (0.25 * 0.25)
			tilt := ((c-a)*(c-a) + (e-d)*(e-d)) / (0.25 * 0.25)
			v := 4 - math.Cos(a) - math.Cos(c) - math.Cos(d) - math.Cos(e)
			want += 0.25 * 0.25 * (0.25*rate + 0.25*2*tilt + 0.25*v)
		}
	}
	if v := shaped.Value(h); math.Abs(v-want) > 1e-13*want {
		t.Errorf("value %.16g, by hand %.16g", v, want)
	}

	// Events outside have no row, no gradient and no say.
	m := shaped.SecondVariationMatrix(nil, h)
	g := cells.Gradient(nil, h)
	moved := h.Clone()
	for k := range h.Data {
		n, _, i := h.Place(k)
		columns, _ := m.Row(k)
		inside := inT(lattice.Event{T: b.Time.Between(n), X: b.Space.Between(i)}) || inT(lattice.Event{T: b.Time.Between(n - 1), X: b.Space.Between(i)}) ||
			inT(lattice.Event{T: b.Time.Between(n), X: b.Space.Between(i - 1)}) || inT(lattice.Event{T: b.Time.Between(n - 1), X: b.Space.Between(i - 1)})
		if inside != shaped.Region().Inside(n, i) || inside != (len(columns) > 0) {
			t.Errorf("event %v: inside the T is %v, Inside %v, a row of %d", b.At(n, i), inside, shaped.Region().Inside(n, i), len(columns))
		}
		if !inside {
			moved.Data[k] = 1e300
			if g.Data[k] != 0 {
				t.Errorf("event %v outside has the gradient %g", b.At(n, i), g.Data[k])
			}
		}
	}
	if a, c := shaped.Value(moved), cells.Value(moved); a != shaped.Value(h) || c != cells.Value(h) {
		t.Errorf("values outside of the region change S to %g and %g", a, c)
	}
}

// TestRegionNaturalConditions asks, on an L and a T, that a constant cost
// nothing, that L = 1 give the area, and that a wave that fits the walls be an
// eigenvector: with h = k = 1/N and corners at whole numbers, cos πx cos πt has no
// flux through any wall and −Δ_h of it is 8 sin²(πh/2)/h² of itself, at re-entrant
// corners as well, where the event has the weight ¾.
func TestRegionNaturalConditions(t *testing.T) {
	const h = 0.25
	b := block(13, h, 13, h) // 3 × 3
	for name, c := range map[string]struct {
		inside func(lattice.Event) bool
		area   float64
	}{
		"L": {func(e lattice.Event) bool { return e.T < 1 || e.X < 2 }, 7},
		"T": {func(e lattice.Event) bool { return e.T > 2 || e.X > 1 && e.X < 2 }, 5},
	} {
		r := mustRegion(t, b, c.inside)
		unit := mustCells(t, r, action.AutoLagrangian{L: func(_, _, _ []hyperdual.Number, _ lattice.Event) hyperdual.Number {
			return hyperdual.Number{Real: 1}
		}})
		zero := field.NewHistory(b, 1)
		if got := unit.Value(zero); math.Abs(got-c.area) > 1e-13 { // a hundred additions
			t.Errorf("%s: area %v, want %v", name, got, c.area)
		}
		s := mustShaped(t, r, action.Wave{Signature: action.Euclidean})
		flat, wave := zero.Clone(), zero.Clone()
		for k := range flat.Data {
			n, _, i := flat.Place(k)
			e := b.At(n, i)
			flat.Data[k] = 0.7
			wave.Data[k] = math.Cos(math.Pi*e.X) * math.Cos(math.Pi*e.T)
		}
		if g, v := s.Gradient(nil, flat).MaxAbs(), s.Value(flat); g != 0 || v != 0 {
			t.Errorf("%s: a constant has the action %g and gradient %g", name, v, g)
		}
		g := s.Gradient(nil, wave)
		mu := 8 * math.Pow(math.Sin(math.Pi*h/2)/h, 2)
		for k, v := range g.Data {
			n, _, i := wave.Place(k)
			want := h * h * r.Event(n, i) * mu * wave.Data[k]
			if math.Abs(v-want) > 1e-14 { // ten roundings of numbers about 1
				t.Errorf("%s: −Δφ at %v is %g, want %g", name, b.At(n, i), v, want)
			}
		}
	}
}

// TestActionsOnRegionsConform runs the suite on both kinds of action on regions,
// rings included.
func TestActionsOnRegionsConform(t *testing.T) {
	coupled := action.AutoLagrangian{N: 2, L: func(phi, rate, tilt []hyperdual.Number, e lattice.Event) hyperdual.Number {
		// A bit of everything: φ₀φ₁_t, φ₀_tφ₁_x, cos φ₀ φ₁_x², ½φ_t², x·t·φ₁³.
		sum := hyperdual.Mul(phi[0], rate[1])
		sum = hyperdual.Add(sum, hyperdual.Mul(rate[0], tilt[1]))
		sum = hyperdual.Add(sum, hyperdual.Mul(hyperdual.Cos(phi[0]), hyperdual.Mul(tilt[1], tilt[1])))
		sum = hyperdual.Add(sum, hyperdual.Scale(0.5, hyperdual.Mul(rate[0], rate[0])))
		return hyperdual.Add(sum, hyperdual.Scale(e.X*e.T, hyperdual.Mul(phi[1], hyperdual.Mul(phi[1], phi[1]))))
	}}
	if err := actiontest.Lagrangian(coupled, actiontest.Settings{}); err != nil {
		t.Error(err)
	}
	for name, b := range grounds() {
		w := action.Wave{
			Potential: action.Sum{action.Each{Potential: action.SineGordon{}, N: 2}, action.Bilinear{{0, 1}, {1, 0.5}}},
			Sigma:     action.Along(func(x float64) float64 { return 1 + x }),
		}
		for shape, inside := range map[string]func(lattice.Event) bool{
			"all": nil,
			"L":   func(e lattice.Event) bool { return e.T < 0.25 || e.X < 0.5 },
		} {
			r := mustRegion(t, b, inside)
			if err := actiontest.Functional(mustCells(t, r, coupled), actiontest.Settings{}); err != nil {
				t.Errorf("cells, %s on %s: %v", shape, name, err)
			}
			if err := actiontest.Functional(mustShaped(t, r, w), actiontest.Settings{}); err != nil {
				t.Errorf("shaped, %s on %s: %v", shape, name, err)
			}
		}
	}
}
