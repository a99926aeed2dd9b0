package integrate

import (
	"errors"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// An Observer is shown the run at every Stride-th slice, the first included,
// and at the last.
type Observer interface {
	// Stride returns the number of steps between calls; below 1 counts as 1.
	Stride() int

	// Observe looks at a moment of the run. An error ends the run; [Stop], or
	// an error that wraps it, ends it without being a failure.
	Observe(m *Moment) error
}

// Stop is returned by an observer to end a run that has done its work.
//
//lint:ignore ST1012 it asks for something, as fs.SkipAll does
var Stop = errors.New("stop asked for")

// A Moment is a run at one slice. Its slices share memory with the run and are
// valid until Observe returns.
type Moment struct {
	Slice  int     // number of the slice
	Time   float64 // its time
	First  int     // number of the slice the run began with
	Last   int     // number of the slice the run is to end with
	Action *action.Discrete

	stepper Stepper
	state   field.State
	fresh   bool
}

// Field returns the field.
func (m *Moment) Field() field.Slice { return m.stepper.Field() }

// State returns the field and its rate. The rate is computed at the first call.
func (m *Moment) State() field.State {
	if !m.fresh {
		m.stepper.State(m.state)
		m.fresh = true
	}
	return m.state
}

// Watch is an observer made of a function.
type Watch struct {
	Every int // steps between calls; 0 means 1
	Do    func(m *Moment) error
}

// Stride returns Every.
func (w Watch) Stride() int { return w.Every }

// Observe calls Do.
func (w Watch) Observe(m *Moment) error { return w.Do(m) }
