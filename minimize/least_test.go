package minimize

import (
	"bytes"
	"context"
	"errors"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A linear field with loss, driven by J cos ωt cos qx on a clock and a ring that
// are both periodic, answers with Re(A e^{iωt}) cos qx,
//
//	A = J/(m² + K² − W² + iα sin(ωk)/k),
//
// K = 2 sin(qh/2)/h and W = 2 sin(ωk/2)/k being the lattice's own wave number
// and frequency: put it into the difference equation. No condition is needed.
func TestTimePeriodicBlock(t *testing.T) {
	const m, alpha, drive = 0.7, 0.2, 1.3
	clock := lattice.Axis{Step: 0.1, Sites: 30, Periodic: true}
	line := lattice.Axis{Step: 0.25, Sites: 16, Periodic: true}
	k, h := clock.Step, line.Step
	w, q := 2*math.Pi/clock.Length(), 4*math.Pi/line.Length()
	s := newAction(t, clock, line, action.Wave{
		Potential: action.Mass(m), Alpha: action.Uniform(alpha),
		Source: action.Over(func(x, t float64) float64 { return drive * math.Cos(w*t) * math.Cos(q*x) }),
	})
	found, err := LeastResidual(context.Background(), s, nil, field.NewHistory(s.Block(), 1), nil)
	if err != nil {
		t.Fatal(err)
	}
	kk, ww := 2*math.Sin(q*h/2)/h, 2*math.Sin(w*k/2)/k
	a := drive / complex(m*m+kk*kk-ww*ww, alpha*math.Sin(w*k)/k)
	for n := range clock.Sites {
		for i := range line.Sites {
			want := real(a*cmplx.Exp(complex(0, w*clock.At(n)))) * math.Cos(q*line.At(i))
			// rounding of the residual, 1e-13, over the smallest |A|⁻¹ of the
			// torus, about 0.1
			if got := found.History.At(n, 0, i); math.Abs(got-want) > 1e-11 {
				t.Fatalf("φ at %v is %v, want %v", s.Block().At(n, i), got, want)
			}
		}
	}
	if r := found.Report; r.Rows != 30*16 || r.Unknowns != 30*16 || r.Fixed != 0 || len(found.Reactions) != 0 {
		t.Errorf("%v", r)
	}
}

// A fluxon that runs once around a ring in the period of the clock, so that the
// history is periodic in time up to the jump 2π of the field. It can start
// anywhere on the ring; an event says where. The march from its first two slices
// is the reference: after one period it must be where it began.
func TestRunningFluxonIsPeriodicInTime(t *testing.T) {
	const speed = 0.7
	line := lattice.Axis{From: -5, Step: 0.25, Sites: 40, Periodic: true, Jump: []float64{2 * math.Pi}}
	clock := lattice.Axis{Step: line.Length() / speed / 60, Sites: 60, Periodic: true, Jump: []float64{-2 * math.Pi}}
	s := newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}})
	// the kink of the infinite line and its images, one a lap
	kink := profile(field.SineGordonKink(field.Moving{Speed: speed}))
	start := field.NewHistory(s.Block(), 1)
	for n := range clock.Sites {
		for i := range line.Sites {
			v := -4 * math.Pi
			for lap := -2.0; lap <= 2; lap++ {
				p, _ := kink(line.At(i)-lap*line.Length(), clock.At(n))
				v += p
			}
			start.Set(n, 0, i, v)
		}
	}
	held := constraint.On(s.Block())
	held.Event(0, 0, math.Pi)
	found, err := LeastResidual(context.Background(), s, held, start, nil)
	if err != nil {
		t.Fatalf("%v\n%v", err, found)
	}
	h := found.History
	m := s.March()
	before, now, next := h.Slice(0).Clone(), h.Slice(1).Clone(), field.NewSlice(1, line.Sites)
	for n := 1; n < clock.Sites; n++ {
		m.Step(next, now, before, n)
		before, now, next = now, next, before
	}
	for i, v := range now.Data {
		// The march adds up 60 residuals of 1e-13, each growing at most
		// linearly in time.
		if want := h.At(0, 0, i) - 2*math.Pi; math.Abs(v-want) > 1e-9 {
			t.Fatalf("after one period φ at site %d is %v, want %v", i, v, want)
		}
	}
	if r := found.Report; r.Rows != r.Unknowns+1 || r.Accepted < 2 {
		t.Errorf("%v", r)
	}
}

