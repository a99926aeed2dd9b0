package minimize

import (
	"fmt"

	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/lattice"
)

// Part says what is changed by a Change.
type Part uint8

// What can be changed.
const (
	PinnedValue   Part = iota // the value of a pin, or of an end without an equation
	SourceImpulse             // ∫∫J dx dt of the source at one event
	ObservedValue             // the value of an observation
	LinearValue               // the number b of a linear condition Σaφ = b
)

// String returns the part in lower case.
func (p Part) String() string {
	if int(p) < 4 {
		return [...]string{"pinned value", "source", "observed value", "linear condition"}[p]
	}
	return fmt.Sprintf("part(%d)", uint8(p))
}

// A Change is something that a history was found with, and that changes by one
// unit: a unit of the field, of Σaφ, or of the impulse of a source.
//
// A source of impulse I is J = I/hk at one site of one slice (twice that at a
// free end, whose cell is half), which adds I/hk to the residual there. To a
// Lorentzian action it adds Iφ, to a Euclidean one or another functional −Iφ.
//
// Values that rates join to a pinned one move with it. The rate of an interior
// slice is not among the parts; pin the two slices that it ties instead.
type Change struct {
	Part      Part
	Event     lattice.Event
	Component int

	// Name of a linear condition, as its reaction or misfit has it; it may be
	// empty if there is one such condition at the event.
	Name string
}

// String returns the change in words.
func (c Change) String() string {
	what := c.Part.String()
	if c.Name != "" {
		what = c.Name
	}
	return fmt.Sprintf("%s of component %d at %v", what, c.Component, c.Event)
}

// load returns what a change of one unit does to the equations.
func (q *Response) load(c Change) (load, error) {
	wrong := func(format string, about ...any) (load, error) {
		return load{}, fmt.Errorf("minimize: response to the %v: %w", c, fmt.Errorf(format, about...))
	}
	e, err := q.index(c.Event, c.Component)
	if err != nil {
		return wrong("%w", err)
	}
	switch c.Part {
	case PinnedValue:
		if u, _ := q.p.free.At(e); u >= 0 {
			return wrong("the value is free; want a pinned one, or its source")
		}
		return load{moved: q.joined(e, 1)}, nil
	case SourceImpulse:
		if q.k.jac == nil {
			return load{force: []entry{{e, q.impulse}}}, nil
		}
		if !q.equations[e] {
			return wrong("the event has no field equation; want one of an interior slice whose row is not lifted")
		}
		return load{rows: []entry{{e, 1 / q.p.hk}}}, nil
	case ObservedValue:
		var l load
		for at, t := range q.p.free.Terms() {
			if o, ok := t.Penalty.(constraint.Quadratic); ok && at == e {
				l.force = append(l.force, entry{e, -t.Weight / (o.Sigma * o.Sigma)})
			}
		}
		if len(l.force) != 1 {
			return wrong("the value has %d observations; want one", len(l.force))
		}
		return l, nil
	case LinearValue:
		var l load
		for r := range q.k.borders {
			b := &q.k.borders[r]
			if at, err := q.index(b.Event, b.Component); err == nil && at == e && (c.Name == "" || c.Name == b.Name) {
				l.border = append(l.border, entry{r, 1})
			}
		}
		if len(l.border) != 1 {
			return wrong("%d linear conditions that do not follow from others go by this; want one", len(l.border))
		}
		return l, nil
	}
	return wrong("want PinnedValue, SourceImpulse, ObservedValue or LinearValue")
}

// joined returns the move of a fixed value, with those that rates join to it.
func (q *Response) joined(e int, by float64) []entry {
	n, c, i := q.p.h.Place(e)
	var moved []entry
	for _, m := range q.held.Joined(n, c, i) {
		moved = append(moved, entry{q.p.h.Index(m, c, i), by})
	}
	return moved
}
