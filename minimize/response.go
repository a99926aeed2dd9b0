package minimize

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A Response knows how a history that was found follows its conditions and
// sources. Where the gradient g of the cost, or of the action, vanishes at the
// free values and something p that g depends on changes, the history changes by
//
//	δφ = −K⁻¹ ∂g/∂p δp,
//
// K being the second derivative, with Aδφ kept at zero for the linear conditions
// A. For the least residual K is hk/q² (JᵀJ + Σ r ∂²r), J = ∂r/∂φ, which is that
// of Gauss and Newton where the equation is met; for a minimum, or a stationary
// history, it is the second variation. Observations and cost conditions add their curvature to both, and a
// bound that is active stays so. K is exact, and the first order in δp is: the
// response is the derivative of what the solver finds.
//
// Make one with [NewResponse]. Its methods share one factor and must not be called
// at the same time.
type Response struct {
	p         *problem
	s         *action.Discrete // least residual
	held      *constraint.Set
	found     *Found
	k         *curvature
	impulse   float64 // of the force that a source of impulse 1 adds to the gradient; minimum
	equations []bool  // values whose row counts; least residual
}

// NewResponse prepares the responses of a history that LeastResidual, Minimum or
// another solver of ∂S/∂φ = 0 has found for the action f, the conditions and the settings. They must be the
// same; a history that does not have the cost that its report says is an error.
// (The action of a least residual is a *action.Discrete.) The matrix K is
// factorised once, at the solution, since solvers leave no factor of it behind.
//
// The error is a *Refusal for a history that is not a solution, or of another
// problem, a *TooLarge, or an *Undetermined if the history can move at no cost.
func NewResponse(f Functional, held *constraint.Set, found *Found, set *Settings) (*Response, error) {
	if f = given(f); f == nil {
		return nil, fmt.Errorf("minimize: response of no action; want the one that the history was found for")
	}
	if found == nil {
		return nil, fmt.Errorf("minimize: response of nothing; want what LeastResidual or Minimum has found")
	}
	problemName := found.Report.Problem
	refuse := func(format string, about ...any) error {
		return &Refusal{Problem: "response of a " + problemName, Why: fmt.Sprintf(format, about...)}
	}
	if found.Report.Status != Converged {
		return nil, refuse("the solve has %v; want a history that it converged to", found.Report.Status)
	}
	c, err := set.with()
	if err != nil {
		return nil, err
	}
	h, b := found.History, f.Block()
	if err := f.Fits(h); err != nil {
		return nil, fmt.Errorf("minimize: history of a response: %w", err)
	}
	if held == nil {
		held = constraint.On(b)
	}
	if g := held.Block(); !sameAxis(b.Time, g.Time) || !sameAxis(b.Space, g.Space) {
		return nil, fmt.Errorf("minimize: conditions on a block of %s; the action is on %s", describe(g), describe(b))
	}
	free, err := held.Free(h)
	if err != nil {
		return nil, fmt.Errorf("minimize: conditions: %w", err)
	}
	if r := found.Report; free.N != r.Unknowns || free.Fixed() != r.Fixed {
		return nil, fmt.Errorf("minimize: conditions that leave %d unknowns and fix %d values; the history was found with %d and %d", free.N, free.Fixed(), r.Unknowns, r.Fixed)
	}
	q := &Response{
		p:    &problem{f: f, free: free, set: c, hk: b.Time.Step * b.Space.Step, h: h},
		held: held, found: found, impulse: -1,
	}
	q.k = &curvature{free: free, shape: h, borders: append(append([]constraint.Row(nil), free.HardRows()...), free.SoftRows()...)}
	var cost float64
	switch problemName {
	case problemResidual:
		s, ok := f.(*action.Discrete)
		if !ok {
			return nil, refuse("the action has no field equation; want the *action.Discrete that it was found for")
		}
		q.s = s
		cost, err = q.least()
	case problemMinimum, problemStationary, problemSaddle:
		q.k.second = f.SecondVariationMatrix(nil, h)
		cost = f.Value(h)
		if g, ok := f.(signed); ok && g.Signature() == action.Lorentzian {
			q.impulse = 1 // S = ∫T − U has the source as +Jφ
		}
	default:
		return nil, refuse("want a least residual, a minimum or a stationary history")
	}
	if err != nil {
		return nil, err
	}
	if err := q.agrees(cost + free.Cost(h)); err != nil {
		return nil, err
	}
	if t := free.Tally(); t.Terms > 0 {
		q.k.terms = field.NewHistory(h.Block, h.Components)
		free.AddCurvature(q.k.terms, h)
	}
	q.k.still = q.active()
	if err := q.k.factorise(q.p, problemName == problemResidual || problemName == problemMinimum); err != nil {
		return nil, err
	}
	return q, nil
}

