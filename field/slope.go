package field

import "github.com/tenter-go/tenter/lattice"

// TimeSlope returns ∂φ/∂t at every event, of order k²: differences of the
// slices before and after, of the first or last three slices at the ends of the
// clock (two if there are no more). A periodic clock goes round, with its jump.
//
// It is the direction in which a history moves when it is shifted in time.
func (h *History) TimeSlope() *History {
	d := NewHistory(h.Block, h.Components)
	at := differences(h.Block.Time)
	for n := range h.Block.Slices() {
		for c := range h.Components {
			to := d.Slice(n).Component(c)
			for _, w := range at(n, c) {
				for i, v := range h.Slice(w.at).Component(c) {
					to[i] += w.weight * (v + w.jump)
				}
			}
		}
	}
	return d
}

// SpaceSlope returns ∂φ/∂x at every event, of order h², as TimeSlope does ∂φ/∂t.
func (h *History) SpaceSlope() *History {
	d := NewHistory(h.Block, h.Components)
	at := differences(h.Block.Space)
	for n := range h.Block.Slices() {
		for c := range h.Components {
			from, to := h.Slice(n).Component(c), d.Slice(n).Component(c)
			for i := range to {
				for _, w := range at(i, c) {
					to[i] += w.weight * (from[w.at] + w.jump)
				}
			}
		}
	}
	return d
}

// A term is weight·(φ(at) + jump) of a difference.
type term struct {
	at           int
	weight, jump float64
}

// differences returns the first derivative at site i of an axis for component c.
func differences(a lattice.Axis) func(i, c int) []term {
	last, w := a.Sites-1, 1/(2*a.Step)
	return func(i, c int) []term {
		switch {
		case i > 0 && i < last:
			return []term{{i - 1, -w, 0}, {i + 1, w, 0}}
		case a.Periodic && i == 0:
			return []term{{last, -w, -a.JumpOf(c)}, {1, w, 0}}
		case a.Periodic:
			return []term{{i - 1, -w, 0}, {0, w, a.JumpOf(c)}}
		case last == 1:
			return []term{{0, -2 * w, 0}, {1, 2 * w, 0}}
		case i == 0:
			return []term{{0, -3 * w, 0}, {1, 4 * w, 0}, {2, -w, 0}}
		}
		return []term{{i, 3 * w, 0}, {i - 1, -4 * w, 0}, {i - 2, w, 0}}
	}
}
