package minimize

import (
	"context"
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
)

// LeastResidual finds a history that satisfies the conditions exactly and the
// field equation as well as it can: it minimises the cost
//
//	C = Σ hk r²/2q² + what the soft conditions cost
//
// over the free values, r being the residual of the field equation per hk
// (action.Discrete.Residual) at every event of every interior slice, pinned
// events included, and q Settings.ResidualScale. Ends without an equation and
// the first and last slice have no row. There may be fewer or more rows than
// unknowns.
//
// The method is Levenberg–Marquardt: with the Jacobian J = ∂r/∂φ the step δ
// solves
//
//	(JᵀJ/q² + λ)δ = −Jᵀr/q²,
//
// which is an implicit step of the gradient flow of the cost with the pseudo-time
// 1/λ, so that the iterates are frames of a relaxation. λ follows the gain ratio,
// and the step is bent along the curve of r where that lowers the cost (geodesic
// acceleration). When the residual is within the tolerance it is driven on to
// rounding by corrections with the factor at hand and the true residual, because
// the normal equations alone square the condition number. [Levenberg 1944,
// Quart. Appl. Math. 2, 164; Marquardt 1963, J. SIAM 11, 431; Nielsen 1999,
// IMM-REP-1999-05; Transtrum & Sethna 2012, arXiv:1201.5885]
//
// Settings.Strategy says how the solve comes near a solution before that.
//
// The start history is adjusted to the conditions first and is not changed. nil
// conditions hold nothing, nil settings are the defaults.
//
// The status is Converged if the largest |r| is within the tolerance or, with
// conditions that the equation cannot meet, if the gradient of the cost vanishes:
// the report says which, and After how large the residual is. Otherwise the
// error is a *NotConverged; Found then holds the best history. The push of a
// reaction is the multiplier ∂C/∂φ(E).
func LeastResidual(ctx context.Context, s *action.Discrete, held *constraint.Set, start *field.History, set *Settings) (*Found, error) {
	p, err := newProblem(problemResidual, given(s), held, start, set)
	if err != nil {
		return nil, err
	}
	if p.bounds != nil {
		return nil, &Refusal{Problem: problemResidual, Why: "bounds; they belong to the minimum of an action"}
	}
	p.unit = p.hk / (p.set.ResidualScale * p.set.ResidualScale)
	l, err := newLeast(p, s)
	if err != nil {
		return nil, err
	}
	l.rep.Before, l.rep.CostBefore = l.norm(l.res.Data, l.normal.rows), l.cost(l.sum)
	if err := l.prepare(ctx); err != nil {
		return nil, err
	}
	found, err := l.solve(ctx)
	return l.again(ctx, held, start, set, found, err)
}

// least is a least-residual problem being solved.
type least struct {
	*problem
	s             *action.Discrete
	jac           *action.Matrix
	normal        *normal
	solver        factoriser
	res, trialRes *field.History // residuals of h and trial
	grad, size    []float64      // Jᵀr and Σ|Jr|
	damped        []float64      // values of JᵀJ + λ
	delta, curved []float64      // the step without and with its curvature
	soft          bool           // the cost has terms beside the residual
	extra         *field.History // gradient or curvature of those
	sum           float64        // 2C/unit: Σ r², and the soft conditions
	lifted        map[int]bool   // rows left out
	exact         bool           // h comes from the march
	met           float64        // Report.Scale at the start
}

func newLeast(p *problem, s *action.Discrete) (*least, error) {
	l := &least{problem: p, s: s}
	if err := l.begin(); err != nil {
		return nil, err
	}
	var err error
	if l.solver, err = p.factoriser(l.normal.pattern, "want a smaller block or higher limits in the settings"); err != nil {
		return nil, err
	}
	for _, v := range []*[]float64{&l.delta, &l.curved} {
		*v = make([]float64, p.free.N)
	}
	l.damped = make([]float64, len(l.normal.values))
	p.rep.Method = fmt.Sprintf("Levenberg–Marquardt, nested-dissection Cholesky, q = %g", p.set.ResidualScale)
	return l, nil
}

// begin evaluates the residual of the start.
func (l *least) begin() error {
	rows, err := l.rows()
	if err != nil {
		return err
	}
	l.res = l.s.Residual(nil, l.h)
	if n := l.norm(l.res.Data, rows); math.IsNaN(n.Max-n.Max) || math.IsInf(l.squares(l.res.Data, rows), 0) {
		return fmt.Errorf("minimize: residual of the start history is %v at %v; want a start for which the equation can be evaluated", n.Max, n.At)
	}
	l.trialRes = l.res.Clone()
	l.jac = l.s.ResidualJacobian(nil, l.h)
	l.normal = newNormal(l.jac, rows, l.free, l.grid())
	l.grad, l.size = make([]float64, l.free.N), make([]float64, l.free.N)
	if t := l.free.Tally(); t.Terms+t.Soft > 0 {
		l.soft, l.extra = true, l.res.Clone()
	}
	l.sum = l.total(l.h, l.res)
	l.rep.Rows = len(rows)
	l.rep.Push = "∂cost/∂φ at the event, the multiplier of the pin"
	return nil
}

