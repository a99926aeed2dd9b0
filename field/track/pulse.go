package track

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/lattice"
)

// A Pulse is a peak of a density. It reaches to the lowest sites between it and
// its neighbours, or to where the density falls to the floor.
type Pulse struct {
	X        float64 // the top
	Height   float64 // the density there
	Centroid float64 // ∫x(e − floor)dx / ∫(e − floor)dx
	Content  float64 // ∫e dx: for an energy density, the energy
}

// Pulses appends the pulses of a density that rise above the floor to dst, from
// left to right, and returns it. It panics unless there is a value for every
// site.
func Pulses(dst []Pulse, line lattice.Axis, density []float64, floor float64) []Pulse {
	r := newRow(line, density, 0)
	n := len(density)
	from, to := 0, n
	if !line.Periodic {
		// An end without a mirror image has no top.
		if line.Left != lattice.Even {
			from = 1
		}
		if line.Right != lattice.Even {
			to = n - 1
		}
	}
	for i := from; i < to; i++ {
		// Of equal neighbours the left one is the top.
		if e := density[i]; e > floor && r.at(i-1) < e && e >= r.at(i+1) {
			dst = append(dst, r.pulse(i, floor))
		}
	}
	return dst
}

// pulse returns the pulse whose highest site is i.
func (r row) pulse(i int, floor float64) Pulse {
	s, height := r.top(i)
	p := Pulse{X: r.line.At(i) + s*r.line.Step, Height: height}
	lo, hi := 0, len(r.v)-1
	if r.line.Periodic {
		lo, hi = i-len(r.v)/2, i+(len(r.v)-1)/2
	}
	a, b := i, i
	for a > lo && r.at(a-1) > floor && r.at(a-1) < r.at(a) {
		a--
	}
	for b < hi && r.at(b+1) > floor && r.at(b+1) <= r.at(b) {
		b++
	}
	var weight, moment float64
	for j := a; j <= b; j++ {
		u := 1.0
		if !r.line.Periodic {
			u = r.line.Weight(j)
		}
		e := r.at(j)
		p.Content += u * e * r.line.Step
		weight += u * (e - floor)
		moment += u * (e - floor) * r.line.At(j)
	}
	p.Centroid = moment / weight
	return p
}

// top returns the place of the maximum next to site i, in steps from it, and the
// value there, of the quartic through the five sites around i; of the parabola
// through three next to an end without an image.
func (r row) top(i int) (s, height float64) {
	y0 := r.at(i)
	a, b := r.at(i-1), r.at(i+1)
	d1, d2, d3, d4 := 0.5*(b-a), b-2*y0+a, 0.0, 0.0
	if first := r.first(i-1, 5); len(r.v) >= 5 && first == i-2 {
		aa, bb := r.at(i-2), r.at(i+2)
		d1 = (8*(b-a) - (bb - aa)) / 12
		d2 = (16*(b+a) - (bb + aa) - 30*y0) / 12
		d3 = 0.5 * (bb - 2*b + 2*a - aa)
		d4 = bb - 4*b + 6*y0 - 4*a + aa
	}
	for range 20 { // Newton's method from the site, close by
		slope := d1 + s*(d2+s*(d3/2+s*d4/6))
		bend := d2 + s*(d3+s*d4/2)
		if !(bend < 0) {
			break
		}
		s = max(-1, min(1, s-slope/bend))
	}
	return s, y0 + s*(d1+s*(d2/2+s*(d3/6+s*d4/24)))
}

// PulseTrain follows the pulses of a density from slice to slice. The slices must
// be so close together in time that a pulse moves by less than Reach.
type PulseTrain struct {
	Line  lattice.Axis // may be changed between slices, as a domain grows
	Floor float64      // lower peaks are left out

	// Centroids makes the paths those of the centroids instead of the tops.
	Centroids bool

	// Reach is as in Kinks.
	Reach float64

	f      follower
	pulses []Pulse
	found  []Kink
}

// Add takes the density at time t, which must be later than that before, else it
// is an error. It panics unless the density has a value for every site.
func (p *PulseTrain) Add(t float64, density []float64) error {
	if math.IsNaN(p.Floor) {
		return fmt.Errorf("track: floor NaN; want a density below the pulses and above what is not one")
	}
	p.pulses = Pulses(p.pulses[:0], p.Line, density, p.Floor)
	p.found = p.found[:0]
	for _, q := range p.pulses {
		x := q.X
		if p.Centroids {
			x = q.Centroid
		}
		p.found = append(p.found, Kink{X: x})
	}
	return p.f.next(t, p.Line, p.found, p.Reach)
}

// Paths returns all paths in the order in which they were first seen, from left
// to right.
func (p *PulseTrain) Paths() []*Path { return p.f.paths }

// Seen returns the paths that were seen at the last slice, from left to right.
// It is valid until the next Add.
func (p *PulseTrain) Seen() []*Path { return p.f.open }
