package minimize

import (
	"context"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"gonum.org/v1/gonum/mat"
)

// Posterior of a Gaussian field with observations, a pin and a hard linear
// condition, against the dense formulas of Gauss and Markov: with Σ = P⁻¹, P the
// second variation and Σ aaᵀ/σ² on the free values, and one hard condition c,
// Σ − Σccᵀ Σ/(cᵀΣc).
func TestPosteriorAgainstDenseFormula(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 0.5, Sites: 5}, Space: lattice.Axis{Step: 0.4, Sites: 7}}
	s, err := action.New(b, action.Wave{Potential: action.Mass(1), Signature: action.Euclidean})
	if err != nil {
		t.Fatal(err)
	}
	held := constraint.On(b)
	held.Event(0, 0, 0.3)
	held.Observe(0.5, 0.4, 1.5, 0.1)
	held.Observe(1.5, 2, -0.7, 0.3)
	held.Average(1, 1.2, 0.5, constraint.Window{Width: 1}).Soft(0.05)
	held.Mean(4, 0.25)
	start := field.NewHistory(b, 1)
	found, err := Minimum(context.Background(), s, held, start, nil)
	if err != nil {
		t.Fatal(err)
	}
	free, err := held.Free(start)
	if err != nil {
		t.Fatal(err)
	}
	p := mat.NewSymDense(free.N, nil)
	second := s.SecondVariationMatrix(nil, start)
	for e := range second.Rows() {
		u, _ := free.At(e)
		columns, values := second.Row(e)
		for k, f := range columns {
			if v, _ := free.At(f); u >= 0 && v >= u {
				p.SetSym(u, v, values[k])
			}
		}
	}
	for e, term := range free.Terms() {
		u, _ := free.At(e)
		_, _, curvature := term.At(0)
		p.SetSym(u, u, p.At(u, u)+curvature)
	}
	vector := func(r constraint.Row) *mat.VecDense {
		a := mat.NewVecDense(free.N, nil)
		for k, u := range r.Unknown {
			a.SetVec(int(u), r.Weight[k])
		}
		return a
	}
	for _, r := range free.SoftRows() {
		p.SymRankOne(p, r.Precision, vector(r))
	}
	var chol mat.Cholesky
	if !chol.Factorize(p) {
		t.Fatal("the dense precision is not positive definite")
	}
	sigma := mat.NewSymDense(free.N, nil)
	if err := chol.InverseTo(sigma); err != nil {
		t.Fatal(err)
	}
	for _, r := range free.HardRows() {
		c := vector(r)
		var sc mat.VecDense
		sc.MulVec(sigma, c)
		sigma.SymRankOne(sigma, -1/mat.Dot(c, &sc), &sc)
	}

	r, err := NewResponse(s, held, found, nil)
	if err != nil {
		t.Fatal(err)
	}
	at := []lattice.Event{b.At(0, 0), b.At(1, 1), b.At(2, 3), b.At(4, 2), b.At(4, 6)}
	got, err := r.Posterior(0, at...)
	if err != nil {
		t.Fatal(err)
	}
	for i := range at {
		n, site, _ := b.Index(at[i])
		u, _ := free.At(start.Index(n, 0, site))
		for j := range at {
			m, place, _ := b.Index(at[j])
			v, _ := free.At(start.Index(m, 0, place))
			want := 0.0
			if u >= 0 && v >= 0 {
				want = sigma.At(u, v)
			}
			// rounding, condition number about 1e4
			if d := got.Covariance.At(i, j) - want; math.Abs(d) > 1e-12 {
				t.Errorf("covariance of %v and %v: %v, dense formula %v", at[i], at[j], got.Covariance.At(i, j), want)
			}
		}
		if got.Mean[i] != found.History.At(n, 0, site) {
			t.Errorf("mean at %v: %v", at[i], got.Mean[i])
		}
	}
	if got.Deviation(0) != 0 || got.Deviation(1) > 0.1 || got.Deviation(2) < 0.1 {
		t.Errorf("deviations %v, %v, %v; want none at a pin, less than observed at an observation, more elsewhere", got.Deviation(0), got.Deviation(1), got.Deviation(2))
	}
}

