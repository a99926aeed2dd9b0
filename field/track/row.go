package track

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/lattice"
)

// row is one component on the sites of a line and a few images beyond its ends.
type row struct {
	line lattice.Axis
	v    []float64
	jump float64 // gained once around a ring
}

func newRow(line lattice.Axis, v []float64, jump float64) row {
	if len(v) != line.Sites {
		panic(fmt.Sprintf("track: %d values on %d sites", len(v), line.Sites))
	}
	return row{line: line, v: v, jump: jump}
}

// at returns the value at site i, up to a few sites beyond an end: there it is
// the mirror image or, on a ring, the site on the other side.
func (r row) at(i int) float64 {
	last := len(r.v) - 1
	switch {
	case 0 <= i && i <= last:
		return r.v[i]
	case r.line.Periodic && i > last:
		return r.v[i-last-1] + r.jump
	case r.line.Periodic:
		return r.v[i+last+1] - r.jump
	case i < 0 && r.line.Left == lattice.Odd:
		return 2*r.v[0] - r.v[-i]
	case i < 0:
		return r.v[-i]
	case r.line.Right == lattice.Odd:
		return 2*r.v[last] - r.v[2*last-i]
	}
	return r.v[2*last-i]
}

// first returns the first of n sites in a row that lie as evenly as they can
// around the link from i to i + 1, without going beyond an end that has no image.
func (r row) first(i, n int) int {
	first := i + 1 - n/2
	mirror := func(e lattice.End) bool { return e == lattice.Even || e == lattice.Odd }
	if r.line.Periodic {
		return first
	}
	if !mirror(r.line.Right) {
		first = min(first, len(r.v)-n)
	}
	if !mirror(r.line.Left) {
		first = max(first, 0)
	}
	return first
}

// passage returns the mean of the places between the sites from and to at which
// the row passes the level: one place, unless there is noise.
func (r row) passage(from, to int, level float64) float64 {
	var sum, n float64
	for i := from; i < to; i++ {
		if (r.at(i) > level) != (r.at(i+1) > level) {
			sum += r.crossing(i, level)
			n++
		}
	}
	return sum / n
}

// crossing returns the place on the link from site i to i + 1 at which the cubic
// through the four sites around it passes the level, on a line of fewer sites
// the straight line. The ends of the link lie on different sides of the level.
func (r row) crossing(i int, level float64) float64 {
	f := func(s float64) float64 { return r.at(i) + s*(r.at(i+1)-r.at(i)) - level }
	if len(r.v) >= 4 {
		first := r.first(i, 4)
		var y [4]float64
		for k := range y {
			y[k] = r.at(first+k) - level
		}
		offset := float64(i - first)
		f = func(s float64) float64 {
			s += offset
			a, b, c, d := s, s-1, s-2, s-3
			return -y[0]*b*c*d/6 + y[1]*a*c*d/2 - y[2]*a*b*d/2 + y[3]*a*b*c/6
		}
	}
	return r.line.At(i) + r.line.Step*root(f, r.at(i)-level, r.at(i+1)-level)
}

// root returns a zero of f between 0 and 1, where its values f0 and f1 have
// different signs or one is zero, to rounding: the Illinois rule of false
// position [Dowell & Jarratt 1971, BIT 11, 168].
func root(f func(float64) float64, f0, f1 float64) float64 {
	a, b := 0.0, 1.0
	if f0 == 0 {
		return a
	}
	for range 100 {
		s := a - f0*(b-a)/(f1-f0)
		fs := f(s)
		if fs == 0 || math.Abs(b-a) < 1e-15 || s == a || s == b {
			return s
		}
		if (fs > 0) != (f1 > 0) {
			a, f0 = b, f1
		} else {
			f0 *= 0.5
		}
		b, f1 = s, fs
	}
	return b
}
