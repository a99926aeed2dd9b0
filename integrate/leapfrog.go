package integrate

import (
	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
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
		p: p, march: p.Action.March(),
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
	return l, nil
}

type leapfrog struct {
	p                 Problem
	march             *action.March
	n                 int // slice of now
	before, now, next field.Slice
}

func (l *leapfrog) Step() {
	l.before, l.now, l.next = l.now, l.next, l.before
	l.n++
	l.p.place(l.next, l.p.Action.Block().Time.At(l.n+1))
	l.march.Step(l.next, l.now, l.before, l.n)
}

func (l *leapfrog) Field() field.Slice { return l.now }

func (l *leapfrog) State(dst field.State) {
	dst.Field.CopyFrom(l.now)
	k := l.p.Action.Block().Time.Step
	for c := range dst.Rate.Components {
		r, a, b := dst.Rate.Component(c), l.next.Component(c), l.before.Component(c)
		for i := range r {
			r[i] = (a[i] - b[i]) / (2 * k)
		}
	}
}

func (l *leapfrog) Memory() []field.Slice { return []field.Slice{l.before, l.now, l.next} }

func (l *leapfrog) Seek(n int) { l.n = n }
