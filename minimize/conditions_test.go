package minimize

import (
	"context"
	"errors"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"gonum.org/v1/gonum/mat"
)

// rimmed returns the Euclidean action of a wave on the unit square with n
// interior points a side, the rim pinned to zero, and those pins.
func rimmed(t *testing.T, n int, w action.Wave) (*action.Discrete, *constraint.Set) {
	t.Helper()
	side := lattice.Axis{Step: 1 / float64(n+1), Sites: n + 2}
	b := lattice.Block{Time: side, Space: side}
	w.Signature = action.Euclidean
	s, err := action.New(b, w)
	if err != nil {
		t.Fatal(err)
	}
	held := constraint.On(b)
	zero := func(float64) float64 { return 0 }
	held.Left(zero)
	held.Right(zero)
	held.Slice(0, field.NewSlice(1, n+2))
	held.Slice(n+1, field.NewSlice(1, n+2))
	return s, held
}

// Elastic–plastic torsion, c = 5, the distance to the boundary being the bound
// [MINPACK-2, Averick, Carter, Moré & Xue 1992]; values for n interior points:
// independent computation, to rounding of the fixed-grid problem.
func TestTorsionWithBounds(t *testing.T) {
	for _, c := range []struct {
		n    int
		want float64
	}{{49, -0.418070823793}, {50, -0.41808763202}, {99, -0.418388955702}} {
		s, held := rimmed(t, c.n, action.Wave{Source: action.Uniform(5)})
		dist := func(x, t float64) float64 { return min(x, 1-x, t, 1-t) }
		held.Bounds(func(x, t float64) float64 { return -max(0, dist(x, t)) }, func(x, t float64) float64 { return max(0, dist(x, t)) })
		found, err := Minimum(context.Background(), s, held, field.NewHistory(s.Block(), 1), nil)
		if err != nil {
			t.Errorf("n = %d: %v", c.n, err)
			continue
		}
		// 2e-12 is the tolerance of the reference.
		if d := found.Report.CostAfter - c.want; math.Abs(d) > 2e-12 {
			t.Errorf("n = %d: energy %.13f, want %.12f", c.n, found.Report.CostAfter, c.want)
		}
		pushed := 0
		for _, r := range found.Reactions {
			if r.Kind == "upper bound" {
				pushed++
				if !(r.Push > 0) { // −∂S/∂φ: S falls beyond the bound
					t.Errorf("n = %d: %v; want a push above 0", c.n, r)
				}
			}
		}
		if pushed == 0 {
			t.Errorf("n = %d: no bound is active", c.n)
		}
		t.Logf("n = %d: %d steps, %d active bounds, %.3f s", c.n, found.Report.Iterations, pushed, found.Report.Wall.Seconds())
	}
}

// A director between two walls that ask for different angles through weak
// anchoring: θ is linear, θ′ = ½W sin 2(θ − θ₀) at the lower wall and −½W sin
// 2(θ − θ₀) at the upper, for K = 1 [Rapini & Papoular 1969, J. Phys. Colloques
// 30, C4-54]. The lattice has linear profiles exactly.
func TestWeakAnchoring(t *testing.T) {
	for _, w := range [][2]float64{{1, 1}, {0.5, 5}, {20, 3}} {
		line := lattice.Axis{Step: 0.05, Sites: 21}
		b := lattice.Block{Time: lattice.Axis{Step: 1, Sites: 2}, Space: line}
		s, err := action.New(b, action.Wave{Signature: action.Euclidean})
		if err != nil {
			t.Fatal(err)
		}
		const lower, upper = 0.2, 1.4
		held := constraint.On(b)
		held.CostLeft(nil, constraint.RapiniPapoular{W: w[0], Easy: lower})
		held.CostRight(nil, constraint.RapiniPapoular{W: w[1], Easy: upper})
		start := field.NewHistory(b, 1)
		for i := range start.Data {
			start.Data[i] = 0.8
		}
		found, err := Minimum(context.Background(), s, held, start, nil)
		if err != nil {
			t.Fatalf("W = %v: %v", w, err)
		}
		h := found.History
		first, last := h.At(0, 0, 0), h.At(0, 0, line.Sites-1)
		slope := (last - first) / line.Length()
		// Tolerance: the solve's, 1e-10 of terms of order W.
		for side, miss := range map[string]float64{
			"lower":  slope - 0.5*w[0]*math.Sin(2*(first-lower)),
			"upper":  slope + 0.5*w[1]*math.Sin(2*(last-upper)),
			"linear": h.At(1, 0, 10) - 0.5*(first+last),
		} {
			if math.Abs(miss) > 1e-8 {
				t.Errorf("W = %v: %s condition missed by %.2e", w, side, miss)
			}
		}
		if slope < 0.1 {
			t.Errorf("W = %v: slope %g; the walls should twist the director", w, slope)
		}
	}
}

