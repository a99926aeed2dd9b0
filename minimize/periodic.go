package minimize

import (
	"context"
	"fmt"
	"io"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A Given closes the problem of a periodic history, of which there is a family:
// it says which member is wanted. It is one of [Period], [Frequency], [Energy] and
// [Amplitude].
type Given interface {
	check(b lattice.Block, components int) error
}

// Period gives the period T.
type Period float64

// Frequency gives the angular frequency ω = 2π/T.
type Frequency float64

// Energy gives the energy E = −dS/dT, S being the action of one period: the mean
// over its slices of elastic and potential energy, and over its time links of the
// kinetic energy, of which the lattice conserves the sum on average.
type Energy float64

// Amplitude gives the value of a component of the field at position X, which must
// be a site, in the first slice.
type Amplitude struct {
	X         float64
	Component int
	Value     float64
}

func positive(name string, v float64) error {
	if !(v > 0) || math.IsInf(v, 0) {
		return fmt.Errorf("minimize: periodic history of the %s %v; want a finite number > 0", name, v)
	}
	return nil
}

func (p Period) check(lattice.Block, int) error    { return positive("period", float64(p)) }
func (f Frequency) check(lattice.Block, int) error { return positive("frequency", float64(f)) }

func (e Energy) check(lattice.Block, int) error {
	if math.IsNaN(float64(e)) || math.IsInf(float64(e), 0) {
		return fmt.Errorf("minimize: periodic history of the energy %v; want a finite number", float64(e))
	}
	return nil
}

func (a Amplitude) check(b lattice.Block, components int) error {
	if _, err := b.Space.Index(a.X); err != nil {
		return fmt.Errorf("minimize: amplitude: %w", err)
	}
	if a.Component < 0 || a.Component >= components {
		return fmt.Errorf("minimize: amplitude of component %d; the field has %d, counted from 0", a.Component, components)
	}
	if math.IsNaN(a.Value) || math.IsInf(a.Value, 0) {
		return fmt.Errorf("minimize: amplitude %v; want a finite number", a.Value)
	}
	return nil
}

// PeriodicSettings of Periodic. The zero value works; so does a nil pointer.
type PeriodicSettings struct {
	// Tolerance is the largest |∂S/∂φ|/hk of a solution, in which the phase
	// condition may push. 0 means 1e-10 of the largest term of the equation.
	Tolerance float64

	Iterations int // limit of Newton steps. 0 means 50.

	// HoldPosition fixes the position by another linear condition,
	// ⟨φ_x, φ − φ_start⟩ = 0 with φ_x of the start: for an object on a ring or far
	// from the ends, whose translation is a zero mode.
	HoldPosition bool

	Memory, Work float64 // limits of the factorisation, as in Settings

	Progress io.Writer                  // gets one line for each step
	Watch    func(Step, *field.History) // sees the history after each step; it must not keep it
	Trace    bool                       // keeps the steps in the report
}

// An Orbit is a history that is periodic in time. The time axis of its history
// has the step Period/Slices.
type Orbit struct {
	*Found
	Period    float64
	Frequency float64 // ω = 2π/Period
	Energy    float64 // −dS/d(Period)
	Action    float64 // S of one period

	// Holding is the largest push per hk, over the block, of the conditions that
	// fix phase and position. On the lattice a shift by less than a step is a
	// symmetry only up to terms that fall exponentially with the slices a period
	// (sites a width); Holding shows them. It is part of ∂S/∂φ/hk, of which
	// Report.After is the rest.
	Holding float64
}

const problemPeriodic = "periodic history"

// Periodic finds a history that is periodic in time and makes the action of a
// Lorentzian density stationary: a breather, an oscillon, a nonlinear standing
// wave. The block's time axis is periodic; its length is the first guess of the
// period, which is an unknown unless it is given, and its number of slices is
// that of the answer.
//
// The slices stay and the period T multiplies their distance: the action of one
// period is K/T − UT, the kinetic part from differences of neighbouring slices.
// The unknowns are the free values, T, and the multiplier μ of the condition that
// fixes the phase,
//
//	∂S/∂φ + μφ̇ = 0,  ⟨φ̇, φ − φ_start⟩ = 0,
//
// φ̇ being the rate of the start [Doedel, Keller & Kernévez 1991, Int. J.
// Bifurcation Chaos 1, 493], together with what is given. Newton's method with a
// bordered factorisation solves them; the step is halved where that is needed to
// come nearer. The start history must therefore move and be near the orbit. Held
// and odd ends stay at the values of the start.
//
// The density must not depend on time, and losses and open ends are refused. The
// error is a *NotConverged unless the status is Converged; the orbit then holds
// the best history. Linear waves swing with one period at any amplitude: give the
// amplitude, not the period.
func Periodic(ctx context.Context, b lattice.Block, d action.Density, start *field.History, given Given, set *PeriodicSettings) (*Orbit, error) {
	o, err := newOrbit(b, d, start, given, set)
	if err != nil {
		return nil, err
	}
	return o.solve(ctx)
}
