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

// rippled returns a Klein–Gordon field and the march of a bump on it.
func rippled(t *testing.T) (*action.Discrete, *field.History) {
	clock, line := lattice.Axis{Step: 0.08, Sites: 21}, lattice.Axis{From: -2, Step: 0.1, Sites: 41}
	s := newAction(t, clock, line, action.Wave{Potential: action.Mass(1)})
	return s, marched(s, field.Profile(func(x, _ float64) (float64, float64) { return math.Exp(-x * x), 0 }).On(line, 0))
}

func judged(t *testing.T, s *action.Discrete, held *constraint.Set, how *Relaxing) (*Found, *Verdict) {
	t.Helper()
	found, err := LeastResidual(context.Background(), s, held, field.NewHistory(s.Block(), 1), nil)
	if err != nil {
		t.Fatal(err)
	}
	r, err := NewResponse(s, held, found, nil)
	if err != nil {
		t.Fatal(err)
	}
	v, err := r.Verdict(context.Background(), how)
	if err != nil {
		t.Fatal(err)
	}
	return found, v
}

// A Cauchy pair and one event that the march does not pass through: the event is
// the one to give up. By itself it costs everything, and it has to move to where
// the march goes. Both slices could make room for it as well, with all their
// values.
func TestVerdictNamesTheWrongPin(t *testing.T) {
	s, want := rippled(t)
	b := s.Block()
	held := pairOf(want)
	const n, i, off = 15, 24, 0.3
	at := b.At(n, i)
	held.Event(at.T, at.X, want.At(n, 0, i)+off)
	found, v := judged(t, s, held, nil)
	cost := found.Report.CostAfter
	if v.Met || v.Excess != 1 || v.Cost != cost || len(v.Reliefs) != 3 || v.Tied != 1 {
		t.Fatalf("%v", v)
	}
	for k, r := range v.Reliefs {
		// One equation too many: whatever gives way saves all. Linear, so the
		// saving is as exact as the multipliers of a history whose gradient
		// vanishes to 1e-8 of its terms.
		if math.Abs(r.Saving-cost) > 1e-7*cost || math.Abs(r.Confirmed-cost) > 1e-12*cost || r.Partial {
			t.Errorf("%v; want a saving of %v", r, cost)
		}
		if k > 0 && (r.Kind != "slice" || r.Values != 41) {
			t.Errorf("%v; want a slice", r)
		}
	}
	if r := v.Reliefs[0]; r.Kind != "event" || r.Event != at || r.Values != 1 || r.At != at || math.Abs(r.Move+off) > 1e-8 {
		t.Errorf("%v; want the event to move by %v", r, -off)
	}
	if text := v.String(); !strings.Contains(text, "cheapest to give up is the event at (x, t) = (0.4, 1.2)") {
		t.Error(text)
	}
}

// What a pin saves when it is given up is ½z², z being how many standard
// deviations of the posterior without it, q the strength of the noise, it is off:
// the identity of a deleted residual [Cook & Weisberg 1982, Residuals and
// Influence in Regression, section 2.2].
func TestSavingIsTheDistanceFromThePosterior(t *testing.T) {
	s, want := rippled(t)
	at, q := s.Block().At(15, 24), 0.2
	set := &Settings{ResidualScale: q}
	response := func(held *constraint.Set) *Response {
		found, err := LeastResidual(context.Background(), s, held, field.NewHistory(s.Block(), 1), set)
		if err != nil {
			t.Fatal(err)
		}
		r, err := NewResponse(s, held, found, set)
		if err != nil {
			t.Fatal(err)
		}
		return r
	}
	held := pairOf(want)
	held.Event(0.96, 0.2, 0.9)
	p, err := response(held).Posterior(0, at)
	if err != nil {
		t.Fatal(err)
	}
	held.Event(at.T, at.X, 0.4)
	v, err := response(held).Verdict(context.Background(), &Relaxing{Confirm: -1})
	if err != nil {
		t.Fatal(err)
	}
	z := (0.4 - p.Mean[0]) / p.Deviation(0)
	for _, r := range v.Reliefs {
		if r.Event == at {
			if math.Abs(r.Saving-0.5*z*z) > 1e-6*r.Saving { // as in TestVerdictNamesTheWrongPin
				t.Errorf("saves %v, ½z² = %v", r.Saving, 0.5*z*z)
			}
			return
		}
	}
	t.Errorf("the pin is not in %v", v)
}

