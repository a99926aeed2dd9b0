package minimize

import (
	"context"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"gonum.org/v1/gonum/integrate/quad"
)

// kicked returns a Klein–Gordon field of mass 1.3 between t = 0 and 4.8, at rest
// at first and pinned there in two slices, and its influence by a source impulse
// at x = 0, t = 0.8. The Courant number is 0.8.
func kicked(t *testing.T, h float64) (s *action.Discrete, i *Influence) {
	k := 0.8 * h
	clock := lattice.Axis{Step: k, Sites: int(math.Round(4.8/k)) + 1}
	line := lattice.Axis{From: -4, Step: h, Sites: int(math.Round(8/h)) + 1}
	s = newAction(t, clock, line, action.Wave{Potential: action.Mass(1.3)})
	rest := field.NewHistory(s.Block(), 1)
	held := pairOf(rest)
	found, err := LeastResidual(context.Background(), s, held, rest, nil)
	if err != nil {
		t.Fatal(err)
	}
	return s, respond(t, s, held, found, nil, Change{Part: SourceImpulse, Event: lattice.Event{T: 0.8, X: 0}})
}

// With a Cauchy pair pinned the influence of a source is the retarded Green
// function of the march: nothing happens before, it moves by one link a step and
// no faster, and inside it is what the march makes of the impulse.
func TestSourceActsOnItsFutureAlone(t *testing.T) {
	s, got := kicked(t, 0.1)
	b := s.Block()
	n0, i0, err := b.Index(got.Change.Event)
	if err != nil {
		t.Fatal(err)
	}
	want := field.NewHistory(b, 1)
	want.Set(n0+1, 0, i0, b.Time.Step/b.Space.Step) // k²/ρ of the residual's 1/hk
	m := s.March()
	for n := n0 + 1; n < b.Slices()-1; n++ {
		m.Step(want.Slice(n+1), want.Slice(n), want.Slice(n-1), n)
	}
	// Rounding of values of order 1, times the growth of errors over 60 steps.
	if d := got.History.MaxDifference(want); d > 1e-12 {
		t.Errorf("differs from the march by %.2e", d)
	}
	lattices, err := lattice.NewCone(b.Space, got.Change.Event, b.Space.Step/b.Time.Step)
	if err != nil {
		t.Fatal(err)
	}
	if x := got.Shares(lattices); x.Outside+x.Past > 1e-24 { // the same squared
		t.Errorf("cone of the lattice: %v", x)
	}
	// Faster than light is what the lattice's dispersion lets through, some at
	// a Courant number below 1.
	light, err := lattice.NewCone(b.Space, got.Change.Event, 1)
	if err != nil {
		t.Fatal(err)
	}
	if x := got.Shares(light); x.Past > 1e-24 || x.Outside < 1e-6 || x.Outside > 0.05 || math.Abs(x.Future+x.Outside-1) > 1e-12 {
		t.Errorf("cone of light: %v", x)
	}
}

// In the limit it is ½θ(t − |x|)J₀(m√(t² − x²)) [Morse & Feshbach 1953, Methods
// of Theoretical Physics, section 7.3]. Its jump at the cone does not converge
// point by point; weighted with a smooth function it is of the order of the
// lattice, 2.
func TestSourceInTheLimit(t *testing.T) {
	weight := func(tau, x float64) float64 {
		return math.Exp(-((tau-2)*(tau-2) + (x-0.3)*(x-0.3)) / (2 * 0.35 * 0.35))
	}
	exact := quad.Fixed(func(tau float64) float64 {
		return quad.Fixed(func(x float64) float64 {
			return 0.5 * math.J0(1.3*math.Sqrt(max(0, tau*tau-x*x))) * weight(tau, x)
		}, -tau, tau, 60, nil, 0)
	}, 0, 4, 80, nil, 0)
	var miss []float64
	for _, h := range []float64{0.2, 0.1, 0.05} {
		_, got := kicked(t, h)
		b := got.History.Block
		var sum float64
		for e, v := range got.History.Data {
			n, _, i := got.History.Place(e)
			at := b.At(n, i)
			sum += v * weight(at.T-0.8, at.X) * b.Time.Step * b.Space.Step
		}
		miss = append(miss, math.Abs(sum-exact))
	}
	for k := range 2 {
		if order := math.Log2(miss[k] / miss[k+1]); math.Abs(order-2) > 0.1 {
			t.Errorf("order %.3f between levels %d and %d, want 2; errors %.3g", order, k, k+1, miss)
		}
	}
}