// A static kink may be moved at no cost. With its collective coordinate held
// the second variation is positive definite and the condition need not push.
func TestKinkWithItsPlaceHeld(t *testing.T) {
	line := lattice.Axis{From: -10, Step: 0.2, Sites: 101}
	b := lattice.Block{Time: lattice.Axis{Step: 1, Sites: 2, Periodic: true}, Space: line}
	s, err := action.New(b, action.Wave{Potential: action.SineGordon{}, Signature: action.Euclidean})
	if err != nil {
		t.Fatal(err)
	}
	kink, err := field.SineGordonKink(field.Moving{At: 0.1}) // half way between two sites
	if err != nil {
		t.Fatal(err)
	}
	start := kink.Over(b)
	mode := field.NewHistory(b, 1)
	for n := range 2 {
		for i := range line.Sites {
			mode.Set(n, 0, i, 1/math.Cosh(line.At(i)-0.1))
		}
	}
	held := constraint.On(b)
	held.CollectiveBlock(mode, start)
	found, err := Minimum(context.Background(), s, held, start, nil)
	if err != nil {
		t.Fatal(err)
	}
	// E = 8 − O(h²); the lattice energies of the reference have 7.98203 at h =
	// 0.4, so about 7.9955 at h = 0.2.
	if e := found.Report.CostAfter / 2; math.Abs(e-7.9955) > 5e-4 {
		t.Errorf("energy %g, want about 7.9955", e)
	}
	for _, r := range found.Reactions {
		if math.Abs(r.Push) > 1e-7 { // Peierls–Nabarro forces are below 1e-12 at this spacing
			t.Errorf("condition pushes: %v", r)
		}
	}
}

// Posterior mean of a Gaussian field with observations: the dense formula of
// Gauss and Markov, (P + Σ aaᵀ/σ²)⁻¹ Σ a d/σ², P the second variation.
func TestGaussMarkov(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 0.5, Sites: 5}, Space: lattice.Axis{Step: 0.4, Sites: 7}}
	s, err := action.New(b, action.Wave{Potential: action.Mass(1), Signature: action.Euclidean})
	if err != nil {
		t.Fatal(err)
	}
	held := constraint.On(b)
	held.Observe(0.5, 0.4, 1.5, 0.1)
	held.Observe(1.5, 2, -0.7, 0.3)
	held.Mean(4, 0.25).Soft(0.2)
	held.Average(1, 1.2, 0.5, constraint.Window{Width: 1}).Soft(0.05)
	start := field.NewHistory(b, 1)
	found, err := Minimum(context.Background(), s, held, start, nil)
	if err != nil {
		t.Fatal(err)
	}
	n := len(start.Data)
	p := mat.NewSymDense(n, nil)
	second := s.SecondVariationMatrix(nil, start)
	for e := range n {
		columns, values := second.Row(e)
		for k, f := range columns {
			if f <= e {
				p.SetSym(e, f, values[k])
			}
		}
	}
	free, err := held.Free(start)
	if err != nil {
		t.Fatal(err)
	}
	rhs := mat.NewVecDense(n, nil)
	for e, term := range free.Terms() {
		_, slope, curvature := term.At(0)
		p.SetSym(e, e, p.At(e, e)+curvature)
		rhs.SetVec(e, rhs.AtVec(e)-slope)
	}
	for _, row := range free.SoftRows() {
		a := mat.NewVecDense(n, nil)
		for k, e := range row.Index {
			a.SetVec(int(e), row.Coefficient[k])
		}
		p.SymRankOne(p, row.Precision, a)
		rhs.AddScaledVec(rhs, row.Precision*row.Target, a)
	}
	var want mat.VecDense
	if err := want.SolveVec(p, rhs); err != nil {
		t.Fatal(err)
	}
	for e, v := range found.History.Data {
		if math.Abs(v-want.AtVec(e)) > 1e-12 { // rounding, condition number about 1e3
			t.Fatalf("value %d is %v, dense formula %v", e, v, want.AtVec(e))
		}
	}
	if len(found.Misfits) != 4 {
		t.Errorf("%d misfits, want 4", len(found.Misfits))
	}
}

