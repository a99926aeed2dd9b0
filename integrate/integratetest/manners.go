package integratetest

import (
	"runtime"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
)

// manners checks what a run relies on: the start is shown as it was given and
// left as it was, Field and State agree, Step does not allocate.
func (e *examiner) manners() {
	for _, tr := range trials(e.claims) {
		const steps = 40
		p, err := tr.problem(steps)
		if err != nil {
			e.fault(tr.name, "%v", err)
			continue
		}
		given := p.Start.Clone()
		st, err := e.m.Start(p)
		if err != nil {
			continue // order has told
		}
		c, sites := p.Action.Components(), tr.line.Sites
		state := field.NewState(c, sites)
		st.State(state)
		// The rate may be kept as a difference of slices, which costs rounding.
		if off := inside(tr, state.Rate, given.Rate); !sameBits(st.Field(), given.Field) || !(off <= 1e-12) {
			e.fault(tr.name, "state at the start is off by %.3g in the field and %.3g in the rate; want the start itself", st.Field().MaxDifference(given.Field), off)
		}
		for range 5 {
			st.Step()
		}
		st.State(state)
		if !sameBits(state.Field, st.Field()) {
			e.fault(tr.name, "State and Field differ by %.3g; want the same bits", state.Field.MaxDifference(st.Field()))
		}
		if !sameBits(p.Start.Field, given.Field) || !sameBits(p.Start.Rate, given.Rate) {
			e.fault(tr.name, "the start of the problem was changed; want a copy to be changed")
		}
		e.advance(tr, p, st)
		if n := allocations(st); n > 0 {
			e.fault(tr.name, "a Step makes %d allocations; want none", n)
		}
	}
}

// advance checks that many steps at once, where a stepper offers them, are the
// steps one by one. st has made five.
func (e *examiner) advance(tr trial, p integrate.Problem, st integrate.Stepper) {
	other, err := e.m.Start(p)
	if err != nil {
		return // order has told
	}
	many, ok := other.(integrate.Advancer)
	if !ok {
		return
	}
	many.Advance(2)
	many.Advance(3)
	for k, m := range many.Memory() {
		if !sameBits(m, st.Memory()[k]) {
			e.fault(tr.name, "Advance differs from as many Steps by %.3g in array %d of the memory; want the same bits", m.MaxDifference(st.Memory()[k]), k)
		}
	}
}

// allocations returns the number of allocations a step. The fewest of several
// tries are taken: others may allocate meanwhile.
func allocations(st integrate.Stepper) int {
	const tries, steps = 5, 5
	fewest := ^uint64(0)
	var before, after runtime.MemStats
	for range tries {
		runtime.ReadMemStats(&before)
		for range steps {
			st.Step()
		}
		runtime.ReadMemStats(&after)
		fewest = min(fewest, after.Mallocs-before.Mallocs)
		if fewest == 0 {
			break
		}
	}
	return int((fewest + steps - 1) / steps)
}

// pair gives a second slice, which must be shown after one step, or refused.
func (e *examiner) pair() {
	const subject = "a given second slice"
	tr := trials(e.claims)[0]
	p, err := tr.problem(60)
	if err != nil {
		e.fault(subject, "%v", err)
		return
	}
	p.Second = p.Start.Field.Clone()
	p.Second.Axpy(1.1*p.Action.Block().Time.Step, p.Start.Rate)
	given := p.Second.Clone()
	st, err := e.m.Start(p)
	if err != nil {
		if e.claims.Pair {
			e.fault(subject, "refused: %v", err)
		}
		return
	}
	if !sameBits(st.Field(), p.Start.Field) {
		e.fault(subject, "the first slice is off by %.3g; want the start", st.Field().MaxDifference(p.Start.Field))
	}
	st.Step()
	if !sameBits(st.Field(), given) {
		e.fault(subject, "the second slice is off by %.3g; want what was given", st.Field().MaxDifference(given))
	}
	st.Step()
	if !sameBits(p.Second, given) {
		e.fault(subject, "what was given was changed; want a copy to be changed")
	}
}
