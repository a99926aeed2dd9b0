package constraint

import (
	"fmt"
	"slices"

	"github.com/tenter-go/tenter/field"
)

// A tie is the condition φ(to) = φ(from) + gain between two values of one
// component at site i, on the slices from and to.
type tie struct {
	from, to, component, site int
	gain                      float64
}

// Rate holds the rate of slice n to the values of v. With the time step k it is
//
//	(φ(n+1) − φ(n−1))/2k = v
//
// at every site of an interior slice, and of any slice of a periodic clock: it
// ties slice n+1 to slice n−1 and leaves slice n itself alone. At the first and
// the last slice, of at least three, it is the one-sided formula of second order,
//
//	(−3φ(0) + 4φ(1) − φ(2))/2k = v,  (3φ(N) − 4φ(N−1) + φ(N−2))/2k = v,
//
// a hard linear condition at every site; Held and Odd ends, whose values are
// given, are left out of it. (To march from a slice and a rate, pin the Cauchy
// pair instead: action's March.Start makes the second slice.)
func (s *Set) Rate(n int, v field.Slice) {
	b := s.block
	name := fmt.Sprintf("rate at slice %d", n)
	if !s.onBlock(n, "rate at slice") || !s.fits(v, b.Sites(), name) {
		return
	}
	last := b.Slices() - 1
	oneSided := !b.Time.Periodic && (n == 0 || n == last)
	if oneSided && last < 2 {
		s.fail(fmt.Errorf("constraint: %s (t = %g) of a block of 2 slices; want at least 3, or pin both", name, b.Time.At(n)))
		return
	}
	first, ok := s.from(v.Components, name)
	if !ok {
		return
	}
	for k := range v.Components {
		for i, rate := range v.Component(k) {
			if oneSided {
				s.oneSidedRate(name, n, first+k, i, rate)
			} else {
				s.tieRate(n, first+k, i, rate)
			}
		}
	}
}

func (s *Set) tieRate(n, c, i int, rate float64) {
	clock := s.block.Time
	before, back := wrap(clock, n-1)
	after, ahead := wrap(clock, n+1)
	// φ(n+1) = stored φ(after) + jump if it went around, and likewise before.
	jump := (ahead - back) * clock.JumpOf(c)
	s.ties = append(s.ties, tie{from: before, to: after, component: c, site: i, gain: 2*clock.Step*rate - jump})
}

func (s *Set) oneSidedRate(name string, n, c, i int, rate float64) {
	if slices.Contains(endsWithoutEquation(s.block.Space), i) {
		return
	}
	l := newLinear(name, rate)
	l.at, l.component = s.block.At(n, i), c
	inward, unit := 1, 1/(2*s.block.Time.Step)
	if n > 0 {
		inward, unit = -1, -unit
	}
	for j, a := range [...]float64{-3, 4, -1} {
		s.addTerm(l, n+inward*j, i, a*unit)
	}
	s.hold(l)
}
