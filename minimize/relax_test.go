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

// flowed runs a flow for so many steps of the given length.
func flowed(t *testing.T, s *action.Discrete, held *constraint.Set, start *field.History, set RelaxSettings, steps int, step float64) *Relaxed {
	t.Helper()
	set.Step, set.Until = step, step*float64(steps)
	run := Relax
	if s.Signature() == action.Lorentzian {
		run = func(ctx context.Context, _ Functional, held *constraint.Set, start *field.History, set *RelaxSettings) (*Relaxed, error) {
			return RelaxResidual(ctx, s, held, start, set)
		}
	}
	r, err := run(context.Background(), s, held, start, &set)
	if err != nil || r.Report.Status != Stopped || r.Report.Iterations != steps || r.Tau != set.Until {
		t.Fatalf("%v: %+v", err, r)
	}
	return r
}

// After m explicit steps the disturbance of one event has reached exactly the
// events up to m links away for a Euclidean action and 2m links for the squared
// residual; beyond, the field is what it was, to the last bit: the domain of
// dependence of the stencil [Courant, Friedrichs & Lewy 1928, Math. Ann. 100, 32].
func TestFrontOfAnExplicitFlow(t *testing.T) {
	clock, line := lattice.Axis{Step: 0.3, Sites: 21}, lattice.Axis{Step: 0.4, Sites: 21}
	for signature, links := range map[action.Signature]int{action.Euclidean: 1, action.Lorentzian: 2} {
		for _, friction := range []float64{0, 1} {
			s := newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}, Signature: signature})
			start := field.NewHistory(s.Block(), 1)
			start.Set(10, 0, 10, 0.1)
			run := flowed(t, s, nil, start, RelaxSettings{Friction: friction, Every: 1, Keep: true}, 4, 0.001)
			if len(run.Frames) != 5 {
				t.Fatalf("%d frames", len(run.Frames))
			}
			for m, frame := range run.Frames {
				for n := range 21 {
					for i := range 21 {
						reached := abs(n-10)+abs(i-10) <= m*links
						if moved := frame.History.At(n, 0, i) != start.At(n, 0, i) || m == 0 && n == 10 && i == 10; moved != reached {
							t.Errorf("%v, friction %g, step %d: event (%d, %d) moved: %v", signature, friction, m, n-10, i-10, moved)
						}
					}
				}
			}
		}
	}
}

// The lowest mode of a square membrane, −Δ of which has the lattice eigenvalue
// λ = (8/h²)sin²(πh/2), decays by 1 − Δτλ in each explicit step and by 1/(1 + Δτλ) in
// each implicit one, exactly.
func TestModeDecays(t *testing.T) {
	const n, steps = 8, 20
	clock, line := square(n, lattice.Held, lattice.Held)
	s := newAction(t, clock, line, action.Wave{Signature: action.Euclidean})
	start := membraneMode(s.Block())
	lambda := 8 * n * n * math.Pow(math.Sin(math.Pi/2/n), 2)
	for _, tc := range []struct {
		implicit bool
		step     float64
		factor   float64
	}{
		{false, 0.003, 1 - 0.003*lambda},
		{true, 0.003, 1 / (1 + 0.003*lambda)},
		{true, 0.1, 1 / (1 + 0.1*lambda)},
	} {
		run := flowed(t, s, frame(s.Block()), start, RelaxSettings{Implicit: tc.implicit}, steps, tc.step)
		want := math.Pow(tc.factor, steps)
		// rounding of twenty steps
		if got := run.History.At(n/2, 0, n/2); math.Abs(got-want) > 1e-13 {
			t.Errorf("implicit %v, Δτ = %g: amplitude %.15g, want %.15g", tc.implicit, tc.step, got, want)
		}
	}
}

