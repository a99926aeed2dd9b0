package minimize

import (
	"cmp"
	"context"
	"fmt"
	"io"
	"iter"
	"runtime"
	"slices"
	"sync"
	"time"

	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
)

// A Solve finds a history from a start, as Minimum, LeastResidual and their like
// do with all but the start fixed. It must be safe for concurrent use, and leave
// the start alone.
type Solve func(ctx context.Context, start *field.History) (*Found, error)

// CensusSettings of TakeCensus. The zero value works; so does a nil pointer.
type CensusSettings struct {
	// Distance is the largest max|h − g| at which two histories count as one. 0
	// means 1e-6.
	Distance float64

	// Symmetries are maps that take a solution to a solution: h and g count as
	// one if g, or the image of g or h under one of the maps, is within Distance of
	// the other. List every map of the group but the identity. A map returns a
	// history of its own and must be safe for concurrent use.
	Symmetries []func(*field.History) *field.History

	// Most is the largest Report.After.Max that counts as a solution; a solve
	// that ends above it has failed. 0 means any: LeastResidual converges to
	// minima of the cost where the residual does not vanish, too.
	Most float64

	// Of, if not nil, gives action and index of each history under the conditions
	// Held. Otherwise the action is Report.CostAfter, and the index is that of
	// Report.Inertia if Solve has counted it.
	Of   Functional
	Held *constraint.Set

	Workers  int       // solves at a time. 0 means GOMAXPROCS. The outcome does not depend on it.
	Progress io.Writer // gets one line for each start, in order
}

// A Resident is one of the distinct histories of a census.
type Resident struct {
	Found  *Found // of the start with the least residual
	Action float64
	Index  int  // negative eigenvalues of the second variation on the free values
	Known  bool // whether the index is
	Hits   int  // starts that ended here
	Starts []int
}

// String returns the resident in one line.
func (r Resident) String() string {
	index := "unknown"
	if r.Known {
		index = fmt.Sprint(r.Index)
	}
	return fmt.Sprintf("action %.10g, index %s, residual %.2g, %d hits, first from start %d", r.Action, index, r.Found.Report.After.Max, r.Hits, r.Starts[0])
}

// A FailedStart is a start from which no solution was found.
type FailedStart struct {
	Start int
	Err   error
}

// A Census lists distinct histories by rising action.
type Census struct {
	Residents []Resident
	Failed    []FailedStart
	Starts    int // starts that were tried
	Wall      time.Duration
}

// String returns the census as a table for a terminal.
func (c *Census) String() string {
	s := fmt.Sprintf("census: %d distinct histories from %d starts, %d failed, %.3g s", len(c.Residents), c.Starts, len(c.Failed), c.Wall.Seconds())
	for _, r := range c.Residents {
		s += "\n  " + r.String()
	}
	return s
}

// A HighResidual is the error of a start whose solve ended above
// CensusSettings.Most.
type HighResidual struct {
	Max  Norm
	Most float64
}

func (e *HighResidual) Error() string {
	return fmt.Sprintf("minimize: residual of %.3g at %v, want at most %.3g", e.Max.Max, e.Max.At, e.Most)
}

// TakeCensus solves from many starts and sorts the outcomes into distinct
// histories. A list of starts is handed over as slices.Values(list); a generator
// is asked for each start when a worker is free, and must not change a start
// afterwards.
//
// Starts are numbered in their order and their outcomes are compared in that
// order: an outcome belongs to the first resident that is near enough, of which
// the history with the least residual is kept, the earlier of two. So the result
// has the same bits for any number of workers, if Solve has.
//
// If the context ends the census of the starts that were finished before the
// first unfinished one is returned with its error. Starts that fail are listed and
// are no error.
func TakeCensus(ctx context.Context, solve Solve, starts iter.Seq[*field.History], set *CensusSettings) (*Census, error) {
	var c CensusSettings
	if set != nil {
		c = *set
	}
	switch {
	case solve == nil:
		return nil, fmt.Errorf("minimize: census without a solve; want a function such as a call of LeastResidual")
	case starts == nil:
		return nil, fmt.Errorf("minimize: census without starts; want some, such as slices.Values of a list")
	case !(c.Distance >= 0) || !(c.Most >= 0) || c.Workers < 0:
		return nil, fmt.Errorf("minimize: census with distance %v, most %v and %d workers; want numbers ≥ 0 (0 for the default)", c.Distance, c.Most, c.Workers)
	}
	if c.Distance == 0 {
		c.Distance = 1e-6
	}
	if c.Workers == 0 {
		c.Workers = runtime.GOMAXPROCS(0)
	}
	began := time.Now()
	t := &teller{set: c, census: new(Census)}
	t.collect(ctx, solve, starts)
	slices.SortStableFunc(t.census.Residents, func(a, b Resident) int { return cmp.Compare(a.Action, b.Action) })
	for k := range t.census.Residents {
		r := &t.census.Residents[k]
		if i := r.Found.Report.Inertia; i != nil {
			r.Index, r.Known = i.Index, i.Known
		}
		if c.Of != nil {
			var err error
			if r.Index, r.Known, err = index(c.Of, c.Held, r.Found.History); err != nil {
				return t.census, err
			}
		}
	}
	t.census.Wall = time.Since(began)
	if ctx.Err() != nil {
		return t.census, fmt.Errorf("minimize: census after %d starts: %w", t.census.Starts, context.Cause(ctx))
	}
	return t.census, nil
}

