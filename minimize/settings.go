package minimize

import (
	"fmt"
	"io"
	"math"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Method says how the linear systems of a minimum are dealt with.
type Method uint8

// The methods of Minimum.
const (
	Auto   Method = iota // Newton if the factor fits Memory and Work, else LBFGS
	Newton               // damped Newton with a Cholesky factorisation by nested dissection
	LBFGS                // limited-memory BFGS without a factorisation
)

// String returns the published name of the method.
func (m Method) String() string {
	if int(m) < 3 {
		return [...]string{"auto", "Newton", "L-BFGS"}[m]
	}
	return fmt.Sprintf("method(%d)", uint8(m))
}

// Settings of a solve. The zero value works; so does a nil pointer.
type Settings struct {
	// Tolerance is the largest |residual| per hk (least residual), or the
	// largest |∂S/∂φ|/hk over free events (minimum), at which the problem
	// counts as solved. 0 means 1e-10 of the largest term of the equation,
	// see Report.Scale.
	Tolerance float64

	// Flatness is the fraction of itself, before cancellation, to which the
	// gradient of the cost must cancel for an over-determined problem to count
	// as solved. 0 means 1e-8. Least residual only.
	Flatness float64

	// Iterations limits the number of trial steps. 0 means 200, and 20000 for
	// L-BFGS.
	Iterations int

	// Damping is the first λ, in units of the largest diagonal entry of the
	// matrix. 0 means 1e-6 for the least residual and no damping for the
	// minimum.
	Damping float64

	// ResidualScale is q in the cost Σ hk r²/2q². 0 means 1. Least residual
	// only.
	ResidualScale float64

	// Lifted lists pinned events whose field equation is left out: the pin is
	// then a driven source. What it drives with is −hk times the residual
	// there, which action.Discrete.Residual gives. Least residual only.
	Lifted []lattice.Event

	// Strategy says how the least residual comes near a solution; Window is the
	// number of new slices of a window (0 means 16), Nodes the number of slice
	// pairs from which shooting marches (0 means 1; more is multiple shooting).
	Strategy Strategy
	Window   int
	Nodes    int

	// Method, Memory (bytes) and Work (floating-point operations of one
	// factorisation) choose how Minimum solves. Memory and Work limit the
	// factor of the least residual, too. 0 means 4e9 bytes and 4e12 operations.
	Method Method
	Memory float64
	Work   float64

	// ZeroModes are directions in which Stationary and Saddle do not go: the
	// outcome differs from the start, adjusted to the conditions, by nothing that
	// overlaps with any of them, ∫ a (φ − φ_start) dx dt = 0. Their values at fixed
	// events do not matter.
	ZeroModes []*field.History

	// Shifts holds translations in the same way, their directions being the
	// slopes, along an axis, of the start history adjusted to the conditions.
	// Stationary and Saddle only.
	Shifts Shift

	// MinimumNorm accepts a stationary point with a singular second variation:
	// of a block with many answers the one nearest to the start, in the sense of
	// ∫ (φ − φ_start)² dx dt, counts as converged. Stationary only.
	MinimumNorm bool

	// Reference, if not nil, is a history on the block whose Morse index,
	// under the same conditions, Stationary and Saddle count as well. It need
	// neither be stationary nor satisfy the conditions.
	Reference *field.History

	// Progress, if not nil, gets one line for every trial step.
	Progress io.Writer

	// Watch, if not nil, is called after every trial step with the history that
	// the next one starts from: the frames of the relaxation. It must neither
	// change the history nor keep it.
	Watch func(Step, *field.History)

	// Trace keeps the steps in the report.
	Trace bool
}

// with returns the settings with their defaults, or an error that names a
// number that makes no sense.
func (s *Settings) with() (Settings, error) {
	var c Settings
	if s != nil {
		c = *s
	}
	for _, v := range []struct {
		name  string
		value float64
	}{
		{"tolerance", c.Tolerance}, {"flatness", c.Flatness}, {"damping", c.Damping},
		{"residual scale", c.ResidualScale}, {"memory", c.Memory}, {"work", c.Work},
	} {
		if !(v.value >= 0) || math.IsInf(v.value, 0) {
			return c, fmt.Errorf("minimize: %s %v in the settings; want a finite number ≥ 0 (0 for the default)", v.name, v.value)
		}
	}
	if c.Iterations < 0 {
		return c, fmt.Errorf("minimize: %d iterations in the settings; want a number ≥ 0 (0 for the default)", c.Iterations)
	}
	if c.Window < 0 || c.Nodes < 0 {
		return c, fmt.Errorf("minimize: windows of %d slices and %d nodes in the settings; want numbers ≥ 0 (0 for the default)", c.Window, c.Nodes)
	}
	if c.Strategy > Dragging {
		return c, fmt.Errorf("minimize: %v in the settings; want one from Fitting to Dragging", c.Strategy)
	}
	if c.Method > LBFGS {
		return c, fmt.Errorf("minimize: %v in the settings; want Auto, Newton or LBFGS", c.Method)
	}
	set := func(v *float64, unset float64) {
		if *v == 0 {
			*v = unset
		}
	}
	set(&c.Flatness, 1e-8)
	set(&c.ResidualScale, 1)
	set(&c.Memory, 4e9)
	set(&c.Work, 4e12)
	if c.Window == 0 {
		c.Window = 16
	}
	if c.Nodes == 0 {
		c.Nodes = 1
	}
	return c, nil
}