// Rates at interior slices are conditions of the two-slice equation as good as a
// second slice: φ(0) and the rate at slice 1 determine the history, which the
// march confirms.
func TestRateInsteadOfSecondSlice(t *testing.T) {
	clock := lattice.Axis{Step: 0.08, Sites: 26}
	line := lattice.Axis{From: -5, Step: 0.1, Sites: 101}
	s := newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}})
	want := marched(s, profile(field.SineGordonKink(field.Moving{Speed: 0.5})).On(line, 0))
	rate := want.Slice(2).Clone()
	rate.Axpy(-1, want.Slice(0))
	for i := range rate.Data {
		rate.Data[i] /= 2 * clock.Step
	}
	held := constraint.On(s.Block())
	held.Slice(1, want.Slice(1))
	held.Rate(1, rate)
	found, err := LeastResidual(context.Background(), s, held, field.Repeat(s.Block(), want.Slice(1)), nil)
	if err != nil {
		t.Fatal(err)
	}
	// The residual at slice 1 sees φ(2) + φ(0) and the rate φ(2) − φ(0): each is
	// determined, with the conditioning of the march.
	if d := found.History.MaxDifference(want); d > 1e-9 {
		t.Errorf("differs from the march by %.3g\n%v", d, found.Report)
	}
}

// An end driven in time and a site driven in the middle, whose row is lifted,
// against a march in which those values are put in step by step.
func TestLiftedRowIsADrivenSource(t *testing.T) {
	clock := lattice.Axis{Step: 0.08, Sites: 41}
	line := lattice.Axis{From: -3, Step: 0.1, Sites: 61, Left: lattice.Held}
	s := newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}})
	const middle = 30
	drive := func(t float64) float64 { return math.Sin(2*t) * t }
	end := func(t float64) float64 { return t * t / 10 }
	want := field.NewHistory(s.Block(), 1)
	m := s.March()
	for n := range clock.Sites {
		want.Set(n, 0, 0, end(clock.At(n)))
		if n > 1 {
			m.Step(want.Slice(n), want.Slice(n-1), want.Slice(n-2), n-1)
		}
		want.Set(n, 0, middle, drive(clock.At(n)))
	}
	held := pairOf(want)
	held.Left(end)
	var lifted []lattice.Event
	for n := range clock.Sites {
		held.Event(clock.At(n), line.At(middle), drive(clock.At(n)))
		if s.Interior(n) {
			lifted = append(lifted, s.Block().At(n, middle))
		}
	}
	if err := held.Err(); err != nil {
		t.Fatal(err)
	}
	start := field.Repeat(s.Block(), want.Slice(0))
	found, err := LeastResidual(context.Background(), s, held, start, &Settings{Lifted: lifted})
	if err != nil {
		t.Fatal(err)
	}
	// as in TestCauchyPairGivesTheMarch
	if d := found.History.MaxDifference(want); d > 1e-10 {
		t.Errorf("differs from the driven march by %.3g\n%v", d, found.Report)
	}
	if r := found.Report; r.Rows != r.Unknowns {
		t.Errorf("%v", r)
	}
	// With the rows kept there are more equations than unknowns and no history
	// meets them.
	found, err = LeastResidual(context.Background(), s, held, start, nil)
	if err != nil {
		t.Fatal(err)
	}
	if r := found.Report; r.Rows != r.Unknowns+len(lifted) || r.After.Max < 1e-3 {
		t.Errorf("%v", r)
	}
}

// overdetermined is a sine-Gordon kink with a Cauchy pair and one event more,
// displaced from the march by off.
func overdetermined(t *testing.T, off float64) (s *action.Discrete, held *constraint.Set, start *field.History, at lattice.Event) {
	clock := lattice.Axis{Step: 0.08, Sites: 21}
	line := lattice.Axis{From: -3, Step: 0.1, Sites: 61}
	s = newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}})
	want := marched(s, profile(field.SineGordonKink(field.Moving{Speed: 0.5})).On(line, 0))
	held = pairOf(want)
	at = s.Block().At(15, 36)
	held.Event(at.T, at.X, want.At(15, 0, 36)+off)
	return s, held, field.Repeat(s.Block(), want.Slice(0)), at
}

