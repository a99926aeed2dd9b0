package lattice

import (
	"fmt"
	"math"
)

// OnSite is the largest distance from a site, in steps, at which a position
// still counts as lying on that site.
const OnSite = 1e-9

// End says how an axis ends.
type End uint8

// The ends of an axis; see the package comment for what each means.
const (
	Free End = iota
	Held
	Open
	Even
	Odd
)

// String returns the name of the end in lower case.
func (e End) String() string {
	names := [...]string{"free", "held", "open", "even", "odd"}
	if int(e) < len(names) {
		return names[e]
	}
	return fmt.Sprintf("end(%d)", uint8(e))
}

// Unknown reports whether the end site has an equation of its own: true for
// Free, Open and Even ends, false for Held and Odd ones.
func (e End) Unknown() bool { return e == Free || e == Open || e == Even }

// An Axis is a row of Sites equally spaced points From + i·Step.
// The zero values of Left and Right are free ends.
type Axis struct {
	From, Step float64
	Sites      int

	Left, Right End // ignored on a periodic axis

	// Periodic joins the last site to the first by one more link, so that the
	// axis has the length Sites·Step.
	Periodic bool

	// Jump is what the field gains once around a periodic axis, one value a
	// component; nil means no jump.
	Jump []float64
}

// Check returns an error that names the first number of the axis that makes no
// sense, or nil.
func (a Axis) Check() error {
	switch {
	case math.IsNaN(a.From) || math.IsInf(a.From, 0):
		return fmt.Errorf("lattice: axis starts at %v; want a finite number", a.From)
	case !(a.Step > 0) || math.IsInf(a.Step, 0):
		return fmt.Errorf("lattice: axis has the step %v; want a finite number > 0", a.Step)
	case a.Sites < 2:
		return fmt.Errorf("lattice: axis has %d sites; want at least 2", a.Sites)
	case a.Left > Odd:
		return fmt.Errorf("lattice: left end is %v; want Free, Held, Open, Even or Odd", a.Left)
	case a.Right > Odd:
		return fmt.Errorf("lattice: right end is %v; want Free, Held, Open, Even or Odd", a.Right)
	case a.Periodic && (a.Left != Free || a.Right != Free):
		return fmt.Errorf("lattice: periodic axis with a %v left and a %v right end; a periodic axis has no ends, leave both unset", a.Left, a.Right)
	case !a.Periodic && len(a.Jump) > 0:
		return fmt.Errorf("lattice: jump %v on an axis with ends; a jump needs Periodic", a.Jump)
	}
	if to := a.To(); math.IsInf(to, 0) || to == a.At(a.Sites-2) || a.From == a.At(1) {
		return fmt.Errorf("lattice: axis from %g in %d steps of %g; want a step that float64 can add at both ends", a.From, a.Sites-1, a.Step)
	}
	for c, j := range a.Jump {
		if math.IsNaN(j) || math.IsInf(j, 0) {
			return fmt.Errorf("lattice: jump of component %d is %v; want a finite number", c, j)
		}
	}
	return nil
}

// At returns the position of site i, From + i·Step, product and sum rounded
// separately on every machine. Any i is allowed.
func (a Axis) At(i int) float64 { return a.From + float64(float64(i)*a.Step) }

// Between returns the middle of the link from site i to site i + 1.
func (a Axis) Between(i int) float64 { return a.From + float64((float64(i)+0.5)*a.Step) }

// Positions appends the positions of all sites to dst and returns it.
func (a Axis) Positions(dst []float64) []float64 {
	for i := range a.Sites {
		dst = append(dst, a.At(i))
	}
	return dst
}

// Links returns the number of nearest-neighbour links: Sites on a periodic
// axis, else Sites − 1. Link i joins the sites i and i + 1.
func (a Axis) Links() int {
	if a.Periodic {
		return a.Sites
	}
	return a.Sites - 1
}

// Length returns Links·Step.
func (a Axis) Length() float64 { return float64(a.Links()) * a.Step }

// To returns the position of the last site.
func (a Axis) To() float64 { return a.At(a.Sites - 1) }

// Weight returns the share of a cell that belongs to site i.
func (a Axis) Weight(i int) float64 {
	if !a.Periodic && (i == 0 && a.Left.Unknown() || i == a.Sites-1 && a.Right.Unknown()) {
		return 0.5
	}
	return 1
}

// Nearest returns the site nearest to x, clamped to the axis (wrapped on a
// periodic one), and the distance from it in steps. The distance is measured
// from the position that At gives, so that it is zero at every At(i) however
// long the axis. It panics if x is not finite.
func (a Axis) Nearest(x float64) (i int, off float64) {
	if math.IsNaN(x - x) {
		panic(fmt.Sprintf("lattice: nearest site to %v", x))
	}
	r := math.Round((x - a.From) / a.Step)
	if !a.Periodic {
		r = min(max(r, 0), float64(a.Sites-1))
	}
	off = math.Abs(x-(a.From+float64(r*a.Step))) / a.Step
	if a.Periodic {
		n := float64(a.Sites)
		if r = math.Mod(r, n); r < 0 {
			r += n
		}
	}
	return int(r), off
}

// Index returns the site at position x. It is an error if x is more than
// OnSite steps from a site or beyond the ends.
func (a Axis) Index(x float64) (int, error) {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return 0, fmt.Errorf("lattice: position %v; want a finite number", x)
	}
	i, off := a.Nearest(x)
	if off <= OnSite {
		return i, nil
	}
	if !a.Periodic && (x < a.From || x > a.To()) {
		return 0, fmt.Errorf("lattice: position %g is off the axis, which runs from %g to %g", x, a.From, a.To())
	}
	return 0, fmt.Errorf("lattice: position %g is %.3g steps from the nearest site, %g; place it on a site or ask for interpolation by name", x, off, a.At(i))
}

// JumpOf returns the jump of component c, zero unless one is set.
func (a Axis) JumpOf(c int) float64 {
	if c < len(a.Jump) {
		return a.Jump[c]
	}
	return 0
}

// Refine returns the axis with every link divided into factor links. Site i of
// a becomes site factor·i. It panics if factor < 1.
func (a Axis) Refine(factor int) Axis {
	if factor < 1 {
		panic("lattice: refinement factor below 1")
	}
	links := a.Links() * factor
	a.Step /= float64(factor)
	a.Sites = links + 1
	if a.Periodic {
		a.Sites = links
	}
	return a
}

// Coarsen returns the axis that keeps every factor-th site. It is an error if
// factor does not divide the number of links or leaves fewer than two sites.
func (a Axis) Coarsen(factor int) (Axis, error) {
	links := a.Links()
	if factor < 1 || links%factor != 0 {
		return Axis{}, fmt.Errorf("lattice: cannot coarsen %d links by %d; want a divisor", links, factor)
	}
	a.Step *= float64(factor)
	a.Sites = links/factor + 1
	if a.Periodic {
		a.Sites = links / factor
	}
	if err := a.Check(); err != nil {
		return Axis{}, fmt.Errorf("coarsening %d links by %d: %w", links, factor, err)
	}
	return a, nil
}
