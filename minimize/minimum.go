package minimize

import (
	"context"
	"errors"
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
)

// Minimum finds a history that makes a Euclidean action S as small as possible
// under the conditions: ∂S/∂φ = 0 at every free value, with the natural
// condition at free ends and at a first or last slice that is not pinned, and a
// positive definite second variation. It is the nearest minimum downhill, not
// the lowest.
//
// Newton's method with λ added to the second variation, λ by the gain ratio and
// zero where the matrix is positive definite and its model good, is used when the
// factor is within the limits of the settings, L-BFGS otherwise; the settings can
// ask for either and the report says which it was. L-BFGS, whose line search ends
// when the action no longer tells histories apart, is followed by Newton steps
// solved by conjugate gradients; it does not verify that the second variation is
// positive definite. [Nocedal & Wright 2006, Numerical Optimization, chapters 3,
// 7]
//
// Bounds want Newton's method. Each step solves for the values that are not held
// against a bound, is cut at the bounds, and is followed by sweeps of projected
// Gauss–Seidel over the model, which find most of what is held next. [Bertsekas
// 1982, SIAM J. Control Optim. 20, 221; Gräser & Kornhuber 2009, J. Comput. Math.
// 27, 1]
//
// A Lorentzian density, whose stationary histories are saddles, is refused with
// a *Refusal. The start history is adjusted to the conditions first and is not
// changed. nil conditions hold nothing, nil settings are the defaults.
//
// The error is a *NotConverged unless the status is Converged; Found then holds
// the best history. The status is Singular if the gradient vanishes but the
// second variation is not positive definite: the history is a saddle, or can be
// moved at no cost, and one more condition, such as a pin at the centre of a
// kink, is wanted. The push of a reaction is −∂S/∂φ(E), the impulse that a source
// at E would need to hold the field there.
func Minimum(ctx context.Context, f Functional, held *constraint.Set, start *field.History, set *Settings) (*Found, error) {
	if f = given(f); f != nil {
		if err := conservative(problemMinimum, f); err != nil {
			return nil, err
		}
		if err := refuseLorentzian(problemMinimum, f); err != nil {
			return nil, err
		}
	}
	m, err := newMinimum(problemMinimum, f, held, start, set)
	if err != nil {
		return nil, err
	}
	if m.set.Method == LBFGS && (m.hard != nil || m.bounds != nil) {
		return nil, &Refusal{Problem: problemMinimum, Why: "L-BFGS with hard linear conditions or bounds; want Newton"}
	}
	if m.set.Method != LBFGS {
		err := m.analyse()
		if err == nil {
			return m.newton(ctx)
		}
		if large := (*TooLarge)(nil); m.set.Method == Newton || m.hard != nil || m.bounds != nil || !errors.As(err, &large) {
			return nil, err
		}
		m.hess = nil
		m.rep.Method = "L-BFGS, because the factor would exceed the limits, then Newton–conjugate gradients"
	} else {
		m.rep.Method = "L-BFGS, then Newton–conjugate gradients"
	}
	return m.lbfgs(ctx)
}

// conservative returns a *Refusal unless the equation comes from an action.
func conservative(problem string, f Functional) error {
	err := f.Conservative()
	if err == nil {
		return nil
	}
	why := err.Error()
	if part := (*action.NoActionError)(nil); errors.As(err, &part) {
		why = part.Part + " does not come from an action; ask for the least residual"
	}
	return &Refusal{Problem: problem, Why: why, Cause: err}
}

// minimum is a minimum problem, or another with ∂S/∂φ = 0, being solved.
type minimum struct {
	*problem
	leads             []int32
	second            *action.Matrix
	hess              *hessian // nil without a factorisation
	solver            factoriser
	slope, trialSlope *field.History // ∂S/∂φ of h and trial
	grad, trialGrad   []float64      // the same by the unknowns
	pure, x           []float64      // gradient without what conditions take up; unknowns
	value             float64        // S of h
	damped, delta     []float64
}

