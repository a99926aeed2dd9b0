package minimize

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Every strategy ends at the history that satisfies the equation and the pins:
// where that is one history, at the same one. From Cauchy data it is the march of
// the action; the block is short enough that a residual at rounding level, 1e-12,
// cannot have grown to 1e-9.
func TestStrategiesAgreeOnCauchyData(t *testing.T) {
	clock := lattice.Axis{From: -2, Step: 0.08, Sites: 49}
	line := lattice.Axis{From: -6, Step: 0.1, Sites: 121}
	s := newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}})
	want := marched(s, profile(field.SineGordonKink(field.Moving{Speed: 0.4})).On(line, clock.From))
	for _, pair := range []int{0, 24} {
		held := constraint.On(s.Block())
		held.Slice(pair, want.Slice(pair))
		held.Slice(pair+1, want.Slice(pair+1))
		for _, strategy := range []Strategy{Fitting, BlockWide, Marching, Windows, CoarseToFine} {
			found, err := LeastResidual(context.Background(), s, held, field.Repeat(s.Block(), want.Slice(pair)), &Settings{Strategy: strategy})
			if err != nil {
				t.Errorf("pair at %d, %v: %v", pair, strategy, err)
				continue
			}
			if d := found.History.MaxDifference(want); d > 1e-9 {
				t.Errorf("pair at %d, %v: differs from the march by %.3g\n%v", pair, strategy, d, found.Report)
			}
			took := strategy
			if took == Fitting {
				took = Marching
			}
			r := found.Report
			if r.Strategy != took || took != BlockWide && (len(r.Stages) != 1 || r.Stages[0].Strategy != took || !r.Stages[0].Used) {
				t.Errorf("pair at %d, %v: reports %v", pair, strategy, r)
			}
		}
	}
}

// Over half a unit of time the two-time problem of a massive field between held
// ends has one solution: no mode of the lattice turns by π in it, the fastest
// having a frequency of √(4/h² + 1) < 4.2 and so turning by 2.1. All strategies that need no Cauchy pair
// must find the history that the slices were taken from.
func TestStrategiesAgreeOnTwoTimes(t *testing.T) {
	clock := lattice.Axis{Step: 0.03125, Sites: 17}
	line := lattice.Axis{From: -4, Step: 0.5, Sites: 17, Left: lattice.Held, Right: lattice.Held}
	s := newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}})
	bump := func(x, t float64) (float64, float64) { return math.Exp(-x * x), x * math.Exp(-x*x) }
	want := marched(s, field.Profile(bump).On(line, 0))
	held := constraint.On(s.Block())
	held.Slice(0, want.Slice(0))
	held.Slice(16, want.Slice(16))
	for _, set := range []Settings{
		{}, {Strategy: BlockWide}, {Strategy: Windows}, {Strategy: CoarseToFine},
		{Strategy: Shooting}, {Strategy: Shooting, Nodes: 4}, {Strategy: Dragging},
	} {
		found, err := LeastResidual(context.Background(), s, held, field.Repeat(s.Block(), want.Slice(0)), &set)
		if err != nil {
			t.Errorf("%v, %d nodes: %v", set.Strategy, set.Nodes, err)
			continue
		}
		// rounding of the residual, 1e-13, over the smallest |sin ωT| ω/T-like
		// factor of the two-time problem, above 1e-2 here
		if d := found.History.MaxDifference(want); d > 1e-9 {
			t.Errorf("%v, %d nodes: differs from the march by %.3g\n%v", set.Strategy, set.Nodes, d, found.Report)
		}
	}
}

// A march that the other conditions contradict is used only if it costs less
// than the start, and the report says so.
func TestMarchThatConditionsContradict(t *testing.T) {
	clock := lattice.Axis{Step: 0.08, Sites: 26}
	line := lattice.Axis{From: -5, Step: 0.1, Sites: 101}
	s := newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}})
	want := marched(s, profile(field.SineGordonKink(field.Moving{Speed: 0.5})).On(line, 0))
	held := pairOf(want)
	held.Event(clock.At(25), 0, want.At(25, 0, 50)+0.01)
	whole, err := LeastResidual(context.Background(), s, held, want, &Settings{Strategy: BlockWide})
	if err != nil {
		t.Fatal(err)
	}
	again, err := LeastResidual(context.Background(), s, held, whole.History, nil)
	if err != nil {
		t.Fatal(err)
	}
	r := again.Report
	if len(r.Stages) != 1 || r.Stages[0].Used || !strings.Contains(r.String(), "not used") {
		t.Errorf("the best history was given up for the march\n%v", r)
	}
	// the gradient vanishes to 1e-8 of itself before cancellation in both
	if d := again.History.MaxDifference(whole.History); d > 1e-8 {
		t.Errorf("differs by %.3g", d)
	}
}

func TestRefusedStrategies(t *testing.T) {
	clock := lattice.Axis{Step: 0.08, Sites: 14}
	line := lattice.Axis{Step: 0.1, Sites: 18}
	open := line
	open.Left = lattice.Open
	row := field.NewSlice(1, 18)
	pinned := func(slices ...int) func(*constraint.Set) {
		return func(held *constraint.Set) {
			for _, n := range slices {
				held.Slice(n, row)
			}
		}
	}
	ring := clock
	ring.Periodic = true
	for _, tc := range []struct {
		name        string
		clock, line lattice.Axis
		hold        func(*constraint.Set)
		set         Settings
		says        string
	}{
		{"march without a pair", clock, line, pinned(0, 2), Settings{Strategy: Marching}, "no Cauchy pair"},
		{"march back with losses", clock, open, pinned(4, 5), Settings{Strategy: Marching}, "open left end"},
		{"march on a ring of time", ring, line, pinned(4, 5), Settings{Strategy: Marching}, "periodic in time"},
		{"windows on a ring of time", ring, line, pinned(4, 5), Settings{Strategy: Windows}, "periodic in time"},
		{"13 and 17 links", clock, line, pinned(0, 13), Settings{Strategy: CoarseToFine}, "13 × 17 links"},
		{"shooting at nothing", clock, line, pinned(0), Settings{Strategy: Shooting}, "0 misfits"},
		{"five nodes", clock, line, pinned(0, 13), Settings{Strategy: Shooting, Nodes: 5}, "3 slices a node"},
		{"dragging one event", clock, line, func(h *constraint.Set) { h.Slice(0, row); h.Event(1.04, 1, 0) }, Settings{Strategy: Dragging}, "1 pinned values"},
		{"windows over rates", clock, line, func(h *constraint.Set) { h.Rate(3, row) }, Settings{Strategy: Windows}, "rates"},
	} {
		t.Run(tc.name, func(t *testing.T) {
			s := newAction(t, tc.clock, tc.line, action.Wave{})
			held := constraint.On(s.Block())
			tc.hold(held)
			_, err := LeastResidual(context.Background(), s, held, field.NewHistory(s.Block(), 1), &tc.set)
			var refused *Refusal
			if !errors.As(err, &refused) || !strings.Contains(err.Error(), tc.says) {
				t.Errorf("error %v; want a refusal that says %q", err, tc.says)
			}
		})
	}
}
