package track

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Kinks follows the kinks of one component from slice to slice. The slices must
// be so close together in time that a kink moves by less than Reach from one to
// the next.
type Kinks struct {
	Line      lattice.Axis // may be changed between slices, as a domain grows
	Vacua     Vacua
	Component int

	// Reach is how far from where it is expected a kink may be seen again, and how
	// near to each other two must vanish to have merged. Zero means 2, about the
	// width of a kink in natural units, and the way of light since the last slice.
	Reach float64

	f     follower
	found []Kink
}

// Add takes the field at time t, which must be later than that before. It is an
// error if it is not, or if Vacua make no sense; it panics if phi does not lie on
// the line.
func (k *Kinks) Add(t float64, phi field.Slice) error {
	if !k.f.started {
		if err := k.Vacua.Check(); err != nil {
			return err
		}
	}
	k.found = k.Vacua.find(k.found[:0], newRow(k.Line, phi.Component(k.Component), k.Line.JumpOf(k.Component)))
	return k.f.next(t, k.Line, k.found, k.Reach)
}

// Follow adds every slice of a history, on the line of its block.
func (k *Kinks) Follow(h *field.History) error {
	k.Line = h.Block.Space
	for n := range h.Block.Slices() {
		if err := k.Add(h.Block.Time.At(n), h.Slice(n)); err != nil {
			return err
		}
	}
	return nil
}

// Paths returns all paths in the order in which they were first seen, from left
// to right.
func (k *Kinks) Paths() []*Path { return k.f.paths }

// Seen returns the paths that were seen at the last slice, from left to right.
// It is valid until the next Add.
func (k *Kinks) Seen() []*Path { return k.f.open }

// next checks the time, completes the reach and adds.
func (f *follower) next(t float64, line lattice.Axis, found []Kink, reach float64) error {
	if f.started && !(t > f.time) {
		return fmt.Errorf("track: slice at t = %g after one at t = %g; want a later one", t, f.time)
	}
	if reach == 0 {
		reach = 2
		if f.started {
			reach += t - f.time
		}
	}
	f.add(t, line, found, reach)
	return nil
}
