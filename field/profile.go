package field

import "github.com/tenter-go/tenter/lattice"

// A Profile is a history given by a formula: the value and the rate ∂φ/∂t of
// one component at (x, t).
type Profile func(x, t float64) (value, rate float64)

// On returns the profile at time t on the sites of a line, as a state of one
// component.
func (p Profile) On(line lattice.Axis, t float64) State {
	s := NewState(1, line.Sites)
	for i := range line.Sites {
		s.Field.Data[i], s.Rate.Data[i] = p(line.At(i), t)
	}
	return s
}

// Over returns the profile on every event of a block, as a history of one
// component.
func (p Profile) Over(b lattice.Block) *History {
	h := NewHistory(b, 1)
	for n := range b.Slices() {
		h.Slice(n).CopyFrom(p.On(b.Space, b.Time.At(n)).Field)
	}
	return h
}
