package minimize

import (
	"fmt"
	"math"
	"slices"
	"time"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/internal/nested"
	"github.com/tenter-go/tenter/lattice"
)

// A problem is what every solve starts from: the action, what is free, and the
// best history so far.
type problem struct {
	f      Functional
	free   *constraint.Unknowns
	hard   *linear // nil without hard linear conditions
	bounds *bounds // nil without bounds
	set    Settings
	hk     float64
	unit   float64        // of the matrix that is factorised: 1, or hk/q² for the least residual
	h      *field.History // best history so far; satisfies the conditions
	trial  *field.History
	began  time.Time
	rep    Report
}

// newProblem checks what a caller hands to a solver called name and adjusts the
// start history to the conditions.
func newProblem(name string, f Functional, held *constraint.Set, start *field.History, set *Settings) (*problem, error) {
	if f == nil {
		return nil, fmt.Errorf("minimize: %s of no action; want one from action.New", name)
	}
	if start == nil {
		return nil, fmt.Errorf("minimize: %s without a start history; want one such as field.Repeat of the first slice", name)
	}
	if err := f.Fits(start); err != nil {
		return nil, fmt.Errorf("minimize: start history: %w", err)
	}
	b := f.Block()
	if held == nil {
		held = constraint.On(b)
	}
	if err := held.Err(); err != nil {
		return nil, fmt.Errorf("minimize: conditions: %w", err)
	}
	if g := held.Block(); !sameAxis(b.Time, g.Time) || !sameAxis(b.Space, g.Space) {
		return nil, fmt.Errorf("minimize: conditions on a block of %s; the action is on %s", describe(g), describe(b))
	}
	c, err := set.with()
	if err != nil {
		return nil, err
	}
	h := start.Clone()
	h.Block = b
	free, err := held.Free(h)
	if err != nil {
		return nil, fmt.Errorf("minimize: conditions: %w", err)
	}
	if free.N == 0 {
		return nil, fmt.Errorf("minimize: %s with all %d values held and none free; remove a condition", name, free.Values())
	}
	p := &problem{f: f, free: free, set: c, hk: b.Time.Step * b.Space.Step, unit: 1, h: h, began: time.Now()}
	if err := p.adjust(); err != nil {
		return nil, err
	}
	p.trial = h.Clone()
	if t := free.Tally(); t.Terms+t.Soft > 0 {
		p.f = &softened{Functional: f, free: free}
	}
	p.rep = Report{Problem: name, Unknowns: free.N, Fixed: free.Fixed(), Redundant: free.Redundant}
	return p, nil
}

// adjust moves the start history to the conditions: pins, then bounds, then hard
// linear conditions at the least distance.
func (p *problem) adjust() (err error) {
	if p.hard, err = newLinear(p.free.HardRows()); err != nil {
		return err
	}
	p.bounds = newBounds(p.free.Bounds())
	x := p.free.Gather(nil, p.h)
	const most = 100 // alternating projections
	for range most {
		p.free.Clamp(x)
		if p.hard == nil {
			break
		}
		p.hard.project(x)
		if p.bounds == nil {
			break
		}
	}
	if p.bounds != nil && p.free.Clamp(x) > 0 && p.hard != nil {
		for _, row := range p.hard.rows {
			if miss := row.Miss(x); math.Abs(miss) > 1e-9*(1+math.Abs(row.Value)) {
				return fmt.Errorf("minimize: %s at %v misses %g by %.3g within the bounds; want looser bounds or a start that meets both", row.Name, row.Event, row.Value, miss)
			}
		}
	}
	p.free.Scatter(p.h, x)
	return nil
}

func sameAxis(a, b lattice.Axis) bool {
	return a.From == b.From && a.Step == b.Step && a.Sites == b.Sites && a.Left == b.Left && a.Right == b.Right &&
		a.Periodic == b.Periodic && slices.Equal(a.Jump, b.Jump)
}

func describe(b lattice.Block) string {
	axis := func(a lattice.Axis) string {
		ends := fmt.Sprintf("%v to %v", a.Left, a.Right)
		if a.Periodic {
			ends = "periodic"
		}
		return fmt.Sprintf("%d from %g by %g (%s)", a.Sites, a.From, a.Step, ends)
	}
	return "slices " + axis(b.Time) + " × sites " + axis(b.Space)
}

