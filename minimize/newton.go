package minimize

import (
	"context"
	"fmt"
	"math"
)

// newton runs damped Newton steps until the gradient is within the tolerance,
// then corrections with the undamped factor of the solution.
func (m *minimum) newton(ctx context.Context) (*Found, error) {
	m.rep.Method = "damped Newton, nested-dissection Cholesky"
	if m.bounds != nil {
		m.rep.Method = "damped Newton on the free part of the bounds, nested-dissection Cholesky"
	}
	m.delta, m.damped = make([]float64, m.free.N), make([]float64, len(m.hess.values))
	limit := m.set.Iterations
	if limit == 0 {
		limit = 200
	}
	m.hess.assemble(m.second)
	largest := m.hess.largest()
	small := 1e-10 * largest // below which λ is zero
	d := newDamping(m.set.Damping*largest, 0)
	for {
		switch {
		case ctx.Err() != nil:
			return m.finish(Stopped, context.Cause(ctx).Error(), context.Cause(ctx))
		case m.rep.After.Max <= m.rep.Tolerance:
			return m.verify(ctx)
		case m.rep.Iterations == limit:
			return m.finish(Stopped, fmt.Sprintf("limit of %d steps reached", limit), nil)
		case d.lambda > 1e6*largest:
			return m.finish(Stalled, "no step lowers the action", nil)
		}
		if err := m.factor(d.lambda); err != nil {
			if d.lambda > 1e3*largest {
				return m.finish(Singular, m.singular(err), err)
			}
			d.lambda = max(1e-6*largest, 10*d.lambda)
			continue
		}
		predicted := m.direction(d.lambda)
		value, most := m.evaluate(m.delta)
		step := Step{Damping: d.lambda, Gain: (m.value - value) / predicted}
		// Where the action no longer tells histories apart the gradient does.
		blind := math.Abs(predicted) < 1e-10*(math.Abs(m.value)+math.Abs(value))
		step.Accepted = step.Gain > 1e-4 && !blind || blind && most < m.rep.After.Max
		if step.Accepted {
			m.accept(value)
			m.measure()
			m.hess.assemble(m.second)
			if blind {
				step.Gain = 1
			}
			d.accepted(step.Gain)
			if d.lambda < small {
				d.lambda = 0
			}
		} else {
			d.lambda = max(d.lambda, 1e-5*largest)
			d.rejected()
		}
		step.Cost, step.Max = m.rep.CostAfter, m.rep.After.Max
		m.step(step)
	}
}

// factor factorises the second variation at h with λ added to its diagonal.
func (m *minimum) factor(lambda float64) error {
	copy(m.damped, m.hess.values)
	for _, at := range m.hess.diagonal {
		m.damped[at] += lambda
	}
	if m.bounds != nil {
		m.bounds.isolate(m.hess.pattern, m.damped)
	}
	m.rep.Factorisations++
	return m.solver.Factor(m.damped)
}

// direction solves for the step δ and returns the decrease of the action that
// the quadratic model predicts, −gᵀδ − ½δᵀHδ.
func (m *minimum) direction(lambda float64) (predicted float64) {
	for u, g := range m.grad {
		m.delta[u] = -g
	}
	if m.bounds == nil {
		m.solver.Solve(m.delta, m.delta)
		for u, d := range m.delta { // Hδ = −g − λδ
			predicted += 0.5 * d * (lambda*d - m.grad[u])
		}
		return predicted
	}
	for u, active := range m.bounds.active {
		if active {
			m.delta[u] = 0
		}
	}
	m.solver.Solve(m.delta, m.delta)
	if m.free.Gather(m.x, m.h); m.hard == nil {
		m.bounds.cut(m.delta, m.x)
	} else {
		m.bounds.shorten(m.delta, m.x)
	}
	if m.hard == nil && len(m.free.SoftRows()) == 0 { // a sweep knows only the grid
		for range sweeps {
			m.bounds.sweep(m.hess, lambda, m.grad, m.x, m.delta)
		}
	}
	for u, d := range m.delta {
		predicted -= m.grad[u] * d
	}
	predicted -= 0.5 * m.hess.quadratic(m.delta)
	for _, row := range m.free.SoftRows() {
		var along float64
		for k, u := range row.Unknown {
			along += row.Weight[k] * m.delta[u]
		}
		predicted -= 0.5 * row.Precision * along * along
	}
	return predicted
}

// verify factorises the second variation at the solution, which shows whether it
// is a minimum, and takes corrections with that factor for as long as they halve
// the gradient.
func (m *minimum) verify(ctx context.Context) (*Found, error) {
	if err := m.factor(0); err != nil {
		return m.finish(Singular, "gradient vanishes, but the second "+m.singular(err), err)
	}
	const most = 20
	for range most {
		if ctx.Err() != nil {
			break
		}
		m.direction(0)
		value, after := m.evaluate(m.delta)
		before := m.rep.After.Max
		if !(after < before) {
			break
		}
		m.rep.Corrections++
		m.accept(value)
		m.rep.After.Max = after
		if after > 0.5*before {
			break
		}
	}
	return m.finish(Converged, "gradient within the tolerance, second variation positive definite", nil)
}
