package actiontest

import (
	"fmt"
	"math/rand/v2"

	"github.com/tenter-go/tenter/field"
)

// A trial is an action with a history to test it on.
type trial struct {
	of    Action
	s     Settings
	r     *rand.Rand
	h     *field.History
	found findings
}

// newTrial returns a trial on a random history.
func newTrial(f Action, s Settings) *trial {
	e := &trial{of: f, s: s, r: s.random(), h: field.NewHistory(f.Block(), f.Components())}
	e.found.where = "; " + describe(f.Block())
	s.draw(e.r, e.h.Data)
	return e
}

// direction returns a random history with values between −1 and 1.
func (e *trial) direction() *field.History {
	d := field.NewHistory(e.of.Block(), e.of.Components())
	unit(e.r, d.Data)
	return d
}

func unit(r *rand.Rand, dst []float64) {
	for i := range dst {
		dst[i] = 2*r.Float64() - 1
	}
}

// place names entry k of a history.
func (e *trial) place(k int) string {
	n, c, i := e.h.Place(k)
	return fmt.Sprintf("component %d at %v", c, e.of.Block().At(n, i))
}

// judge holds the values given against the differences in q.
func (e *trial) judge(kind string, given []float64, q quotient, of string) {
	j := newJudge(e.s, q, given)
	for k, v := range given {
		if size, text := j.verdict(k, v); size > 0 {
			e.found.add(kind, size, "%s, %s, %s of %s", kind, e.place(k), text, of)
		}
	}
}