// Bounds and a linear condition together: the flattest curve of mean 1 above an
// obstacle, by symmetry and by its multipliers.
func TestBoundsWithAMean(t *testing.T) {
	line := lattice.Axis{Step: 0.1, Sites: 21}
	b := lattice.Block{Time: lattice.Axis{Step: 1, Sites: 2}, Space: line}
	s, err := action.New(b, action.Wave{Potential: action.Mass(0.5), Signature: action.Euclidean})
	if err != nil {
		t.Fatal(err)
	}
	held := constraint.On(b)
	for n := range 2 {
		held.Mean(n, 1)
	}
	held.Bounds(func(x, _ float64) float64 { return 1.5 - 2*math.Abs(x-1) }, nil)
	found, err := Minimum(context.Background(), s, held, field.NewHistory(b, 1), nil)
	if err != nil {
		t.Fatal(err)
	}
	h := found.History
	touching := 0
	for i := range line.Sites {
		v := h.At(0, 0, i)
		if math.Abs(v-h.At(1, 0, line.Sites-1-i)) > 1e-9 {
			t.Errorf("site %d: %g, its mirror image %g", i, v, h.At(1, 0, line.Sites-1-i))
		}
		if low := 1.5 - 2*math.Abs(line.At(i)-1); v < low-1e-12 {
			t.Errorf("site %d: %g below the bound %g", i, v, low)
		} else if v < low+1e-9 {
			touching++
		}
	}
	if touching == 0 || touching == line.Sites {
		t.Errorf("%d sites touch the bound; want some", touching)
	}
}

// The same formula for the least residual: with the residual r = Lφ linear and
// of strength q, the posterior mean solves (LᵀL hk/q² + Σ aaᵀ/σ²)φ = Σ a d/σ².
func TestGaussMarkovOfAResidual(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 0.3, Sites: 6}, Space: lattice.Axis{Step: 0.4, Sites: 5}}
	s, err := action.New(b, action.Wave{Potential: action.Mass(1), Alpha: action.Uniform(0.2)})
	if err != nil {
		t.Fatal(err)
	}
	held := constraint.On(b)
	for i := range 5 { // noisy readings of two slices, and of one event later on
		held.Observe(0, b.Space.At(i), math.Sin(float64(i)), 0.1)
		held.Observe(0.9, b.Space.At(i), math.Cos(float64(i)), 0.3)
	}
	held.Observe(1.5, 0.8, 0.4, 0.05)
	held.EndToEnd(3, 0.2).Soft(0.4)
	held.Mean(5, -0.1) // hard
	start := field.NewHistory(b, 1)
	const q = 0.7
	found, err := LeastResidual(context.Background(), s, held, start, &Settings{ResidualScale: q})
	if err != nil {
		t.Fatal(err)
	}
	n := len(start.Data)
	free, err := held.Free(start)
	if err != nil {
		t.Fatal(err)
	}
	// One more unknown for the hard condition.
	full, rhs := mat.NewSymDense(n+1, nil), mat.NewVecDense(n+1, nil)
	jac := s.ResidualJacobian(nil, start)
	for r := range n {
		columns, values := jac.Row(r)
		for a, e := range columns {
			for c, f := range columns {
				if f <= e {
					full.SetSym(e, f, full.At(e, f)+values[a]*values[c]*0.3*0.4/(q*q))
				}
			}
		}
	}
	for e, term := range free.Terms() {
		_, slope, curvature := term.At(0)
		full.SetSym(e, e, full.At(e, e)+curvature)
		rhs.SetVec(e, rhs.AtVec(e)-slope)
	}
	for _, row := range free.SoftRows() {
		for k, e := range row.Index {
			for l, f := range row.Index[:k+1] {
				full.SetSym(int(e), int(f), full.At(int(e), int(f))+row.Precision*row.Coefficient[k]*row.Coefficient[l])
			}
			rhs.SetVec(int(e), rhs.AtVec(int(e))+row.Precision*row.Target*row.Coefficient[k])
		}
	}
	for _, row := range free.HardRows() {
		for k, e := range row.Index {
			full.SetSym(n, int(e), row.Coefficient[k])
		}
		rhs.SetVec(n, row.Target)
	}
	var want mat.VecDense
	if err := want.SolveVec(full, rhs); err != nil {
		t.Fatal(err)
	}
	for e, v := range found.History.Data {
		// The normal equations of a condition number near 1e5, squared, times
		// rounding.
		if math.Abs(v-want.AtVec(e)) > 1e-7 {
			t.Fatalf("value %d is %v, dense formula %v\n%v", e, v, want.AtVec(e), found.Report)
		}
	}
	for _, r := range found.Reactions {
		// With C + λ(Σaφ − b) stationary, ∂C/∂φ = −λa: push and λ differ in sign.
		if math.Abs(r.Push+want.AtVec(n)) > 1e-6*(1+math.Abs(want.AtVec(n))) {
			t.Errorf("reaction %v, dense formula %g", r, -want.AtVec(n))
		}
	}
	if len(found.Reactions) != 1 {
		t.Errorf("%d reactions, want that of the mean", len(found.Reactions))
	}
}