// With the first and the last slice pinned the influence is the Green function of
// the two-time problem, which has no cone. In modes cos πji/M of the frequency θ/k,
// cos θ = 1 − k²Ω²/2, it is
//
//	−k²s sin θn₋ sin θ(N − n₊) / (sin θ sin θN),
//
// n₋ and n₊ the earlier and the later of the slices, s the mode's share of the
// impulse (the difference equation solved by hand). As a stationary history of the
// action the same field has the same response.
func TestSourceBetweenTwoTimes(t *testing.T) {
	const (
		h, k = 0.1, 0.08
		m, n = 60, 41 // links
		mass = 1.3
	)
	s := newAction(t, lattice.Axis{Step: k, Sites: n + 1}, lattice.Axis{Step: h, Sites: m + 1}, action.Wave{Potential: action.Mass(mass)})
	b := s.Block()
	rest := field.NewHistory(b, 1)
	held := constraint.On(b)
	held.Slice(0, rest.Slice(0))
	held.Slice(n, rest.Slice(n))
	found, err := LeastResidual(context.Background(), s, held, rest, nil)
	if err != nil {
		t.Fatal(err)
	}
	const n0, i0 = 15, 22
	source := Change{Part: SourceImpulse, Event: b.At(n0, i0)}
	got := respond(t, s, held, found, nil, source)

	want := field.NewHistory(b, 1)
	worst := math.Inf(1)
	for j := range m + 1 {
		norm := 0.5 * m
		if j == 0 || j == m {
			norm = m
		}
		mode := func(i int) float64 { return math.Cos(math.Pi * float64(j*i) / m) }
		root := 2 / h * math.Sin(math.Pi*float64(j)/(2*m))
		theta := math.Acos(1 - 0.5*k*k*(root*root+mass*mass))
		worst = min(worst, math.Abs(math.Sin(theta*n)))
		share := mode(i0) / (h * k * norm)
		for slice := range n + 1 {
			early, late := float64(min(slice, n0)), float64(max(slice, n0))
			c := -k * k * share * math.Sin(theta*early) * math.Sin(theta*(n-late)) / (math.Sin(theta) * math.Sin(theta*n))
			for i := range m + 1 {
				want.Data[want.Index(slice, 0, i)] += c * mode(i)
			}
		}
	}
	// Rounding, enlarged where a mode is nearly a solution by itself, 1/sin θN.
	if d := got.History.MaxDifference(want); d > 1e-12*want.MaxAbs()/worst {
		t.Errorf("differs from the sum of modes by %.2e of %.2e (least sin θN %.1e)", d, want.MaxAbs(), worst)
	}
	cone, err := lattice.NewCone(b.Space, source.Event, 1)
	if err != nil {
		t.Fatal(err)
	}
	x := got.Shares(cone)
	t.Logf("two times pinned: %v", x)
	if x.Outside < 0.01 || x.Past < 0.01 {
		t.Errorf("%v; want some of it outside and in the past", x)
	}

	stationary := *found
	stationary.Report.Problem, stationary.Report.CostAfter = "stationary", s.Value(found.History)
	other := respond(t, s, held, &stationary, nil, source)
	if d := got.History.MaxDifference(other.History); d > 1e-12*want.MaxAbs()/worst {
		t.Errorf("response of the stationary history differs by %.2e", d)
	}
}