// A field that flows to zero everywhere comes to rest there.
func TestRelaxationToZero(t *testing.T) {
	clock, line := square(6, lattice.Held, lattice.Held)
	s := newAction(t, clock, line, action.Wave{Signature: action.Euclidean})
	for name, set := range map[string]*RelaxSettings{"explicit": {}, "implicit": {Implicit: true}, "friction": {Friction: 10}} {
		run, err := Relax(context.Background(), s, frame(s.Block()), membraneMode(s.Block()), set)
		if err != nil || run.Report.Status != Converged || run.Report.After.Max > run.Report.Tolerance {
			t.Errorf("%s: %v\n%v", name, err, run.Report)
		}
		// 1e-10 of the tension of a link, below 2π/h, over λ = 20
		if v := run.History.MaxAbs(); v > 1e-9 {
			t.Errorf("%s: %.3g is left", name, v)
		}
	}
}

// membraneMode is sin πt sin πx.
func membraneMode(b lattice.Block) *field.History {
	h := field.NewHistory(b, 1)
	for n := range b.Slices() {
		for i := range b.Sites() {
			h.Set(n, 0, i, math.Sin(math.Pi*b.Time.At(n))*math.Sin(math.Pi*b.Space.At(i)))
		}
	}
	return h
}

// With friction a mode swings like a damped oscillator,
// e^{−γτ/2}(cos ντ + γ/2ν sin ντ), ν² = λ − γ²/4: to order 2 with leapfrog, to order 1
// with implicit Euler steps.
func TestModeSwingsWithFriction(t *testing.T) {
	const n, until, friction = 4, 0.6, 3.0
	clock, line := square(n, lattice.Held, lattice.Held)
	s := newAction(t, clock, line, action.Wave{Signature: action.Euclidean})
	lambda := 8 * n * n * math.Pow(math.Sin(math.Pi/2/n), 2)
	nu := math.Sqrt(lambda - friction*friction/4)
	exact := math.Exp(-friction*until/2) * (math.Cos(nu*until) + friction/(2*nu)*math.Sin(nu*until))
	for implicit, order := range map[bool]float64{false: 2, true: 1} {
		var e [3]float64
		for k := range e {
			steps := 40 << k
			if implicit {
				steps *= 32
			}
			run := flowed(t, s, frame(s.Block()), membraneMode(s.Block()), RelaxSettings{Implicit: implicit, Friction: friction}, steps, until/float64(steps))
			e[k] = run.History.At(n/2, 0, n/2) - exact
		}
		if got := math.Log2(e[1] / e[2]); math.Abs(got-order) > 0.05 { // the next order at τ/80 and τ/2560
			t.Errorf("implicit %v: errors %.4g, order %.3f; want %g", implicit, e, got, order)
		}
	}
}

// The fastest mode of a square membrane has Λ = (8/h²)cos²(πh/2): explicit steps
// above 2/Λ, with friction 2/√Λ, are refused.
func TestLimitOfExplicitSteps(t *testing.T) {
	const n = 12
	clock, line := square(n, lattice.Held, lattice.Held)
	s := newAction(t, clock, line, action.Wave{Signature: action.Euclidean, Source: action.Uniform(1)})
	start := field.NewHistory(s.Block(), 1)
	top := 8 * n * n * math.Pow(math.Cos(math.Pi/2/n), 2)
	for _, friction := range []float64{0, 2} {
		limit := 2 / top
		if friction > 0 {
			limit = 2 / math.Sqrt(top)
		}
		_, err := Relax(context.Background(), s, frame(s.Block()), start, &RelaxSettings{Friction: friction, Step: 1.0001 * limit})
		var unstable *Unstable
		if !errors.As(err, &unstable) {
			t.Fatalf("friction %g: %v", friction, err)
		}
		// eighty Lanczos steps; never above but for rounding
		if r := unstable.Eigenvalue / top; r < 1-1e-6 || r > 1+1e-12 || !strings.Contains(err.Error(), "implicit") {
			t.Errorf("friction %g: eigenvalue %.12g, want %.12g: %v", friction, unstable.Eigenvalue, top, err)
		}
		run, err := Relax(context.Background(), s, frame(s.Block()), start, &RelaxSettings{Friction: friction, Step: 0.9999 * limit, Tolerance: 1e-8})
		if err != nil {
			t.Errorf("friction %g: %v", friction, err)
		}
		// −Δu = 1: see TestSquareMembrane; the same lattice history
		best := lowest(t, s, frame(s.Block()), start, nil)
		if d := run.History.MaxDifference(best.History); d > 1e-9 { // 1e-8 over λ ≈ 20
			t.Errorf("friction %g: off the minimum by %.3g", friction, d)
		}
	}
}