func TestStrategiesRefuseSoftConditions(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 0.3, Sites: 6}, Space: lattice.Axis{Step: 0.4, Sites: 5}}
	s, err := action.New(b, action.Wave{})
	if err != nil {
		t.Fatal(err)
	}
	held := constraint.On(b)
	held.Slice(0, field.NewSlice(1, 5))
	held.Slice(1, field.NewSlice(1, 5))
	held.Observe(0.9, 0.4, 1, 0.1)
	start := field.NewHistory(b, 1)
	for _, way := range []Strategy{Marching, Windows, CoarseToFine, Shooting, Dragging} {
		var refusal *Refusal
		if _, err := LeastResidual(context.Background(), s, held, start, &Settings{Strategy: way}); !errors.As(err, &refusal) {
			t.Errorf("%v: %v, want a *Refusal", way, err)
		}
	}
	found, err := LeastResidual(context.Background(), s, held, start, nil)
	if err != nil || found.Report.Strategy != BlockWide {
		t.Errorf("left to itself: %v by %v, want block-wide", err, found.Report.Strategy)
	}
}

func TestLeastResidualRefusesBounds(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 0.3, Sites: 6}, Space: lattice.Axis{Step: 0.4, Sites: 5}}
	s, err := action.New(b, action.Wave{})
	if err != nil {
		t.Fatal(err)
	}
	held := constraint.On(b)
	held.Bound(0.3, 0.4, 0, 1)
	var refusal *Refusal
	if _, err := LeastResidual(context.Background(), s, held, field.NewHistory(b, 1), nil); !errors.As(err, &refusal) {
		t.Errorf("bounds: %v, want a *Refusal", err)
	}
}

// A minimum under a hard linear condition is a stationary history of index 0
// under it, with the same reaction.
func TestStationaryUnderALinearCondition(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 0.5, Sites: 5}, Space: lattice.Axis{Step: 0.4, Sites: 7}}
	s, err := action.New(b, action.Wave{Potential: action.Phi4{}, Signature: action.Euclidean})
	if err != nil {
		t.Fatal(err)
	}
	held := constraint.On(b)
	held.Mean(2, 0.6)
	held.Event(0, 0, -1)
	start := field.NewHistory(b, 1)
	for i := range start.Data {
		start.Data[i] = 0.9
	}
	low, err := Minimum(context.Background(), s, held, start, nil)
	if err != nil {
		t.Fatal(err)
	}
	still, err := Stationary(context.Background(), s, held, low.History, nil)
	if err != nil {
		t.Fatal(err)
	}
	if d := still.History.MaxDifference(low.History); d > 1e-9 { // the tolerance of both
		t.Errorf("%g away from the minimum", d)
	}
	if i := still.Report.Inertia; !i.Known || i.Index != 0 {
		t.Errorf("inertia %+v, want index 0", i)
	}
	for k, r := range low.Reactions {
		if q := still.Reactions[k]; q.Kind != r.Kind || math.Abs(q.Push-r.Push) > 1e-8 || r.Push == 0 {
			t.Errorf("reaction %v, of the minimum %v", q, r)
		}
	}
	if len(low.Reactions) != 2 {
		t.Errorf("%d reactions, want 2", len(low.Reactions))
	}
}
