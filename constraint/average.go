package constraint

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/lattice"
)

// Shape is the shape of a window in space-time.
type Shape uint8

// The shapes of a window. In one dimension, with Width or Duration zero, they are
// the same.
const (
	Box  Shape = iota // |2Δx/Width| ≤ 1 and |2Δt/Duration| ≤ 1
	Disc              // (2Δx/Width)² + (2Δt/Duration)² ≤ 1
)

// String returns the name of the shape in lower case.
func (p Shape) String() string {
	switch p {
	case Box:
		return "box"
	case Disc:
		return "disc"
	}
	return fmt.Sprintf("shape(%d)", uint8(p))
}

// A Window is what an average is taken over. One of the two lengths may be zero:
// the average is then over x on one slice, or over t at one site.
type Window struct {
	Shape    Shape
	Width    float64 // in x, whole
	Duration float64 // in t, whole
}

// Average holds the average of the field over a window around time t and
// position x. Every event counts with the part of its cell that lies in the
// window, and the weights sum to 1, so that the average changes smoothly with the
// window and, as the lattice is refined, tends to the integral over the window
// divided by its area. (A pin at one event has no such limit in two Euclidean
// dimensions.) For a disc the parts are found along 16 lines a cell.
//
// The centre need not be on the lattice, except along an axis where the window
// has no length. It is an error, which names the event, if no event of the
// lattice is in the window, if the window leaves the block, or if it is longer
// than a periodic axis.
func (s *Set) Average(t, x, value float64, w Window) *Linear {
	l := newLinear("average", value)
	l.at = lattice.Event{T: t, X: x}
	wrong := func(format string, about ...any) *Linear {
		s.fail(fmt.Errorf("constraint: average over a %v of %g × %g around %v: %w", w.Shape, w.Width, w.Duration, l.at, fmt.Errorf(format, about...)))
		return l
	}
	switch {
	case w.Shape > Disc:
		return wrong("want Box or Disc")
	case !finite(w.Width) || !finite(w.Duration) || w.Width < 0 || w.Duration < 0 || w.Width == 0 && w.Duration == 0:
		return wrong("want lengths ≥ 0, one of them above 0")
	case !finite(t) || !finite(x):
		return wrong("want a finite event")
	}
	if err := inside(s.block.Time, t, w.Duration); err != nil {
		return wrong("time: %w", err)
	}
	if err := inside(s.block.Space, x, w.Width); err != nil {
		return wrong("space: %w", err)
	}
	c, ok := s.one(l.Name)
	if !ok {
		return l
	}
	l.component = c
	if !s.covers(l.at, w) {
		return wrong("it covers no event of the lattice; want a window wider than a step")
	}
	var sum float64
	s.eachShare(l.at, w, func(n, i int, share float64) {
		sum += share
		s.addTerm(l, n, i, share)
	})
	for k := range l.terms {
		l.terms[k].a /= sum
	}
	l.shift /= sum
	return s.hold(l)
}

// inside returns an error if an interval of so much length around x leaves the
// axis, or if it has none and x is not on a site.
func inside(a lattice.Axis, x, length float64) error {
	slack := lattice.OnSite * a.Step
	switch {
	case length == 0:
		_, err := a.Index(x)
		return err
	case a.Periodic && length > a.Length()+slack:
		return fmt.Errorf("longer than the periodic axis, which has %g", a.Length())
	case !a.Periodic && (x-length/2 < a.From-slack || x+length/2 > a.To()+slack):
		return fmt.Errorf("leaves the axis, which runs from %g to %g", a.From, a.To())
	}
	return nil
}

// covers reports whether an event of the lattice is in the window.
func (s *Set) covers(e lattice.Event, w Window) bool {
	scaled := func(a lattice.Axis, at, length float64) float64 {
		if length == 0 {
			return 0
		}
		_, off := a.Nearest(at)
		return 2 * off * a.Step / length
	}
	u, v := scaled(s.block.Time, e.T, w.Duration), scaled(s.block.Space, e.X, w.Width)
	const edge = 1 + 1e-9
	if w.Shape == Box {
		return u <= edge && v <= edge
	}
	return math.Hypot(u, v) <= edge
}

// eachShare calls do for every cell that the window meets, with the area of the
// cell that is in it, in any unit. Slices and sites may lie beyond periodic axes.
func (s *Set) eachShare(e lattice.Event, w Window, do func(n, i int, share float64)) {
	clock, line := s.block.Time, s.block.Space
	if w.Shape == Box || w.Width == 0 || w.Duration == 0 {
		for _, p := range overlaps(clock, e.T, w.Duration) {
			for _, q := range overlaps(line, e.X, w.Width) {
				do(p.site, q.site, p.weight*q.weight)
			}
		}
		return
	}
	const lines = 16
	for _, p := range overlaps(clock, e.T, w.Duration) {
		shares := make(map[int]float64)
		first, last := math.MaxInt, math.MinInt
		for j := range lines {
			u := 2 * (clock.At(p.site) + ((float64(j)+0.5)/lines-0.5)*clock.Step - e.T) / w.Duration
			if u*u >= 1 {
				continue
			}
			for _, q := range overlaps(line, e.X, w.Width*math.Sqrt(1-u*u)) {
				shares[q.site] += q.weight
				first, last = min(first, q.site), max(last, q.site)
			}
		}
		for i := first; i <= last; i++ {
			if share := shares[i]; share > 0 {
				do(p.site, i, share)
			}
		}
	}
}

// overlaps returns the sites whose cells meet the interval of so much length
// around x, and the length that they share with it; for no length, the site at x.
func overlaps(a lattice.Axis, x, length float64) []weighted {
	if length == 0 {
		return []weighted{{int(math.Round((x - a.From) / a.Step)), 1}}
	}
	lo, hi := x-length/2, x+length/2
	var found []weighted
	for j := int(math.Floor((lo-a.From)/a.Step + 0.5)); j <= int(math.Ceil((hi-a.From)/a.Step-0.5)); j++ {
		share := min(hi, a.Between(j)) - max(lo, a.Between(j-1))
		if share > 1e-12*a.Step && (a.Periodic || j >= 0 && j < a.Sites) {
			found = append(found, weighted{j, share})
		}
	}
	return found
}
