package main

import (
	"context"
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/lattice/refine"
	"github.com/tenter-go/tenter/minimize"
)

// A bounce is one on a quarter of the plane, whose free sides x = 0 and t = 0 are
// the axes of symmetry. The rim is free as well, so that the field there tells
// whether it is far enough away.
type bounce struct {
	history *field.History // f
	report  minimize.Report
	rim     float64 // largest |f| there, over f at the centre
}

// density is that of W.
func (w *well) density() action.Wave {
	return action.Wave{Potential: action.Polynomial(w.shape), Signature: action.Euclidean}
}

// study finds the bounce on every level, the first from the lump, each next one
// from the level before.
func (w *well) study(ctx context.Context, coarsest lattice.Block, levels int, lump field.Lump) (*refine.Table, []*bounce, error) {
	profile, err := field.NewLump(lump)
	if err != nil {
		return nil, nil, err
	}
	var found []*bounce
	table, err := refine.Study{Block: coarsest, Levels: levels, Order: 2}.Run(ctx, func(ctx context.Context, b lattice.Block) ([]refine.Quantity, error) {
		start := profile.Over(b)
		if len(found) > 0 {
			var err error
			if start, err = found[len(found)-1].history.Resample(b, field.Cubic); err != nil {
				return nil, err
			}
		}
		n, err := w.solve(ctx, start)
		if err != nil {
			return nil, err
		}
		found = append(found, n)
		a2 := w.reach * w.reach
		return []refine.Quantity{
			{Name: "bounce_action", Value: 4 * a2 * n.report.CostAfter},
			{Name: "core_value", Value: w.field(n.history.At(0, 0, 0))},
			{Name: "virial", Value: 4 * a2 * w.energy(n.history)},
			{Name: "anisotropy", Value: math.Abs(w.reach) * n.anisotropy()},
		}, nil
	})
	return table, found, err
}

func (w *well) solve(ctx context.Context, start *field.History) (*bounce, error) {
	s, err := action.New(start.Block, w.density())
	if err != nil {
		return nil, err
	}
	found, err := minimize.Saddle(ctx, s, nil, start, &minimize.Settings{Iterations: 40})
	if err != nil {
		return nil, err
	}
	n := &bounce{history: found.History, report: found.Report}
	core, last := n.history.At(0, 0, 0), start.Block.Sites()-1
	for i := range start.Block.Sites() {
		n.rim = max(n.rim, math.Abs(n.history.At(last, 0, i)/core), math.Abs(n.history.At(i, 0, last)/core))
	}
	switch {
	case !(core > 1):
		return nil, fmt.Errorf("the saddle has φ = %g in the middle, before the turning point %g; want a finer -spacing", w.field(core), w.field(1))
	case n.rim > 1e-3:
		return nil, fmt.Errorf("at the rim φ − φ_false is still %.2g of what it is in the middle; want at most 0.001: a larger -box", n.rim)
	}
	return n, nil
}

// energy is ∫W over the quarter.
func (w *well) energy(h *field.History) (sum float64) {
	b := h.Block
	for n := range b.Slices() {
		for i, f := range h.Slice(n).Component(0) {
			sum += b.Time.Weight(n) * b.Space.Weight(i) * w.shape.at(f)
		}
	}
	return sum * b.Time.Step * b.Space.Step
}

// anisotropy is the largest difference between the field along the axis and along
// the diagonal at the same distance from the centre, as far as the square rim is not
// felt.
func (n *bounce) anisotropy() (largest float64) {
	r, diagonal := n.diagonal()
	line := n.history.Block.Space
	line.Step, line.Sites = r[1], len(r)
	axis, err := n.history.Slice(0).Resample(n.history.Block.Space, line, field.Cubic)
	if err != nil {
		return math.NaN()
	}
	for i, f := range axis.Component(0) {
		if r[i] > n.history.Block.Space.To()-leastTail {
			break
		}
		largest = max(largest, math.Abs(f-diagonal[i]))
	}
	return largest
}

// diagonal returns the field along the diagonal as far as the axis goes.
func (n *bounce) diagonal() (r, f []float64) {
	space := n.history.Block.Space
	for i := range space.Sites {
		if d := math.Sqrt2 * space.At(i); d <= space.To() {
			r, f = append(r, d), append(f, n.history.At(i, 0, i))
		}
	}
	return r, f
}

// whole mirrors the quarter into the whole plane.
func (n *bounce) whole() *field.History {
	axis := n.history.Block.Space
	links := axis.Links()
	axis.From, axis.Sites = -axis.To(), 2*links+1
	h := field.NewHistory(lattice.Block{Time: axis, Space: axis}, 1)
	for e := range h.Data {
		t, _, x := h.Place(e)
		h.Data[e] = n.history.At(max(t-links, links-t), 0, max(x-links, links-x))
	}
	return h
}

// index counts the negative modes of the bounce on the whole plane, both translations
// held.
func (w *well) index(ctx context.Context, n *bounce) (*minimize.Found, error) {
	whole := n.whole()
	s, err := action.New(whole.Block, w.density())
	if err != nil {
		return nil, err
	}
	return minimize.Saddle(ctx, s, nil, whole, &minimize.Settings{Shifts: minimize.InTime | minimize.InSpace})
}
