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

// twoTime is the two-time problem of a sine-Gordon collision: the exact slices at
// t = ∓T/2 pinned, the ends held at its values. The start knows nothing else.
func twoTime(t *testing.T, span float64) (*action.Discrete, *constraint.Set, *field.History) {
	t.Helper()
	clock := lattice.Axis{From: -span / 2, Step: 0.1, Sites: int(math.Round(span/0.1)) + 1}
	line := lattice.Axis{From: -16, Step: 0.2, Sites: 161, Left: lattice.Held, Right: lattice.Held}
	s := newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}})
	f := profile(field.SineGordonKinkAntikink(field.Collision{Speed: 0.4}))
	held := constraint.On(s.Block())
	first := f.On(line, -span/2).Field
	held.Slice(0, first)
	held.Slice(clock.Sites-1, f.On(line, span/2).Field)
	held.Left(func(t float64) float64 { v, _ := f(-16, t); return v })
	held.Right(func(t float64) float64 { v, _ := f(16, t); return v })
	start, err := Straight(held, field.Repeat(s.Block(), first))
	if err != nil {
		t.Fatal(err)
	}
	return s, held, start
}

// shootsAcross solves the two-time problem from the straight start, which the
// residual alone can judge: there are many solutions.
func shootsAcross(t *testing.T, span float64) {
	s, held, start := twoTime(t, span)
	found, err := LeastResidual(context.Background(), s, held, start, &Settings{Strategy: Shooting})
	if err != nil {
		t.Fatal(err)
	}
	var most float64
	for _, r := range s.Residual(nil, found.History).Data {
		most = max(most, math.Abs(r))
	}
	t.Logf("T = %g: max|r| %.2g, action %.9g\n%v", span, most, s.Value(found.History), found.Report)
	if !(most <= 1e-9) { // the bar of the two-time problem
		t.Errorf("max|r| = %.3g, want at most 1e-9", most)
	}
	last := s.Block().Slices() - 1
	for n, want := range map[int]field.Slice{0: start.Slice(0), last: start.Slice(last)} {
		if d := found.History.Slice(n).MaxDifference(want); d != 0 {
			t.Errorf("pinned slice %d is off by %v", n, d)
		}
	}
}

func TestShootingAcrossTenUnits(t *testing.T) { shootsAcross(t, 10) }

// Dragging follows its curve to the same history as the march of what it found.
func TestDraggingAcrossTenUnits(t *testing.T) {
	s, held, start := twoTime(t, 10)
	found, err := LeastResidual(context.Background(), s, held, start, &Settings{Strategy: Dragging})
	if err != nil {
		t.Fatal(err)
	}
	r := found.Report
	if len(r.Stages) != 1 || r.Stages[0].Iterations < 5 || r.After.Max > 1e-9 {
		t.Errorf("%v", r)
	}
}

// The derivative of all misfits by all Cauchy data against central differences:
// the error of those is step²/6 times the third derivative, about 1e-8, and
// rounding 1e-16/step = 1e-12.
func TestTangentsOfShots(t *testing.T) {
	s, held, start := twoTime(t, 3)
	p, err := newProblem(problemResidual, s, held, start, nil)
	if err != nil {
		t.Fatal(err)
	}
	sh := newShots(p, s, nil, []int{0, 12, 20})
	sh.fill()
	sh.shoot(p.h)
	sh.linearise(context.Background(), p.h)
	const step = 1e-4
	for j := range sh.nodes {
		nd := &sh.nodes[j]
		jac := append([]float64(nil), nd.jac...)
		for u := 0; u < len(nd.free); u += 37 {
			at := nd.slice*sh.size + nd.free[u]
			v := p.h.Data[at]
			p.h.Data[at] = v + step
			sh.shoot(p.h)
			up := append([]float64(nil), nd.res...)
			p.h.Data[at] = v - step
			sh.shoot(p.h)
			p.h.Data[at] = v
			for r, down := range nd.res {
				if d := (up[r]-down)/(2*step) - jac[u*len(nd.rows)+r]; math.Abs(d) > 1e-6 {
					t.Fatalf("node %d, ∂(misfit %d)/∂(unknown %d) is off by %.3g", j, r, u, d)
				}
			}
		}
	}
}

func TestStraightStart(t *testing.T) {
	s, held, start := twoTime(t, 10)
	n, last := 25, s.Block().Slices()-1
	for i := range 161 {
		a, b := start.At(0, 0, i), start.At(last, 0, i)
		if i > 0 && i < 160 { // the ends are held at every slice
			if d := start.At(n, 0, i) - (0.75*a + 0.25*b); math.Abs(d) > 1e-14 { // rounding
				t.Fatalf("site %d at a quarter of the way is off by %v", i, d)
			}
		}
	}
	if Vary(start, 0, 1).MaxDifference(start) != 0 || Vary(start, 3, 1).MaxDifference(Vary(start, 3, 1)) != 0 {
		t.Error("variations are not repeatable")
	}
	if d := Vary(start, 3, 1).MaxDifference(Vary(start, 4, 1)); d < 0.1 {
		t.Errorf("variations 3 and 4 differ by %v only", d)
	}
	if _, err := Straight(nil, start); err == nil {
		t.Error("no error without conditions")
	}
	_ = held
}

// Where dt = dx, two sides of 8 links and no mass, every mode returns after twice
// the side: the last slice repeats the first with its sign and its sides changed,
// and slices that do not cannot be joined. Shooting is then tried in vain, from
// both starts, and the report says so.
func TestTwoTimesThatCannotBeJoined(t *testing.T) {
	line := lattice.Axis{Step: 1, Sites: 9, Left: lattice.Held, Right: lattice.Held}
	s := newAction(t, lattice.Axis{Step: 1, Sites: 9}, line, action.Wave{})
	row := field.NewSlice(1, 9)
	row.Data[2], row.Data[5] = 1, 2
	held := constraint.On(s.Block())
	held.Slice(0, row)
	held.Slice(8, row)
	found, err := LeastResidual(context.Background(), s, held, field.NewHistory(s.Block(), 1), nil)
	if found == nil {
		t.Fatal(err)
	}
	r := found.Report
	if len(r.Stages) != 3 || r.Strategy != BlockWide || !r.Stages[0].Used || r.Stages[1].Used || r.Stages[2].Used || r.Stages[2].Strategy != Shooting {
		t.Errorf("%v\n%v", err, r)
	}
	// 1 and 2 want to be −2 and −1 at the mirror images of their sites
	if r.After.Max < 0.01 {
		t.Errorf("residual %v of a problem without a solution", r.After.Max)
	}
}