// Flows of either kind end at the minimum, and downhill all the way.
func TestRelaxationEndsAtTheMinimum(t *testing.T) {
	s, held, start := pinnedPhi4(t, -0.3)
	best := lowest(t, s, held, start, nil)
	for name, set := range map[string]*RelaxSettings{
		"explicit": {}, "implicit": {Implicit: true, Step: 0.5}, "explicit with friction": {Friction: 2}, "implicit with friction": {Friction: 2, Implicit: true, Step: 0.5},
	} {
		last := math.Inf(1)
		set.Every = 1
		set.Watch = func(f Frame) {
			if set.Friction == 0 && f.Cost > last+1e-12 { // rounding of an action of order 1
				t.Errorf("%s: action rises by %.3g at τ = %g", name, f.Cost-last, f.Tau)
			}
			last = f.Cost
		}
		run, err := Relax(context.Background(), s, held, start, set)
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if d := run.History.MaxDifference(best.History); d > 1e-8 { // 1e-10 of the equation over a curvature of order 1
			t.Errorf("%s: off the minimum by %.3g", name, d)
		}
		if a, b := run.Reactions[0], best.Reactions[0]; math.Abs(a.Push-b.Push) > 1e-8 || a.Event != b.Event {
			t.Errorf("%s: %v, want %v", name, a, b)
		}
		if run.Report.CostAfter != last || !strings.Contains(run.Report.String(), "action") {
			t.Errorf("%s: last frame %v\n%v", name, last, run.Report)
		}
	}
}

// With a Cauchy pair held the squared residual relaxes to the march, in explicit
// steps downhill all the way.
func TestResidualRelaxesToTheMarch(t *testing.T) {
	clock, line := lattice.Axis{Step: 0.1, Sites: 16}, lattice.Axis{From: -3, Step: 0.25, Sites: 25}
	s := newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}, Alpha: action.Uniform(0.1)})
	st := profile(field.SineGordonKink(field.Moving{At: -0.5, Speed: 0.4})).On(line, 0)
	want := marched(s, st)
	held := constraint.On(s.Block())
	held.Slice(0, want.Slice(0))
	held.Slice(1, want.Slice(1))
	start := field.Repeat(s.Block(), want.Slice(0))
	run, err := RelaxResidual(context.Background(), s, held, start, &RelaxSettings{Implicit: true, Step: 100})
	if err != nil {
		t.Fatal(err)
	}
	// 1e-10 of the terms of the equation, amplified over the block, below 100
	if d := run.History.MaxDifference(want); d > 1e-7 {
		t.Errorf("off the march by %.3g after %d steps", d, run.Report.Iterations)
	}
	last := math.Inf(1)
	explicit, err := RelaxResidual(context.Background(), s, held, start, &RelaxSettings{Steps: 300, Every: 1, Watch: func(f Frame) {
		if f.Cost >= last {
			t.Errorf("cost rises to %.6g at τ = %g", f.Cost, f.Tau)
		}
		last = f.Cost
	}})
	var failed *NotConverged
	if !errors.As(err, &failed) || explicit.Report.Iterations != 300 || !(explicit.Report.CostAfter < 0.7*explicit.Report.CostBefore) {
		t.Errorf("%v: %v", err, explicit.Report)
	}
	if !strings.Contains(explicit.Report.String(), "cost") {
		t.Errorf("%v", explicit.Report)
	}
}

