package minimize

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"time"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/internal/nested"
)

// continuation is a branch being followed.
type continuation struct {
	family Family
	set    ContinuationSettings
	start  *field.History // gives the values at ends without an equation
	first  *equations     // the member at the first parameter
	member *equations     // the last one asked for
	at     float64        // its parameter

	hess   *hessian
	border *edged // with one border
	plain  *edged // without, made when it is needed
	grid   *nested.Pattern

	floor  float64 // the largest tolerance so far: on a branch of zeros all terms vanish
	branch *Branch
	rep    BranchReport
	last   float64
	began  time.Time
}

// A curvePoint is a Point with what the steps need.
type curvePoint struct {
	Point
	x         []float64
	tangent   []float64 // of unit length together with slope, which is dp/ds
	slope     float64
	sign      int // of the determinant of the bordered matrix
	tolerance float64
}

func newContinuation(family Family, p float64, start *field.History, set *ContinuationSettings) (*continuation, error) {
	if family == nil {
		return nil, errors.New("minimize: continuation of no family; want a function of the parameter")
	}
	s, err := set.with()
	if err != nil {
		return nil, err
	}
	if !(p >= s.Low && p <= s.High) {
		return nil, fmt.Errorf("minimize: continuation from the parameter %v; want one from %g to %g", p, s.Low, s.High)
	}
	c := &continuation{family: family, set: s, start: start, began: time.Now(), branch: new(Branch), last: p}
	if c.first, err = c.problem(p); err != nil {
		return nil, err
	}
	c.member, c.at = c.first, p
	if along := s.Along; along != nil && (along.Check() != nil || !along.SameShape(c.first.h)) {
		return nil, errors.New("minimize: direction of a continuation does not have the shape of the start history or is not finite")
	}
	c.first.second = c.first.f.SecondVariationMatrix(nil, c.first.h)
	c.hess = newHessian(c.first.second, c.first.free, c.first.grid())
	c.grid = c.hess.pattern
	if _, err := c.first.symbolic(c.grid, "want a smaller block or higher limits in the settings"); err != nil {
		return nil, err
	}
	c.border, err = newEdged(c.grid, 1)
	c.rep.Unknowns = c.first.free.N
	return c, err
}

// problem returns the member of the family at p.
func (c *continuation) problem(p float64) (*equations, error) {
	f, held, err := c.family(p)
	if err != nil {
		return nil, fmt.Errorf("minimize: family at %g: %w", p, err)
	}
	return newEquations(problemContinuation, f, held, c.start, &Settings{Tolerance: c.set.Tolerance, Memory: c.set.Memory, Work: c.set.Work})
}

// goTo makes the member at p the current one. It must have the unknowns of the first.
func (c *continuation) goTo(p float64) (*equations, error) {
	if p == c.at {
		return c.member, nil
	}
	q, err := c.problem(p)
	if err != nil {
		return nil, err
	}
	if !sameBlock(q.f.Block(), c.first.f.Block()) || !slices.Equal(q.leads, c.first.leads) || q.free.Fixed() != c.first.free.Fixed() {
		return nil, fmt.Errorf("minimize: family at %g has %d unknowns on %d × %d events; want those of the start, %d on %d × %d", p,
			q.free.N, q.f.Block().Slices(), q.f.Block().Sites(), c.first.free.N, c.first.f.Block().Slices(), c.first.f.Block().Sites())
	}
	q.slope, q.second = c.member.slope, c.member.second
	c.member, c.at = q, p
	return q, nil
}

// size returns the length of arc of a change.
func (c *continuation) size(x []float64, p float64) float64 {
	s := length(x)
	return math.Sqrt(s*s/float64(len(x)) + p*p/(c.set.Scale*c.set.Scale))
}

// forward returns the direction of the parameter.
func (c *continuation) forward() *curvePoint {
	s := c.set.Scale
	if c.set.Backward {
		s = -s
	}
	return &curvePoint{tangent: make([]float64, c.first.free.N), slope: s}
}

// derivative writes ∂(∂S/∂x)/∂p at x and p to dst.
func (c *continuation) derivative(dst, x []float64, p float64) error {
	if c.set.Derivative != nil {
		q, err := c.goTo(p)
		if err != nil {
			return err
		}
		q.free.Scatter(q.trial, x)
		by := field.NewHistory(q.trial.Block, q.trial.Components)
		c.set.Derivative(by, q.trial, p)
		q.free.Reduce(dst, by)
		return nil
	}
	e := 1e-5 * max(math.Abs(p), c.set.Scale)
	above, below := p+e, p-e
	q, err := c.goTo(above)
	if err != nil {
		return err
	}
	q.gradient(dst, x)
	if q, err = c.goTo(below); err != nil {
		return err
	}
	g := make([]float64, len(x))
	q.gradient(g, x)
	for k, v := range g {
		dst[k] = (dst[k] - v) / (above - below)
	}
	return nil
}

// look evaluates the equations at a point: its gradient, the second variation
// and what the gradient is compared with. The matrix stands in hess.
func (c *continuation) look(x []float64, p float64) (*curvePoint, error) {
	q, err := c.goTo(p)
	if err != nil {
		return nil, err
	}
	g := make([]float64, len(x))
	q.gradient(g, x)
	q.second = q.f.SecondVariationMatrix(q.second, q.trial)
	c.hess.assemble(q.second)
	pt := &curvePoint{x: x}
	pt.Parameter, pt.Gradient = p, q.size(g)
	c.floor = max(c.floor, q.tolerance())
	pt.tolerance = c.floor
	if math.IsNaN(pt.Gradient.Max) || math.IsInf(pt.Gradient.Max, 0) {
		return nil, fmt.Errorf("gradient is %v at %v and parameter %g", pt.Gradient.Max, pt.Gradient.At, p)
	}
	pt.History = q.trial.Clone()
	pt.History.Block = q.f.Block()
	pt.Action = q.f.Value(q.trial)
	return pt, nil
}

