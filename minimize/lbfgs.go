package minimize

import (
	"context"
	"fmt"
	"math"
	"time"

	"gonum.org/v1/gonum/optimize"
)

// lbfgs runs gonum's L-BFGS on the unknowns and judges its outcome by the
// gradient alone: its line search reports failure as soon as the action no longer
// tells histories apart, which happens at the floor of the gradient as well as
// above it. What is left is done by conjugate gradients. [Liu & Nocedal 1989,
// Math. Program. 45, 503]
func (m *minimum) lbfgs(ctx context.Context) (*Found, error) {
	limit := m.set.Iterations
	if limit == 0 {
		limit = 20000
	}
	if m.rep.After.Max <= m.rep.Tolerance {
		return m.conjugate(ctx)
	}
	problem := optimize.Problem{
		Func: func(x []float64) float64 {
			m.free.Scatter(m.trial, x)
			return m.f.Value(m.trial)
		},
		Grad: func(grad, x []float64) {
			m.free.Scatter(m.trial, x)
			m.trialSlope = m.f.Gradient(m.trialSlope, m.trial)
			m.free.Reduce(grad, m.trialSlope)
		},
		Status: func() (optimize.Status, error) {
			if ctx.Err() != nil {
				return optimize.RuntimeLimit, nil
			}
			return optimize.NotTerminated, nil
		},
	}
	result, err := optimize.Minimize(problem, m.free.Gather(nil, m.h), &optimize.Settings{
		GradientThreshold: m.hk * m.rep.Tolerance,
		MajorIterations:   limit,
		Converger:         optimize.NeverTerminate{},
		Recorder:          &listener{m: m},
	}, &optimize.LBFGS{Store: 20})
	if result == nil {
		return m.finish(Stalled, fmt.Sprintf("L-BFGS could not start: %v", err), err)
	}
	// The best history so far stands in the result, whatever the error.
	m.free.Scatter(m.trial, result.X)
	if value := m.f.Value(m.trial); value <= m.value {
		m.trialSlope = m.f.Gradient(m.trialSlope, m.trial)
		m.free.Reduce(m.trialGrad, m.trialSlope)
		m.accept(value)
	}
	m.measure()
	switch {
	case ctx.Err() != nil:
		return m.finish(Stopped, context.Cause(ctx).Error(), context.Cause(ctx))
	case result.Status == optimize.IterationLimit:
		return m.finish(Stopped, fmt.Sprintf("limit of %d steps reached", limit), nil)
	}
	return m.conjugate(ctx)
}

// A listener passes the iterations of gonum's driver on.
type listener struct{ m *minimum }

func (*listener) Init() error { return nil }

func (l *listener) Record(at *optimize.Location, op optimize.Operation, _ *optimize.Stats) error {
	if op != optimize.MajorIteration || l.m.rep.Iterations == 0 && at.F == l.m.value {
		return nil
	}
	m := l.m
	s := Step{Accepted: true, Cost: at.F, Gain: math.NaN(), Elapsed: time.Since(m.began)}
	for _, g := range at.Gradient {
		s.Max = max(s.Max, math.Abs(g)/m.hk)
	}
	if m.set.Watch != nil {
		best := m.h
		m.free.Scatter(m.trial, at.X)
		m.h = m.trial
		defer func() { m.h = best }()
	}
	m.step(s)
	return nil
}
