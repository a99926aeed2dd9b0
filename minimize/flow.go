package minimize

import (
	"context"
	"fmt"
	"math"
	"slices"
	"time"
)

// flow is a relaxation under way.
type flow struct {
	descent
	set    RelaxSettings
	out    Relaxed
	solver factoriser // nil for explicit steps
	tau    float64
	speed  []float64 // φ_τ half a step back, or at the last implicit step
	delta  []float64
	damped []float64
	top    float64 // the largest |cost| so far
}

func relax(ctx context.Context, d descent, set RelaxSettings) (*Relaxed, error) {
	p := d.base()
	f := &flow{descent: d, set: set, speed: make([]float64, p.free.N), delta: make([]float64, p.free.N)}
	if err := f.choose(); err != nil {
		return nil, err
	}
	return f.run(ctx)
}

// choose finds the step and prepares the solver.
func (f *flow) choose() (err error) {
	a, _ := f.second()
	limit := func(eigenvalue float64) float64 {
		switch {
		case eigenvalue <= 0:
			return math.Inf(1)
		case f.set.Friction > 0:
			return 2 / math.Sqrt(eigenvalue)
		}
		return 2 / eigenvalue
	}
	f.out.Step = f.set.Step
	if f.out.Step == 0 {
		f.out.Step = 0.9 * limit(a.bound()/f.unit())
		if f.set.Implicit {
			f.out.Step *= 100
		}
		if math.IsInf(f.out.Step, 0) {
			f.out.Step = 1 // nothing flows
		}
	}
	name := "gradient flow"
	if f.set.Friction > 0 {
		name = fmt.Sprintf("flow with friction %g", f.set.Friction)
	}
	r := &f.base().rep
	if f.set.Implicit {
		r.Method = fmt.Sprintf("%s, linearly implicit Euler steps Δτ = %.6g, nested-dissection Cholesky", name, f.out.Step)
		f.damped = make([]float64, len(a.values))
		f.solver, err = factorise(f.descent)
		return err
	}
	scheme := "explicit Euler"
	if f.set.Friction > 0 {
		scheme = "leapfrog"
	}
	r.Method = fmt.Sprintf("%s, %s steps Δτ = %.6g", name, scheme, f.out.Step)
	const lanczos = 80
	eigenvalue := a.largest(lanczos) / f.unit()
	f.out.Limit = limit(eigenvalue)
	if f.out.Step > f.out.Limit {
		return &Unstable{Flow: "the explicit " + name, Step: f.out.Step, Eigenvalue: eigenvalue, Largest: f.out.Limit}
	}
	return nil
}

func (f *flow) run(ctx context.Context) (*Relaxed, error) {
	p := f.base()
	done, reason := f.solved(true)
	p.rep.Before, p.rep.CostBefore = p.rep.After, f.cost()
	f.top = math.Abs(f.cost())
	f.frame()
	for {
		switch {
		case ctx.Err() != nil:
			return f.end(Stopped, context.Cause(ctx).Error(), context.Cause(ctx))
		case done && f.still():
			return f.end(Converged, reason, nil)
		case f.set.Until > 0 && f.tau >= f.set.Until:
			return f.end(Stopped, fmt.Sprintf("relaxation time %g reached", f.set.Until), nil)
		case p.rep.Iterations == f.set.Steps:
			return f.end(Stopped, fmt.Sprintf("limit of %d steps reached", f.set.Steps), nil)
		}
		step := f.out.Step
		if f.set.Until > 0 && f.tau+step > f.set.Until*(1-1e-12) {
			step = f.set.Until - f.tau
		}
		if err := f.step(step); err != nil {
			return f.end(Singular, p.singular(err)+"; want a shorter step", err)
		}
		before := f.cost()
		p.rep.Iterations++
		if !f.move(f.delta) {
			return f.end(Stalled, "the next step is not finite; want a shorter step", nil)
		}
		p.rep.Accepted++
		f.tau += step
		if f.set.Until > 0 && step != f.out.Step {
			f.tau = f.set.Until
		}
		f.top = max(f.top, math.Abs(f.cost()))
		if f.set.Friction == 0 && f.solver == nil && f.cost()-before > 1e-9*f.top {
			return f.end(Stalled, fmt.Sprintf("cost rises from %.10g to %.10g: the curvature has outgrown the explicit step; want a shorter one", before, f.cost()), nil)
		}
		n := p.rep.Iterations
		done, reason = f.solved(n%100 == 0)
		if done {
			done, reason = f.solved(true)
		}
		if n%f.set.Every == 0 {
			f.frame()
		}
	}
}

