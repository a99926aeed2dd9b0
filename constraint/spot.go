package constraint

import (
	"math"

	"github.com/tenter-go/tenter/lattice"
)

// A spot is an event as slice and site, and how often one goes around the
// periodic axes of the block to get from there to where it was asked for.
type spot struct {
	slice, site int
	laps        [2]float64 // of time and of space
}

// locate returns the spot of an event, which must be on the lattice.
func (s *Set) locate(e lattice.Event) (spot, error) {
	n, i, err := s.block.Index(e)
	if err != nil {
		return spot{}, err
	}
	return spot{n, i, [2]float64{laps(s.block.Time, e.T, n), laps(s.block.Space, e.X, i)}}, nil
}

// laps returns how often one goes around a periodic axis from site i to x.
func laps(a lattice.Axis, x float64, i int) float64 {
	if !a.Periodic {
		return 0
	}
	return math.Round((x - a.At(i)) / a.Length())
}

// shift returns what component c of the field gains on the way to the spot: its
// value there is the stored one plus the shift.
func (s *Set) shift(p spot, c int) float64 {
	return p.laps[0]*s.block.Time.JumpOf(c) + p.laps[1]*s.block.Space.JumpOf(c)
}

// wrap writes a site that may lie beyond a periodic axis as site and laps.
func wrap(a lattice.Axis, j int) (i int, laps float64) {
	if !a.Periodic {
		return j, 0
	}
	i = j % a.Sites
	if i < 0 {
		i += a.Sites
	}
	return i, float64((j - i) / a.Sites)
}