// least prepares the matrix of a least residual and returns the cost of its
// residual.
func (q *Response) least() (cost float64, err error) {
	k, p := q.k, q.p
	l := &least{problem: p, s: q.s}
	if k.rows, err = l.rows(); err != nil {
		return 0, err
	}
	q.equations = make([]bool, len(p.h.Data))
	for _, e := range k.rows {
		q.equations[e] = true
	}
	k.jac = q.s.ResidualJacobian(nil, p.h)
	k.weight = p.hk / (p.set.ResidualScale * p.set.ResidualScale)
	p.unit = k.weight
	r := q.s.Residual(nil, p.h)
	k.bent = residualCurvature(q.s, p.h, r, k.rows, k.weight)
	return l.cost(l.squares(r.Data, k.rows)), nil
}

// agrees returns an error unless the cost is the one of the report.
func (q *Response) agrees(cost float64) error {
	r := q.found.Report
	slack := 1e-6 * max(math.Abs(cost), math.Abs(r.CostAfter))
	if q.k.jac != nil { // a residual within the tolerance is as good as another
		slack += q.k.weight * float64(len(q.k.rows)) * r.Tolerance * r.Tolerance
	}
	if !(math.Abs(cost-r.CostAfter) <= slack) {
		return fmt.Errorf("minimize: history of a response costs %.10g, and %.10g in its report; want the action, conditions and settings that it was found for", cost, r.CostAfter)
	}
	return nil
}

// active returns the bounds that hold the history, nil if none does.
func (q *Response) active() *bounds {
	var still *bounds
	for _, r := range q.found.Reactions {
		if r.Kind != "lower bound" && r.Kind != "upper bound" {
			continue
		}
		if still == nil {
			still = &bounds{active: make([]bool, q.p.free.N)}
		}
		if e, err := q.index(r.Event, r.Component); err == nil {
			if u, _ := q.p.free.At(e); u >= 0 && !still.active[u] {
				still.active[u] = true
				still.count++
			}
		}
	}
	return still
}

// index returns the place of a value in the history.
func (q *Response) index(at lattice.Event, c int) (int, error) {
	n, i, err := q.p.f.Block().Index(at)
	if err != nil {
		return 0, err
	}
	if c < 0 || c >= q.p.h.Components {
		return 0, fmt.Errorf("component %d at %v; the field has %d, counted from 0", c, at, q.p.h.Components)
	}
	return q.p.h.Index(n, c, i), nil
}

// An Undetermined is the error of a response that does not exist: the conditions
// leave the history free to move, to working accuracy, or it is not a minimum.
type Undetermined struct {
	Event             lattice.Event // where the history moves most
	Component         int
	Condition         string  // the linear condition there, if it is one that does
	Smallest, Largest float64 // eigenvalue, or failing pivot, and diagonal entry
}

func (e *Undetermined) Error() string {
	where := fmt.Sprintf("component %d at %v", e.Component, e.Event)
	if e.Condition != "" {
		where = fmt.Sprintf("the %s at %v", e.Condition, e.Event)
	}
	return fmt.Sprintf("minimize: response of a history that its conditions do not determine: it may move, most of all %s, at %.2g of the curvature elsewhere, %.2g; want one more condition there",
		where, e.Smallest/e.Largest, e.Largest)
}