func TestRelaxationStops(t *testing.T) {
	s, held, start := pinnedPhi4(t, -0.3)
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	var lines strings.Builder
	run, err := Relax(ctx, s, held, start, &RelaxSettings{Every: 2, Keep: true, Progress: &lines, Watch: func(f Frame) {
		if f.Step >= 6 {
			cancel()
		}
	}})
	var failed *NotConverged
	if !errors.As(err, &failed) || !errors.Is(err, context.Canceled) || len(run.Frames) != 4 || run.Frames[3].Step != 6 {
		t.Fatalf("%v, %d frames", err, len(run.Frames))
	}
	if n := strings.Count(lines.String(), "\n"); n != 4 || !strings.Contains(lines.String(), "τ 0,") {
		t.Errorf("%s", lines.String())
	}
	if run.Frames[0].History.MaxDifference(run.History) == 0 || run.Frames[3].History.MaxDifference(run.History) != 0 {
		t.Errorf("frames are not the history at their times")
	}

	// Long implicit steps on the top of V, where ∂G/∂φ has eigenvalues near −1.
	flat := start.Clone()
	for e := range flat.Data {
		flat.Data[e] = 0.1
	}
	run, err = Relax(context.Background(), s, nil, flat, &RelaxSettings{Implicit: true, Step: 5})
	if !errors.As(err, &failed) || run.Report.Status != Singular || !strings.Contains(err.Error(), "shorter step") {
		t.Errorf("%v", err)
	}
	// V″ grows from −1 to 2 on the way to the vacuum: a step just below the limit at
	// the start is above it at the end, where a rough field tells.
	for e := range flat.Data {
		flat.Data[e] += 0.01 * float64(e%2)
	}
	_, err = Relax(context.Background(), s, nil, flat, &RelaxSettings{Step: 1})
	var unstable *Unstable
	if !errors.As(err, &unstable) {
		t.Fatalf("%v", err)
	}
	run, err = Relax(context.Background(), s, nil, flat, &RelaxSettings{Step: 0.9999 * unstable.Largest})
	if !errors.As(err, &failed) || run.Report.Status != Stalled || !strings.Contains(err.Error(), "outgrown") {
		t.Errorf("%v", err)
	}
}

func TestWrongRelaxation(t *testing.T) {
	s, held, start := pinnedPhi4(t, -0.3)
	clock, line := lattice.Axis{Step: 0.1, Sites: 5}, lattice.Axis{Step: 0.2, Sites: 4}
	wave := newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}})
	flat := field.NewHistory(wave.Block(), 1)
	for _, tc := range []struct {
		name string
		run  func() (*Relaxed, error)
		says []string
	}{
		{"Lorentzian action", func() (*Relaxed, error) { return Relax(context.Background(), wave, nil, flat, nil) }, []string{"relaxation refused", "Lorentzian"}},
		{"no action", func() (*Relaxed, error) { return Relax(context.Background(), nil, nil, flat, nil) }, []string{"no action"}},
		{"no residual", func() (*Relaxed, error) { return RelaxResidual(context.Background(), nil, nil, flat, nil) }, []string{"no action"}},
		{"no start", func() (*Relaxed, error) { return Relax(context.Background(), s, held, nil, nil) }, []string{"without a start history"}},
		{"negative step", func() (*Relaxed, error) {
			return Relax(context.Background(), s, held, start, &RelaxSettings{Step: -1})
		}, []string{"step -1"}},
		{"NaN friction", func() (*Relaxed, error) {
			return RelaxResidual(context.Background(), wave, nil, flat, &RelaxSettings{Friction: math.NaN()})
		}, []string{"friction NaN"}},
		{"negative count", func() (*Relaxed, error) {
			return Relax(context.Background(), s, held, start, &RelaxSettings{Every: -2})
		}, []string{"every -2"}},
		{"too large", func() (*Relaxed, error) {
			return Relax(context.Background(), s, held, start, &RelaxSettings{Implicit: true, Memory: 1})
		}, []string{"above the limits", "explicit"}},
	} {
		t.Run(tc.name, func(t *testing.T) {
			run, err := tc.run()
			if err == nil || run != nil {
				t.Fatalf("%v", run)
			}
			for _, word := range tc.says {
				if !strings.Contains(err.Error(), word) {
					t.Errorf("%q does not say %q", err, word)
				}
			}
		})
	}
}
