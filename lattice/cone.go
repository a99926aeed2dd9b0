package lattice

import (
	"fmt"
	"math"
	"sort"
)

// A Cone is the light cone of an event: the events that a signal from the apex
// can reach, and those whose signals can reach it. Make one with NewCone or
// NewConeVarying.
type Cone struct {
	apex   Event
	line   Axis
	speed  float64   // the constant speed, if travel is nil
	travel []float64 // ∫dx/c from the first site to each site (and once around)
}

// A Side says where an event lies as seen from the apex of a cone.
type Side int8

// The sides of a cone; its surface belongs to Past and Future, the apex to
// Future.
const (
	Past    Side = -1
	Outside Side = 0
	Future  Side = 1
)

// NewCone returns the cone of the apex for a constant speed c > 0. The apex may
// lie between sites and off the line. Errors name a line that makes no sense,
// an apex that is not finite or a speed out of range.
func NewCone(line Axis, apex Event, c float64) (*Cone, error) {
	if err := checkApex(line, apex); err != nil {
		return nil, err
	}
	if !(c > 0) || math.IsInf(c, 0) {
		return nil, fmt.Errorf("lattice: light cone of %v with the speed %v; want a finite speed > 0", apex, c)
	}
	return &Cone{apex: apex, line: line, speed: c}, nil
}

// NewConeVarying returns the cone of the apex where the speed is c(x). The
// travel time ∫dx/c is taken link by link with Simpson's rule and, inside a
// link, in proportion; beyond the ends of the line it goes on as in the last
// link. c is called at sites and at the middles of links, on a periodic line
// only within [From, From+Length). Errors are those of NewCone and name the
// position of a bad speed.
func NewConeVarying(line Axis, apex Event, c func(x float64) float64) (*Cone, error) {
	if err := checkApex(line, apex); err != nil {
		return nil, err
	}
	travel := make([]float64, line.Links()+1)
	slow := func(x float64) (float64, error) {
		v := c(x)
		if !(v > 0) || math.IsInf(v, 0) {
			return 0, fmt.Errorf("lattice: light cone of %v: speed %v at x = %g; want a finite speed > 0", apex, v, x)
		}
		return 1 / v, nil
	}
	left, err := slow(line.At(0))
	if err != nil {
		return nil, err
	}
	for i := range line.Links() {
		mid, err := slow(line.Between(i))
		if err != nil {
			return nil, err
		}
		next := i + 1
		if line.Periodic && next == line.Sites {
			next = 0
		}
		right, err := slow(line.At(next))
		if err != nil {
			return nil, err
		}
		travel[i+1] = travel[i] + line.Step/6*(left+4*mid+right)
		left = right
	}
	return &Cone{apex: apex, line: line, travel: travel}, nil
}

func checkApex(line Axis, apex Event) error {
	if err := line.Check(); err != nil {
		return fmt.Errorf("light cone: %w", err)
	}
	if math.IsNaN(apex.T-apex.T) || math.IsNaN(apex.X-apex.X) {
		return fmt.Errorf("lattice: light cone of %v; want a finite event", apex)
	}
	return nil
}

// Apex returns the event at the tip of the cone.
func (c *Cone) Apex() Event { return c.apex }

// Delay returns the time a signal needs between the apex's position and x, by
// the quicker way round on a periodic axis.
func (c *Cone) Delay(x float64) float64 {
	if c.travel == nil {
		d := math.Abs(x - c.apex.X)
		if c.line.Periodic {
			l := c.line.Length()
			d = math.Mod(d, l)
			d = min(d, l-d)
		}
		return d / c.speed
	}
	d := math.Abs(c.clock(x) - c.clock(c.apex.X))
	if c.line.Periodic {
		d = min(d, c.travel[len(c.travel)-1]-d)
	}
	return d
}

// clock returns the travel time from the first site to x, linear in a link.
func (c *Cone) clock(x float64) float64 {
	s := (x - c.line.From) / c.line.Step
	last := len(c.travel) - 1
	if c.line.Periodic {
		s = math.Mod(s, float64(last))
		if s < 0 {
			s += float64(last)
		}
	}
	i := min(max(int(math.Floor(s)), 0), last-1)
	return c.travel[i] + (s-float64(i))*(c.travel[i+1]-c.travel[i])
}

// Side returns whether e lies in the future, in the past or outside of the
// cone. Rounding is allowed for: an event within OnSite of a time Delay(x) of
// the surface counts as on it.
func (c *Cone) Side(e Event) Side {
	d := c.Delay(e.X)
	dt := e.T - c.apex.T
	slack := OnSite * max(d, math.Abs(dt))
	switch {
	case dt >= d-slack:
		return Future
	case -dt >= d-slack:
		return Past
	}
	return Outside
}

// Front returns the surface of the cone as two curves over the given positions,
// sorted by x: the earliest future and the latest past time at each.
func (c *Cone) Front(xs []float64) (x, future, past []float64) {
	x = append([]float64(nil), xs...)
	sort.Float64s(x)
	future = make([]float64, len(x))
	past = make([]float64, len(x))
	for i, p := range x {
		d := c.Delay(p)
		future[i], past[i] = c.apex.T+d, c.apex.T-d
	}
	return x, future, past
}
