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

// respond returns the influence of one change.
func respond(t *testing.T, f Functional, held *constraint.Set, found *Found, set *Settings, c Change) *Influence {
	t.Helper()
	r, err := NewResponse(f, held, found, set)
	if err != nil {
		t.Fatal(err)
	}
	all, err := r.Of(c)
	if err != nil {
		t.Fatal(err)
	}
	return all[0]
}

// difference returns (up − down)/2d of two histories.
func difference(up, down *field.History, d float64) *field.History {
	h := up.Clone()
	for e, v := range down.Data {
		h.Data[e] = (h.Data[e] - v) / (2 * d)
	}
	return h
}

// One condition too many for a sine-Gordon kink: the response of the whole
// history to the pinned value is the derivative of what the solver finds, the
// curvature of the residual included, which the equation does not meet.
func TestResponseOfAPinAgainstSolvingAgain(t *testing.T) {
	set := &Settings{ResidualScale: 0.5, Flatness: 1e-10}
	solve := func(off float64) (*action.Discrete, *constraint.Set, *Found, lattice.Event) {
		s, held, start, at := overdetermined(t, off)
		found, err := LeastResidual(context.Background(), s, held, start, set)
		if err != nil {
			t.Fatal(err)
		}
		return s, held, found, at
	}
	const off, d = 0.8, 1e-2
	s, held, found, at := solve(off)
	got := respond(t, s, held, found, set, Change{Part: PinnedValue, Event: at}).History
	// Richardson's combination of two central differences leaves an error of
	// order d⁴ times the fifth derivative, a few units.
	diff := func(d float64) *field.History {
		_, _, up, _ := solve(off + d)
		_, _, down, _ := solve(off - d)
		return difference(up.History, down.History, d)
	}
	coarse, fine := diff(2*d), diff(d)
	for e, v := range fine.Data {
		fine.Data[e] = (4*v - coarse.Data[e]) / 3
	}
	if n, i, _ := s.Block().Index(at); got.At(n, 0, i) != 1 {
		t.Errorf("the pin itself moves by %v", got.At(n, 0, i))
	}
	if miss := got.MaxDifference(fine); miss > 1e-6 {
		t.Errorf("response differs from that of re-solves by %.2e", miss)
	}
}

// A driven, damped field with a rate and a slice held. The pinned slice 0 takes
// slice 2 with it.
func TestResponseMovesWhatRatesJoin(t *testing.T) {
	clock, line := lattice.Axis{Step: 0.08, Sites: 16}, lattice.Axis{From: -2, Step: 0.1, Sites: 41}
	s := newAction(t, clock, line, action.Wave{Potential: action.Mass(1), Alpha: action.Uniform(0.2)})
	solve := func(v float64) (*constraint.Set, *Found) {
		held := constraint.On(s.Block())
		held.Part(0, 0, 40, field.NewSlice(1, 40))
		held.Event(0, 2, v)
		held.Rate(1, field.NewSlice(1, 41))
		found, err := LeastResidual(context.Background(), s, held, field.NewHistory(s.Block(), 1), nil)
		if err != nil {
			t.Fatal(err)
		}
		return held, found
	}
	held, found := solve(0.5)
	_, other := solve(1.5)
	got := respond(t, s, held, found, nil, Change{Event: lattice.Event{T: 0, X: 2}}).History
	if got.At(2, 0, 40) != 1 {
		t.Errorf("slice 2 moves by %v with the pin on slice 0; want 1", got.At(2, 0, 40))
	}
	// The problem is linear: rounding, and the tolerance of the solves.
	for e, v := range got.Data {
		if want := other.History.Data[e] - found.History.Data[e]; math.Abs(v-want) > 1e-10 {
			t.Fatalf("value %d moves by %v, in another solve by %v", e, v, want)
		}
	}
}

// Every kind of condition on a minimum, against solving again.
func TestResponsesOfAMinimum(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 0.5, Sites: 7}, Space: lattice.Axis{Step: 0.4, Sites: 9}}
	event := func(n, i int) lattice.Event { return b.At(n, i) }
	solve := func(c Change, by float64) (*action.Discrete, *constraint.Set, *Found) {
		move := func(p Part) float64 {
			if p == c.Part {
				return by
			}
			return 0
		}
		s, err := action.New(b, action.Wave{
			Potential: action.Phi4{}, Signature: action.Euclidean,
			Source: action.Over(func(x, t float64) float64 {
				j := 0.3 * math.Sin(3*x+t)
				if e := event(4, 6); math.Abs(x-e.X)+math.Abs(t-e.T) < 1e-9 {
					j += move(SourceImpulse) / (b.Time.Step * b.Space.Step)
				}
				return j
			}),
		})
		if err != nil {
			t.Fatal(err)
		}
		held := constraint.On(b)
		held.Event(event(2, 3).T, event(2, 3).X, 1.2+move(PinnedValue))
		held.Observe(event(5, 1).T, event(5, 1).X, 0.7+move(ObservedValue), 0.3)
		mean, average := 0.0, 0.0
		if c.Name == "mean of slice 6" {
			mean = by
		} else if c.Part == LinearValue {
			average = by
		}
		held.Mean(6, 0.9+mean)
		held.Average(event(3, 7).T, event(3, 7).X, 0.8+average, constraint.Window{Width: 0.8}).Soft(0.2)
		held.Bound(event(1, 7).T, event(1, 7).X, math.Inf(-1), 0.6)
		start := field.NewHistory(b, 1)
		for e := range start.Data {
			start.Data[e] = 1
		}
		found, err := Minimum(context.Background(), s, held, start, &Settings{Tolerance: 1e-12})
		if err != nil {
			t.Fatal(err)
		}
		return s, held, found
	}
	for _, c := range []Change{
		{Part: PinnedValue, Event: event(2, 3)},
		{Part: SourceImpulse, Event: event(4, 6)},
		{Part: ObservedValue, Event: event(5, 1)},
		{Part: LinearValue, Event: event(6, 0), Name: "mean of slice 6"},
		{Part: LinearValue, Event: event(3, 7)},
	} {
		s, held, found := solve(c, 0)
		got := respond(t, s, held, found, nil, c).History
		const d = 1e-3
		_, _, up := solve(c, d)
		_, _, down := solve(c, -d)
		// d²/6 of the third derivative, of order 1
		if miss := got.MaxDifference(difference(up.History, down.History, d)); miss > 1e-6 {
			t.Errorf("%v: differs from that of re-solves by %.2e", c, miss)
		}
		if got.MaxAbs() < 1e-3 {
			t.Errorf("%v: moves nothing", c)
		}
		if v := got.At(1, 0, 7); v != 0 {
			t.Errorf("%v: the active bound moves by %v", c, v)
		}
	}
}

