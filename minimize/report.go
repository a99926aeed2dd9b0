package minimize

import (
	"fmt"
	"strings"
	"time"

	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Status says how a solve ended.
type Status uint8

// The ways a solve ends. A Report gives the reason in words.
const (
	Converged Status = iota // solved to the tolerance
	Stalled                 // no step improves the history any more
	Stopped                 // iteration limit, or the context ended
	Singular                // the matrix at the solution is singular or has the wrong signs
)

// String returns the status in lower case.
func (s Status) String() string {
	if int(s) < 4 {
		return [...]string{"converged", "stalled", "stopped", "singular"}[s]
	}
	return fmt.Sprintf("status(%d)", uint8(s))
}

// A Found is the outcome of a solve.
type Found struct {
	History *field.History
	Report  Report

	// Reactions of all hard conditions: pins, ties, held ends, linear conditions
	// and active bounds, the largest |Push| first. What Push means is
	// Report.Push.
	Reactions []constraint.Reaction

	// Misfits of all soft conditions, the largest |Sigmas| first.
	Misfits []constraint.Misfit
}

// A Norm is the size of a residual or gradient over its rows.
type Norm struct {
	Max float64       // largest absolute value
	RMS float64       // root of the mean square
	At  lattice.Event // where Max stands
}

// A Report says what a solve did and how well it ended.
type Report struct {
	Problem string // least residual, minimum, stationary, saddle
	Method  string

	// Strategy is what was asked for or chosen, and Why; Stages is what it did
	// before the solve for the whole block. Least residual only.
	Strategy Strategy
	Why      string
	Stages   []Stage

	Status Status
	Reason string // why it ended, in words

	Rows      int // equations
	Unknowns  int
	Fixed     int // values held
	Redundant int // conditions that repeat others

	// Norms of the residual r (least residual) or of ∂S/∂φ/hk over the free
	// events (all others, without its parts along zero modes held), at the start
	// history adjusted to the pins and at the end.
	Before, After Norm

	// The cost Σ hk r²/2q² (least residual), or the action.
	CostBefore, CostAfter float64

	// Scale is the largest single term of the equation over the block at the
	// end: the tensions of links and the sum of force and source. Tolerance is
	// what Max of After was compared with.
	Scale, Tolerance float64

	// Flat is the largest |gradient of the cost| over its size before
	// cancellation; small where the cost cannot be lowered. Least residual
	// only.
	Flat float64

	Iterations     int // trial steps
	Accepted       int // of them, those that improved the history
	Corrections    int // final corrections with the factor at hand
	Factorisations int
	Front          int     // order of the largest front; 0 without a factorisation
	Damping        float64 // last λ
	Wall           time.Duration

	// Inertia says what kind of stationary point was found. Nil for the least
	// residual and the minimum, and where a solve ended before it was counted.
	Inertia *Inertia

	Push  string // what the Push of a Reaction is
	Trace []Step // if asked for
}

// A Step is one trial step of a solve.
type Step struct {
	Iteration int
	Accepted  bool
	Damping   float64 // λ
	Cost      float64 // after the step, as CostAfter
	Max       float64 // after the step, as After.Max
	Gain      float64 // actual over predicted change of the cost
	Elapsed   time.Duration
}

// String returns the step in one line, as Settings.Progress gets it.
func (s Step) String() string {
	mark := "rejected"
	if s.Accepted {
		mark = "accepted"
	}
	return fmt.Sprintf("step %3d %s: cost %.8g, max %.3g, λ %.2g, gain %.3f, %.2fs", s.Iteration, mark, s.Cost, s.Max, s.Damping, s.Gain, s.Elapsed.Seconds())
}

// String returns the report as a few lines for a terminal.
func (r Report) String() string {
	what, cost := "residual", "cost"
	if !strings.HasSuffix(r.Problem, "residual") {
		what, cost = "gradient", "action"
	}
	var b strings.Builder
	fmt.Fprintf(&b, "%s: %v (%s)\n", r.Problem, r.Status, r.Reason)
	fmt.Fprintf(&b, "  method    %s\n", r.Method)
	if r.Problem == problemResidual {
		fmt.Fprintf(&b, "  strategy  %v (%s)\n", r.Strategy, r.Why)
	}
	for _, s := range r.Stages {
		fmt.Fprintf(&b, "  stage     %v\n", s)
	}
	fmt.Fprintf(&b, "  size      %d equations, %d unknowns, %d values held", r.Rows, r.Unknowns, r.Fixed)
	if r.Redundant > 0 {
		fmt.Fprintf(&b, ", %d conditions repeated", r.Redundant)
	}
	fmt.Fprintf(&b, "\n  %s  max %.3g → %.3g, rms %.3g → %.3g (want max ≤ %.3g)\n", what, r.Before.Max, r.After.Max, r.Before.RMS, r.After.RMS, r.Tolerance)
	if r.After.Max > r.Tolerance {
		fmt.Fprintf(&b, "            largest at %v\n", r.After.At)
	}
	fmt.Fprintf(&b, "  %-8s  %.10g → %.10g\n", cost, r.CostBefore, r.CostAfter)
	fmt.Fprintf(&b, "  work      %d steps, %d accepted, %d corrections, %d factorisations", r.Iterations, r.Accepted, r.Corrections, r.Factorisations)
	if r.Front > 0 {
		fmt.Fprintf(&b, " (largest front %d)", r.Front)
	}
	fmt.Fprintf(&b, ", %.3g s\n", r.Wall.Seconds())
	if r.Inertia != nil {
		fmt.Fprintf(&b, "  inertia   %v\n", r.Inertia)
	}
	fmt.Fprintf(&b, "  reactions %s", r.Push)
	return b.String()
}

const (
	problemResidual   = "least residual"
	problemMinimum    = "minimum"
	problemStationary = "stationary"
	problemSaddle     = "saddle"
)
