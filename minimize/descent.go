package minimize

import (
	"fmt"
	"math"
	"slices"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
)

// A descent is what a flow runs down: a cost of the unknowns with its gradient and
// a matrix of second derivatives. unit is what gradient and matrix are divided by
// in the flow.
type descent interface {
	base() *problem
	cost() float64

	// gradient returns ∂cost/∂x in units of unit, less what hard linear
	// conditions and active bounds take up, and second the matrix in the same
	// unit, both at the best history.
	gradient() []float64
	second() (matrix symmetric, diagonal []int)
	unit() float64

	// move makes h + δ the best history and reports whether it can be evaluated;
	// if it cannot, h stays.
	move(delta []float64) bool

	// solved reports whether the history is a solution. thorough measures the
	// scale of the equation anew.
	solved(thorough bool) (done bool, reason string)
	finish(status Status, reason string, cause error) (*Found, error)
}

// actionDescent runs down an action.
type actionDescent struct{ *minimum }

func newActionDescent(m *minimum) *actionDescent {
	m.hess = newHessian(m.second, m.free, m.grid())
	return &actionDescent{m}
}

func (d *actionDescent) base() *problem      { return d.problem }
func (d *actionDescent) cost() float64       { return d.value }
func (d *actionDescent) gradient() []float64 { return d.pure }
func (d *actionDescent) unit() float64       { return d.hk }

func (d *actionDescent) second() (symmetric, []int) {
	d.minimum.second = d.f.SecondVariationMatrix(d.minimum.second, d.h)
	d.hess.assemble(d.minimum.second)
	return symmetric{d.hess.pattern, d.hess.values, d.softRows()}, d.hess.diagonal
}

func (d *actionDescent) move(delta []float64) bool {
	value, most := d.evaluate(delta)
	if bad(value) || bad(most) {
		return false
	}
	d.accept(value)
	d.purify(d.grad, d.h)
	return true
}

func (d *actionDescent) solved(thorough bool) (bool, string) {
	if thorough {
		keepTolerance(&d.rep, d.measure)
	} else {
		d.rep.After.Max = 0
		for _, g := range d.pure {
			d.rep.After.Max = max(d.rep.After.Max, math.Abs(g)/d.hk)
		}
	}
	return d.rep.After.Max <= d.rep.Tolerance, "gradient within the tolerance"
}

// residualDescent runs down the squared residual.
type residualDescent struct {
	*least
	diagonal []int
	pure     []float64
}

func newResidualDescent(p *problem, s *action.Discrete) (*residualDescent, error) {
	l := &least{problem: p, s: s}
	if err := l.begin(); err != nil {
		return nil, err
	}
	d := &residualDescent{least: l, diagonal: l.normal.diagonal, pure: make([]float64, p.free.N)}
	d.slope()
	return d, nil
}

func (d *residualDescent) base() *problem      { return d.problem }
func (d *residualDescent) cost() float64       { return d.least.cost(d.sum) }
func (d *residualDescent) gradient() []float64 { return d.pure }
func (d *residualDescent) unit() float64       { return d.set.ResidualScale * d.set.ResidualScale }

func (d *residualDescent) second() (symmetric, []int) {
	d.assemble()
	return symmetric{d.normal.pattern, d.normal.values, d.softRows()}, d.diagonal
}

// slope evaluates the gradient at the best history.
func (d *residualDescent) slope() {
	d.differentiate()
	copy(d.pure, d.grad)
	if d.hard != nil {
		d.hard.tangent(d.pure, d.grad, d.hard.multipliers(d.grad))
	}
}

func (d *residualDescent) move(delta []float64) bool {
	sum := d.evaluate(delta)
	if bad(sum) {
		return false
	}
	d.accept(sum)
	d.slope()
	return true
}

func (d *residualDescent) solved(bool) (bool, string) {
	keepTolerance(&d.rep, d.measure)
	return d.least.solved()
}

// keepTolerance measures, but does not let the tolerance of the report fall: in a
// flow towards φ = 0 the terms of the equation vanish together with the gradient.
func keepTolerance(r *Report, measure func()) {
	before := r.Tolerance
	measure()
	r.Tolerance = max(before, r.Tolerance)
}

func bad(v float64) bool { return math.IsNaN(v) || math.IsInf(v, 0) }

// An Unstable is the error of an explicit flow whose step is above the limit of
// stability at the start.
type Unstable struct {
	Flow       string
	Step       float64 // Δτ
	Eigenvalue float64 // the largest of ∂G/∂φ is at least that
	Largest    float64 // the limit
}

func (e *Unstable) Error() string {
	return fmt.Sprintf("minimize: step %g is above the stability limit of %s: largest eigenvalue %.6g, limit %.6g; want a step below it, or implicit steps",
		e.Step, e.Flow, e.Eigenvalue, e.Largest)
}

// softRows returns the soft linear conditions with precisions in the unit of the
// matrix.
func (p *problem) softRows() []constraint.Row {
	rows := slices.Clone(p.free.SoftRows())
	for k := range rows {
		rows[k].Precision /= p.unit
	}
	return rows
}

// factorise prepares implicit steps, or returns a *TooLarge.
func factorise(d descent) (factoriser, error) {
	m, _ := d.second()
	return d.base().factoriser(m.Pattern, "want explicit steps, a smaller block or higher limits in the settings")
}
