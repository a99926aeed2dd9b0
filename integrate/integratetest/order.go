package integratetest

import (
	"math"

	"github.com/tenter-go/tenter/field"
)

// floor is the error at which rounding and the reference take over.
const floor = 1e-11

// order measures the order on every trial that is not refused, and that held
// ends are where they should be at every slice.
func (e *examiner) order() {
	for _, tr := range trials(e.claims) {
		p, err := tr.problem(1)
		if err != nil {
			e.fault(tr.name, "%v", err)
			continue
		}
		omega, _ := p.Action.MaxFrequency(p.Start.Field)
		steps := int(math.Ceil(length * omega / e.reach(part)))
		if p, err = tr.problem(steps); err != nil {
			e.fault(tr.name, "%v", err)
			continue
		}
		if _, err := e.m.Start(p); err != nil {
			if !tr.may {
				e.fault(tr.name, "refused: %v", err)
			}
			continue
		}
		var value, rate [3]float64
		for l := range 3 {
			value[l], rate[l], err = e.errorsOf(tr, steps<<l, 1<<l)
			if err != nil {
				e.fault(tr.name, "%v", err)
				return
			}
		}
		e.slope(tr.name, "field", value)
		e.slope(tr.name, "rate", rate)
	}
}

func (e *examiner) slope(trial, what string, err [3]float64) {
	if err[0] < floor {
		return
	}
	// All three levels count; where the finest is at the floor, the first two.
	p := math.Log2(err[0]/err[2]) / 2
	if err[2] < floor {
		p = math.Log2(err[0] / max(err[1], floor))
	}
	if !(p >= float64(e.claims.Order)-Slack) {
		e.fault(trial, "order of the %s %.2f (errors %.3g, %.3g, %.3g on halving the step); want %d", what, p, err[0], err[1], err[2], e.claims.Order)
	}
}

// errorsOf runs a trial and returns the largest errors of field and rate over
// every stride-th slice.
func (e *examiner) errorsOf(tr trial, steps, stride int) (value, rate float64, err error) {
	p, err := tr.problem(steps)
	if err != nil {
		return 0, 0, err
	}
	st, err := e.m.Start(p)
	if err != nil {
		return 0, 0, err
	}
	ref, err := newReference(tr)
	if err != nil {
		return 0, 0, err
	}
	clock := p.Action.Block().Time
	state := field.NewState(p.Action.Components(), tr.line.Sites)
	misplaced := false
	for n := 1; n <= steps; n++ {
		st.Step()
		if !misplaced && stride == 1 {
			misplaced = e.misplaced(tr, st.Field(), clock.At(n)-clock.From, p.Start.Field)
		}
		if n%stride != 0 {
			continue
		}
		ref.advance(clock.At(n))
		st.State(state)
		// A method that blows up has an infinite error.
		value = worse(value, state.Field.MaxDifference(ref.now.Field))
		rate = worse(rate, inside(tr, state.Rate, ref.now.Rate))
	}
	return value, rate, nil
}

func worse(a, b float64) float64 {
	if math.IsNaN(b) {
		return math.Inf(1)
	}
	return max(a, b)
}

// inside compares rates at the sites that have an equation.
func inside(tr trial, a, b field.Slice) float64 {
	from, to := 0, a.Sites
	if !tr.line.Periodic && !tr.line.Left.Unknown() {
		from, to = 1, a.Sites-1
	}
	return a.Part(from, to).MaxDifference(b.Part(from, to))
}

// misplaced reports, with a fault, whether a held end is not where it should be.
func (e *examiner) misplaced(tr trial, phi field.Slice, t float64, start field.Slice) bool {
	if tr.line.Periodic || tr.line.Left.Unknown() {
		return false
	}
	for k, f := range tr.ends {
		i := k * (phi.Sites - 1)
		want := start.At(0, i)
		if f != nil {
			want, _ = f(t)
		}
		// rounding of the time of a slice
		if got := phi.At(0, i); !(math.Abs(got-want) <= 1e-13*(1+math.Abs(want))) {
			e.fault(tr.name, "held end at site %d is %v at t = %g; want %v", i, got, t, want)
			return true
		}
	}
	return false
}
