package minimize

import (
	"context"
	"errors"
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// orbit is a periodic history being found.
type orbit struct {
	*equations
	s        *stretched
	given    Given
	period   float64 // best so far, and of the trial
	tried    float64
	unknown  bool        // the period is
	hess     *hessian    // by the unknowns
	border   *edged      // phase, position, period
	held     [][]float64 // phase and position: the derivatives of the start
	push     []float64   // their multipliers
	from     []float64   // unknowns of the start
	x        []float64
	at       int // unknown of an Amplitude
	offset   float64
	g, by    []float64 // ∂S/∂x and ∂²S/∂x∂T at the trial
	byPeriod *field.History
	value    [3]float64 // S and its derivatives by T at the trial
}

func newOrbit(b lattice.Block, d action.Density, start *field.History, given Given, set *PeriodicSettings) (*orbit, error) {
	if given == nil {
		return nil, errors.New("minimize: periodic history of nothing given; want a Period, Frequency, Energy or Amplitude")
	}
	if !b.Time.Periodic {
		return nil, errors.New("minimize: periodic history on a clock with ends; want a periodic time axis")
	}
	if start == nil {
		return nil, errors.New("minimize: periodic history without a start; want a history that moves, near the orbit")
	}
	if err := given.check(b, start.Components); err != nil {
		return nil, err
	}
	var c PeriodicSettings
	if set != nil {
		c = *set
	}
	s, err := newStretched(b, d)
	if err != nil {
		return nil, err
	}
	if s.one.Signature() != action.Lorentzian {
		return nil, &Refusal{Problem: problemPeriodic, Why: "the density is Euclidean; want the Lorentzian signature"}
	}
	q, err := newEquations(problemPeriodic, s.one, nil, start, &Settings{
		Tolerance: c.Tolerance, Iterations: c.Iterations, Memory: c.Memory, Work: c.Work, Progress: c.Progress, Watch: c.Watch, Trace: c.Trace,
	})
	if err != nil {
		return nil, err
	}
	if err := s.autonomous(d, q.h); err != nil {
		return nil, err
	}
	o := &orbit{equations: q, s: s, given: given, period: s.first, unknown: true}
	switch v := given.(type) {
	case Period:
		o.period, o.unknown = float64(v), false
	case Frequency:
		o.period, o.unknown = 2*math.Pi/float64(v), false
	case Amplitude:
		i, _ := b.Space.Nearest(v.X)
		if o.at, o.offset = o.free.At(o.h.Index(0, v.Component, i)); o.at < 0 {
			return nil, fmt.Errorf("minimize: amplitude at x = %g, where the field is held; want a free site", v.X)
		}
	}
	if err := o.fix(c.HoldPosition); err != nil {
		return nil, err
	}
	o.rep.Method = "Newton, bordered nested-dissection LDLT"
	o.rep.Push = "−∂S/∂φ at the event, the impulse that holds the pin"
	o.rep.Rows = o.free.N
	return o, o.analyse()
}

// fix makes the conditions on phase and position.
func (o *orbit) fix(position bool) error {
	h := o.h
	rate, slope := make([]float64, o.free.N), make([]float64, o.free.N)
	clock, line := h.Block.Time, h.Block.Space
	for k, e := range o.leads {
		n, c, i := h.Place(int(e))
		rate[k] = gap(clock, n, c, func(n int) float64 { return h.At(n, c, i) })
		slope[k] = gap(line, i, c, func(i int) float64 { return h.At(n, c, i) })
	}
	o.held = [][]float64{rate}
	if !(length(rate) > 1e-12*h.Norm()) {
		return errors.New("minimize: start of a periodic history that does not move; want one whose slices differ")
	}
	if position {
		if !(length(slope) > 1e-12*h.Norm()) {
			return errors.New("minimize: start of a periodic history that is the same at all sites, whose position was to be held")
		}
		o.held = append(o.held, slope)
	}
	o.push = make([]float64, len(o.held))
	return nil
}

// gap returns the central difference of a field along an axis at place i, with
// its jump; one-sided at ends.
func gap(a lattice.Axis, i, component int, at func(int) float64) float64 {
	before, after, jump := i-1, i+1, 0.0
	if a.Periodic {
		if before < 0 {
			before, jump = a.Sites-1, jump+a.JumpOf(component)
		}
		if after == a.Sites {
			after, jump = 0, jump+a.JumpOf(component)
		}
	} else {
		before, after = max(before, 0), min(after, a.Sites-1)
	}
	return at(after) - at(before) + jump
}

func (o *orbit) analyse() error {
	n := o.free.N
	o.second = o.s.second(o.h, o.period)
	o.hess = newHessian(o.second, o.free, o.grid())
	if _, err := o.symbolic(o.hess.pattern, "want a smaller block or higher limits in the settings"); err != nil {
		return err
	}
	m := len(o.held)
	if o.unknown {
		m++
	}
	var err error
	if o.border, err = newEdged(o.hess.pattern, m); err != nil {
		return err
	}
	o.x = o.free.Gather(nil, o.h)
	o.from = append([]float64(nil), o.x...)
	o.g, o.by = make([]float64, n), make([]float64, n)
	o.slope, o.byPeriod = o.h.Clone(), o.h.Clone()
	return nil
}

// evaluate moves the trial to unknowns x, multipliers and period, and returns how
// far it is from a solution: the largest rest of ∂S/∂φ + Σμc per hk, and that of
// what is given and of the conditions in the same unit, scale being the largest
// term of the equation.
func (o *orbit) evaluate(x, push []float64, period, scale float64) float64 {
	o.tried = period
	o.hk = o.h.Block.Space.Step * period / float64(o.h.Block.Slices())
	o.free.Scatter(o.trial, x)
	o.s.gradient(o.slope, o.byPeriod, o.trial, period)
	o.free.Reduce(o.g, o.slope)
	o.free.Reduce(o.by, o.byPeriod)
	o.value = o.s.value(o.trial, period)
	for j, c := range o.held {
		for k, v := range c {
			o.g[k] += push[j] * v
		}
	}
	n := o.size(o.g)
	rest, unit := o.closing(x)
	return max(n.Max, scale*math.Abs(rest)/unit)
}

// closing returns by how much the trial misses what is given, and a unit for it.
func (o *orbit) closing(x []float64) (rest, unit float64) {
	switch v := o.given.(type) {
	case Energy:
		return o.value[1] + float64(v), max(math.Abs(float64(v)), math.Abs(o.value[1]))
	case Amplitude:
		return x[o.at] + o.offset - v.Value, max(math.Abs(v.Value), o.trial.MaxAbs())
	}
	return 0, 1
}

// accept makes the trial the best history.
func (o *orbit) accept(x, push []float64) {
	copy(o.x, x)
	copy(o.push, push)
	o.period = o.tried
	copy(o.h.Data, o.trial.Data)
}

// measure evaluates the second variation at the best history, which the trial
// stands at, and updates the report.
func (o *orbit) measure() {
	o.second = o.s.second(o.trial, o.period)
	r := &o.rep
	r.After, r.CostAfter = o.size(o.g), o.value[0]
	r.Scale = o.scale(o.second, o.slope.Data, o.leads) / o.hk
	r.Tolerance = o.set.Tolerance
	if r.Tolerance == 0 {
		r.Tolerance = 1e-10 * r.Scale
	}
}

func (o *orbit) solve(ctx context.Context) (*Orbit, error) {
	limit := o.set.Iterations
	if limit == 0 {
		limit = 50
	}
	x, push := make([]float64, len(o.x)), make([]float64, len(o.push))
	o.evaluate(o.x, o.push, o.period, 0)
	o.measure()
	o.rep.Before, o.rep.CostBefore = o.rep.After, o.value[0]
	merit := o.evaluate(o.x, o.push, o.period, o.rep.Scale)
	if math.IsNaN(merit) || math.IsInf(merit, 0) {
		return nil, fmt.Errorf("minimize: start of a periodic history has the gradient %v at %v; want a start for which it can be evaluated", o.rep.After.Max, o.rep.After.At)
	}
	polished := false
	for {
		solved := merit <= o.rep.Tolerance
		switch {
		case ctx.Err() != nil:
			return o.finish(Stopped, context.Cause(ctx).Error(), context.Cause(ctx))
		case solved && (polished || merit == 0):
			return o.finish(Converged, "gradient within the tolerance", nil)
		case o.rep.Iterations == limit:
			return o.finish(Stopped, fmt.Sprintf("limit of %d steps reached", limit), nil)
		}
		o.evaluate(o.x, o.push, o.period, o.rep.Scale)
		dx, dy, err := o.newton()
		if err != nil {
			return o.finish(Singular, err.Error(), err)
		}
		const shortest = 1. / 1024
		accepted := false
		for f := 1.0; f >= shortest && !accepted; f *= 0.5 {
			period := o.period
			for k, d := range dx {
				x[k] = o.x[k] + f*d
			}
			for j := range push {
				push[j] = o.push[j] + f*dy[j]
			}
			if o.unknown {
				period += f * dy[len(push)]
			}
			if !(period > 0) {
				continue
			}
			now := o.evaluate(x, push, period, o.rep.Scale)
			step := Step{Accepted: now < merit, Damping: 1/f - 1, Cost: o.value[0], Max: o.size(o.g).Max, Gain: math.NaN()}
			if accepted = step.Accepted; accepted {
				merit = now
				o.accept(x, push)
				o.measure()
				step.Max = o.rep.After.Max
			}
			o.step(step)
			if solved {
				break // at the floor of rounding a step may do nothing
			}
		}
		if !accepted && !solved {
			return o.finish(Stalled, "no fraction of a Newton step comes nearer", nil)
		}
		polished = solved
	}
}

// newton returns the step of the free values, and that of the multipliers and
// the period.
func (o *orbit) newton() (dx, dy []float64, err error) {
	n, m := len(o.x), len(o.held)
	o.second = o.s.second(o.trial, o.period)
	o.hess.assemble(o.second)
	columns, rows := append([][]float64(nil), o.held...), append([][]float64(nil), o.held...)
	corner := make([][]float64, o.border.m)
	for j := range corner {
		corner[j] = make([]float64, o.border.m)
	}
	dx, dy = make([]float64, n), make([]float64, o.border.m)
	for k, v := range o.g {
		dx[k] = -v
	}
	for j, c := range o.held {
		for k, v := range c {
			dy[j] -= v * (o.x[k] - o.from[k])
		}
	}
	if o.unknown {
		columns = append(columns, o.by)
		rest, _ := o.closing(o.x)
		dy[m] = -rest
		if _, ok := o.given.(Amplitude); ok {
			at := make([]float64, n)
			at[o.at] = 1
			rows = append(rows, at)
		} else {
			rows = append(rows, o.by)
			corner[m][m] = o.value[2]
		}
	}
	o.rep.Factorisations++
	if err := o.border.Factor(o.hess.values, columns, rows, corner); err != nil {
		return nil, nil, o.where(err)
	}
	o.border.Solve(dx, dy, dx, dy)
	return dx, dy, nil
}

// finish completes the report and the orbit.
func (o *orbit) finish(status Status, reason string, cause error) (*Orbit, error) {
	o.evaluate(o.x, o.push, o.period, o.rep.Scale)
	o.measure()
	var holding float64
	for k := range o.x {
		var sum float64
		for j, c := range o.held {
			sum += o.push[j] * c[k]
		}
		holding = max(holding, math.Abs(sum)/o.hk)
	}
	for e, v := range o.slope.Data {
		o.slope.Data[e] = -v
	}
	o.h.Block = o.s.at(o.period)
	found, err := o.end(status, reason, cause, o.slope, constraint.Multipliers{})
	return &Orbit{
		Found: found, Period: o.period, Frequency: 2 * math.Pi / o.period,
		Energy: -o.value[1], Action: o.value[0], Holding: holding,
	}, err
}
