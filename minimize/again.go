package minimize

import (
	"context"
	"fmt"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
)

// again tries a two-time problem, of which the block-wide solve has left a
// residual, by shooting: from the first two slices of the start and then of the
// straight one. It applies where no strategy was asked for and the solve did not
// end at a limit of the settings. The first history
// within the tolerance is returned; if there is none, the block-wide one is. The
// report lists all that was tried.
func (l *least) again(ctx context.Context, held *constraint.Set, start *field.History, set *Settings, first *Found, err error) (*Found, error) {
	r := &first.Report
	limited := r.Status == Stopped && l.set.Iterations > 0
	if l.set.Strategy != Fitting || ctx.Err() != nil || limited || r.After.Max <= r.Tolerance || !l.twoTimes() {
		return first, err
	}
	stages := append(r.Stages, Stage{
		Strategy: BlockWide, Why: r.Why, Outcome: fmt.Sprintf("%v, %s", r.Status, r.Reason), Used: true,
		Iterations: r.Iterations, Factorisations: r.Factorisations, Max: r.After.Max, Wall: r.Wall,
	})
	straight := start.Clone()
	straighten(straight, l.free)
	var shoot Settings
	if set != nil {
		shoot = *set
	}
	shoot.Strategy = Shooting
	for k, h := range []*field.History{start, straight} {
		found, wrong := LeastResidual(ctx, l.s, held, h, &shoot)
		if found == nil {
			stages = append(stages, Stage{Strategy: Shooting, Why: "the block-wide solve left a residual", Outcome: wrong.Error()})
			break
		}
		for _, s := range found.Report.Stages {
			s.Why = "the block-wide solve left a residual; from the " + [...]string{"start", "straight start"}[k]
			s.Used = found.Report.After.Max <= found.Report.Tolerance
			stages = append(stages, s)
		}
		if found.Report.After.Max <= found.Report.Tolerance {
			stages[len(r.Stages)].Used = false
			c := &found.Report
			c.Strategy, c.Why, c.Stages = Shooting, "two slices are pinned and the block-wide solve left a residual", stages
			c.Before, c.CostBefore, c.Wall = r.Before, r.CostBefore, l.since()
			return found, wrong
		}
	}
	r.Stages, r.Wall = stages, l.since()
	return first, err
}

// twoTimes reports whether the first and the last slice are pinned and the one
// after the first is not, in an equation that can be marched.
func (l *least) twoTimes() bool {
	b := l.s.Block()
	return !l.fuzzy() && !b.Time.Periodic && l.s.Signature() != action.Euclidean && !l.tied() &&
		l.free.SliceFixed(0) && l.free.SliceFixed(b.Slices()-1) && !l.free.SliceFixed(1)
}
