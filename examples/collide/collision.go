package main

import (
	"context"
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/track"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// collision is one run: a pair, its speed, the lattice, and until when.
type collision struct {
	*pair
	speed   float64
	spacing float64
	step    float64 // about, so that until is a slice
	until   float64 // the watch time, counted from the start
	window  float64 // the exit speed is fitted to this last part of the time
	stop    stop
	picture float64          // time between recorded slices; 0 records nothing
	probe   *integrate.Probe // of the middle, if not nil
}

// stop says what ends a run before its time.
type stop struct {
	bounces int  // so many collisions, if not 0
	escape  bool // the pair will not meet again
	capture bool // the pair cannot part any more
}

// flight is what became of a collision.
type flight struct {
	met     []float64     // times of the looks at which they had merged
	exit    track.Line    // fit to the partner on the right over the window
	outcome track.Outcome // Capture if it had not escaped when the run ended
	path    *track.Path   // of the partner on the right
	history *field.History
}

// exitSpeed returns the speed of an escape, 0 if there was none.
func (f *flight) exitSpeed() float64 {
	if f.outcome != track.Escape {
		return 0
	}
	return f.exit.Speed
}

// spread is the time between changes of the domain, and look that between looks
// at the field.
const (
	spread = 10.0
	look   = 0.25
)

// run evolves the pair. The half line is no longer than it must be: at the start
// nothing has got farther than the pair's tails and the way of light, and near
// the end nothing farther out can come back in time. It is cut and continued by
// the vacuum at the ends of short stretches of time, whose states are exact, so
// that no bit of what is inside the light cone changes.
func (c collision) run(ctx context.Context) (*flight, error) {
	profile, err := c.start(c.speed)
	if err != nil {
		return nil, err
	}
	w := &watch{collision: c}
	w.kinks.Vacua = c.vacua
	steps := max(1, int(math.Round(c.until/c.step)))
	k := c.until / float64(steps)
	stretch := max(1, int(spread/k))
	if c.picture > 0 {
		stretch = steps
	}
	state := profile.On(c.line(0, float64(min(stretch, steps))*k), 0)
	for n := 0; n < steps && !w.done; n += stretch {
		length := min(stretch, steps-n)
		from := float64(n) * k
		line := c.line(from, from+float64(length)*k)
		state = c.fit(state, line)
		block, err := lattice.NewBlock(lattice.Axis{From: from, Step: k, Sites: length + 1}, line)
		if err != nil {
			return nil, err
		}
		s, err := action.New(block, action.Wave{Potential: c.potential, Links: action.Sixth})
		if err != nil {
			return nil, err
		}
		set := integrate.Settings{Method: integrate.Yoshida4{}, Every: -1, Observers: []integrate.Observer{w}}
		if c.probe != nil {
			set.Observers = append(set.Observers, c.probe)
		}
		if c.picture > 0 {
			set.Every = max(1, int(c.picture/k))
		}
		run, err := integrate.Evolve(ctx, s, state, set)
		if err != nil {
			return nil, fmt.Errorf("speed %g: %w", c.speed, err)
		}
		state = run.Final
		w.flight.history = run.History
	}
	return w.result(), nil
}

// line returns the half line on which the pair is evolved between two times.
func (c collision) line(from, to float64) lattice.Axis {
	ahead := c.separation + 37/c.beyond + to // e⁻³⁷ is below rounding
	back := c.farthest(c.until) + c.until - from + 5
	reach := min(ahead, back)
	if c.picture > 0 {
		reach = min(c.separation+37/c.beyond+c.until, 0.5*(c.separation+37/c.beyond+c.farthest(c.until)+c.until+5))
	}
	return lattice.Axis{Step: c.spacing, Sites: int(math.Ceil(reach/c.spacing)) + 1, Left: lattice.Even}
}

// farthest returns a place which neither partner has passed at time t. Where
// only collisions are counted the middle is all that matters in the end.
func (c collision) farthest(t float64) float64 {
	if c.stop.bounces > 0 {
		return 0
	}
	return max(c.separation, c.speed*t-c.separation) + 5
}

// fit cuts a state to a line or continues it by the outer vacuum.
func (c collision) fit(s field.State, line lattice.Axis) field.State {
	n := s.Field.Sites
	if line.Sites <= n {
		return field.State{Field: s.Field.Part(0, line.Sites), Rate: s.Rate.Part(0, line.Sites)}
	}
	longer := field.NewState(1, line.Sites)
	for i := range line.Sites {
		longer.Field.Data[i] = c.outer
	}
	longer.Field.Part(0, n).CopyFrom(s.Field)
	longer.Rate.Part(0, n).CopyFrom(s.Rate)
	return longer
}

// watch is the observer of a collision.
type watch struct {
	collision
	kinks  track.Kinks
	flight flight
	last   float64 // time of the last look
	next   float64 // time of the next judgement
	done   bool
}

// Stride makes a look every quarter of a unit of time.
func (w *watch) Stride() int { return max(1, int(look/w.step)) }

// Observe follows the pair and asks for a stop when the outcome is settled.
func (w *watch) Observe(m *integrate.Moment) error {
	if m.Time <= w.last && m.Time > 0 {
		return nil // the last slice of a stretch is the first of the next
	}
	w.last = m.Time
	// Look where the pair can be.
	line := m.Action.Block().Space
	line.Sites = min(line.Sites, int((max(w.separation, w.speed*m.Time-w.separation)+10)/line.Step)+1)
	w.kinks.Line = line
	if err := w.kinks.Add(m.Time, m.Field().Part(0, line.Sites)); err != nil {
		return err
	}
	if met := w.partner().Merged; len(met) > 0 {
		if w.stop.bounces > 0 && len(met) >= w.stop.bounces {
			w.done = true
		} else if m.Time >= w.next {
			w.next = m.Time + 5
			w.done = w.settled(m)
		}
	}
	if w.done {
		return integrate.Stop
	}
	return nil
}

// partner returns the path of the right partner, all there is at the start.
func (w *watch) partner() *track.Path { return w.kinks.Paths()[0] }

// settled reports whether nothing can change the outcome.
func (w *watch) settled(m *integrate.Moment) bool {
	if w.stop.escape && w.fate(2*steady) == track.Escape {
		return true
	}
	if !w.stop.capture || len(w.partner().Merged) < 3 { // two are worth knowing exactly
		return false
	}
	// The pair inside, radiation outside: twice the energy of the half line.
	const inside, margin = 20, 1e-3
	if _, x := w.partner().Last(); x > inside-5/w.bond.Decay {
		return false
	}
	density := m.Action.EnergyDensity(nil, m.State(), m.Time)
	energy := 2 * track.Content(m.Action.Block().Space, density, 0, inside)
	return w.bond.Spent(energy, margin) == track.Capture
}

// steady is the least time over which the speed of a pair says what becomes of it:
// six periods 2π/√(3/2) of the φ⁴ kink's wobble.
const steady = 30

// fate tells what becomes of the pair, from its speed over the last time given or
// over the latter half of the time since the collision.
func (w *watch) fate(window float64) track.Outcome {
	p := w.partner()
	t, _ := p.Last()
	if t < w.last {
		return track.Capture // merged
	}
	from := t - window
	if n := len(p.Merged); n > 0 {
		from = max(from, 0.5*(t+p.Merged[n-1]))
	}
	if t-from < min(steady, window)-look {
		return track.Undecided
	}
	exit, err := p.Speed(from, t)
	if err != nil {
		return track.Undecided
	}
	w.flight.exit = exit
	return w.bond.Fate(2*exit.At, exit.Speed-4*exit.SpeedError)
}

// result sums up at the end of the run. Who has not escaped by then counts as
// captured.
func (w *watch) result() *flight {
	f := &w.flight
	f.path = w.partner()
	f.met = f.path.Merged
	f.outcome = track.Capture
	if len(f.met) > 0 && w.fate(w.window) == track.Escape {
		f.outcome = track.Escape
	}
	return f
}
