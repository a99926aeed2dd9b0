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

func TestWrongInput(t *testing.T) {
	clock := lattice.Axis{Step: 0.1, Sites: 5}
	line := lattice.Axis{Step: 0.2, Sites: 4}
	wave := action.Wave{Potential: action.SineGordon{}}
	euclidean := action.Wave{Potential: action.SineGordon{}, Signature: action.Euclidean}
	s, e := newAction(t, clock, line, wave), newAction(t, clock, line, euclidean)
	open := line
	open.Right = lattice.Open
	b := s.Block()
	start := field.NewHistory(b, 1)
	nan := start.Clone()
	nan.Set(3, 0, 2, math.NaN())
	huge := start.Clone()
	huge.Set(2, 0, 1, 1e200)
	with := func(b lattice.Block, hold func(*constraint.Set)) *constraint.Set {
		held := constraint.On(b)
		hold(held)
		return held
	}
	all := with(b, func(s *constraint.Set) {
		for n := range 5 {
			s.Slice(n, field.NewSlice(1, 4))
		}
	})
	elsewhere := b
	elsewhere.Time.From = 1
	least := LeastResidual
	lowest := func(ctx context.Context, s *action.Discrete, held *constraint.Set, start *field.History, set *Settings) (*Found, error) {
		return Minimum(ctx, s, held, start, set)
	}
	for _, tc := range []struct {
		name  string
		solve func(context.Context, *action.Discrete, *constraint.Set, *field.History, *Settings) (*Found, error)
		s     *action.Discrete
		held  *constraint.Set
		start *field.History
		set   *Settings
		says  []string
	}{
		{"no action", least, nil, nil, start, nil, []string{"no action"}},
		{"no action to minimise", lowest, nil, nil, start, nil, []string{"no action"}},
		{"no start", least, s, nil, nil, nil, []string{"without a start history"}},
		{"NaN in the start", least, s, nil, nan, nil, []string{"NaN", "(0.4, 0.3"}},
		{"NaN in the start of a minimum", lowest, e, nil, nan, nil, []string{"NaN", "(0.4, 0.3"}},
		{"start too large to evaluate", least, s, nil, huge, nil, []string{"residual of the start history"}},
		{"action of the start overflows", lowest, e, nil, huge, nil, []string{"action of the start history"}},
		{"start of another shape", least, s, nil, field.NewHistory(b, 2), nil, []string{"5 slices × 2 components × 4 sites"}},
		{"conditions on another block", least, s, constraint.On(elsewhere), start, nil, []string{"5 from 1 by 0.1", "5 from 0 by 0.1"}},
		{"conditions with an error", least, s, with(b, func(s *constraint.Set) { s.Event(0.15, 0, 1) }), start, nil, []string{"conditions", "(0, 0.15)"}},
		{"conditions in conflict", lowest, e, with(b, func(s *constraint.Set) { s.Event(0.1, 0, 1); s.Event(0.1, 0, 2) }), start, nil, []string{"(0, 0.1)", "1", "2"}},
		{"rates in conflict", least, s, with(b, func(s *constraint.Set) {
			s.Rate(2, field.NewSlice(1, 4))
			s.Event(0.1, 0, 1)
			s.Event(0.3, 0, 2)
		}), start, nil, []string{"(0, 0.3", "rate"}},
		{"nothing free", least, s, all, start, nil, []string{"20 values held"}},
		{"two components held", least, s, with(b, func(s *constraint.Set) { s.Event(0.1, 0, 1, 1) }), start, nil, []string{"1 components", "on 2"}},
		{"negative tolerance", least, s, nil, start, &Settings{Tolerance: -1}, []string{"tolerance -1"}},
		{"NaN damping", lowest, e, nil, start, &Settings{Damping: math.NaN()}, []string{"damping NaN"}},
		{"infinite residual scale", least, s, nil, start, &Settings{ResidualScale: math.Inf(1)}, []string{"residual scale +Inf"}},
		{"negative iterations", lowest, e, nil, start, &Settings{Iterations: -3}, []string{"-3 iterations"}},
		{"unknown method", lowest, e, nil, start, &Settings{Method: 7}, []string{"method(7)"}},
		{"too large", least, s, nil, start, &Settings{Memory: 1}, []string{"20 unknowns", "limits"}},
		{"lifted row off the block", least, s, nil, start, &Settings{Lifted: []lattice.Event{{T: 9, X: 0}}}, []string{"lifted", "(0, 9)"}},
		{"lifted row of a free event", least, s, nil, start, &Settings{Lifted: []lattice.Event{{T: 0.2, X: 0.2}}}, []string{"lifted", "(0.2, 0.2)", "free"}},
		{"lifted row of the first slice", least, s, nil, start, &Settings{Lifted: []lattice.Event{{T: 0, X: 0.2}}}, []string{"lifted", "(0.2, 0)", "no field equation"}},
		{"two slices", least, newAction(t, lattice.Axis{Step: 0.1, Sites: 2}, line, wave), nil, field.NewHistory(lattice.Block{Time: lattice.Axis{Step: 0.1, Sites: 2}, Space: line}, 1), nil, []string{"at least 3 slices"}},
		{"minimum of a Lorentzian action", lowest, s, nil, start, nil, []string{"Lorentzian", "Euclidean"}},
		{"minimum with a loss", lowest, newAction(t, clock, line, action.Wave{Alpha: action.Uniform(0.1)}), nil, start, nil, []string{"loss α"}},
		{"minimum with a viscous loss", lowest, newAction(t, clock, line, action.Wave{Beta: action.Uniform(0.1)}), nil, start, nil, []string{"loss β"}},
		{"minimum with an open end", lowest, newAction(t, clock, open, action.Wave{}), nil, start, nil, []string{"open right end"}},
	} {
		t.Run(tc.name, func(t *testing.T) {
			found, err := tc.solve(context.Background(), tc.s, tc.held, tc.start, tc.set)
			if err == nil || found != nil {
				t.Fatalf("found %v, error %v", found, err)
			}
			for _, word := range tc.says {
				if !strings.Contains(err.Error(), word) {
					t.Errorf("%q does not say %q", err, word)
				}
			}
			if strings.Contains(err.Error(), "\n") {
				t.Errorf("%q is longer than a line", err)
			}
			var refusal *Refusal
			if strings.HasPrefix(tc.name, "minimum") != errors.As(err, &refusal) {
				t.Errorf("refusal: %v", err)
			}
		})
	}
	var cause *action.NoActionError
	if _, err := Minimum(context.Background(), newAction(t, clock, open, action.Wave{}), nil, start, nil); !errors.As(err, &cause) || cause.Part != "open right end" {
		t.Errorf("%v", err)
	}
	var clash *constraint.Conflict
	held := with(b, func(s *constraint.Set) { s.Event(0.1, 0, 1); s.Event(0.1, 0, 2) })
	if _, err := LeastResidual(context.Background(), s, held, start, nil); !errors.As(err, &clash) || clash.Event != (lattice.Event{T: 0.1}) {
		t.Errorf("%v", err)
	}
}

func TestMinimumRefusesALorentzianRegion(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 1, Sites: 4}, Space: lattice.Axis{Step: 1, Sites: 4}}
	r, err := lattice.NewRegion(b, nil)
	if err != nil {
		t.Fatal(err)
	}
	s, err := action.NewShaped(r, action.Wave{Potential: action.Mass(1)})
	if err != nil {
		t.Fatal(err)
	}
	var refusal *Refusal
	if _, err := Minimum(context.Background(), s, nil, field.NewHistory(b, 1), nil); !errors.As(err, &refusal) || !strings.Contains(refusal.Why, "Lorentzian") {
		t.Errorf("got %v, want a *Refusal that says Lorentzian", err)
	}
}
