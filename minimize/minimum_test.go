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

func zero(float64) float64 { return 0 }

// square is the unit square in n × n links, both axes with the given ends in
// space.
func square(n int, left, right lattice.End) (clock, line lattice.Axis) {
	a := lattice.Axis{Step: 1 / float64(n), Sites: n + 1}
	line = a
	line.Left, line.Right = left, right
	return a, line
}

func lowest(t *testing.T, s *action.Discrete, held *constraint.Set, start *field.History, set *Settings) *Found {
	t.Helper()
	found, err := Minimum(context.Background(), s, held, start, set)
	if err != nil {
		t.Fatalf("%v\n%+v", err, found)
	}
	return found
}

// frame pins the first and last slice to zero.
func frame(b lattice.Block) *constraint.Set {
	held := constraint.On(b)
	held.Slice(0, field.NewSlice(1, b.Sites()))
	held.Slice(b.Slices()-1, field.NewSlice(1, b.Sites()))
	return held
}

// −Δu = 1 on the unit square with u = 0 around it: the value at the centre is
// 0.0736713532815 (series, quoted in several test suites of elliptic solvers),
// the integral 0.03514425373878843 (a quarter of the torsion constant 0.1405770149551537,
// series to 25 digits, Timoshenko & Goodier quote 0.1406) and the least action
// −½∫u. Observed order 2 over three levels; Richardson's value is good to the
// next term, h⁴.
func TestSquareMembrane(t *testing.T) {
	const centre, integral = 0.0736713532815, 0.1405770149551537 / 4
	var middle, least [3]float64
	for k, n := range []int{16, 32, 64} {
		clock, line := square(n, lattice.Held, lattice.Held)
		s := newAction(t, clock, line, action.Wave{Signature: action.Euclidean, Source: action.Uniform(1)})
		found := lowest(t, s, frame(s.Block()), field.NewHistory(s.Block(), 1), nil)
		middle[k] = found.History.At(n/2, 0, n/2) - centre
		least[k] = found.Report.CostAfter + integral/2
		if r := found.Report; r.Unknowns != (n-1)*(n-1) {
			t.Errorf("%v", r)
		}
	}
	for name, e := range map[string][3]float64{"centre": middle, "action": least} {
		if order := math.Log2(e[1] / e[2]); math.Abs(order-2) > 0.02 { // h² terms beside h² : 1/64²·const
			t.Errorf("%s: errors %.3g, order %.3f; want 2", name, e, order)
		}
		if rest := math.Abs(4*e[2]-e[1]) / 3; rest > 1e-7 { // h⁴/10 at h = 1/32
			t.Errorf("%s: Richardson's value is off by %.3g", name, rest)
		}
	}
}

// By symmetry a quarter of the membrane with natural conditions along the cuts,
// a free last slice and a free right end, has the same lattice solution.
func TestNaturalConditionsCutTheMembrane(t *testing.T) {
	clock, line := square(16, lattice.Held, lattice.Held)
	w := action.Wave{Signature: action.Euclidean, Source: action.Uniform(1)}
	s := newAction(t, clock, line, w)
	whole := lowest(t, s, frame(s.Block()), field.NewHistory(s.Block(), 1), nil)
	clock.Sites, line.Sites, line.Right = 9, 9, lattice.Free
	s = newAction(t, clock, line, w)
	held := constraint.On(s.Block())
	held.Slice(0, field.NewSlice(1, 9))
	quarter := lowest(t, s, held, field.NewHistory(s.Block(), 1), nil)
	for n := range 9 {
		for i := range 9 {
			// rounding: 1e-16 times the condition of the Laplacian, 200
			if d := quarter.History.At(n, 0, i) - whole.History.At(n, 0, i); math.Abs(d) > 1e-14 {
				t.Fatalf("(%d, %d) differs by %.3g", n, i, d)
			}
		}
	}
}

// Laplace's equation with one side of a square held at 1 and the others at 0: the
// four rotated problems add up to the constant 1, so the centre is ¼ at every
// spacing. A side is a slice, or an end.
func TestLaplaceWithOneSideHeld(t *testing.T) {
	for _, n := range []int{2, 4, 10, 32} {
		for _, side := range []string{"first slice", "right end"} {
			clock, line := square(n, lattice.Free, lattice.Free)
			s := newAction(t, clock, line, action.Wave{Signature: action.Euclidean})
			held := constraint.On(s.Block())
			ones, none := field.NewSlice(1, n-1), field.NewSlice(1, n-1)
			for i := range ones.Data {
				ones.Data[i] = 1
			}
			one := func(float64) float64 { return 1 }
			if side == "first slice" {
				held.Part(0, 1, n, ones)
				held.Part(n, 1, n, none)
				held.Left(zero)
				held.Right(zero)
			} else {
				held.Part(0, 1, n, none)
				held.Part(n, 1, n, none)
				held.Left(zero)
				held.Right(one)
			}
			found := lowest(t, s, held, field.NewHistory(s.Block(), 1), nil)
			// rounding times the condition of the Laplacian, n²
			if v := found.History.At(n/2, 0, n/2); math.Abs(v-0.25) > 1e-13 {
				t.Errorf("%d links, %s: centre %v, want 0.25", n, side, v)
			}
		}
	}
}

