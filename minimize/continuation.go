package minimize

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"time"

	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A Family is one problem for each value p of a parameter: the functional and the
// conditions on it. Either may depend on p, the steps of the block as well, but
// not the number of its events or which of them are free. nil conditions hold
// nothing. It is asked for values a little beside those of the branch, too, and up
// to a step beyond its end. Linear conditions and bounds are refused.
type Family func(p float64) (Functional, *constraint.Set, error)

// ContinuationSettings of Continue. The zero value works; so does a nil pointer.
//
// Steps are lengths of arc. The arc of a change δx of the N unknowns and δp of
// the parameter is √(Σδx²/N + (δp/Scale)²), which depends on the mean square of the
// change and not on the lattice.
type ContinuationSettings struct {
	// Step is the first step. It grows and shrinks between Shortest and Longest
	// with the number of Newton steps that a correction takes. 0 means 0.1,
	// Step/1e6 and 20 Step.
	Step, Shortest, Longest float64

	Scale    float64 // unit of the parameter in the arc. 0 means 1.
	Backward bool    // towards smaller parameters at first

	// Along, if not nil, is the direction in which the branch leaves the start,
	// at constant parameter at first. At a branch point that is Point.Null. Only
	// the free values count.
	Along *field.History

	// At asks for points at these values of the parameter, each time that the
	// branch passes one. Low and High end the branch where the parameter leaves
	// the interval between them; both 0 means no limit.
	At        []float64
	Low, High float64

	Points int  // limit of the number of steps. 0 means 200.
	Lean   bool // keep the histories of special points only

	// Derivative, if not nil, writes ∂²S/∂φ∂p at every event. The conditions
	// must not depend on p then. nil means a central difference.
	Derivative func(dst, h *field.History, p float64)

	Tolerance float64 // largest |∂S/∂φ|/hk of a point. 0 means 1e-10 of the largest term of the equation that was met.

	Memory, Work float64 // limits of a factorisation, as in Settings

	Progress io.Writer                   // gets one line for each point
	Watch    func(Point, *field.History) // sees each point; it must not keep the history
	Stop     func(Point) bool            // ends the branch after a point
}

// PointKind says why a point of a branch stands there.
type PointKind uint8

// The kinds of points.
const (
	Passing   PointKind = iota // where a step ended
	Asked                      // at a parameter that was asked for or the branch ends at
	Fold                       // the parameter turns round
	Branching                  // the index changes and the parameter does not turn: branches cross
)

// String returns the kind in lower case.
func (k PointKind) String() string {
	if int(k) < 4 {
		return [...]string{"passing", "asked", "fold", "branching"}[k]
	}
	return fmt.Sprintf("point(%d)", uint8(k))
}

// A Point is a stationary history on a branch.
type Point struct {
	Kind      PointKind
	Parameter float64
	Arc       float64        // length of arc from the start
	Slope     float64        // d(parameter)/d(arc); changes sign at a fold
	Action    float64        // S, and the cost of soft conditions
	Gradient  Norm           // of ∂S/∂φ/hk over the free events
	History   *field.History // nil for passing points if the settings are Lean

	// Index is the number of negative eigenvalues of the second variation on
	// the free values. It is unknown if one of them vanishes, as at folds and
	// branch points, where Null is the eigenvector, of largest value 1.
	Index int
	Known bool
	Null  *field.History

	Newton int // Newton steps of the correction
}

// String returns the point in one line.
func (p Point) String() string {
	index := "unknown"
	if p.Known {
		index = fmt.Sprint(p.Index)
	}
	return fmt.Sprintf("%-9v parameter %.10g, arc %.4g, action %.10g, index %s, gradient %.2g", p.Kind, p.Parameter, p.Arc, p.Action, index, p.Gradient.Max)
}

// A Branch is a curve of stationary histories, in the order of its arc.
type Branch struct {
	Points []Point
	Report BranchReport
}

// Of returns the points of one kind.
func (b *Branch) Of(k PointKind) []Point {
	var list []Point
	for _, p := range b.Points {
		if p.Kind == k {
			list = append(list, p)
		}
	}
	return list
}