// One condition too many that happens to hold leaves no residual. One that does
// not leaves one, is not called a solution of the equation, and its multiplier is
// the derivative of the least cost by the pinned value (envelope theorem).
func TestOneConditionTooMany(t *testing.T) {
	least := func(off float64) (*Found, constraint.Reaction) {
		s, held, start, at := overdetermined(t, off)
		found, err := LeastResidual(context.Background(), s, held, start, &Settings{ResidualScale: 0.5, Flatness: 1e-10})
		if err != nil {
			t.Fatalf("%v", err)
		}
		for _, r := range found.Reactions {
			if r.Event == at {
				return found, r
			}
		}
		t.Fatal("the event has no reaction")
		panic("unreachable")
	}
	exact, _ := least(0)
	if r := exact.Report; r.After.Max > r.Tolerance || r.Rows != r.Unknowns+1 {
		t.Errorf("consistent pins: %v", r)
	}
	found, reaction := least(0.2)
	r := found.Report
	if r.Status != Converged || !strings.Contains(r.Reason, "leave a residual") || r.After.Max < 100*r.Tolerance {
		t.Errorf("conflicting pins: %v", r)
	}
	if reaction.Kind != "event" || found.Reactions[0].Push == 0 {
		t.Errorf("reaction %v", reaction)
	}
	const d = 1e-3
	up, _ := least(0.2 + d)
	down, _ := least(0.2 - d)
	slope := (up.Report.CostAfter - down.Report.CostAfter) / (2 * d)
	// the central difference errs by d²/6 of the third derivative, which is of
	// the order of the slope
	if math.Abs(slope-reaction.Push) > 1e-5*math.Abs(slope) || slope <= 0 {
		t.Errorf("multiplier %v, slope of the least cost %v", reaction.Push, slope)
	}
}

// With one slice pinned there are fewer equations than unknowns; some history
// with no residual is found, and the pin is kept exactly.
func TestFewerConditionsThanNeeded(t *testing.T) {
	clock := lattice.Axis{Step: 0.08, Sites: 21}
	line := lattice.Axis{From: -3, Step: 0.1, Sites: 61}
	s := newAction(t, clock, line, action.Wave{Potential: action.Phi4{}})
	shape := profile(field.Phi4Kink(field.Moving{})).On(line, 0).Field
	held := constraint.On(s.Block())
	held.Slice(10, shape)
	found, err := LeastResidual(context.Background(), s, held, field.NewHistory(s.Block(), 1), nil)
	if err != nil {
		t.Fatal(err)
	}
	r := found.Report
	if r.Rows != 19*61 || r.Unknowns != 20*61 || r.After.Max > r.Tolerance {
		t.Errorf("%v", r)
	}
	if d := found.History.Slice(10).MaxDifference(shape); d != 0 {
		t.Errorf("the pinned slice moved by %v", d)
	}
}

func TestLeastResidualStops(t *testing.T) {
	s, held, start, _ := overdetermined(t, 0)
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	var log bytes.Buffer
	frames := 0
	found, err := LeastResidual(ctx, s, held, start, &Settings{Strategy: BlockWide, Progress: &log, Trace: true, Watch: func(st Step, h *field.History) {
		if frames++; st.Iteration == 2 {
			cancel()
		}
		if h.Check() != nil {
			t.Error("frame with a value that is not finite")
		}
	}})
	var failed *NotConverged
	if !errors.As(err, &failed) || !errors.Is(err, context.Canceled) || failed.Found != found || found.Report.Status != Stopped {
		t.Fatalf("%v", err)
	}
	r := found.Report
	if r.Iterations != 2 || len(r.Trace) != 2 || frames != 2 || strings.Count(log.String(), "\n") != 2 {
		t.Errorf("%d steps, %d in the trace, %d frames, log %q", r.Iterations, len(r.Trace), frames, log.String())
	}
	if !(r.CostAfter < r.CostBefore) || r.After.Max == 0 {
		t.Errorf("no better than the start: %v", r)
	}
	if res := s.Residual(nil, found.History).MaxAbs(); res != r.After.Max {
		t.Errorf("reported residual %v, that of the history %v", r.After.Max, res)
	}

	found, err = LeastResidual(context.Background(), s, held, start, &Settings{Strategy: BlockWide, Iterations: 1})
	if !errors.As(err, &failed) || found.Report.Status != Stopped || !strings.Contains(err.Error(), "limit of 1 steps") {
		t.Errorf("%v", err)
	}
	cancel()
	if found, err = LeastResidual(ctx, s, held, start, nil); !errors.Is(err, context.Canceled) || found == nil || found.Report.Iterations != 0 {
		t.Errorf("%v", err)
	}
}

// A history that is zero solves its equation, however small the terms that are
// left when the solver comes near it.
func TestLeastResidualOfNothing(t *testing.T) {
	s := newAction(t, lattice.Axis{Step: 0.1, Sites: 12}, lattice.Axis{Step: 0.2, Sites: 9}, action.Wave{Potential: action.SineGordon{}})
	held := constraint.On(s.Block())
	held.Slice(0, field.NewSlice(1, 9))
	held.Slice(1, field.NewSlice(1, 9))
	start := field.NewHistory(s.Block(), 1)
	for e := range start.Data {
		start.Data[e] = 0.5
	}
	found, err := LeastResidual(context.Background(), s, held, start, &Settings{Strategy: BlockWide})
	if err != nil {
		t.Fatal(err)
	}
	if m := found.History.MaxAbs(); m > 1e-12 { // rounding of the start's 0.5, times the growth over 12 slices
		t.Errorf("largest value %g, want 0", m)
	}
}