// Two fields u and v with the coupling ½(u − v)², u held at 1 on one side of a
// square and v on another: u + v solves Laplace's equation whatever the coupling,
// so it is ¼ + ¼ at the centre.
func TestCoupledComponents(t *testing.T) {
	clock, line := square(10, lattice.Free, lattice.Free)
	s := newAction(t, clock, line, action.Wave{Potential: action.Bilinear{{30, -30}, {-30, 30}}, Signature: action.Euclidean})
	held := constraint.On(s.Block())
	ones, none := field.NewSlice(1, 9), field.NewSlice(1, 9)
	for i := range ones.Data {
		ones.Data[i] = 1
	}
	u, v := held.Component(0), held.Component(1)
	u.Part(0, 1, 10, ones)
	u.Part(10, 1, 10, none)
	v.Part(0, 1, 10, none)
	v.Part(10, 1, 10, none)
	held.Left(zero, zero)
	held.Right(zero, func(float64) float64 { return 1 })
	found := lowest(t, s, held, field.NewHistory(s.Block(), 2), nil)
	a, b := found.History.At(5, 0, 5), found.History.At(5, 1, 5)
	// rounding times the condition of the operator, below 200
	if math.Abs(a+b-0.5) > 1e-13 || math.Abs(a-b) > 1e-13 { // equal by symmetry
		t.Errorf("u = %v, v = %v at the centre; want 0.25 each", a, b)
	}
	if a := found.History.At(2, 0, 5) - found.History.At(2, 1, 5); !(a > 0.01) {
		t.Errorf("u − v = %v beside the side where u is held", a)
	}
}

// The static kink as a minimum of the Euclidean action: the action per time is
// its mass 8 up to terms of order h² (Rajaraman 1982, Solitons and Instantons),
// and the history does not depend on time. One event at its centre holds the
// translation.
func TestStaticKink(t *testing.T) {
	var e [3]float64
	for k, h := range []float64{0.4, 0.2, 0.1} {
		line := lattice.Axis{From: -14, Step: h, Sites: int(28/h+0.5) + 1, Left: lattice.Held, Right: lattice.Held}
		clock := lattice.Axis{Step: 0.25, Sites: 9}
		s := newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}, Signature: action.Euclidean})
		st := profile(field.SineGordonKink(field.Moving{At: 0.17})).On(line, 0).Field
		st.Data[0], st.Data[len(st.Data)-1] = 0, 2*math.Pi
		held := constraint.On(s.Block())
		held.Event(1, 0, math.Pi)
		found := lowest(t, s, held, field.Repeat(s.Block(), st), nil)
		e[k] = found.Report.CostAfter/clock.Length() - 8
		for n := range clock.Sites {
			// The softest mode, across the Peierls–Nabarro potential, amplifies
			// rounding by less than 1e4 at these spacings.
			if d := found.History.Slice(n).MaxDifference(found.History.Slice(0)); d > 1e-10 {
				t.Errorf("h = %g: slice %d differs by %.3g", h, n, d)
			}
		}
	}
	if order := math.Log2(e[1] / e[2]); math.Abs(order-2) > 0.02 {
		t.Errorf("mass − 8 = %.4g, order %.3f; want 2", e, order)
	}
	if rest := math.Abs(4*e[2]-e[1]) / 3; rest > 2e-5 { // h⁴ of h = 0.2, over 80
		t.Errorf("Richardson's mass is off by %.3g", rest)
	}
}

// pinnedPhi4 is a φ⁴ field on a block with free ends, with the vacuum 1 at the
// first slice and one event held at v.
func pinnedPhi4(t *testing.T, v float64) (*action.Discrete, *constraint.Set, *field.History) {
	clock := lattice.Axis{Step: 0.2, Sites: 21}
	line := lattice.Axis{From: -3, Step: 0.2, Sites: 31}
	s := newAction(t, clock, line, action.Wave{Potential: action.Phi4{}, Signature: action.Euclidean})
	ones := field.NewSlice(1, line.Sites)
	for i := range ones.Data {
		ones.Data[i] = 1
	}
	held := constraint.On(s.Block())
	held.Slice(0, ones)
	held.Event(2, 0.6, v)
	return s, held, field.NewHistory(s.Block(), 1)
}