// newMinimum evaluates the action and its derivatives at the start.
func newMinimum(name string, f Functional, held *constraint.Set, start *field.History, set *Settings) (*minimum, error) {
	p, err := newProblem(name, f, held, start, set)
	if err != nil {
		return nil, err
	}
	m := &minimum{problem: p}
	f = p.f // with the cost of soft conditions
	m.rep.Push = "−∂S/∂φ at the event, the impulse that holds the pin"
	m.rep.Rows = p.free.N
	for k := range p.free.N {
		m.leads = append(m.leads, int32(p.free.Lead(k)))
	}
	m.second = f.SecondVariationMatrix(nil, m.h)
	m.slope = f.Gradient(nil, m.h)
	m.trialSlope = m.slope.Clone()
	for _, v := range []*[]float64{&m.grad, &m.trialGrad, &m.pure, &m.x} {
		*v = make([]float64, p.free.N)
	}
	m.free.Reduce(m.grad, m.slope)
	m.value = f.Value(m.h)
	m.measure()
	m.rep.Before, m.rep.CostBefore = m.rep.After, m.value
	if n := m.rep.Before; math.IsNaN(n.Max-n.Max) || math.IsNaN(m.value-m.value) {
		return nil, fmt.Errorf("minimize: action of the start history is %v, its gradient %v at %v; want a start for which both can be evaluated", m.value, n.Max, n.At)
	}
	return m, nil
}

// analyse prepares the factorisation, or returns a *TooLarge.
func (m *minimum) analyse() (err error) {
	m.hess = newHessian(m.second, m.free, m.grid())
	m.solver, err = m.factoriser(m.hess.pattern, "want L-BFGS, a smaller block or higher limits in the settings")
	return err
}

// evaluate moves the trial to h + δ and returns the action and the largest
// |∂S/∂φ|/hk there.
func (m *minimum) evaluate(delta []float64) (value, largest float64) {
	m.move(delta)
	value = m.f.Value(m.trial)
	m.trialSlope = m.f.Gradient(m.trialSlope, m.trial)
	m.free.Reduce(m.trialGrad, m.trialSlope)
	m.purify(m.trialGrad, m.trial)
	for _, g := range m.pure {
		largest = max(largest, math.Abs(g)/m.hk)
	}
	return value, largest
}

// purify writes the gradient g at the history h to pure, less what hard linear
// conditions and active bounds take up, and returns the multipliers of the
// former. It chooses the active bounds.
func (m *minimum) purify(g []float64, h *field.History) (mu []float64) {
	copy(m.pure, g)
	if m.bounds == nil {
		if m.hard != nil {
			mu = m.hard.multipliers(g)
			m.hard.tangent(m.pure, g, mu)
		}
		return mu
	}
	m.free.Gather(m.x, h)
	// The multipliers depend on the active bounds and these on them.
	const passes = 3
	for range passes {
		if m.hard != nil {
			if m.hard.hold(m.bounds.active) != nil {
				m.hard.hold(nil)
			}
			mu = m.hard.multipliers(g)
			m.hard.tangent(m.pure, g, mu)
		}
		m.bounds.choose(m.x, m.pure)
		if m.hard == nil {
			break
		}
	}
	for u, active := range m.bounds.active {
		if active {
			m.pure[u] = 0
		}
	}
	return mu
}

// accept makes the trial the best history.
func (m *minimum) accept(value float64) {
	m.keep()
	m.slope, m.trialSlope = m.trialSlope, m.slope
	m.grad, m.trialGrad = m.trialGrad, m.grad
	m.value = value
}

// measure evaluates the second variation at h and updates the report.
func (m *minimum) measure() {
	m.second = m.f.SecondVariationMatrix(m.second, m.h)
	// the gradient by the unknowns, per hk, at the values that lead them
	m.purify(m.grad, m.h)
	reduced := m.trialSlope
	clear(reduced.Data)
	for k, e := range m.leads {
		reduced.Data[e] = m.pure[k] / m.hk
	}
	r := &m.rep
	r.After = m.norm(reduced.Data, m.leads)
	r.CostAfter = m.value
	r.Scale = m.scale(m.second, m.slope.Data, m.leads) / m.hk
	r.Tolerance = m.set.Tolerance
	if r.Tolerance == 0 {
		r.Tolerance = 1e-10 * r.Scale
	}
}

// finish completes the report with the reactions −∂S/∂φ.
func (m *minimum) finish(status Status, reason string, cause error) (*Found, error) {
	m.measure()
	push := m.trialSlope
	for e, g := range m.slope.Data {
		push.Data[e] = -g
	}
	var by constraint.Multipliers
	grad := m.free.Reduce(nil, m.slope)
	mu := m.purify(grad, m.h)
	for _, v := range mu {
		by.Rows = append(by.Rows, -v)
	}
	if m.bounds != nil {
		by.Bounds = make([]float64, m.free.N)
		rest := grad
		if m.hard != nil {
			rest = make([]float64, m.free.N)
			m.hard.tangent(rest, grad, mu)
		}
		for u, active := range m.bounds.active {
			if active {
				by.Bounds[u] = -rest[u]
			}
		}
	}
	return m.end(status, reason, cause, push, by)
}