// rows returns the events with a field equation that is not lifted.
func (l *least) rows() ([]int32, error) {
	b := l.s.Block()
	l.lifted = make(map[int]bool)
	for _, at := range l.set.Lifted {
		n, i, err := b.Index(at)
		if err != nil {
			return nil, fmt.Errorf("minimize: lifted row: %w", err)
		}
		if !l.equation(n, i) {
			return nil, fmt.Errorf("minimize: lifted row at %v, where there is no field equation; want an event of an interior slice", at)
		}
		for c := range l.h.Components {
			e := l.h.Index(n, c, i)
			if k, _ := l.free.At(e); k >= 0 {
				return nil, fmt.Errorf("minimize: lifted row at %v, where component %d is free; want a pinned event", at, c)
			}
			l.lifted[e] = true
		}
	}
	var rows []int32
	for e := range l.h.Data {
		if n, _, i := l.h.Place(e); l.equation(n, i) && !l.lifted[e] {
			rows = append(rows, int32(e))
		}
	}
	if len(rows) == 0 {
		return nil, fmt.Errorf("minimize: no event of %s has a field equation; want at least 3 slices and a site that is not held", describe(b))
	}
	return rows, nil
}

// equation reports whether event (n, i) has a field equation.
func (l *least) equation(n, i int) bool {
	return l.s.Interior(n) && !(i == 0 && l.s.HeldLeft()) && !(i == l.h.Block.Sites()-1 && l.s.HeldRight())
}

func (l *least) squares(r []float64, rows []int32) float64 {
	var sum float64
	for _, e := range rows {
		sum += r[e] * r[e]
	}
	return sum
}

// total returns 2C/unit of the history h, whose residual is r.
func (l *least) total(h, r *field.History) float64 {
	sum := l.squares(r.Data, l.normal.rows)
	if l.soft {
		sum += 2 * l.free.Cost(h) / l.unit
	}
	return sum
}

// cost returns C for the total 2C/unit.
func (l *least) cost(sum float64) float64 { return 0.5 * l.unit * sum }

// linearise evaluates Jacobian, gradient and normal matrix at h.
func (l *least) linearise() {
	l.differentiate()
	l.assemble()
}

// differentiate evaluates Jacobian and gradient at h, soft conditions included.
func (l *least) differentiate() {
	l.jac = l.s.ResidualJacobian(l.jac, l.h)
	l.normal.gradient(l.grad, l.size, l.jac, l.res.Data)
	if !l.soft {
		return
	}
	clear(l.extra.Data)
	l.free.AddGradient(l.extra, l.h)
	for u, g := range l.free.Reduce(nil, l.extra) {
		l.grad[u] += g / l.unit
		l.size[u] += math.Abs(g) / l.unit
	}
}

// assemble writes the normal matrix of the Jacobian at hand, with the curvature
// of soft conditions where it is positive. Soft linear conditions border the
// matrix.
func (l *least) assemble() {
	l.normal.assemble(l.jac)
	if !l.soft {
		return
	}
	clear(l.extra.Data)
	l.free.AddCurvature(l.extra, l.h)
	for u, c := range l.free.Reduce(nil, l.extra) {
		l.normal.values[l.normal.diagonal[u]] += max(0, c) / l.unit
	}
}

// flat returns the largest gradient of the cost, less what hard linear
// conditions take up, over its size before cancellation.
func (l *least) flat() float64 {
	var g, size float64
	grad := l.grad
	if l.hard != nil {
		grad = make([]float64, len(l.grad))
		l.hard.tangent(grad, l.grad, l.hard.multipliers(l.grad))
	}
	for u, v := range grad {
		g, size = max(g, math.Abs(v)), max(size, l.size[u])
	}
	if size == 0 {
		return 0
	}
	return g / size
}

// factor factorises JᵀJ + λ, λ in units of 1/q².
func (l *least) factor(lambda float64) error {
	copy(l.damped, l.normal.values)
	for _, at := range l.normal.diagonal {
		l.damped[at] += lambda
	}
	l.rep.Factorisations++
	return l.solver.Factor(l.damped)
}

// try solves for the step, moves the trial there and returns Σ r² of it and the
// decrease of Σ r² that the linear model predicts.
func (l *least) try(lambda float64) (sum, predicted float64) {
	for u, g := range l.grad {
		l.delta[u] = -g
	}
	l.solver.Solve(l.delta, l.delta)
	for u, d := range l.delta {
		predicted += d * (lambda*d - l.grad[u])
	}
	if l.bend() {
		if sum = l.evaluate(l.curved); sum < l.sum {
			return sum, predicted
		}
	}
	return l.evaluate(l.delta), predicted
}

// evaluate moves the trial to h + δ and returns the total there.
func (l *least) evaluate(delta []float64) float64 {
	l.move(delta)
	l.trialRes = l.s.Residual(l.trialRes, l.trial)
	return l.total(l.trial, l.trialRes)
}

// accept makes the trial the best history.
func (l *least) accept(sum float64) {
	l.keep()
	l.res, l.trialRes = l.trialRes, l.res
	l.sum = sum
}