// The same for the least residual: hk/q² JᵀJ and Σ aaᵀ/σ² on the free values. A
// history of zeros is the solution where zero is observed.
func TestPosteriorOfALeastResidual(t *testing.T) {
	const q = 0.3
	s := newAction(t, lattice.Axis{Step: 0.4, Sites: 6}, lattice.Axis{Step: 0.5, Sites: 5}, action.Wave{Potential: action.Mass(1), Alpha: action.Uniform(0.2)})
	b := s.Block()
	rest := field.NewHistory(b, 1)
	held := constraint.On(b)
	held.Slice(0, rest.Slice(0))
	held.ObserveSlice(1, rest.Slice(1), 0.1)
	held.Observe(2, 1, 0, 0.2)
	held.Mean(3, 0).Soft(0.05)
	free, err := held.Free(rest)
	if err != nil {
		t.Fatal(err)
	}
	found := &Found{History: rest, Report: Report{Problem: problemResidual, Unknowns: free.N, Fixed: free.Fixed()}}
	r, err := NewResponse(s, held, found, &Settings{ResidualScale: q})
	if err != nil {
		t.Fatal(err)
	}

	j := mat.NewDense(len(rest.Data), free.N, nil)
	jac := s.ResidualJacobian(nil, rest)
	for e := range jac.Rows() {
		columns, values := jac.Row(e)
		for k, f := range columns {
			if u, _ := free.At(f); u >= 0 {
				j.Set(e, u, values[k])
			}
		}
	}
	p := mat.NewSymDense(free.N, nil)
	p.SymOuterK(b.Time.Step*b.Space.Step/(q*q), j.T())
	for e, term := range free.Terms() {
		u, _ := free.At(e)
		_, _, curvature := term.At(0)
		p.SetSym(u, u, p.At(u, u)+curvature)
	}
	for _, row := range free.SoftRows() {
		a := mat.NewVecDense(free.N, nil)
		for k, u := range row.Unknown {
			a.SetVec(int(u), row.Weight[k])
		}
		p.SymRankOne(p, row.Precision, a)
	}
	var chol mat.Cholesky
	if !chol.Factorize(p) {
		t.Fatal("the dense precision is not positive definite")
	}
	var sigma mat.SymDense
	if err := chol.InverseTo(&sigma); err != nil {
		t.Fatal(err)
	}
	at := make([]lattice.Event, free.N)
	for u := range at {
		_, _, _, at[u] = free.Event(free.Lead(u))
	}
	got, err := r.Posterior(0, at...)
	if err != nil {
		t.Fatal(err)
	}
	for u := range at {
		for v := range u + 1 {
			// rounding, condition number about 1e5
			if d := got.Covariance.At(u, v) - sigma.At(u, v); math.Abs(d) > 1e-11*sigma.At(u, u) {
				t.Fatalf("covariance of %v and %v: %v, dense formula %v", at[u], at[v], got.Covariance.At(u, v), sigma.At(u, v))
			}
		}
	}
}

// A string at rest at first and driven by white noise of the strength q has the
// variance q²t²/4, the noise being collected from the past light cone with the
// Green function ½ [Walsh 1986, An Introduction to Stochastic Partial Differential
// Equations, chapter 3]. The cone's edge makes it of first order.
func TestPosteriorOfANoisyString(t *testing.T) {
	const q, when = 0.7, 2.0
	var miss []float64
	for _, h := range []float64{0.1, 0.05, 0.025} {
		k := h / 2
		clock := lattice.Axis{Step: k, Sites: int(math.Round(when/k)) + 1}
		line := lattice.Axis{From: -2.5, Step: h, Sites: int(math.Round(5/h)) + 1}
		s := newAction(t, clock, line, action.Wave{})
		rest := field.NewHistory(s.Block(), 1)
		held := pairOf(rest)
		set := &Settings{ResidualScale: q}
		found, err := LeastResidual(context.Background(), s, held, rest, set)
		if err != nil {
			t.Fatal(err)
		}
		r, err := NewResponse(s, held, found, set)
		if err != nil {
			t.Fatal(err)
		}
		p, err := r.Posterior(0, lattice.Event{T: when, X: 0})
		if err != nil {
			t.Fatal(err)
		}
		miss = append(miss, math.Abs(p.Covariance.At(0, 0)-q*q*when*when/4))
	}
	for k := range 2 {
		if order := math.Log2(miss[k] / miss[k+1]); math.Abs(order-1) > 0.15 {
			t.Errorf("order %.3f between levels %d and %d, want 1; errors %.3g", order, k, k+1, miss)
		}
	}
	t.Logf("errors of the variance %v: %.3g", q*q*when*when/4, miss)
}