// One value of the Cauchy data is left open and two events are pinned that both
// depend on it: either can be met, not both.
func TestVerdictTellsATie(t *testing.T) {
	s, want := rippled(t)
	b := s.Block()
	const open = 20
	held := constraint.On(b)
	held.Slice(0, want.Slice(0))
	held.Part(1, 0, open, want.Slice(1).Part(0, open))
	held.Part(1, open+1, 41, want.Slice(1).Part(open+1, 41))
	held.Event(b.Time.At(12), b.Space.At(18), want.At(12, 0, 18)+0.2)
	held.Event(b.Time.At(14), b.Space.At(22), want.At(14, 0, 22)-0.1)
	found, v := judged(t, s, held, &Relaxing{Confirm: 2})
	cost := found.Report.CostAfter
	if v.Excess != 1 || v.Tied != 2 || len(v.Reliefs) != 4 || !strings.Contains(v.String(), "a tie: giving up any of the first 2") {
		t.Fatalf("%v", v)
	}
	for k, r := range v.Reliefs {
		if math.Abs(r.Saving-cost) > 1e-7*cost { // as above
			t.Errorf("%v; want a saving of %v", r, cost)
		}
		if k < 2 && (r.Kind != "event" || math.Abs(r.Confirmed-cost) > 1e-12*cost) || k >= 2 && !math.IsNaN(r.Confirmed) {
			t.Errorf("%v; want the events first, and confirmed", r)
		}
	}
	if math.Abs(v.Reliefs[0].Move) > math.Abs(v.Reliefs[1].Move) {
		t.Errorf("the larger move first: %v", v)
	}
}

// Two equations too many, and the sine-Gordon equation: each saving is what
// another solve saves, exactly for the linear equation and nearly for the other.
func TestSavingsAgainstSolvingAgain(t *testing.T) {
	s, want := rippled(t)
	sine := newAction(t, s.Block().Time, s.Block().Space, action.Wave{Potential: action.SineGordon{}})
	for _, c := range []struct {
		name string
		s    *action.Discrete
		miss float64 // of the cost
	}{
		{"linear", s, 1e-6},
		{"sine-Gordon", sine, 0.02}, // the third order in moves of 0.3
	} {
		b := c.s.Block()
		h := want
		if c.s == sine {
			h = marched(sine, field.Profile(func(x, _ float64) (float64, float64) { return math.Exp(-x * x), 0 }).On(b.Space, 0))
		}
		held := pairOf(h)
		for _, e := range []struct {
			n, i int
			off  float64
		}{{10, 20, 0.3}, {16, 26, -0.2}, {16, 27, -0.21}} {
			at := b.At(e.n, e.i)
			held.Event(at.T, at.X, h.At(e.n, 0, e.i)+e.off)
		}
		held.Right(func(t float64) float64 {
			n, _ := b.Time.Nearest(t)
			return h.At(n, 0, 40)
		})
		found, v := judged(t, c.s, held, &Relaxing{Confirm: 100})
		cost := found.Report.CostAfter
		if len(v.Reliefs) != 6 {
			t.Errorf("%s: %v", c.name, v)
		}
		for k, r := range v.Reliefs {
			if !(math.Abs(r.Saving-r.Confirmed) <= c.miss*cost) {
				t.Errorf("%s: %v", c.name, r)
			}
			if k > 0 && r.Saving > v.Reliefs[k-1].Saving+1e-6*cost {
				t.Errorf("%s: out of order: %v", c.name, v)
			}
		}
		// One by one, an event saves what it did, and nothing saves more than the
		// condition that it is part of.
		_, apart := judged(t, c.s, held, &Relaxing{Apart: true, Confirm: -1})
		most := make(map[string]float64)
		for _, r := range v.Reliefs {
			most[r.Kind] = max(most[r.Kind], r.Saving)
		}
		for _, r := range apart.Reliefs {
			if r.Values != 1 || r.Saving > most[r.Kind]+1e-6*cost || !(r.Saving > 0) {
				t.Errorf("%s, apart: %v", c.name, r)
			}
		}
	}
}

func TestVerdictThatNothingNeedsRelaxing(t *testing.T) {
	s, want := rippled(t)
	held := pairOf(want)
	at := s.Block().At(15, 24)
	held.Event(at.T, at.X, want.At(15, 0, 24))
	if _, v := judged(t, s, held, nil); !v.Met || len(v.Reliefs) != 0 || !strings.Contains(v.String(), "nothing needs relaxing") {
		t.Errorf("%v", v)
	}
}

func TestVerdictRefuses(t *testing.T) {
	s, held := rimmed(t, 5, action.Wave{Source: action.Uniform(1)})
	found, err := Minimum(context.Background(), s, held, field.NewHistory(s.Block(), 1), nil)
	if err != nil {
		t.Fatal(err)
	}
	r, err := NewResponse(s, held, found, nil)
	if err != nil {
		t.Fatal(err)
	}
	var no *Refusal
	if _, err := r.Verdict(context.Background(), nil); !errors.As(err, &no) {
		t.Errorf("%v; want a refusal", err)
	}

	wave, pins, start, _ := overdetermined(t, 0.2)
	if found, err = LeastResidual(context.Background(), wave, pins, start, nil); err != nil {
		t.Fatal(err)
	}
	if r, err = NewResponse(wave, pins, found, nil); err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if v, err := r.Verdict(ctx, nil); !errors.Is(err, context.Canceled) || v == nil || v.Cost != found.Report.CostAfter {
		t.Errorf("%v, %v", v, err)
	}
}