// A BranchReport says what was done along a branch and why it ended.
type BranchReport struct {
	Status         Status
	Reason         string
	Unknowns       int
	Steps          int // accepted
	Rejected       int // tried again with half the step
	Newton         int // Newton steps of all corrections
	Factorisations int
	Step           float64 // last
	Wall           time.Duration
}

// String returns the report in two lines.
func (r BranchReport) String() string {
	return fmt.Sprintf("continuation: %v (%s)\n  work      %d unknowns, %d steps, %d rejected, %d Newton steps, %d factorisations, %.3g s",
		r.Status, r.Reason, r.Unknowns, r.Steps, r.Rejected, r.Newton, r.Factorisations, r.Wall.Seconds())
}

// A BrokenBranch is the error of a branch that could not be followed to its end.
// What was followed is in Branch, which Continue returns as well.
type BrokenBranch struct {
	Branch    *Branch
	Parameter float64 // of the last point
	Cause     error
}

func (e *BrokenBranch) Error() string {
	r := e.Branch.Report
	return fmt.Sprintf("minimize: continuation %v after %d steps at parameter %.8g: %s", r.Status, r.Steps, e.Parameter, r.Reason)
}

// Unwrap returns the cause.
func (e *BrokenBranch) Unwrap() error { return e.Cause }

const problemContinuation = "continuation"

// Continue follows a branch of stationary histories, ∂S/∂φ = 0 at every free
// value, of either signature, from the parameter p.
//
// The start is corrected at constant p, unless Along is given and it is good
// already. Then each step predicts along the tangent of the branch and corrects
// within the plane normal to it, with the parameter among the unknowns, by
// Newton's method: pseudo-arclength steps, which go around folds. The matrix is
// that of the second variation with a border, which is regular at a fold. Where
// the parameter's part of the tangent changes sign a fold is located, where the
// index changes without one a branch point; if the index is not known the sign of
// the bordered determinant tells. [Keller 1977, in Applications of Bifurcation
// Theory, 359; Seydel 2010, Practical Bifurcation and Stability Analysis, chapters
// 4, 5]
//
// A branch point that the index passes unchanged, one eigenvalue rising and
// another falling between two points, is not seen; shorter steps tell them apart.
//
// The branch ends, without an error, at Low or High, when Stop says so, or after
// Points steps; the report says which. Otherwise the error is a *BrokenBranch:
// the context ended, or the step became shorter than Shortest.
func Continue(ctx context.Context, family Family, p float64, start *field.History, set *ContinuationSettings) (*Branch, error) {
	c, err := newContinuation(family, p, start, set)
	if err != nil {
		return nil, err
	}
	here, err := c.begin(ctx, p)
	if here == nil {
		return c.end(Stalled, fmt.Sprintf("the start could not be corrected: %v", err), err)
	}
	if done, reason := c.record(here); done {
		return c.end(Converged, reason, nil)
	}
	step := c.set.Step
	for {
		if ctx.Err() != nil {
			return c.end(Stopped, context.Cause(ctx).Error(), context.Cause(ctx))
		}
		if c.rep.Steps == c.set.Points {
			return c.end(Converged, fmt.Sprintf("limit of %d steps reached", c.set.Points), nil)
		}
		c.rep.Step = step
		next, err := c.advance(ctx, here, step)
		var between []*curvePoint
		if err == nil {
			between, err = c.between(ctx, here, next, step)
		}
		if ctx.Err() != nil {
			continue
		}
		if err != nil {
			c.rep.Rejected++
			if step *= 0.5; step < c.set.Shortest {
				return c.end(Stalled, fmt.Sprintf("the step became shorter than %.3g: %v", c.set.Shortest, err), err)
			}
			continue
		}
		c.rep.Steps++
		for _, q := range between {
			if done, reason := c.record(q); done {
				return c.end(Converged, reason, nil)
			}
		}
		if done, reason := c.record(next); done {
			return c.end(Converged, reason, nil)
		}
		switch {
		case next.Newton <= 3:
			step = min(1.5*step, c.set.Longest)
		case next.Newton >= 6:
			step = max(0.7*step, c.set.Shortest)
		}
		here = next
	}
}

