package integrate

import (
	"context"
	"errors"
	"fmt"
	"math"
	"time"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Settings of a run. The zero value is leapfrog, recording every slice.
type Settings struct {
	Method Method // nil means Leapfrog{}

	// Every is the number of steps between recorded slices. 0 means 1, a
	// negative number records nothing.
	Every int

	Observers []Observer
	Ends      Ends // values of held ends

	// Second is slice 1 of the block, instead of the one made from the rate of
	// the start: leapfrog from two slices. The rate of the start then serves
	// the energy of slice 0 only. At held ends it must have their values.
	Second field.Slice

	// Workers is the number of goroutines that share the sites of a long line; 0
	// means all cores. The bits do not depend on it.
	Workers int

	// Resume continues from a checkpoint of the same method and action; the
	// start is used for the values that held ends keep.
	Resume *Checkpoint
}

// A Run is what an evolution has done.
type Run struct {
	// History holds the recorded slices, on the block's line and every
	// Settings.Every-th of its times.
	History *field.History

	Slice      int         // the last slice reached
	Time       float64     // its time
	Final      field.State // the state there
	Checkpoint *Checkpoint // to go on from there
	Steps      int
	Wall       time.Duration
	Stopped    error // what ended the run early without being a failure, or nil
}

// checkEvery is the number of steps between tests for values that are not
// finite, where nobody looks at the slices.
const checkEvery = 512

// Evolve carries Cauchy data at the first slice of the action's block to the
// last. It refuses a step above the stability limit of the method with
// *Unstable, taking the fastest oscillation from the start by
// action.Discrete.MaxFrequency, and ends at the first value that is not finite
// with *BlowUp. If the context is cancelled the error wraps the context's. With
// each of the last two the Run is returned too and holds all that was computed.
func Evolve(ctx context.Context, s *action.Discrete, start field.State, set Settings) (*Run, error) {
	begun := time.Now()
	if set.Method == nil {
		set.Method = Leapfrog{}
	}
	if set.Every == 0 {
		set.Every = 1
	}
	if err := check(s, start, set); err != nil {
		return nil, err
	}
	p := Problem{Action: s, Start: start.Clone(), Second: set.Second, Ends: set.Ends, Workers: set.Workers}
	st, err := set.Method.Start(p)
	if err != nil {
		return nil, err
	}
	first := 0
	if set.Resume != nil {
		first = set.Resume.Slice
		if err := set.Resume.restore(st, set.Method); err != nil {
			return nil, err
		}
	}
	l := newLoop(p, st, set, first)
	failure := l.run(ctx)
	m := &l.moment
	r := &Run{History: l.recorded(), Slice: m.Slice, Time: m.Time, Steps: m.Slice - first, Stopped: l.stopped}
	r.Final = m.State().Clone()
	r.Checkpoint = checkpoint(set.Method, l.st, r.Slice)
	r.Wall = time.Since(begun)
	return r, failure
}

func check(s *action.Discrete, start field.State, set Settings) error {
	if s == nil {
		return errors.New("integrate: action is nil")
	}
	if err := s.FitsState(start); err != nil {
		return fmt.Errorf("integrate: start: %w", err)
	}
	if s.Density().Signature == action.Euclidean {
		return errors.New("integrate: evolution of a Euclidean density; want a Lorentzian one, or a solver of package minimize")
	}
	if (set.Ends.Left != nil && !s.HeldLeft()) || (set.Ends.Right != nil && !s.HeldRight()) {
		return errors.New("integrate: value prescribed at an end that is not held; want a Held end, or a flux of the density")
	}
	if err := checkSecond(s, start.Field, set); err != nil {
		return err
	}
	for k, o := range set.Observers {
		if o == nil {
			return fmt.Errorf("integrate: observer %d is nil", k)
		}
	}
	if r := set.Resume; r != nil && (r.Slice < 0 || r.Slice >= s.Block().Slices()) {
		return fmt.Errorf("integrate: checkpoint at slice %d of a block of %d", r.Slice, s.Block().Slices())
	}
	return stable(s, start.Field, set.Method)
}

// checkSecond returns an error unless the second slice, if there is one, fits
// the start and the held ends.
func checkSecond(s *action.Discrete, start field.Slice, set Settings) error {
	second := set.Second
	if second.Empty() {
		return nil
	}
	if err := second.Check(); err != nil {
		return fmt.Errorf("integrate: second slice: %w", err)
	}
	if !second.SameShape(start) {
		return fmt.Errorf("integrate: second slice of %d components × %d sites after a start of %d × %d", second.Components, second.Sites, start.Components, start.Sites)
	}
	placed := second.Clone()
	p := Problem{Action: s, Start: field.AtRest(start), Ends: set.Ends}
	p.place(placed, s.Block().Time.At(1))
	last := second.Sites - 1
	for c := range second.Components {
		for k, i := range [2]int{0, last} {
			const rounding = 1e-9 // of a value computed in another way
			if got, want := second.At(c, i), placed.At(c, i); math.Abs(got-want) > rounding*(1+math.Abs(want)) {
				return fmt.Errorf("integrate: second slice: held %s end is %v; want %v", [...]string{"left", "right"}[k], got, want)
			}
		}
	}
	return nil
}

// stable returns *Unstable if the step is above the limit. At the limit itself
// a massless lattice is still bounded for the Cauchy data that leapfrog makes
// (Courant number 1), an oscillator with a restoring force is not.
func stable(s *action.Discrete, phi field.Slice, m Method) error {
	omega, curvature := s.MaxFrequency(phi)
	k, limit := s.Block().Time.Step, m.Limit()
	const rounding = 1e-12
	if x := k * omega; x > limit*(1+rounding) || curvature > 0 && x >= limit {
		return &Unstable{Method: m.Name(), Step: k, Omega: omega, Limit: limit, Largest: limit / omega}
	}
	return nil
}

// loop is a run under way.
type loop struct {
	problem Problem
	set     Settings
	st      Stepper
	moment  Moment
	history *field.History
	count   int           // recorded slices
	good    []field.Slice // copy of the stepper's memory at a slice known to be finite
	goodAt  int
	stopped error
}

func newLoop(p Problem, st Stepper, set Settings, first int) *loop {
	s := p.Action
	clock := s.Block().Time
	l := &loop{problem: p, set: set, st: st, moment: Moment{Slice: first, Time: clock.At(first), First: first, Last: clock.Sites - 1, Action: s, stepper: st}}
	f := st.Field()
	l.moment.state = field.NewState(f.Components, f.Sites)
	for _, m := range st.Memory() {
		l.good = append(l.good, m.Clone())
	}
	l.goodAt = first
	b := s.Block()
	b.Time.Periodic, b.Time.Jump = false, nil
	b.Time.Sites = 0
	if every := set.Every; every > 0 {
		from := (first + every - 1) / every * every
		b.Time.From = clock.At(from)
		b.Time.Step *= float64(every)
		if last := l.moment.Last; from <= last {
			b.Time.Sites = (last-from)/every + 1
		}
	}
	l.history = field.NewHistory(b, f.Components)
	return l
}

// recorded returns the history of the slices recorded so far.
func (l *loop) recorded() *field.History {
	h := l.history
	h.Block.Time.Sites = l.count
	h.Data = h.Data[:l.count*h.Components*h.Block.Sites()]
	return h
}

func (l *loop) run(ctx context.Context) error {
	for {
		if err := l.look(); err != nil {
			return err
		}
		m := &l.moment
		if l.stopped != nil || m.Slice >= m.Last {
			return nil
		}
		if err := ctx.Err(); err != nil {
			return fmt.Errorf("integrate: stopped at t = %g, slice %d of %d: %w", m.Time, m.Slice, m.Last, err)
		}
		l.advance(l.quiet())
	}
}

// quiet returns the number of steps to the next slice that somebody looks at, or
// fewer on a line so long that a cancelled run would take noticeably long to end.
func (l *loop) quiet() int {
	const enough = 64 // steps, to block them in time
	const work = 1 << 25
	m := &l.moment
	f := l.st.Field()
	steps := min(checkEvery-(m.Slice-l.goodAt), max(enough, work/(f.Components*f.Sites)))
	if _, ok := l.st.(Advancer); !ok {
		steps = 1
	}
	until := func(stride, from int) { steps = min(steps, stride-(m.Slice-from)%stride) }
	if l.set.Every > 0 {
		until(l.set.Every, 0)
	}
	for _, o := range l.set.Observers {
		until(max(1, o.Stride()), m.First)
	}
	return min(max(steps, 1), m.Last-m.Slice)
}

func (l *loop) step() { l.advance(1) }

func (l *loop) advance(steps int) {
	m := &l.moment
	if a, ok := l.st.(Advancer); ok && steps > 1 {
		a.Advance(steps)
	} else {
		for range steps {
			l.st.Step()
		}
	}
	m.Slice += steps
	m.Time = m.Action.Block().Time.At(m.Slice)
	m.fresh = false
}

// look tests the present slice if it is time to, records it and shows it to the
// observers.
func (l *loop) look() error {
	m := &l.moment
	record := l.set.Every > 0 && m.Slice%l.set.Every == 0
	watched := false
	for _, o := range l.set.Observers {
		watched = watched || l.due(o)
	}
	keep := m.Slice-l.goodAt >= checkEvery
	if record || watched || keep || m.Slice == m.Last {
		if !l.finite() {
			return l.blowUp()
		}
	}
	if keep {
		for k, s := range l.st.Memory() {
			l.good[k].CopyFrom(s)
		}
		l.goodAt = m.Slice
	}
	if record {
		l.history.Slice(l.count).CopyFrom(l.st.Field())
		l.count++
	}
	if !watched {
		return nil
	}
	for _, o := range l.set.Observers {
		if !l.due(o) {
			continue
		}
		if err := o.Observe(m); errors.Is(err, Stop) {
			l.stopped = err
		} else if err != nil {
			return fmt.Errorf("integrate: observer %T at t = %g: %w", o, m.Time, err)
		}
	}
	return nil
}

func (l *loop) due(o Observer) bool {
	m := &l.moment
	return (m.Slice-m.First)%max(1, o.Stride()) == 0 || m.Slice == m.Last
}

// finite reports whether all that the stepper keeps is finite.
func (l *loop) finite() bool {
	for _, s := range l.st.Memory() {
		if _, _, found := s.FirstNotFinite(); found {
			return false
		}
	}
	return true
}

// blowUp goes back to the last slice known to be finite, steps forward to the
// first that is not and leaves the run at the last state that is.
func (l *loop) blowUp() error {
	m := &l.moment
	end := m.Slice
	if err := l.back(l.goodAt); err != nil {
		return err
	}
	e := &BlowUp{Value: math.NaN()}
	for ; ; l.step() {
		c, i, found := l.st.Field().FirstNotFinite()
		if found {
			e.Component, e.Value, e.Slice = c, l.st.Field().At(c, i), m.Slice
			e.Event = lattice.Event{T: m.Time, X: m.Action.Block().Space.At(i)}
		}
		// The memory may run ahead of the field by a slice.
		if found || m.Slice > end+1 {
			break
		}
	}
	for n := m.Slice - 1; ; n-- {
		if err := l.back(n); err != nil {
			return err
		}
		if m.State().Check() == nil || n <= l.goodAt {
			break
		}
	}
	e.Last, e.LastSlice = m.State().Clone(), m.Slice
	return e
}

// back restarts the run at the last slice known to be finite and steps to the
// given one.
func (l *loop) back(to int) error {
	st, err := l.set.Method.Start(l.problem)
	if err != nil {
		return err
	}
	st.Seek(l.goodAt)
	for k, s := range st.Memory() {
		s.CopyFrom(l.good[k])
	}
	m := &l.moment
	l.st, m.stepper = st, st
	m.Slice, m.fresh = l.goodAt, false
	m.Time = m.Action.Block().Time.At(m.Slice)
	for m.Slice < to {
		l.step()
	}
	return nil
}