// The reaction of a pin is −∂S/∂φ at its event, and dS_min/dv = ∂S/∂φ by the
// envelope theorem. The start, zero, lies on the top of V, so that the second
// variation there is not positive definite.
func TestReactionOfAPin(t *testing.T) {
	least := func(v float64) *Found {
		s, held, start := pinnedPhi4(t, v)
		return lowest(t, s, held, start, nil)
	}
	found := least(-0.3)
	r := found.Reactions[0]
	if r.Kind != "event" || r.Value != -0.3 {
		t.Fatalf("hardest-working pin: %v", r)
	}
	const d = 1e-3
	slope := (least(-0.3+d).Report.CostAfter - least(-0.3-d).Report.CostAfter) / (2 * d)
	// d²/6 of the third derivative
	if math.Abs(r.Push+slope) > 1e-6*math.Abs(slope) || slope >= 0 {
		t.Errorf("push %v, −dS/dv = %v", r.Push, -slope)
	}
	if rep := found.Report; rep.Factorisations <= rep.Accepted+1 {
		t.Errorf("no damping on the top of V: %v", rep)
	}
	// the same from a rate: two tied values push with opposite signs
	s, _, start := pinnedPhi4(t, 0)
	held := constraint.On(s.Block())
	fast := field.NewSlice(1, 31)
	fast.Data[11] = 0.7
	held.Rate(7, fast)
	tied := lowest(t, s, held, start, nil)
	a, b := tied.Reactions[0], tied.Reactions[1]
	if a.Kind != "rate" || a.Event.X != b.Event.X || math.Abs(a.Push+b.Push) > 1e-12 || math.Abs(a.Push) < 1e-3 {
		t.Errorf("reactions of a rate: %v, %v", a, b)
	}
}

func TestLBFGSAgreesWithNewton(t *testing.T) {
	s, held, start := pinnedPhi4(t, -0.3)
	newton := lowest(t, s, held, start, &Settings{Method: Newton})
	for name, set := range map[string]*Settings{
		"asked for":         {Method: LBFGS},
		"factor too large":  {Memory: 1000},
		"too much work":     {Work: 1000},
		"coarse, by itself": {Method: LBFGS, Tolerance: 1e-4},
	} {
		found := lowest(t, s, held, start, set)
		r := found.Report
		// both within 1e-10 of the largest term, over the smallest curvature of
		// order 1; the polish goes to rounding
		if d := found.History.MaxDifference(newton.History); d > 1e-9 {
			t.Errorf("%s: differs from Newton by %.3g\n%v", name, d, r)
		}
		if !strings.HasPrefix(r.Method, "L-BFGS") || r.Factorisations != 0 || r.Iterations == 0 {
			t.Errorf("%s: %v", name, r)
		}
	}
	var large *TooLarge
	if _, err := Minimum(context.Background(), s, held, start, &Settings{Method: Newton, Memory: 1000}); !errors.As(err, &large) || large.Unknowns != newton.Report.Unknowns || large.Memory != 1000 {
		t.Errorf("Newton above the limit: %v", err)
	}
	if !strings.Contains(newton.Report.String(), "Newton") || !strings.Contains(newton.Report.String(), "converged") {
		t.Errorf("%v", newton.Report)
	}
}

// On the top of V the gradient vanishes, and it is no minimum. Both methods say
// so.
func TestTopIsNoMinimum(t *testing.T) {
	s, _, start := pinnedPhi4(t, 0)
	for _, m := range []Method{Newton, LBFGS} {
		found, err := Minimum(context.Background(), s, nil, start, &Settings{Method: m})
		var failed *NotConverged
		if m == LBFGS {
			// a gradient of exactly zero gives conjugate gradients no direction
			if err != nil || !strings.Contains(found.Report.Reason, "not factorised") {
				t.Errorf("%v: %v", m, err)
			}
			continue
		}
		if !errors.As(err, &failed) || found.Report.Status != Singular || !strings.Contains(err.Error(), "not positive definite") {
			t.Errorf("%v: %v", m, err)
		}
	}
}

func TestMinimumStops(t *testing.T) {
	for _, m := range []Method{Newton, LBFGS} {
		s, held, start := pinnedPhi4(t, -0.3)
		ctx, cancel := context.WithCancel(context.Background())
		defer cancel()
		found, err := Minimum(ctx, s, held, start, &Settings{Method: m, Watch: func(st Step, h *field.History) {
			if st.Accepted && st.Iteration >= 2 {
				cancel()
			}
		}})
		var failed *NotConverged
		if !errors.As(err, &failed) || !errors.Is(err, context.Canceled) || found.Report.Status != Stopped {
			t.Fatalf("%v: %v", m, err)
		}
		if r := found.Report; !(r.CostAfter < r.CostBefore) || s.Value(found.History) != r.CostAfter {
			t.Errorf("%v: not the best history: %v", m, r)
		}
		found, err = Minimum(context.Background(), s, held, start, &Settings{Method: m, Iterations: 1})
		if !errors.As(err, &failed) || found.Report.Status != Stopped || !strings.Contains(err.Error(), "limit of 1 steps") {
			t.Errorf("%v: %v", m, err)
		}
	}
}
