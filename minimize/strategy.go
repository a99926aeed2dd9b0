package minimize

import (
	"context"
	"fmt"
	"math"
	"time"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// Strategy says how LeastResidual comes near a solution. Whatever the strategy,
// Levenberg–Marquardt on the whole block ends the solve, so that all of them
// solve the same problem to the same tolerance.
type Strategy uint8

// The strategies. What each needs and refuses is said in the package comment.
const (
	Fitting      Strategy = iota // Marching from a Cauchy pair, else BlockWide and, between two slices, Shooting
	BlockWide                    // Levenberg–Marquardt on the whole block from the start history alone
	Marching                     // the action's march from a pinned Cauchy pair, forward and backward
	Windows                      // a few slices at a time, each by Levenberg–Marquardt
	CoarseToFine                 // a coarser block first, refined by cubic interpolation
	Shooting                     // march from unknown Cauchy data and correct them, see Settings.Nodes
	Dragging                     // carry the pins from where the start's march has them to where they are wanted
)

// String returns the name of the strategy.
func (s Strategy) String() string {
	if int(s) < 7 {
		return [...]string{"fitting", "block-wide", "marching", "growing windows", "coarse-to-fine", "shooting", "dragging pins"}[s]
	}
	return fmt.Sprintf("strategy(%d)", uint8(s))
}

// A Stage is what a strategy did before the solve for the whole block.
type Stage struct {
	Strategy       Strategy
	Why            string // it was chosen
	Outcome        string // in words
	Used           bool   // its history became the start of the block-wide solve
	Iterations     int    // trial steps
	Factorisations int
	Max            float64 // largest |r| of its history, adjusted to the conditions
	Wall           time.Duration
}

// String returns the stage in one line.
func (s Stage) String() string {
	used := "not used"
	if s.Used {
		used = "used"
	}
	return fmt.Sprintf("%v (%s): %s, %d steps, max %.3g, %.3g s, %s", s.Strategy, s.Why, s.Outcome, s.Iterations, s.Max, s.Wall.Seconds(), used)
}

// prepare runs the strategy of the settings and, if it helps, makes its history
// the best one. A strategy asked for by name is believed as long as its history
// is finite; one that was chosen must lower the cost.
func (l *least) prepare(ctx context.Context) error {
	stage := Stage{Strategy: l.set.Strategy, Why: "asked for"}
	if stage.Strategy == Fitting {
		stage.Strategy, stage.Why = l.fitting()
	}
	l.rep.Strategy, l.rep.Why = stage.Strategy, stage.Why
	if l.fuzzy() && stage.Strategy != BlockWide {
		return l.refuse(stage.Strategy, "there are soft or linear conditions; want BlockWide")
	}
	began := time.Now()
	var h *field.History
	var err error
	switch stage.Strategy {
	case BlockWide:
		return nil
	case Marching:
		h, err = l.marching(ctx, &stage)
	case Windows:
		h, err = l.windows(ctx, &stage)
	case CoarseToFine:
		h, err = l.coarse(ctx, &stage)
	case Shooting:
		h, err = l.shooting(ctx, &stage)
	case Dragging:
		h, err = l.dragging(ctx, &stage)
	}
	if err != nil {
		return err
	}
	l.adopt(h, &stage)
	stage.Wall = time.Since(began)
	l.rep.Stages = append(l.rep.Stages, stage)
	return nil
}

// adopt makes h, adjusted to the conditions, the best history if it is finite
// and, unless it was asked for, cheaper.
func (l *least) adopt(h *field.History, stage *Stage) {
	l.free.Scatter(l.trial, l.free.Gather(nil, h))
	l.trialRes = l.s.Residual(l.trialRes, l.trial)
	sum := l.total(l.trial, l.trialRes)
	stage.Max = l.norm(l.trialRes.Data, l.normal.rows).Max
	stage.Used = !math.IsNaN(sum-sum) && (sum < l.sum || l.set.Strategy != Fitting)
	if stage.Used {
		l.accept(sum)
	}
}

// fitting chooses a strategy by the conditions.
func (l *least) fitting() (Strategy, string) {
	n, pair := l.free.CauchyPair()
	switch {
	case l.fuzzy():
		return BlockWide, "there are soft or linear conditions"
	case l.s.Block().Time.Periodic:
		return BlockWide, "the block is periodic in time"
	case l.s.Signature() == action.Euclidean:
		return BlockWide, "the signature is Euclidean"
	case !pair:
		return BlockWide, "no Cauchy pair is pinned"
	case n > 0 && l.s.Conservative() != nil:
		return BlockWide, fmt.Sprintf("a Cauchy pair is pinned at slice %d, but an equation with losses cannot be marched back", n)
	}
	return Marching, fmt.Sprintf("a Cauchy pair is pinned at slice %d", n)
}

// refuse returns the refusal of a strategy.
func (l *least) refuse(s Strategy, format string, args ...any) error {
	return &Refusal{Problem: fmt.Sprintf("%s by %v", l.rep.Problem, s), Why: fmt.Sprintf(format, args...)}
}

// marches returns a refusal unless the equation is an initial-value problem.
func (l *least) marches(s Strategy) error {
	switch {
	case l.s.Block().Time.Periodic:
		return l.refuse(s, "the block is periodic in time; want BlockWide")
	case l.s.Signature() == action.Euclidean:
		return l.refuse(s, "a Euclidean action has no march; want BlockWide")
	}
	return nil
}

// fuzzy reports whether there are conditions beside pins and rates.
func (l *least) fuzzy() bool { return l.soft || l.hard != nil }

// tied reports whether rates join free values.
func (l *least) tied() bool { return l.free.N+l.free.Fixed() != l.free.Values() }
