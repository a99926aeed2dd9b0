package main

import (
	"context"
	"fmt"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/minimize"
)

// window is a piece of the flight that is evolved once more by itself and then
// found all at once.
type window struct {
	evolved, found *field.History
	report         minimize.Report
	distance       float64
}

const (
	windowSlices = 100
	windowSites  = 401
)

// solveWindow cuts the line around the fluxon at the moment when it enters the
// odd stretch. The cuts are free ends.
func (d delayLine) solveWindow(ctx context.Context, f *flight) (*window, error) {
	whole := f.system.Block()
	middle, _ := whole.Space.Nearest((oddFrom - 0.03) * d.length)
	sites := min(windowSites, whole.Sites())
	first := min(max(middle-sites/2, 0), whole.Sites()-sites)
	cut, err := whole.Window(0, windowSlices, first, first+sites)
	if err != nil {
		return nil, err
	}
	clock := cut.Time
	clock.From = f.enteringAt
	block, err := lattice.NewBlock(clock, cut.Space)
	if err != nil {
		return nil, err
	}
	s, err := action.New(block, d.density())
	if err != nil {
		return nil, err
	}
	start := field.State{Field: f.entering.Field.Part(first, first+sites), Rate: f.entering.Rate.Part(first, first+sites)}
	run, err := integrate.Evolve(ctx, s, start, integrate.Settings{})
	if err != nil {
		return nil, err
	}

	// The conditions are the first two slices; the start knows the first only,
	// and nothing may be marched.
	held := constraint.On(block)
	held.Slice(0, run.History.Slice(0))
	held.Slice(1, run.History.Slice(1))
	found, err := minimize.LeastResidual(ctx, s, held, field.Repeat(block, run.History.Slice(0)), &minimize.Settings{Strategy: minimize.BlockWide})
	if err != nil {
		return nil, fmt.Errorf("all at once: %w", err)
	}
	return &window{evolved: run.History, found: found.History, report: found.Report, distance: found.History.MaxDifference(run.History)}, nil
}
