package integrate

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Unstable says that the time step is above the stability limit of the method
// for the fastest oscillation of the lattice.
type Unstable struct {
	Method  string
	Step    float64 // the time step k
	Omega   float64 // the largest angular frequency ω
	Limit   float64 // the largest kω of the method
	Largest float64 // the largest stable step, Limit/ω
}

func (e *Unstable) Error() string {
	return fmt.Sprintf("integrate: time step %g is above the stability limit of %s: kω = %.6g with ω = %.6g, limit %.6g; want a step below %.6g",
		e.Step, e.Method, e.Step*e.Omega, e.Omega, e.Limit, e.Largest)
}

// BlowUp says that a value stopped being finite, and carries the last state in
// which all were.
type BlowUp struct {
	Event     lattice.Event // of the first value that is not finite
	Component int
	Value     float64
	Slice     int         // of the event
	Last      field.State // the last finite state
	LastSlice int         // its slice
}

func (e *BlowUp) Error() string {
	return fmt.Sprintf("integrate: component %d became %v at %v, slice %d; the last finite state is that of slice %d; want a smaller time step, or a potential bounded below",
		e.Component, e.Value, e.Event, e.Slice, e.LastSlice)
}