// teller compares outcomes with the residents so far.
type teller struct {
	set    CensusSettings
	census *Census
}

// outcome is what came of one start.
type outcome struct {
	start  int
	found  *Found
	images []*field.History // under the symmetries
	err    error
	action float64
}

// collect solves from all starts and admits the outcomes in their order.
func (t *teller) collect(ctx context.Context, solve Solve, starts iter.Seq[*field.History]) {
	type job struct {
		number int
		start  *field.History
	}
	jobs, done := make(chan job), make(chan outcome)
	go func() {
		defer close(jobs)
		number := 0
		for start := range starts {
			select {
			case jobs <- job{number, start}:
				number++
			case <-ctx.Done():
				return
			}
		}
	}()
	var workers sync.WaitGroup
	for range t.set.Workers {
		workers.Go(func() {
			for j := range jobs {
				done <- t.try(ctx, solve, j.number, j.start)
			}
		})
	}
	go func() {
		workers.Wait()
		close(done)
	}()
	early := make(map[int]outcome)
	for o := range done {
		early[o.start] = o
		for {
			next, ok := early[t.census.Starts]
			if !ok || ctx.Err() != nil && next.err != nil {
				break // what the end of the context has broken off does not count
			}
			delete(early, next.start)
			t.admit(next)
		}
	}
}

// try solves from one start and measures the outcome.
func (t *teller) try(ctx context.Context, solve Solve, number int, start *field.History) outcome {
	o := outcome{start: number}
	o.found, o.err = solve(ctx, start)
	if o.err != nil {
		return o
	}
	if r := o.found.Report.After; t.set.Most > 0 && !(r.Max <= t.set.Most) {
		o.err = &HighResidual{Max: r, Most: t.set.Most}
		return o
	}
	for _, image := range t.set.Symmetries {
		o.images = append(o.images, image(o.found.History))
	}
	o.action = o.found.Report.CostAfter
	if t.set.Of != nil {
		o.action = t.set.Of.Value(o.found.History)
	}
	return o
}

// admit adds an outcome to the census.
func (t *teller) admit(o outcome) {
	c := t.census
	c.Starts++
	defer func() {
		if t.set.Progress != nil {
			word := fmt.Sprintf("action %.10g", o.action)
			if o.err != nil {
				word = o.err.Error()
			}
			fmt.Fprintf(t.set.Progress, "start %d: %s; %d distinct histories so far\n", o.start, word, len(c.Residents))
		}
	}()
	if o.err != nil {
		c.Failed = append(c.Failed, FailedStart{o.start, o.err})
		return
	}
	for k := range c.Residents {
		r := &c.Residents[k]
		if !t.same(r.Found.History, o) {
			continue
		}
		r.Hits++
		r.Starts = append(r.Starts, o.start)
		if o.found.Report.After.Max < r.Found.Report.After.Max {
			r.Found, r.Action = o.found, o.action
		}
		return
	}
	c.Residents = append(c.Residents, Resident{Found: o.found, Action: o.action, Hits: 1, Starts: []int{o.start}})
}

// same reports whether an outcome or one of its images is near the history h, or
// an image of h near it.
func (t *teller) same(h *field.History, o outcome) bool {
	near := func(a, b *field.History) bool {
		return a.SameShape(b) && a.MaxDifference(b) <= t.set.Distance
	}
	if near(h, o.found.History) {
		return true
	}
	for _, g := range o.images {
		if near(h, g) {
			return true
		}
	}
	for _, image := range t.set.Symmetries {
		if near(image(h), o.found.History) {
			return true
		}
	}
	return false
}

// index returns the number of negative eigenvalues of the second variation of f
// at h under conditions, and false if it is singular to working accuracy.
func index(f Functional, held *constraint.Set, h *field.History) (n int, known bool, err error) {
	q, err := newEquations("index", f, held, h, nil)
	if err != nil {
		return 0, false, err
	}
	m := f.SecondVariationMatrix(nil, q.h)
	hess := newHessian(m, q.free, q.grid())
	hess.assemble(m)
	b, err := newEdged(hess.pattern, 0)
	if err != nil {
		return 0, false, err
	}
	if err := b.symmetricOnly(hess.values); err != nil {
		return 0, false, fmt.Errorf("minimize: index: %w", err)
	}
	n, known = b.Negative()
	return n, known, nil
}
