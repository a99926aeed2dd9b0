package integratetest

import (
	"math"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
)

// restart carries the memory of a stepper half-way through each trial to a new
// one and compares every later bit.
func (e *examiner) restart() {
	const before, after = 37, 20
	for _, tr := range trials(e.claims) {
		p, err := tr.problem(before + after)
		if err != nil {
			e.fault(tr.name, "%v", err)
			continue
		}
		first, err := e.m.Start(p)
		if err != nil {
			continue // order has told
		}
		for range before {
			first.Step()
		}
		second, err := e.m.Start(p)
		if err != nil {
			e.fault(tr.name, "refused at the second start: %v", err)
			continue
		}
		from, to := first.Memory(), second.Memory()
		if len(from) != len(to) {
			e.fault(tr.name, "memory of %d arrays after %d steps and of %d at the start; want equally many", len(from), before, len(to))
			continue
		}
		for k := range from {
			to[k].CopyFrom(from[k])
		}
		second.Seek(before)
		for n := before; ; n++ {
			if what := differ(first, second, p.Action.Components(), tr.line.Sites); what != "" {
				e.fault(tr.name, "restarted at slice %d by Memory and Seek, the %s differs at slice %d; want the same bits", before, what, n)
				break
			}
			if n == before+after {
				break
			}
			first.Step()
			second.Step()
		}
	}
}

// differ names the first thing in which two steppers differ, or returns "".
func differ(a, b integrate.Stepper, components, sites int) string {
	if !sameBits(a.Field(), b.Field()) {
		return "field"
	}
	s, t := field.NewState(components, sites), field.NewState(components, sites)
	a.State(s)
	b.State(t)
	if !sameBits(s.Field, t.Field) || !sameBits(s.Rate, t.Rate) {
		return "state"
	}
	m, n := a.Memory(), b.Memory()
	if len(m) != len(n) {
		return "number of arrays"
	}
	for k := range m {
		if !sameBits(m[k], n[k]) {
			return "memory"
		}
	}
	return ""
}

func sameBits(a, b field.Slice) bool {
	if !a.SameShape(b) {
		return false
	}
	for c := range a.Components {
		w := b.Component(c)
		for i, v := range a.Component(c) {
			if math.Float64bits(v) != math.Float64bits(w[i]) {
				return false
			}
		}
	}
	return true
}
