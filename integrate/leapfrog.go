package integrate

import (
	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/internal/kernel"
)

// Leapfrog is the Störmer–Verlet method, order 2, symplectic and reversible: the
// condition that the discrete action be stationary, solved slice by slice
// [Hairer, Lubich & Wanner 2003, Acta Numerica 12, 399]. Losses are centred and
// keep its order. The rate of slice n is (φ(n+1) − φ(n−1))/2k.
type Leapfrog struct{}

var _ Method = Leapfrog{}

// Name returns "leapfrog".
func (Leapfrog) Name() string { return "leapfrog" }

// Limit returns 2.
func (Leapfrog) Limit() float64 { return 2 }

// Start implements Method. It is one slice ahead of what it shows, for the sake
// of the centred rate.
func (Leapfrog) Start(p Problem) (Stepper, error) {
	f := p.Start.Field
	l := &leapfrog{
		p: p, march: p.Action.March(), held: p.Action.HeldLeft() || p.Action.HeldRight(),
		before: field.NewSlice(f.Components, f.Sites),
		now:    f.Clone(),
		next:   field.NewSlice(f.Components, f.Sites),
	}
	clock := p.Action.Block().Time
	l.p.place(l.now, clock.At(l.n))
	l.next.CopyFrom(l.now)
	l.p.place(l.next, clock.At(l.n+1))
	rate := p.Start.Rate.Clone()
	l.p.placeRate(rate, clock.At(l.n))
	if p.Second.Empty() {
		l.march.Start(l.next, field.State{Field: l.now, Rate: rate}, l.n)
	} else {
		l.next.CopyFrom(p.Second)
	}
	l.before.CopyFrom(l.next)
	l.before.Axpy(-2*clock.Step, rate)
	l.block = p.block(2*f.Components, l.part)
	return l, nil
}

type leapfrog struct {
	p                 Problem
	march             *action.March
	block             blocked
	held              bool
	n                 int // slice of now
	before, now, next field.Slice
	older, newer      field.Slice // of a blocked run: slices first−1 and first
	first             int
}

func (l *leapfrog) Step() {
	l.before, l.now, l.next = l.now, l.next, l.before
	l.n++
	l.p.place(l.next, l.p.Action.Block().Time.At(l.n+1))
	l.march.Step(l.next, l.now, l.before, l.n)
}

// Advance makes all but the last step in two arrays, the slice after taking the
// place of the slice before.
func (l *leapfrog) Advance(steps int) {
	if l.march.Steady() && steps > 1 {
		l.run(l.next, l.now, l.n+1, steps-1)
		l.n += steps - 1
		if steps%2 == 0 {
			l.now, l.next = l.next, l.now
		}
		steps = 1
	}
	for range steps {
		l.Step()
	}
}

// run makes steps from the slices first and first−1.
func (l *leapfrog) run(newer, older field.Slice, first, steps int) {
	l.newer, l.older, l.first = newer, older, first
	l.block.advance(steps)
}

// part makes step number s of a run at the sites from lo to hi−1.
func (l *leapfrog) part(s, lo, hi int) {
	now, next := l.newer, l.older
	if s%2 == 1 {
		now, next = next, now
	}
	l.march.Part(next, now, next, l.first+s, lo, hi)
	if l.held {
		l.p.placePart(next, l.first+s+1, lo, hi)
	}
}

func (l *leapfrog) Field() field.Slice { return l.now }

func (l *leapfrog) State(dst field.State) {
	dst.Field.CopyFrom(l.now)
	half := 1 / (2 * l.p.Action.Block().Time.Step)
	for c := range dst.Rate.Components {
		r := dst.Rate.Component(c)
		kernel.AddScaled(r, l.next.Component(c), -1, l.before.Component(c))
		kernel.Scale(r, half, r)
	}
}

func (l *leapfrog) Memory() []field.Slice { return []field.Slice{l.before, l.now, l.next} }

func (l *leapfrog) Seek(n int) { l.n = n }
