package minimize

import (
	"context"
	"fmt"
	"io"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// RelaxSettings of Relax and RelaxResidual. The zero value works; so does a nil
// pointer.
type RelaxSettings struct {
	// Implicit takes steps with an exact factorisation, which may be long,
	// instead of explicit ones, which are limited but cost little.
	Implicit bool

	// Friction is γ of the flow φ_ττ + γφ_τ = −G, which starts at rest. 0 means
	// the gradient flow φ_τ = −G.
	Friction float64

	// Step is Δτ. 0 means 0.9 of the safe limit of an explicit step, and a
	// hundred times that if Implicit.
	Step float64

	Until float64 // τ at which the flow ends; the last step is shortened to meet it. 0 means no end.
	Steps int     // limit of the number of steps. 0 means 100000.

	// Tolerance ends the flow: the largest |G|, with friction of |γφ_τ| as well,
	// for an action; the largest |residual| for the squared residual. 0 means
	// 1e-10 of the largest term of the equation that the flow has met. Flatness, ResidualScale and
	// Lifted are those of Settings, for the squared residual.
	Tolerance, Flatness, ResidualScale float64
	Lifted                             []lattice.Event

	Memory, Work float64 // limits of the factorisation, as in Settings

	// Every counts the steps from one recorded frame to the next; the start and
	// the end are frames, too. 0 means 100. Keep keeps the frames in the outcome,
	// with histories of their own; Watch sees them, and must neither change nor
	// keep the history. Progress gets a line for each.
	Every    int
	Keep     bool
	Watch    func(Frame)
	Progress io.Writer
}

// A Frame is the history at one relaxation time.
type Frame struct {
	Step    int
	Tau     float64
	Cost    float64 // the action or the cost of the residual
	Max     float64 // the largest |G|
	History *field.History
}

// String returns the frame in one line.
func (f Frame) String() string {
	return fmt.Sprintf("step %6d: τ %.6g, cost %.10g, gradient %.3g", f.Step, f.Tau, f.Cost, f.Max)
}

// Relaxed is the outcome of a flow.
type Relaxed struct {
	*Found
	Tau    float64 // where it ended
	Step   float64 // Δτ
	Limit  float64 // above which an explicit step is refused; 0 for implicit ones
	Frames []Frame // if they were to be kept
}

const (
	problemRelax         = "relaxation"
	problemRelaxResidual = "relaxation of the residual"
)

// Relax lets a history flow downhill on a Euclidean action S in a relaxation time
// τ beside the times of the block,
//
//	φ_τ = −G  or  φ_ττ + γφ_τ = −G,  G = (1/hk)∂S/∂φ,
//
// at every free value. Soft conditions add their cost to S, hard linear ones keep
// the flow in their plane, and bounds stop what runs against them, as a membrane
// that comes to lie on an obstacle. That is the heat flow of an elliptic
// problem, and its minima are the histories at rest. Minimum finds them faster;
// a flow shows the way. G of an event at a free end, whose share of a cell is
// half, counts half.
//
// Explicit steps are those of Euler, φ ← φ − ΔτG, and with friction those of
// leapfrog. They are stable for ΔτΛ < 2 and Δτ√Λ < 2, Λ being the largest
// eigenvalue of ∂G/∂φ. A step above the limit by an estimate that Λ is not below, at
// the start, is refused with an *Unstable; the default step is safe by a bound
// that Λ is not above. Each explicit step moves the front of a disturbance by one
// link, of the longest that there are. Implicit steps are linearly implicit Euler steps,
//
//	(∂G/∂φ + 1/Δτ)δ = −G  or  (∂G/∂φ + γ/Δτ + 1/Δτ²)δ = −G + φ_τ/Δτ,
//
// of order 1, stable where the matrix is positive definite, which long steps on a
// hilltop are not: the status is Singular then. [Hairer & Wanner 2010, Solving
// Ordinary Differential Equations II, chapter IV.7]
//
// The flow ends when G is within the tolerance, with status Converged, or at
// Until, with status Stopped and no error. Other ends are a *NotConverged: the
// limit of steps, the context, an action that rises because the curvature has
// outgrown an explicit step, or is not finite. The push of a reaction is −∂S/∂φ(E).
func Relax(ctx context.Context, f Functional, held *constraint.Set, start *field.History, set *RelaxSettings) (*Relaxed, error) {
	if f = given(f); f != nil {
		if err := conservative(problemRelax, f); err != nil {
			return nil, err
		}
		if err := refuseLorentzian(problemRelax, f); err != nil {
			return nil, err
		}
	}
	c, err := set.with()
	if err != nil {
		return nil, err
	}
	m, err := newMinimum(problemRelax, f, held, start, c.settings())
	if err != nil {
		return nil, err
	}
	return relax(ctx, newActionDescent(m), c)
}

// RelaxResidual is Relax for the cost C = Σ hk r²/2q² of LeastResidual,
//
//	φ_τ = −G  or  φ_ττ + γφ_τ = −G,  G = (1/hk)∂C/∂φ = Jᵀr/q²,
//
// which has a way downhill for Lorentzian densities, losses and drives. Its
// implicit steps solve (JᵀJ/q² + 1/Δτ)δ = −G: those of Levenberg and Marquardt with
// the damping 1/Δτ, which is always definite. JᵀJ couples events two links apart, so
// that a front moves two links in each explicit step. The flow ends as
// LeastResidual does: at a small residual, or where the cost is flat. The push of a
// reaction is the multiplier ∂C/∂φ(E).
func RelaxResidual(ctx context.Context, s *action.Discrete, held *constraint.Set, start *field.History, set *RelaxSettings) (*Relaxed, error) {
	c, err := set.with()
	if err != nil {
		return nil, err
	}
	p, err := newProblem(problemRelaxResidual, given(s), held, start, c.settings())
	if err != nil {
		return nil, err
	}
	if p.bounds != nil {
		return nil, &Refusal{Problem: problemRelaxResidual, Why: "bounds; they belong to the flow of an action"}
	}
	p.unit = p.hk / (p.set.ResidualScale * p.set.ResidualScale)
	d, err := newResidualDescent(p, s)
	if err != nil {
		return nil, err
	}
	return relax(ctx, d, c)
}

// with returns the settings with their defaults, or an error.
func (s *RelaxSettings) with() (RelaxSettings, error) {
	var c RelaxSettings
	if s != nil {
		c = *s
	}
	for _, v := range []struct {
		name  string
		value float64
	}{{"friction", c.Friction}, {"step", c.Step}, {"end", c.Until}} {
		if !(v.value >= 0) || math.IsInf(v.value, 0) {
			return c, fmt.Errorf("minimize: %s %v of a relaxation; want a finite number ≥ 0 (0 for the default)", v.name, v.value)
		}
	}
	if c.Steps < 0 || c.Every < 0 {
		return c, fmt.Errorf("minimize: %d steps of a relaxation, a frame every %d; want numbers ≥ 0 (0 for the default)", c.Steps, c.Every)
	}
	if c.Steps == 0 {
		c.Steps = 100000
	}
	if c.Every == 0 {
		c.Every = 100
	}
	return c, nil
}

// settings returns those that a problem knows.
func (s *RelaxSettings) settings() *Settings {
	return &Settings{
		Tolerance: s.Tolerance, Flatness: s.Flatness, ResidualScale: s.ResidualScale, Lifted: s.Lifted,
		Memory: s.Memory, Work: s.Work,
	}
}
