package integrate

import (
	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// A Method turns Cauchy data at one slice into those at the next. [Leapfrog],
// [Yoshida4] and [RK4] are Methods; package integratetest checks others.
type Method interface {
	// Name is the published name of the method.
	Name() string

	// Limit is the largest kω for which a linear oscillation of the angular
	// frequency ω stays bounded with the time step k.
	Limit() float64

	// Start returns a stepper at the first slice of the block, or an error that
	// says what the method cannot do.
	Start(p Problem) (Stepper, error)
}

// A Stepper is a method at work. It serves one goroutine.
type Stepper interface {
	// Step advances by one slice. It allocates nothing.
	Step()

	// Field returns the field at the present slice. It shares the stepper's
	// memory and is valid until the next Step.
	Field() field.Slice

	// State copies the Cauchy data at the present slice to dst.
	State(dst field.State)

	// Memory returns the arrays that, with the number of the slice, determine
	// every later step. They share the stepper's memory: a checkpoint copies
	// them, and a restart writes them to the memory of a new stepper, tells it
	// the slice by Seek, and goes on to the same bits.
	Memory() []field.Slice
	Seek(n int)
}

// An Advancer is a Stepper that makes many steps faster than one by one, with the
// same bits. Evolve uses it where nobody looks in between.
type Advancer interface {
	Stepper
	Advance(steps int)
}

// A Problem is what a method starts from.
type Problem struct {
	Action  *action.Discrete
	Start   field.State // at the first slice of the block
	Second  field.Slice // the slice after it, if given; else made from the rate
	Ends    Ends
	Workers int // goroutines on a long line; 0 means all cores
}

// Ends gives the values of held ends as functions of time, for one component
// each; nil keeps the value of the start. They are also called a step before the
// first slice and after the last, for the rates of the ends, which are central
// differences and replace those of the start, and on a long line from several
// goroutines.
type Ends struct {
	Left, Right func(component int, t float64) float64
}

// place writes the values of held ends at time t to phi.
func (p *Problem) place(phi field.Slice, t float64) {
	if p.Ends.Left == nil && p.Ends.Right == nil && sameEnds(phi, p.Start.Field) {
		return
	}
	left, right := p.Action.HeldLeft(), p.Action.HeldRight()
	last := phi.Sites - 1
	for c := range phi.Components {
		v := phi.Component(c)
		if left {
			v[0] = p.end(p.Ends.Left, c, 0, t)
		}
		if right {
			v[last] = p.end(p.Ends.Right, c, last, t)
		}
	}
}

// keepsEnds reports whether held ends keep their values.
func (p *Problem) keepsEnds() bool { return p.Ends.Left == nil && p.Ends.Right == nil }

// placePart is place at slice n for the ends among the sites from lo to hi−1.
func (p *Problem) placePart(phi field.Slice, n, lo, hi int) {
	last := phi.Sites - 1
	t := p.Action.Block().Time.At(n)
	for c := range phi.Components {
		if lo == 0 && p.Action.HeldLeft() {
			phi.Component(c)[0] = p.end(p.Ends.Left, c, 0, t)
		}
		if hi == phi.Sites && p.Action.HeldRight() {
			phi.Component(c)[last] = p.end(p.Ends.Right, c, last, t)
		}
	}
}

func sameEnds(a, b field.Slice) bool {
	for c := range a.Components {
		v, w := a.Component(c), b.Component(c)
		if v[0] != w[0] || v[len(v)-1] != w[len(w)-1] {
			return false
		}
	}
	return true
}

func (p *Problem) end(f func(int, float64) float64, c, i int, t float64) float64 {
	if f == nil {
		return p.Start.Field.Component(c)[i]
	}
	return f(c, t)
}

// placeRate writes the rates of held ends at time t to v: zero where the value
// is kept, else the central difference over one step.
func (p *Problem) placeRate(v field.Slice, t float64) {
	k := p.Action.Block().Time.Step
	rate := func(f func(int, float64) float64, c int) float64 {
		if f == nil {
			return 0
		}
		return (f(c, t+k) - f(c, t-k)) / (2 * k)
	}
	for c := range v.Components {
		r := v.Component(c)
		if p.Action.HeldLeft() {
			r[0] = rate(p.Ends.Left, c)
		}
		if p.Action.HeldRight() {
			r[len(r)-1] = rate(p.Ends.Right, c)
		}
	}
}
