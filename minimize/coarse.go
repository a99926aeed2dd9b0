package minimize

import (
	"context"
	"errors"
	"fmt"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
)

// coarse solves the problem on the block that keeps every second slice and site,
// or every third if the links cannot be halved, and so on down to blocks of some
// 16 links, and refines the history by cubic interpolation. Pins on events that
// are left out wait for the fine block; of a Cauchy pair the second slice would
// be one of them, so that a window of the fine block is solved first that
// reaches the next coarse slice.
func (l *least) coarse(ctx context.Context, stage *Stage) (*field.History, error) {
	b := l.s.Block()
	factor := 2
	for ; factor <= 7 && (b.Time.Links()%factor != 0 || b.Space.Links()%factor != 0); factor++ {
	}
	onto, err := b.Coarsen(factor)
	if err != nil || onto.Time.Links() < 8 || onto.Space.Links() < 8 {
		return nil, l.refuse(CoarseToFine, "%d × %d links cannot be coarsened to 8 or more by a common factor up to 7; want another block or Windows", b.Time.Links(), b.Space.Links())
	}
	if l.tied() {
		return nil, l.refuse(CoarseToFine, "rates tie values of different slices; want BlockWide")
	}
	s, err := action.New(onto, l.s.Density())
	if err != nil {
		return nil, l.refuse(CoarseToFine, "the density cannot be put on the coarse block (%v); want functions instead of tables", err)
	}
	fine := l.h.Clone()
	pair, isPair := l.free.CauchyPair()
	if isPair {
		if pair%factor != 0 || pair+factor >= b.Slices() {
			return nil, l.refuse(CoarseToFine, "the Cauchy pair begins at slice %d; want a multiple of %d", pair, factor)
		}
		w := &window{least: l, h: fine, stage: stage, most: l.set.Window}
		for n := pair + 2; n <= pair+factor; n++ {
			w.extrapolate(n, n-1, n-2)
		}
		if ok, err := w.solve(ctx, pair, pair+factor+1, pair); err != nil || !ok {
			return fine, err
		}
	}
	start := field.NewHistory(onto, fine.Components)
	held := constraint.On(onto)
	for n := range onto.Slices() {
		solved := isPair && n == pair/factor+1
		for c := range fine.Components {
			row := start.Slice(n).Component(c)
			for i := range row {
				row[i] = fine.At(n*factor, c, i*factor)
			}
			pinRuns(held, n, c, row, func(i int) (float64, bool) {
				k, _ := l.free.At(fine.Index(n*factor, c, i*factor))
				return row[i], k < 0 || solved
			})
		}
	}
	set := l.inner()
	set.Tolerance = 0 // the coarse equation has terms of its own size
	if onto.Time.Links() >= 32 && onto.Space.Links() >= 32 {
		set.Strategy = CoarseToFine
	}
	found, err := LeastResidual(ctx, s, held, start, set)
	var refused *Refusal
	var deepest string
	if set.Strategy == CoarseToFine && errors.As(err, &refused) {
		deepest = "; no coarser: " + refused.Why
		set.Strategy = BlockWide
		found, err = LeastResidual(ctx, s, held, start, set)
	}
	if found == nil {
		return nil, fmt.Errorf("coarse block of %s: %w", describe(onto), err)
	}
	stage.add(found.Report)
	stage.Outcome = fmt.Sprintf("every %d. slice and site: %v, max %.3g", factor, found.Report.Status, found.Report.After.Max) + deepest
	for _, below := range found.Report.Stages {
		stage.Outcome += "; below " + below.Outcome
	}
	return found.History.Resample(b, field.Cubic)
}
