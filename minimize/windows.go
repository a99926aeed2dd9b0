package minimize

import (
	"context"
	"errors"
	"fmt"

	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
)

// windows solves the block a few slices at a time. From a Cauchy pair each
// window begins with the last two slices of the one before, which stay as they
// are, and new slices that go on from them in a straight line; the windows go
// forward and backward from the pair. Without a pair the window itself grows,
// from the first slice on, and nothing in it stays. A window that does not
// converge is tried again with half the new slices.
func (l *least) windows(ctx context.Context, stage *Stage) (*field.History, error) {
	switch {
	case l.s.Block().Time.Periodic:
		return nil, l.refuse(Windows, "the block is periodic in time; want BlockWide")
	case l.tied():
		return nil, l.refuse(Windows, "rates tie values of different slices; want BlockWide")
	}
	h := l.h.Clone()
	slices := h.Block.Slices()
	pair, frozen := l.free.CauchyPair()
	w := &window{least: l, h: h, stage: stage, most: l.set.Window}
	if !frozen {
		for end := min(w.most, slices); ; end = min(slices, max(end+w.most, end+end/4)) {
			if ok, err := w.solve(ctx, 0, end, -1); err != nil || !ok || end == slices {
				return h, err
			}
		}
	}
	for end := pair + 2; end < slices; {
		m := min(w.most, slices-end)
		for e := end; e < end+m; e++ { // straight on
			w.extrapolate(e, e-1, e-2)
		}
		ok, err := w.solve(ctx, end-2, end+m, end-2)
		if err != nil || !ok && m == 1 {
			return h, err
		}
		if ok {
			end += m
		} else {
			w.most = m / 2
		}
	}
	w.most = l.set.Window
	for first := pair; first > 0; {
		m := min(w.most, first)
		for e := first - 1; e >= first-m; e-- {
			w.extrapolate(e, e+1, e+2)
		}
		ok, err := w.solve(ctx, first-m, first+2, first)
		if err != nil || !ok && m == 1 {
			return h, err
		}
		if ok {
			first -= m
		} else {
			w.most = m / 2
		}
	}
	return h, nil
}

// window solves parts of a least-residual problem.
type window struct {
	*least
	h     *field.History
	stage *Stage
	most  int // new slices at once
	count int
}

// extrapolate continues slice n from the two beside it.
func (w *window) extrapolate(n, near, far int) {
	s := w.h.Slice(n)
	s.CopyFrom(w.h.Slice(near))
	s.Axpy(1, w.h.Slice(near))
	s.Axpy(-1, w.h.Slice(far))
}

// solve solves the slices from ≤ n < to and writes them to the history; those of
// the pair at slice frozen, if there is one, stay. It returns false if it does
// not converge, and an error if the problem cannot be asked.
func (w *window) solve(ctx context.Context, from, to, frozen int) (ok bool, err error) {
	s, err := w.s.Window(from, to)
	if err != nil {
		return false, err
	}
	start, err := w.h.Window(from, to, 0, w.h.Block.Sites())
	if err != nil {
		return false, err
	}
	held := constraint.On(s.Block())
	free := w.hold(held, from, frozen)
	w.count++
	if !free { // all of it is pinned
		return true, nil
	}
	set := w.inner()
	for _, at := range w.set.Lifted {
		n, _, err := w.h.Block.Index(at)
		if err == nil && n > from && n < to-1 {
			set.Lifted = append(set.Lifted, at)
		}
	}
	found, err := LeastResidual(ctx, s, held, start, set)
	if found != nil {
		w.stage.add(found.Report)
	}
	var not *NotConverged
	if err != nil && !errors.As(err, &not) {
		return false, fmt.Errorf("slices %d to %d: %w", from, to-1, err)
	}
	if err != nil {
		w.stage.Outcome = fmt.Sprintf("%d windows, %v at slices %d to %d: %s", w.count, found.Report.Status, from, to-1, found.Report.Reason)
		return false, nil
	}
	w.stage.Outcome = fmt.Sprintf("%d windows of up to %d slices", w.count, w.set.Window)
	copy(w.h.Data[w.h.Index(from, 0, 0):], found.History.Data)
	return true, nil
}

// hold pins what is fixed in the slices of held's block, which begins at slice
// from of the whole, and the pair at slice frozen. It reports whether anything is
// left free.
func (w *window) hold(held *constraint.Set, from, frozen int) (free bool) {
	for n := range held.Block().Slices() {
		pair := frozen >= 0 && (n+from == frozen || n+from == frozen+1)
		for c := range w.h.Components {
			row := w.h.Slice(n + from).Component(c)
			free = pinRuns(held, n, c, row, func(i int) (float64, bool) {
				k, v := w.free.At(w.h.Index(n+from, c, i))
				if pair {
					v = row[i]
				}
				return v, k < 0 || pair
			}) || free
		}
	}
	return free
}

// pinRuns pins the values of component c of slice n that at says are fixed, run
// by run. It reports whether any is not.
func pinRuns(held *constraint.Set, n, c int, row []float64, at func(i int) (float64, bool)) (free bool) {
	view := held.Component(c)
	values := make([]float64, 0, len(row))
	for i := 0; i <= len(row); i++ {
		var v float64
		var fixed bool
		if i < len(row) {
			v, fixed = at(i)
			free = free || !fixed
		}
		if fixed {
			values = append(values, v)
			continue
		}
		if len(values) > 0 {
			view.Part(n, i-len(values), i, field.SliceOf(values))
			values = values[:0]
		}
	}
	return free
}

// inner returns the settings of a solve inside a strategy.
func (l *least) inner() *Settings {
	return &Settings{
		Strategy: BlockWide, Tolerance: l.set.Tolerance, Flatness: l.set.Flatness, Damping: l.set.Damping,
		ResidualScale: l.set.ResidualScale, Memory: l.set.Memory, Work: l.set.Work, Window: l.set.Window, Nodes: l.set.Nodes,
	}
}

// add counts the work of a solve inside the stage.
func (s *Stage) add(r Report) {
	s.Iterations += r.Iterations
	s.Factorisations += r.Factorisations
	for _, t := range r.Stages {
		s.Iterations += t.Iterations
		s.Factorisations += t.Factorisations
	}
}