// measure updates norm, scale and tolerance of the report at h.
func (l *least) measure() {
	r := &l.rep
	r.After = l.norm(l.res.Data, l.normal.rows)
	r.CostAfter = l.cost(l.sum)
	r.Scale = l.scale(l.jac, l.res.Data, l.normal.rows)
	r.Tolerance = l.set.Tolerance
	if l.met == 0 {
		l.met = r.Scale
	}
	if r.Tolerance == 0 {
		// Where the history vanishes its terms do, too: what is lost in the
		// rounding of the first ones counts as nothing.
		r.Tolerance = max(1e-10*r.Scale, 1e-16*l.met)
	}
	r.Flat = l.flat()
}

const leastDamping = 1e-14 // of the largest diagonal entry, against rank deficiency

func (l *least) solve(ctx context.Context) (*Found, error) {
	limit := l.set.Iterations
	if limit == 0 {
		limit = 200
	}
	l.linearise()
	l.measure()
	first := l.set.Damping
	if first == 0 {
		first = 1e-6
	}
	largest := l.normal.largest()
	d := newDamping(first*largest, leastDamping*largest)
	for {
		switch done, reason := l.solved(); {
		case ctx.Err() != nil:
			return l.finish(Stopped, context.Cause(ctx).Error(), context.Cause(ctx))
		case done:
			return l.polish(ctx, d, reason)
		case l.rep.Iterations == limit:
			return l.finish(Stopped, fmt.Sprintf("limit of %d steps reached", limit), nil)
		case d.lambda > 1e6*largest:
			return l.finish(Stalled, "no step lowers the cost", nil)
		}
		if err := l.factor(d.lambda); err != nil {
			if d.lambda > largest {
				return l.finish(Singular, l.singular(err), err)
			}
			d.rejected()
			continue
		}
		sum, predicted := l.try(d.lambda)
		step := Step{Damping: d.lambda / (l.set.ResidualScale * l.set.ResidualScale), Gain: (l.sum - sum) / predicted}
		switch blind := predicted < 1e-12*l.sum; {
		case blind:
			if step.Accepted = l.flatter(sum); step.Accepted {
				step.Gain = 1
			}
		case sum < l.sum:
			step.Accepted = true
			l.accept(sum)
			l.linearise()
			l.measure()
		}
		if step.Accepted {
			d.accepted(step.Gain)
		} else {
			d.rejected()
		}
		step.Cost, step.Max = l.rep.CostAfter, l.rep.After.Max
		l.step(step)
	}
}

// flatter makes the trial, whose total is sum, the best history if the gradient
// of the cost is flatter there. It judges steps where the cost no longer tells
// histories apart.
func (l *least) flatter(sum float64) bool {
	before, total := l.rep.Flat, l.sum
	l.accept(sum)
	l.linearise()
	l.measure()
	if l.rep.Flat < before {
		return true
	}
	l.accept(total) // which swaps them back
	l.linearise()
	l.measure()
	return false
}

// solved reports whether the history is a solution, and why.
func (l *least) solved() (done bool, reason string) {
	if l.rep.After.Max <= l.rep.Tolerance && !l.soft {
		return true, "residual within the tolerance"
	}
	if l.rep.Flat <= l.set.Flatness {
		return true, "gradient of the cost vanishes, the conditions leave a residual"
	}
	return false, ""
}

// polish takes corrections with one factor and the true residual for as long as
// they halve the largest residual.
func (l *least) polish(ctx context.Context, d *damping, reason string) (*Found, error) {
	d.lambda = d.least
	if l.soft || l.rep.After.Max > l.rep.Tolerance || l.rep.After.Max == 0 || l.exact && l.rep.Iterations == 0 || l.factor(d.lambda) != nil {
		return l.finish(Converged, reason, nil)
	}
	const most = 20
	for range most {
		if ctx.Err() != nil {
			break
		}
		for u, g := range l.grad {
			l.delta[u] = -g
		}
		l.solver.Solve(l.delta, l.delta)
		sum := l.evaluate(l.delta)
		before, after := l.rep.After.Max, l.norm(l.trialRes.Data, l.normal.rows).Max
		if !(after < before) {
			break
		}
		l.rep.Corrections++
		l.accept(sum)
		l.rep.After.Max = after
		if after > 0.5*before {
			break
		}
		l.normal.gradient(l.grad, l.size, l.jac, l.res.Data)
	}
	return l.finish(Converged, reason, nil)
}

// finish completes the report with the multipliers ∂C/∂φ.
func (l *least) finish(status Status, reason string, cause error) (*Found, error) {
	l.linearise()
	l.measure()
	push := l.trial
	r := l.trialRes.Data
	clear(r)
	for _, e := range l.normal.rows {
		r[e] = l.res.Data[e] * l.unit
	}
	l.jac.MulTransVec(push.Data, r)
	if l.soft {
		l.free.AddGradient(push, l.h)
	}
	var by constraint.Multipliers
	if l.hard != nil {
		by.Rows = l.hard.multipliers(l.free.Reduce(nil, push))
	}
	return l.end(status, reason, cause, push, by)
}