// product is V = ½φ₀²φ₁².
type product struct{}

func (product) Components() int { return 2 }

func (product) Value(dst []float64, phi field.Slice, _ action.Sites) {
	for i := range dst {
		p := phi.At(0, i) * phi.At(1, i)
		dst[i] = p * p / 2
	}
}

func (product) Slope(dst, phi field.Slice, _ action.Sites) {
	for i := range phi.Sites {
		a, b := phi.At(0, i), phi.At(1, i)
		dst.Component(0)[i], dst.Component(1)[i] = a*b*b, a*a*b
	}
}

func (product) Curvature(dst, phi field.Slice, _ action.Sites) {
	for i := range phi.Sites {
		a, b := phi.At(0, i), phi.At(1, i)
		dst.Component(0)[i], dst.Component(3)[i] = b*b, a*a
		dst.Component(1)[i], dst.Component(2)[i] = 2*a*b, 2*a*b
	}
}

// Two components coupled by a potential, one of them pinned where the residual is
// not zero: the curvature of the residual couples them.
func TestResponseOfTwoComponents(t *testing.T) {
	clock, line := lattice.Axis{Step: 0.1, Sites: 12}, lattice.Axis{From: -1, Step: 0.2, Sites: 11}
	s := newAction(t, clock, line, action.Wave{Potential: product{}, Components: 2})
	set := &Settings{Flatness: 1e-9}
	solve := func(off float64) (*constraint.Set, *Found) {
		held := constraint.On(s.Block())
		first := field.NewSlice(2, 11)
		for i := range first.Data {
			first.Data[i] = 0.5 + 0.1*float64(i%5)
		}
		held.Slice(0, first)
		held.Slice(1, first)
		held.Component(0).Event(0.7, 0, 1.2+off)
		held.Component(0).Event(0.9, 0.2, 0.5)
		found, err := LeastResidual(context.Background(), s, held, field.Repeat(s.Block(), first), set)
		if err != nil {
			t.Fatal(err)
		}
		return held, found
	}
	held, found := solve(0)
	got := respond(t, s, held, found, set, Change{Event: lattice.Event{T: 0.7, X: 0}}).History
	const d = 1e-3
	_, up := solve(d)
	_, down := solve(-d)
	// d²/6 of the third derivative, of order 1
	if miss := got.MaxDifference(difference(up.History, down.History, d)); miss > 1e-6 {
		t.Errorf("differs from that of re-solves by %.2e", miss)
	}
}

func TestResponseRefuses(t *testing.T) {
	s, held, start, at := overdetermined(t, 0.2)
	found, err := LeastResidual(context.Background(), s, held, start, nil)
	if err != nil {
		t.Fatal(err)
	}
	says := func(err error, words ...string) {
		t.Helper()
		if err == nil {
			t.Error("no error")
			return
		}
		for _, w := range words {
			if !strings.Contains(err.Error(), w) {
				t.Errorf("%v: does not say %q", err, w)
			}
		}
	}
	_, err = NewResponse(s, held, found, &Settings{ResidualScale: 2})
	says(err, "costs", "report")
	_, err = NewResponse(s, nil, found, nil)
	says(err, "unknowns")
	stopped := *found
	stopped.Report.Status = Stopped
	_, err = NewResponse(s, held, &stopped, nil)
	says(err, "stopped", "converged")
	_, err = NewResponse(s, held, found, &Settings{Memory: 1})
	says(err, "response", "limits")
	r, err := NewResponse(s, held, found, nil)
	if err != nil {
		t.Fatal(err)
	}
	free := lattice.Event{T: 0.8, X: 0}
	for _, c := range []struct {
		change Change
		says   string
	}{
		{Change{Event: free}, "free"},
		{Change{Event: lattice.Event{T: 0.81, X: 0}}, "(0, 0.81)"},
		{Change{Event: at, Component: 1}, "component 1"},
		{Change{Part: SourceImpulse, Event: lattice.Event{T: 0, X: 0}}, "no field equation"},
		{Change{Part: ObservedValue, Event: free}, "0 observations"},
		{Change{Part: LinearValue, Event: free}, "0 linear conditions"},
		{Change{Part: 9, Event: free}, "part(9)"},
	} {
		_, err := r.Of(c.change)
		says(err, c.says)
	}

	// With one slice pinned the history is not determined.
	few := constraint.On(s.Block())
	few.Slice(0, start.Slice(0))
	loose, err := LeastResidual(context.Background(), s, few, start, nil)
	if err != nil {
		t.Fatal(err)
	}
	var u *Undetermined
	if _, err = NewResponse(s, few, loose, nil); !errors.As(err, &u) || u.Smallest > 1e-12*u.Largest {
		t.Errorf("%v; want an Undetermined", err)
	}
}