// step finds the change δ of a step Δτ.
func (f *flow) step(step float64) error {
	if f.solver != nil {
		if err := f.implicit(step); err != nil {
			return err
		}
	} else {
		f.explicit(step)
	}
	f.confine()
	// what the bounds have let through
	for u, v := range f.delta {
		f.speed[u] = v / step
	}
	return nil
}

// implicit finds δ by a linearly implicit Euler step.
func (f *flow) implicit(step float64) error {
	unit, friction, p := f.unit(), f.set.Friction, f.base()
	a, diagonal := f.second()
	copy(f.damped, a.values)
	shift := 1 / step
	if friction > 0 {
		shift = friction/step + 1/(step*step)
	}
	for _, at := range diagonal {
		f.damped[at] += unit * shift
	}
	if p.bounds != nil {
		p.bounds.isolate(a.Pattern, f.damped)
	}
	p.rep.Factorisations++
	if err := f.solver.Factor(f.damped); err != nil {
		return err
	}
	for u, v := range f.gradient() {
		f.delta[u] = -v
		if friction > 0 {
			f.delta[u] += unit * f.speed[u] / step
		}
	}
	f.stop()
	f.solver.Solve(f.delta, f.delta)
	return nil
}

// explicit finds δ by an Euler step, with friction by one of leapfrog.
func (f *flow) explicit(step float64) {
	unit, friction := f.unit(), f.set.Friction
	keep, kick := 0.0, 1.0
	if friction > 0 {
		keep, kick = (1-0.5*friction*step)/(1+0.5*friction*step), step/(1+0.5*friction*step)
		if f.base().rep.Iterations == 0 { // from rest, half a step to where speeds live
			keep, kick = 0, 0.5*kick
		}
	}
	for u, v := range f.gradient() {
		f.delta[u] = step * (keep*f.speed[u] - kick*v/unit)
	}
	f.stop()
}

// stop holds the unknowns that are pushed against a bound.
func (f *flow) stop() {
	p := f.base()
	if p.bounds == nil {
		return
	}
	for u, active := range p.bounds.active {
		if active {
			f.delta[u] = 0
		}
	}
}

// confine cuts the step at the bounds.
func (f *flow) confine() {
	p := f.base()
	if p.bounds == nil {
		return
	}
	x := p.free.Gather(nil, p.h)
	if p.hard != nil {
		p.bounds.shorten(f.delta, x)
	} else {
		p.bounds.cut(f.delta, x)
	}
}

// still reports whether the flow has come to rest: with friction, whether the
// force of friction is within the tolerance of the gradient.
func (f *flow) still() bool {
	if f.set.Friction == 0 {
		return true
	}
	limit := f.base().rep.Tolerance
	for _, v := range f.speed {
		if math.Abs(f.set.Friction*v) > limit {
			return false
		}
	}
	return true
}

// frame records the history.
func (f *flow) frame() {
	p := f.base()
	if !f.set.Keep && f.set.Watch == nil && f.set.Progress == nil {
		return
	}
	var most float64
	for _, g := range f.gradient() {
		most = max(most, math.Abs(g)/f.unit())
	}
	now := Frame{Step: p.rep.Iterations, Tau: f.tau, Cost: f.cost(), Max: most, History: p.h}
	if f.set.Progress != nil {
		fmt.Fprintf(f.set.Progress, "%v, %.2fs\n", now, time.Since(p.began).Seconds())
	}
	if f.set.Watch != nil {
		f.set.Watch(now)
	}
	if f.set.Keep {
		now.History = p.h.Clone()
		f.out.Frames = append(f.out.Frames, now)
	}
}

// end completes the outcome. There is no error for Converged, and for the end
// that was asked for.
func (f *flow) end(status Status, reason string, cause error) (*Relaxed, error) {
	p := f.base()
	if p.rep.Iterations%f.set.Every != 0 {
		f.frame()
	}
	tolerance := p.rep.Tolerance
	found, err := f.finish(status, reason, cause)
	found.Report.Tolerance = tolerance
	out := f.out
	out.Found, out.Tau, out.Frames = found, f.tau, slices.Clip(f.out.Frames)
	if status == Stopped && cause == nil && f.set.Until > 0 && f.tau >= f.set.Until {
		err = nil
	}
	return &out, err
}
