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
