package main

import (
	"context"
	"fmt"
	"math"

	"github.com/tenter-go/tenter/integrate/sweep"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/lattice/refine"
)

// critical is the search for the upper edge of the speeds at which the pair
// meets a second time before the watch time.
type critical struct {
	*pair
	watch float64
	tell  func(format string, args ...any)

	found []float64 // on the lattices so far
}

// resolution is how far the edge is narrowed down on each lattice. What finer
// lattices change is some thousand times as much.
const resolution = 1e-9

// study searches on three lattices, both steps halved each time. Yoshida's method
// is of order 4, and the links of order 6 are far ahead of it.
func (s *critical) study(ctx context.Context, spacing, step float64) (*refine.Table, error) {
	if !(s.watch > 3*s.separation) {
		return nil, fmt.Errorf("-watch %g; want more than %g, three times the half separation, so that slow pairs can meet", s.watch, 3*s.separation)
	}
	steps := max(1, int(math.Ceil(s.watch/step)))
	block, err := lattice.NewBlock(
		lattice.Axis{Step: s.watch / float64(steps), Sites: steps + 1},
		lattice.Axis{Step: spacing, Sites: int(0.5*s.watch/spacing) + 2, Left: lattice.Even},
	)
	if err != nil {
		return nil, err
	}
	return refine.Study{Block: block, Order: 4}.Run(ctx, func(ctx context.Context, b lattice.Block) ([]refine.Quantity, error) {
		v, err := s.edge(ctx, b)
		s.found = append(s.found, v)
		return []refine.Quantity{{Name: "critical_speed", Value: v, Unit: "c"}}, err
	})
}

// edge narrows the critical speed down on a lattice, by thirds: the runs at the
// two points between go in parallel.
func (s *critical) edge(ctx context.Context, b lattice.Block) (float64, error) {
	lo, hi, err := s.bracket(ctx, b)
	if err != nil {
		return 0, err
	}
	runs := 0
	for hi-lo > resolution {
		inner := [2]float64{lo + (hi-lo)/3, hi - (hi-lo)/3}
		again, err := s.meetAgain(ctx, b, inner[:]...)
		if err != nil {
			return 0, err
		}
		switch runs += 2; {
		case again[1]:
			lo = inner[1]
		case again[0]:
			lo, hi = inner[0], inner[1]
		default:
			hi = inner[0]
		}
	}
	v := 0.5 * (lo + hi)
	s.tell("h = %g, k = %g: %.9f after %d runs\n", b.Space.Step, b.Time.Step, v, runs)
	return v, nil
}

// bracket returns speeds below and above the edge: far apart on the first
// lattice, on the others from what those before have found.
func (s *critical) bracket(ctx context.Context, b lattice.Block) (lo, hi float64, err error) {
	n := len(s.found)
	width := 0.0
	switch n {
	case 0:
		// Slower pairs would hardly meet once.
		lo, hi = 2.5*s.separation/s.watch, 0.7
	case 1:
		width = 1e-4
		lo, hi = s.found[0]-width, s.found[0]+width
	default:
		width = 2*math.Abs(s.found[n-1]-s.found[n-2]) + 10*resolution
		lo, hi = s.found[n-1]-width, s.found[n-1]+width
	}
	for range 10 {
		again, err := s.meetAgain(ctx, b, lo, hi)
		switch {
		case err != nil:
			return 0, 0, err
		case again[0] && !again[1]:
			return lo, hi, nil
		case width == 0 && !again[0]:
			return 0, 0, fmt.Errorf("no second collision before t = %g at the speed %.4g; this pair has no critical speed above it", s.watch, lo)
		case width == 0:
			return 0, 0, fmt.Errorf("a second collision before t = %g even at the speed %.4g; want a longer -watch", s.watch, hi)
		case again[1]:
			lo, hi = hi, hi+4*width
		default:
			lo, hi = lo-4*width, lo
		}
		width *= 4
	}
	return 0, 0, fmt.Errorf("critical speeds of successive lattices are far apart; want a smaller -spacing")
}

// meetAgain runs the pair at each speed and tells whether it meets a second time
// before the watch time.
func (s *critical) meetAgain(ctx context.Context, b lattice.Block, speeds ...float64) ([]bool, error) {
	runs := sweep.Sweep{Parameters: []string{"speed"}, Results: []string{"collisions"}}
	for _, v := range speeds {
		runs.Points = append(runs.Points, []float64{v})
	}
	table, err := runs.Run(ctx, func(ctx context.Context, p []float64) ([]float64, error) {
		f, err := collision{
			pair: s.pair, speed: p[0], spacing: b.Space.Step, step: b.Time.Step, until: s.watch,
			window: 2 * steady, stop: stop{bounces: 2, escape: true},
		}.run(ctx)
		if err != nil {
			return nil, err
		}
		return []float64{float64(len(f.met))}, nil
	})
	if err != nil {
		return nil, err
	}
	again := make([]bool, len(speeds))
	for k, row := range table.Rows {
		again[k] = row[1] >= 2
	}
	return again, nil
}