// with returns the settings with their defaults, or an error.
func (s *ContinuationSettings) with() (ContinuationSettings, error) {
	var c ContinuationSettings
	if s != nil {
		c = *s
	}
	for _, v := range []struct {
		name  string
		value float64
	}{{"step", c.Step}, {"shortest step", c.Shortest}, {"longest step", c.Longest}, {"scale", c.Scale}} {
		if !(v.value >= 0) || math.IsInf(v.value, 0) {
			return c, fmt.Errorf("minimize: %s %v of a continuation; want a finite number ≥ 0 (0 for the default)", v.name, v.value)
		}
	}
	unset := func(v *float64, to float64) {
		if *v == 0 {
			*v = to
		}
	}
	unset(&c.Step, 0.1)
	unset(&c.Shortest, 1e-6*c.Step)
	unset(&c.Longest, 20*c.Step)
	unset(&c.Scale, 1)
	if c.Shortest > c.Step || c.Step > c.Longest {
		return c, fmt.Errorf("minimize: continuation with the steps %g ≤ %g ≤ %g; want them in this order", c.Shortest, c.Step, c.Longest)
	}
	if c.Low == 0 && c.High == 0 {
		c.Low, c.High = math.Inf(-1), math.Inf(1)
	}
	if !(c.Low < c.High) {
		return c, fmt.Errorf("minimize: continuation between the parameters %v and %v; want the lower one first", c.Low, c.High)
	}
	if c.Points < 0 {
		return c, fmt.Errorf("minimize: %d points of a continuation; want a number ≥ 0 (0 for the default)", c.Points)
	}
	if c.Points == 0 {
		c.Points = 200
	}
	return c, nil
}

// record adds a point to the branch and reports whether it is the last.
func (c *continuation) record(q *curvePoint) (done bool, reason string) {
	p := q.Point
	if c.set.Progress != nil {
		fmt.Fprintln(c.set.Progress, p)
	}
	if c.set.Watch != nil {
		c.set.Watch(p, q.History)
	}
	if c.set.Lean && p.Kind == Passing && len(c.branch.Points) > 0 {
		p.History = nil
	}
	c.branch.Points = append(c.branch.Points, p)
	c.last = p.Parameter
	switch {
	case c.set.Stop != nil && c.set.Stop(p):
		return true, "told to stop"
	case p.Kind == Asked && (p.Parameter == c.set.Low || p.Parameter == c.set.High):
		return true, fmt.Sprintf("parameter %g reached", p.Parameter)
	}
	return false, ""
}

// end completes the report. The error is nil only for Converged.
func (c *continuation) end(status Status, reason string, cause error) (*Branch, error) {
	c.rep.Status, c.rep.Reason, c.rep.Wall = status, reason, time.Since(c.began)
	c.branch.Report = c.rep
	if status == Converged {
		return c.branch, nil
	}
	return c.branch, &BrokenBranch{Branch: c.branch, Parameter: c.last, Cause: cause}
}

// begin corrects the start at constant parameter and finds the tangent there.
func (c *continuation) begin(ctx context.Context, p float64) (*curvePoint, error) {
	x := c.first.free.Gather(nil, c.first.h)
	direction := c.forward()
	if c.set.Along == nil {
		return c.settle(ctx, x, p, direction)
	}
	along := make([]float64, len(x))
	for k, e := range c.first.leads {
		along[k] = c.set.Along.Data[e]
	}
	size := c.size(along, 0)
	if !(size > 0) || math.IsInf(size, 0) {
		return nil, fmt.Errorf("direction of length %v; want one that changes a free value", size)
	}
	for k := range along {
		along[k] /= size
	}
	q, err := c.look(x, p)
	if err != nil {
		return nil, err
	}
	if !(q.Gradient.Max <= q.tolerance) {
		if q, err = c.settle(ctx, x, p, direction); err != nil {
			return nil, err
		}
	}
	q.tangent, q.slope = along, 0
	q.Slope = 0
	return q, nil
}

var errFar = errors.New("the branch turns too sharply for the step")

// sameBlock reports whether two blocks have the same events and ends.
func sameBlock(a, b lattice.Block) bool {
	return a.Slices() == b.Slices() && a.Sites() == b.Sites() && a.Time.Periodic == b.Time.Periodic && a.Space.Periodic == b.Space.Periodic
}