// grid puts the unknowns on the grid of slices and sites.
func (p *problem) grid() *nested.Pattern {
	b := p.f.Block()
	g := &nested.Pattern{
		N: p.free.N, Row: make([]int32, p.free.N), Col: make([]int32, p.free.N),
		Rows: b.Slices(), Cols: b.Sites(), WrapRow: b.Time.Periodic, WrapCol: b.Space.Periodic,
	}
	for k := range g.N {
		n, _, i, _ := p.free.Event(p.free.Lead(k))
		g.Row[k], g.Col[k] = int32(n), int32(i)
	}
	return g
}

// move writes h + δ to the trial history.
func (p *problem) move(delta []float64) {
	p.free.Expand(p.trial, delta)
	for e, v := range p.h.Data {
		p.trial.Data[e] += v
	}
}

// keep makes the trial the best history.
func (p *problem) keep() { p.h, p.trial = p.trial, p.h }

// step reports a trial step to whoever listens.
func (p *problem) step(s Step) {
	p.rep.Iterations++
	if s.Accepted {
		p.rep.Accepted++
	}
	s.Iteration = p.rep.Iterations
	s.Elapsed = time.Since(p.began)
	if p.set.Trace {
		p.rep.Trace = append(p.rep.Trace, s)
	}
	if p.set.Progress != nil {
		fmt.Fprintln(p.set.Progress, s)
	}
	if p.set.Watch != nil {
		p.set.Watch(s, p.h)
	}
}

// end completes the report. The error is nil only for Converged.
func (p *problem) end(status Status, reason string, cause error, push *field.History, by constraint.Multipliers) (*Found, error) {
	p.rep.Status, p.rep.Reason = status, reason
	p.rep.Wall = p.since()
	found := &Found{History: p.h, Report: p.rep, Reactions: p.free.ReactionsWith(p.h, push, by), Misfits: p.free.Misfits(p.h)}
	if status == Converged {
		return found, nil
	}
	return found, &NotConverged{Found: found, Cause: cause}
}

// since returns the time since the solve began.
func (p *problem) since() time.Duration { return time.Since(p.began) }

// norm returns the size of values[e] over the given events.
func (p *problem) norm(values []float64, rows []int32) Norm {
	var sum float64
	var n Norm
	worst := -1
	for _, e := range rows {
		v := values[e]
		sum += v * v
		if a := math.Abs(v); worst < 0 || a > n.Max || math.IsNaN(a) {
			n.Max, worst = a, int(e)
			if math.IsNaN(a) {
				break
			}
		}
	}
	if worst >= 0 {
		_, _, _, n.At = p.free.Event(worst)
		n.RMS = math.Sqrt(sum / float64(len(rows)))
	}
	return n
}

// scale returns the largest single term of the equation over the given rows of
// a matrix m of second derivatives at the history h, r being the equation's
// left-hand side there: the tensions m_ef(φ_f − φ_e) of links, and what r has
// besides them, force and source. Rows whose links go around a periodic axis are
// left out, unless there are no others.
func (p *problem) scale(m *action.Matrix, r []float64, rows []int32) float64 {
	b := p.f.Block()
	size := p.h.Components * b.Sites()
	var inside, around float64 // rows whose links stay inside, and the others
	for _, e := range rows {
		_, _, i, _ := p.free.Event(int(e))
		columns, values := m.Row(int(e))
		rest, most, wraps := r[e], 0.0, false
		for k, f := range columns {
			wraps = wraps || 2*abs(f%b.Sites()-i) > b.Sites() || 2*abs(f/size-int(e)/size) > b.Slices()
			term := values[k] * (p.h.Data[f] - p.h.Data[e])
			rest -= term
			most = max(most, math.Abs(term))
		}
		if wraps {
			around = max(around, most, math.Abs(rest))
		} else {
			inside = max(inside, most, math.Abs(rest))
		}
	}
	if inside > 0 {
		return inside
	}
	return around
}

func abs(n int) int { return max(n, -n) }
