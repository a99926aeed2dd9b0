package constraint

import (
	"fmt"

	"github.com/tenter-go/tenter/lattice"
)

// A Conflict says that a value of the field is held at two numbers.
type Conflict struct {
	Event         lattice.Event
	Component     int
	First, Second float64
	By            [2]string // the conditions that ask for First and Second

	// Above is set if the two numbers are not values of the field but what it
	// must gain from that event, by two chains of rates.
	Above *lattice.Event
}

func (e *Conflict) Error() string {
	if e.Above != nil {
		return fmt.Sprintf("constraint: component %d at %v is held at %v and at %v above its value at %v by rates; want one number, remove one of the rates",
			e.Component, e.Event, e.First, e.Second, *e.Above)
	}
	return fmt.Sprintf("constraint: component %d at %v is held at %v by its %s and at %v by its %s; want one value",
		e.Component, e.Event, e.First, e.By[0], e.Second, e.By[1])
}

// A Crossing says that no value of the field at an event is between its bounds:
// the bounds cross, or the value is fixed outside of them.
type Crossing struct {
	Event     lattice.Event
	Component int
	Low, High float64
	By        string  // the condition that fixes the value; empty if the bounds cross
	Value     float64 // if it is fixed
}

func (e *Crossing) Error() string {
	if e.By == "" {
		return fmt.Sprintf("constraint: component %d at %v is bounded from below by %v and from above by %v; want bounds that leave a value",
			e.Component, e.Event, e.Low, e.High)
	}
	return fmt.Sprintf("constraint: component %d at %v is held at %v by its %s, outside of its bounds %v to %v; want a value between them",
		e.Component, e.Event, e.Value, e.By, e.Low, e.High)
}

// A Contradiction says that a hard linear condition asks for what others
// exclude.
type Contradiction struct {
	Condition     string
	Event         lattice.Event // of the condition
	Component     int
	Asked, Forced float64  // the number it asks for and what it can only be
	Others        []string // hard linear conditions that force it, with their events; none if pins, rates and ends do alone
}

func (e *Contradiction) Error() string {
	why := "values that are held"
	if len(e.Others) > 0 {
		why = list(e.Others)
	}
	return fmt.Sprintf("constraint: %s at %v, component %d, is asked to be %.12g and forced to be %.12g by %s; want that number, or one condition less",
		e.Condition, e.Event, e.Component, e.Asked, e.Forced, why)
}
