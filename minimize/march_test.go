package minimize

import (
	"context"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

func newAction(t *testing.T, clock, line lattice.Axis, w action.Wave) *action.Discrete {
	t.Helper()
	b, err := lattice.NewBlock(clock, line)
	if err != nil {
		t.Fatal(err)
	}
	s, err := action.New(b, w)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// profile is for profiles whose numbers are right.
func profile(p field.Profile, err error) field.Profile {
	if err != nil {
		panic(err)
	}
	return p
}

// marched returns the history that the action's march makes from Cauchy data at
// the first slice. Held ends keep their values.
func marched(s *action.Discrete, st field.State) *field.History {
	h := field.Repeat(s.Block(), st.Field)
	m := s.March()
	m.Start(h.Slice(1), st, 0)
	for n := 1; n < s.Block().Slices()-1; n++ {
		m.Step(h.Slice(n+1), h.Slice(n), h.Slice(n-1), n)
	}
	return h
}

// pairOf pins the first two slices of a history.
func pairOf(h *field.History) *constraint.Set {
	held := constraint.On(h.Block)
	held.Slice(0, h.Slice(0))
	held.Slice(1, h.Slice(1))
	return held
}

// A Cauchy pair pinned in the least-residual problem reproduces the march
// (contract of the two sets of equations), from a start that knows the first
// slice only. The march solves the same residual slice by slice, so the two
// agree to the residual's rounding, 1e-12 of the terms φ/k² or so, times the
// growth of an error over the block, which is below 100 here: 1e-8 is the bar,
// 1e-10 what is asked of blocks without exponential growth.
func TestCauchyPairGivesTheMarch(t *testing.T) {
	clock := lattice.Axis{From: -2, Step: 0.08, Sites: 41}
	line := lattice.Axis{From: -6, Step: 0.1, Sites: 121}
	bump := func(x, t float64) (float64, float64) {
		return math.Exp(-x * x), x * math.Exp(-x*x)
	}
	kink := profile(field.SineGordonKink(field.Moving{Speed: 0.4}))
	ring := lattice.Axis{From: -6, Step: 0.1, Sites: 120, Periodic: true, Jump: []float64{2 * math.Pi}}
	with := func(a lattice.Axis, left, right lattice.End) lattice.Axis {
		a.Left, a.Right = left, right
		return a
	}
	for _, tc := range []struct {
		name  string
		line  lattice.Axis
		wave  action.Wave
		start field.Profile
	}{
		{"wave equation", line, action.Wave{}, bump},
		{"Klein–Gordon", line, action.Wave{Potential: action.Mass(1)}, bump},
		{"Klein–Gordon, links of sixth order", line, action.Wave{Potential: action.Mass(1), Links: action.Sixth}, bump},
		{"kink", line, action.Wave{Potential: action.SineGordon{}}, kink},
		{"kink between held ends", with(line, lattice.Held, lattice.Held), action.Wave{Potential: action.SineGordon{}}, kink},
		{"bump between an odd and an even end", with(line, lattice.Odd, lattice.Even), action.Wave{Potential: action.Phi4{}}, bump},
		{"bump between open ends", with(line, lattice.Open, lattice.Open), action.Wave{Potential: action.Mass(0.5)}, bump},
		{"kink on a ring", ring, action.Wave{Potential: action.SineGordon{}}, kink},
		{"driven and lossy", line, action.Wave{
			Potential: action.SineGordon{}, Alpha: action.Uniform(0.1), Beta: action.Uniform(0.02),
			Source:   action.Over(func(x, t float64) float64 { return 0.3 * math.Cos(t) }),
			Kappa:    action.Along(func(x float64) float64 { return 1 - 0.2*math.Tanh(x) }),
			LeftFlux: action.Uniform(0.1),
		}, kink},
	} {
		t.Run(tc.name, func(t *testing.T) {
			s := newAction(t, clock, tc.line, tc.wave)
			want := marched(s, tc.start.On(tc.line, clock.From))
			found, err := LeastResidual(context.Background(), s, pairOf(want), field.Repeat(s.Block(), want.Slice(0)), &Settings{Strategy: BlockWide})
			if err != nil {
				t.Fatal(err)
			}
			if d := found.History.MaxDifference(want); d > 1e-10 {
				t.Errorf("differs from the march by %.3g\n%v", d, found.Report)
			}
			if r := found.Report; r.Rows != r.Unknowns || r.Status != Converged {
				t.Errorf("%v", r)
			}
		})
	}
}

func TestTwoComponentsGiveTheMarch(t *testing.T) {
	clock := lattice.Axis{Step: 0.08, Sites: 31}
	line := lattice.Axis{From: -5, Step: 0.1, Sites: 101}
	s := newAction(t, clock, line, action.Wave{Potential: action.Sum{
		action.Each{Potential: action.SineGordon{}, N: 2},
		action.Bilinear{{0.5, -0.5}, {-0.5, 0.5}},
	}})
	st := field.NewState(2, line.Sites)
	a := profile(field.SineGordonKink(field.Moving{Speed: 0.5, At: -1})).On(line, 0)
	b := profile(field.SineGordonKink(field.Moving{Speed: -0.3, At: 1})).On(line, 0)
	copy(st.Field.Component(0), a.Field.Data)
	copy(st.Field.Component(1), b.Field.Data)
	copy(st.Rate.Component(0), a.Rate.Data)
	copy(st.Rate.Component(1), b.Rate.Data)
	want := marched(s, st)
	found, err := LeastResidual(context.Background(), s, pairOf(want), field.Repeat(s.Block(), st.Field), &Settings{Strategy: BlockWide})
	if err != nil {
		t.Fatal(err)
	}
	// as in TestCauchyPairGivesTheMarch
	if d := found.History.MaxDifference(want); d > 1e-10 {
		t.Errorf("differs from the march by %.3g\n%v", d, found.Report)
	}
}

// The bar of the core: on blocks of 100 × 400, eight units of time, a cold start
// from the first slice repeated ends within 1e-8 of the march after at least
// three accepted steps.
func TestColdStartOnLargeBlock(t *testing.T) {
	clock := lattice.Axis{From: -4, Step: 0.08, Sites: 101}
	line := lattice.Axis{From: -20, Step: 0.1, Sites: 401}
	odd := func(x float64) float64 {
		if x > 0 && x < 5 {
			return 0.7
		}
		return 1
	}
	for _, tc := range []struct {
		name  string
		wave  action.Wave
		start field.Profile
	}{
		{"kink", action.Wave{}, profile(field.SineGordonKink(field.Moving{Speed: 0.5}))},
		{"collision", action.Wave{}, profile(field.SineGordonKinkAntikink(field.Collision{Speed: 0.4}))},
		{"lossy, biased line", action.Wave{
			Alpha: action.Uniform(0.1), Beta: action.Uniform(0.02), Source: action.Uniform(0.3), Kappa: action.Along(odd),
		}, profile(field.SineGordonKink(field.Moving{Speed: 0.8}))},
	} {
		t.Run(tc.name, func(t *testing.T) {
			tc.wave.Potential = action.SineGordon{}
			s := newAction(t, clock, line, tc.wave)
			want := marched(s, tc.start.On(line, clock.From))
			found, err := LeastResidual(context.Background(), s, pairOf(want), field.Repeat(s.Block(), want.Slice(0)), &Settings{Strategy: BlockWide})
			if err != nil {
				t.Fatal(err)
			}
			d := found.History.MaxDifference(want)
			t.Logf("%d steps, %d factorisations, %.1f s, difference %.2g", found.Report.Iterations, found.Report.Factorisations, found.Report.Wall.Seconds(), d)
			if d > 1e-8 || found.Report.Accepted < 3 {
				t.Errorf("differs from the march by %.3g\n%v", d, found.Report)
			}
		})
	}
}
