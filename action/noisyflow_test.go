package action_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/action/actiontest"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

func mustFlow(t testing.TB, b lattice.Block, f action.GradientFlow) *action.NoisyFlow {
	t.Helper()
	s, err := action.NewNoisyFlow(b, f)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// TestNoisyFlowConforms runs the suite on blocks with every kind of end, every
// order of links and every number of nodes.
func TestNoisyFlowConforms(t *testing.T) {
	clock := lattice.Axis{From: 0.25, Step: 0.125, Sites: 4}
	loop := clock
	loop.Periodic, loop.Jump = true, []float64{2 * math.Pi, 0}
	line := lattice.Axis{From: -0.5, Step: 0.25, Sites: 6}
	with := func(left, right lattice.End) lattice.Axis {
		a := line
		a.Left, a.Right = left, right
		return a
	}
	around := line
	around.Periodic, around.Jump = true, []float64{-2 * math.Pi}
	narrow := around // narrower than the sixth-order links reach
	narrow.Sites = 4
	over := func(base float64) action.Coefficient {
		return action.Over(func(x, t float64) float64 { return base + 0.5*math.Sin(2*x+3*t) })
	}
	energy := action.Wave{
		Potential: action.Sum{action.Each{Potential: action.SineGordon{}, N: 2}, action.Bilinear{{0, 1}, {1, 0.5}}},
		Kappa:     action.PerComponent{over(1), nil}, Sigma: over(1), Source: over(0),
	}
	flux := energy
	flux.LeftFlux, flux.RightFlux = action.Uniform(0.3), over(0)
	byHand := energy // a potential without third derivatives: differences of V″
	byHand.Potential = action.Sum{hat{}, energy.Potential}
	for k, c := range []struct {
		b lattice.Block
		w action.Wave
	}{
		{lattice.Block{Time: clock, Space: line}, flux},
		{lattice.Block{Time: clock, Space: with(lattice.Held, lattice.Odd)}, energy},
		{lattice.Block{Time: clock, Space: with(lattice.Even, lattice.Held)}, byHand},
		{lattice.Block{Time: clock, Space: around}, energy},
		{lattice.Block{Time: loop, Space: around}, energy},
		{lattice.Block{Time: loop, Space: narrow}, energy},
	} {
		for _, links := range everyLinks {
			for _, nodes := range []int{0, 1, 2, 4} {
				c.w.Links = links
				s := mustFlow(t, c.b, action.GradientFlow{Energy: c.w, Mobility: over(1), Nodes: nodes})
				if s.ThirdDerivatives() != (k != 2) {
					t.Errorf("case %d: ThirdDerivatives() is %v", k, s.ThirdDerivatives())
				}
				if err := actiontest.Functional(s, actiontest.Settings{}); err != nil {
					t.Errorf("case %d, links %d, nodes %d: %v", k, links, nodes, err)
				}
			}
		}
	}
}

// TestThirdDerivatives holds V‴·d of the catalogue, inside the second variation,
// against differences of the gradient, one potential at a time.
func TestThirdDerivatives(t *testing.T) {
	b := block(3, 0.25, 4, 0.5)
	for _, c := range append(catalogue(), combinations()...) {
		s := mustFlow(t, b, action.GradientFlow{Energy: action.Wave{Potential: c.p}})
		if err := actiontest.Functional(s, actiontest.Settings{}); err != nil {
			t.Errorf("%s: %v", c.name, err)
		}
	}
}

// TestGaussNewton asks that the matrix without V‴ be positive semidefinite and be
// the whole second variation where there is no noise.
func TestGaussNewton(t *testing.T) {
	b := block(5, 0.1, 7, 0.25)
	b.Space.Left = lattice.Held
	s := mustFlow(t, b, action.GradientFlow{Energy: action.Wave{Potential: action.Phi4{}}})
	h := field.NewHistory(b, 1)
	scatter(11, 2, h.Data)
	full, part := s.SecondVariationMatrix(nil, h), s.GaussNewtonMatrix(nil, h)
	var differ bool
	for r := range full.Rows() {
		_, v := full.Row(r)
		_, w := part.Row(r)
		for k := range v {
			differ = differ || v[k] != w[k]
		}
	}
	if !differ {
		t.Error("on a rough history the matrix without V‴ is the whole")
	}
	dst := make([]float64, len(h.Data))
	for seed := range uint64(50) {
		x := make([]float64, len(h.Data))
		scatter(seed, 1, x)
		part.MulVec(dst, x)
		var sum, size float64
		for k, v := range x {
			sum += v * dst[k]
			size += math.Abs(v * dst[k])
		}
		if sum < -1e-14*size { // rounding of a sum of this size
			t.Errorf("x·Mx = %g", sum)
		}
	}
	rest := field.NewHistory(b, 1) // φ = 1 is at rest
	for k := range rest.Data {
		rest.Data[k] = 1
	}
	full, part = s.SecondVariationMatrix(nil, rest), s.GaussNewtonMatrix(nil, rest)
	for k, v := range full.Value {
		if v != part.Value[k] || full.Column[k] != part.Column[k] {
			t.Fatalf("entry %d at rest is %g and %g", k, v, part.Value[k])
		}
	}
}

// TestNoisyFlowAroundTheClock asks that a history on a clock that is periodic with
// a jump cost what the same history costs on a clock of one slice more, which
// repeats the first with the jump added.
func TestNoisyFlowAroundTheClock(t *testing.T) {
	open := block(6, 0.25, 7, 0.5)
	loop := open
	loop.Time.Sites, loop.Time.Periodic, loop.Time.Jump = 5, true, []float64{2 * math.Pi}
	f := action.GradientFlow{Energy: action.Wave{Potential: action.SineGordon{}}}
	short, long := field.NewHistory(loop, 1), field.NewHistory(open, 1)
	scatter(21, 1, short.Data)
	copy(long.Data, short.Data)
	for i, v := range short.Slice(0).Data {
		long.Set(5, 0, i, v+2*math.Pi)
	}
	got, want := mustFlow(t, loop, f).Value(short), mustFlow(t, open, f).Value(long)
	if math.Abs(got-want) > 1e-13*want { // 35 terms
		t.Errorf("S = %.15g around the clock, %.15g along it", got, want)
	}
}
