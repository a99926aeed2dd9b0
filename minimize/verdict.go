package minimize

import (
	"context"
	"fmt"
	"math"
	"strings"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A Verdict says which conditions of an over-determined least residual the field
// equation cannot meet together, and what each would have to give.
type Verdict struct {
	Cost   float64 // of the history that was found
	Excess int     // equations and hard linear conditions above unknowns
	Met    bool    // the residual is within the tolerance: nothing needs relaxing

	// Reliefs has every pinned condition that pushes, by at least a millionth of
	// the largest push, the one that saves most first. Of those that save as much,
	// within Alike, the one with the fewest values comes first, and then the one
	// that moves least. Empty if Met.
	Reliefs []Relief

	// Tied is how many of the first reliefs save as much with equally few values:
	// there is no reason but the moves, and what one knows of the data, to prefer
	// one of them.
	Tied int
}

// A Relief is what comes of giving up one condition and keeping all others.
type Relief struct {
	Kind   string        // of the condition, as its reactions have it
	Event  lattice.Event // its first value
	Values int           // how many values it holds
	Push   float64       // its largest |∂cost/∂φ|

	// Saving is by how much the least cost would go down, ½λᵀS⁻¹λ, with λ the
	// multipliers of the values and S their derivatives by the values, but no more
	// than Cost. It is exact for a linear equation. Where the solution for S⁻¹λ was cut short it is
	// a lower bound, and Partial is set. With noise of the strength q in the
	// equation, √(2 Saving) is how many standard deviations a single value is off
	// what all other conditions tell of it.
	Saving  float64
	Partial bool

	// Move is the largest change of a value of the condition when it is given
	// up, and At where; of all moves that save as much, the least.
	Move float64
	At   lattice.Event

	// Confirmed is by how much the history of another solve without the condition
	// costs less. Unless Settled that solve did not converge, and there may be
	// one that costs less still. It is NaN for conditions further down, and for
	// ends without an equation and lifted rows, which cannot be given up.
	Confirmed float64
	Settled   bool

	group *group
}

// Relaxing is the settings of a verdict. The zero value works; so does a nil
// pointer.
type Relaxing struct {
	// Apart takes every pinned event as a condition of its own. Otherwise a slice
	// is one condition, and so are the parts of a slice, an end, and an event.
	Apart bool

	// Confirm is how many of the first reliefs are confirmed by another solve. 0
	// means 3, a negative number none.
	Confirm int

	// Alike is by which fraction of the cost a saving may be below the largest and
	// still count as equal to it. 0 means 0.01.
	Alike float64
}

// Verdict finds what each pinned condition of a least residual would save if it
// alone were given up: a slice, the parts of a slice, an end, or an event. λ and
// S come from the factor at hand; S⁻¹λ from conjugate gradients, which for m
// equations above the number of unknowns take m steps or fewer, each a solve. The
// first few are confirmed by solving again without the condition.
//
// In an over-determined problem it is seldom one condition alone that is wrong:
// with m equations too many any condition that tells on the residual can give
// way and lower the cost, and the whole of a slice can nearly always. Hence the
// number of values and the moves, which come with the saving.
//
// Observations and other soft conditions yield by themselves; what they are
// overruled by is in Found.Misfits. Linear conditions are kept.
//
// The error is a *Refusal for a minimum, whose conditions cost nothing that one
// could do without. A context that ends is returned with the reliefs so far.
func (q *Response) Verdict(ctx context.Context, how *Relaxing) (*Verdict, error) {
	if q.k.jac == nil {
		return nil, &Refusal{Problem: "verdict on the conditions of a " + q.found.Report.Problem, Why: "its equations are as many as its unknowns; want a least residual"}
	}
	if how == nil {
		how = new(Relaxing)
	}
	alike := how.Alike
	if !(alike >= 0) {
		return nil, fmt.Errorf("minimize: savings that are alike to %v of the cost; want a number ≥ 0 (0 for the default)", alike)
	}
	if alike == 0 {
		alike = 0.01
	}
	confirm := how.Confirm
	if confirm == 0 {
		confirm = 3
	}
	r := q.found.Report
	v := &Verdict{Cost: r.CostAfter, Excess: len(q.k.rows) + len(q.p.free.HardRows()) - q.p.free.N, Met: r.After.Max <= r.Tolerance}
	if v.Met {
		return v, nil
	}
	for _, g := range q.groups(how.Apart) {
		if ctx.Err() != nil {
			v.rank(alike)
			return v, context.Cause(ctx)
		}
		if r := q.relieve(g); r.Saving > 0 {
			r.Saving = min(r.Saving, v.Cost)
			v.Reliefs = append(v.Reliefs, r)
		}
	}
	v.rank(alike)
	for i := range min(confirm, len(v.Reliefs)) {
		if err := q.confirm(ctx, &v.Reliefs[i]); err != nil {
			return v, err
		}
	}
	v.rank(alike)
	return v, nil
}

// relieve finds the saving of one condition by conjugate gradients on Sy = −λ.
func (q *Response) relieve(g *group) Relief {
	relief := Relief{Kind: g.kind, Event: g.values[0].at, Values: len(g.values), Confirmed: math.NaN(), group: g}
	n := len(g.values)
	y, rest, along := make([]float64, n), make([]float64, n), make([]float64, n)
	var square float64
	for i, v := range g.values {
		relief.Push = max(relief.Push, math.Abs(v.push))
		rest[i], along[i] = -v.push, -v.push
		square += v.push * v.push
	}
	const (
		most     = 200
		enough   = 1e-9  // of the saving, by which a step must still raise it
		rounding = 1e-13 // of the stiffness of a value that moves alone
	)
	relief.Partial = n > most
	for range min(most, n) {
		image := q.stiffness(g, along)
		var curvature float64
		for i, a := range along {
			curvature += a * image[i]
		}
		if !(curvature > rounding*square*q.k.largest) {
			relief.Partial = false // what is left is noise
			break
		}
		step := square / curvature
		gain := 0.5 * step * square
		relief.Saving += gain
		var next float64
		for i, a := range along {
			y[i] += step * a
			rest[i] -= step * image[i]
			next += rest[i] * rest[i]
		}
		if n == 1 || gain <= enough*relief.Saving || next == 0 {
			relief.Partial = false
			break
		}
		for i, r := range rest {
			along[i] = r + next/square*along[i]
		}
		square = next
	}
	g.move = y
	for i, v := range y {
		if math.Abs(v) >= math.Abs(relief.Move) {
			relief.Move, relief.At = v, g.values[i].at
		}
	}
	return relief
}

// stiffness returns how the multipliers of a group change when its values move by
// y and the rest of the history follows.
func (q *Response) stiffness(g *group, y []float64) []float64 {
	l := g.load(y)
	gradient := q.k.gradient(l, q.k.solve([]load{l})[0])
	change := make([]float64, len(y))
	for i, v := range g.values {
		for _, m := range v.joined {
			change[i] += gradient[m]
		}
	}
	return change
}

// confirm solves again without a condition, from the history that the linear
// response predicts.
func (q *Response) confirm(ctx context.Context, r *Relief) error {
	g := r.group
	if g.fixed {
		return nil
	}
	start := field.NewHistory(q.p.h.Block, q.p.h.Components)
	for e, d := range q.k.solve([]load{g.load(g.move)})[0].moved.Data {
		start.Data[e] = q.p.h.Data[e] + d
	}
	set := q.p.set
	set.Progress, set.Watch, set.Trace = nil, nil, false
	if set.Iterations == 0 {
		set.Iterations = 40 // it starts near by
	}
	found, err := LeastResidual(ctx, q.s, q.held.Without(g.holds), start, &set)
	switch {
	case ctx.Err() != nil:
		return context.Cause(ctx)
	case found != nil:
		r.Confirmed, r.Settled = q.found.Report.CostAfter-found.Report.CostAfter, err == nil
	default:
		return fmt.Errorf("minimize: verdict, without the %s at %v: %w", r.Kind, r.Event, err)
	}
	return nil
}

// String returns the verdict as a table for a terminal, the first ten reliefs.
func (v *Verdict) String() string {
	var b strings.Builder
	fmt.Fprintf(&b, "verdict: %d equations above the unknowns, cost %.6g; ", v.Excess, v.Cost)
	switch {
	case v.Met:
		b.WriteString("the equation meets all conditions, nothing needs relaxing")
		return b.String()
	case len(v.Reliefs) == 0:
		b.WriteString("no pinned condition pushes")
		return b.String()
	case v.Tied > 1:
		fmt.Fprintf(&b, "a tie: giving up any of the first %d saves as much", v.Tied)
	default:
		fmt.Fprintf(&b, "the cheapest to give up is the %s at %s", v.Reliefs[0].Kind, place(v.Reliefs[0].Event))
	}
	const most = 10
	for i, r := range v.Reliefs {
		if i == most {
			fmt.Fprintf(&b, "\n  and %d more", len(v.Reliefs)-most)
			break
		}
		fmt.Fprintf(&b, "\n  %v", r)
	}
	return b.String()
}

// String returns the relief in one line.
func (r Relief) String() string {
	bound, confirmed := "", ""
	if r.Partial {
		bound = "at least "
	}
	if !math.IsNaN(r.Confirmed) {
		confirmed = fmt.Sprintf(" (%.6g confirmed)", r.Confirmed)
		if !r.Settled {
			confirmed = fmt.Sprintf(" (at least %.6g confirmed)", r.Confirmed)
		}
	}
	values := "1 value"
	if r.Values > 1 {
		values = fmt.Sprintf("%d values", r.Values)
	}
	return fmt.Sprintf("%s at %s, %s: saves %s%.6g%s, moves by up to %.4g at %s",
		r.Kind, place(r.Event), values, bound, r.Saving, confirmed, r.Move, place(r.At))
}

// place returns an event without the last digits of its coordinates.
func place(e lattice.Event) string { return fmt.Sprintf("(x, t) = (%.6g, %.6g)", e.X, e.T) }
