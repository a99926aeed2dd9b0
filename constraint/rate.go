package constraint

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
)

// A tie is the condition φ(to) = φ(from) + gain between two values of one
// component at site i, on the slices from and to.
type tie struct {
	from, to, component, site int
	gain                      float64
}

// Rate holds the rate of slice n,
//
//	(φ(n+1) − φ(n−1))/2k = v,
//
// k being the time step, at every site. It ties slice n+1 to slice n−1 and
// leaves slice n itself alone. The slice must be interior: at the first and last
// slice of a clock that is not periodic it is an error.
func (s *Set) Rate(n int, v field.Slice) {
	b := s.block
	if !s.onBlock(n, "rate at slice") || !s.fits(v, b.Sites(), fmt.Sprintf("rate at slice %d", n)) {
		return
	}
	last := b.Slices() - 1
	if !b.Time.Periodic && (n == 0 || n == last) {
		side, other := "before", 1
		if n == last {
			side, other = "after", last-1
		}
		s.fail(fmt.Errorf("constraint: rate at slice %d (t = %g), which has no slice %s it; pin the Cauchy pair of slices %d and %d instead (action's March.Start makes the second from a rate)",
			n, b.Time.At(n), side, min(n, other), max(n, other)))
		return
	}
	first, ok := s.from(v.Components, fmt.Sprintf("rate at slice %d", n))
	if !ok {
		return
	}
	before, after := n-1, n+1
	laps := 0.0
	if before < 0 {
		before, laps = last, laps+1
	}
	if after > last {
		after, laps = 0, laps+1
	}
	for k := range v.Components {
		c := first + k
		// φ(n+1) = stored φ(after) + jump if it went around, and likewise before.
		jump := laps * b.Time.JumpOf(c)
		for i, rate := range v.Component(k) {
			s.ties = append(s.ties, tie{from: before, to: after, component: c, site: i, gain: 2*b.Time.Step*rate - jump})
		}
	}
}