const mostNewton = 12

// correct solves ∂S/∂x = 0 and ⟨t, (x, p) − (x₀, p₀)⟩ = 0 by Newton's method from
// (x₀, p₀), t being the tangent of the point from, and completes the point found.
func (c *continuation) correct(ctx context.Context, x []float64, p float64, from *curvePoint) (*curvePoint, error) {
	n := len(x)
	x0, p0 := slices.Clone(x), p
	x = slices.Clone(x)
	g, by := make([]float64, n), make([]float64, n)
	row, corner := make([]float64, n), [][]float64{{from.slope / (c.set.Scale * c.set.Scale)}}
	for k, v := range from.tangent {
		row[k] = v / float64(n)
	}
	previous := math.Inf(1)
	polished := false
	for step := 0; ; step++ {
		if ctx.Err() != nil {
			return nil, context.Cause(ctx)
		}
		pt, err := c.look(x, p)
		if err != nil {
			return nil, err
		}
		solved := pt.Gradient.Max <= pt.tolerance
		if solved && (polished || pt.Gradient.Max == 0) || solved && step == 0 {
			pt.Newton = step
			return pt, c.complete(pt, from, row, corner)
		}
		if step == mostNewton || !solved && step > 3 && !(pt.Gradient.Max < previous) {
			return nil, fmt.Errorf("gradient of %.3g at %v is left after %d Newton steps", pt.Gradient.Max, pt.Gradient.At, step)
		}
		polished = solved // one more step makes the point exact to rounding
		previous = pt.Gradient.Max
		c.member.gradient(g, x)
		if err := c.derivative(by, x, p); err != nil {
			return nil, err
		}
		if err := c.factor(by, row, corner); err != nil {
			return nil, err
		}
		rest := corner[0][0] * (p0 - p)
		for k, v := range row {
			rest += v * (x0[k] - x[k])
			g[k] = -g[k]
		}
		dp := []float64{rest}
		c.border.Solve(g, dp, g, dp)
		for k, d := range g {
			x[k] += d
		}
		p += dp[0]
		c.rep.Newton++
		if math.IsNaN(p) {
			return nil, errors.New("parameter of a Newton step is not a number")
		}
	}
}

func (c *continuation) factor(by, row []float64, corner [][]float64) error {
	c.rep.Factorisations++
	return c.member.where(c.border.Factor(c.hess.values, [][]float64{by}, [][]float64{row}, corner))
}

// complete finds tangent, index and determinant at a point whose second
// variation stands in hess.
func (c *continuation) complete(pt, from *curvePoint, row []float64, corner [][]float64) error {
	n := len(pt.x)
	by := make([]float64, n)
	if err := c.derivative(by, pt.x, pt.Parameter); err != nil {
		return err
	}
	if err := c.factor(by, row, corner); err != nil {
		return err
	}
	pt.tangent = make([]float64, n)
	dp := []float64{1}
	c.border.Solve(pt.tangent, dp, pt.tangent, dp)
	size := c.size(pt.tangent, dp[0])
	if !(size > 0) || math.IsInf(size, 0) {
		return fmt.Errorf("tangent of length %v", size)
	}
	for k := range pt.tangent {
		pt.tangent[k] /= size
	}
	pt.slope = dp[0] / size
	pt.Slope = pt.slope
	pt.Index, pt.Known = c.border.Negative()
	pt.sign = c.border.Sign()
	return nil
}

// settle solves ∂S/∂x = 0 at constant parameter and orients the tangent by that
// of the point from.
func (c *continuation) settle(ctx context.Context, x []float64, p float64, from *curvePoint) (*curvePoint, error) {
	fixed := c.forward()
	pt, err := c.correct(ctx, x, p, fixed)
	if err != nil {
		return nil, err
	}
	// The parameter has moved by rounding at most.
	pt.Parameter = p
	dot := pt.slope * from.slope / (c.set.Scale * c.set.Scale)
	for k, v := range pt.tangent {
		dot += v * from.tangent[k] / float64(len(x))
	}
	if dot < 0 {
		for k := range pt.tangent {
			pt.tangent[k] = -pt.tangent[k]
		}
		pt.slope, pt.Slope, pt.sign = -pt.slope, -pt.Slope, -pt.sign
	}
	return pt, nil
}

// along returns the point that lies so far along the tangent of a.
func (a *curvePoint) along(step float64) (x []float64, p float64) {
	x = slices.Clone(a.x)
	for k, v := range a.tangent {
		x[k] += step * v
	}
	return x, a.Parameter + step*a.slope
}

// advance takes one step from a and refuses it if the branch turns by more than
// half a radian or if it meets more than one fold or branch point.
func (c *continuation) advance(ctx context.Context, a *curvePoint, step float64) (*curvePoint, error) {
	x, p := a.along(step)
	b, err := c.correct(ctx, x, p, a)
	if err != nil {
		return nil, err
	}
	b.Arc = a.Arc + step
	dot := a.slope * b.slope / (c.set.Scale * c.set.Scale)
	for k, v := range a.tangent {
		dot += v * b.tangent[k] / float64(len(x))
	}
	if dot < math.Cos(0.5) {
		return nil, errFar
	}
	if fold, branching := c.passed(a, b); fold && branching {
		return nil, errors.New("a fold and a branch point within one step")
	}
	return b, nil
}
