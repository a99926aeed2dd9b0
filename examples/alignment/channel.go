package main

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/lattice"
)

// channel is the invented channel: a bar of width 1 from the end of the left arm
// to the end of the right one, and a stem of width 1 that meets it from below.
// Both axes of the block are space. The stem's end wall lies at y = 0, its middle
// line at x = 0. Lengths are in channel widths, energies in units of the elastic
// constant K and anchoring strengths in K/width.
type channel struct{ stem, left, right arm }

// arm is a dead end of the channel, beyond the unit square where the three meet,
// and the wall that closes it. An arm of no length does not exist, nor does its
// wall.
type arm struct {
	length   float64
	strength float64 // W
	easy     float64 // the angle that the wall asks for, in radians from the x axis
}

// part is one of the three arms by its name.
type part struct {
	name string
	*arm
}

func (p part) wall() string { return p.name + " wall" }

func (p part) String() string {
	if p.name == "stem" {
		return p.name
	}
	return p.name + " arm"
}

// parts returns the arms that exist, for reading and changing.
func (c *channel) parts() []part {
	var ps []part
	for _, p := range []part{{"stem", &c.stem}, {"left", &c.left}, {"right", &c.right}} {
		if p.length > 0 {
			ps = append(ps, p)
		}
	}
	return ps
}

// check returns an error unless every corner and every point that is measured lies
// on a lattice with so many cells across the channel.
func (c *channel) check(across int) error {
	if across < 2 || across%2 != 0 || across > 128 {
		return fmt.Errorf("-across %d; want an even number of cells from 2 to 128", across)
	}
	for _, p := range []part{{"stem", &c.stem}, {"left", &c.left}, {"right", &c.right}} {
		half := p.length * float64(across) / 2
		switch {
		case !(p.length >= 0 && p.length <= 100) || math.Abs(half-math.Round(half)) > 1e-9:
			return fmt.Errorf("-%s-length %g; want a multiple of %g from 0 to 100, two cells of the coarsest lattice", p.name, p.length, 2/float64(across))
		case !(p.strength >= 0) || math.IsInf(p.strength, 0):
			return fmt.Errorf("-%s %g; want a finite anchoring strength ≥ 0", p.name, p.strength)
		case math.IsNaN(p.easy - p.easy):
			return fmt.Errorf("-%s-angle %g; want a finite number", p.name, degrees(p.easy))
		}
	}
	if len(c.parts()) < 2 {
		return fmt.Errorf("fewer than two arms; want two, or nothing has to be settled")
	}
	var total float64
	for _, p := range c.parts() {
		total += p.strength
	}
	if total == 0 {
		return fmt.Errorf("no wall with an anchoring strength above 0; the angle could be anything")
	}
	return nil
}

// block is the rectangle around the channel, with so many cells across it.
func (c *channel) block(across int) (lattice.Block, error) {
	sites := func(length float64) int { return int(math.Round(length*float64(across))) + 1 }
	step := 1 / float64(across)
	return lattice.NewBlock(
		lattice.Axis{Step: step, Sites: sites(c.stem.length + 1)},
		lattice.Axis{From: -0.5 - c.left.length, Step: step, Sites: sites(c.left.length + 1 + c.right.length)},
	)
}

// within returns the cells of a piece of the channel: "stem", "left", "right",
// "junction", or "" for all of it.
func (c *channel) within(b lattice.Block, piece string) (*lattice.Region, error) {
	return lattice.NewRegion(b, func(e lattice.Event) bool {
		var at string
		switch {
		case math.Abs(e.X) < 0.5 && e.T < c.stem.length:
			at = "stem"
		case e.T < c.stem.length:
			return false
		case e.X < -0.5:
			at = "left"
		case e.X > 0.5:
			at = "right"
		default:
			at = "junction"
		}
		return piece == "" || piece == at
	})
}

// elastic is ½K∫|∇θ|², K = 1, on a region.
func elastic(r *lattice.Region) (*action.Shaped, error) {
	return action.NewShaped(r, action.Wave{Signature: action.Euclidean})
}

// conditions anchors the end walls of the arms, each at the cost ∫½W sin²(θ − easy)
// along it [Rapini & Papoular 1969, J. Phys. Colloques 30, C4-54]. The side walls
// are free: no torque acts on them. The costs stand in the order of parts.
func (c *channel) conditions(r *lattice.Region) (*constraint.Set, []*constraint.Cost) {
	b := r.Block()
	held := constraint.On(b)
	held.Within(r)
	var walls []*constraint.Cost
	for _, p := range c.parts() {
		anchoring := constraint.RapiniPapoular{W: p.strength, Easy: p.easy}
		var wall *constraint.Cost
		if p.name == "stem" {
			first, _ := b.Space.Nearest(-0.5)
			last, _ := b.Space.Nearest(0.5)
			wall = held.CostPart(0, first, last+1, nil, anchoring)
		} else {
			events, length := c.end(b, p.name)
			wall = held.CostAlong(events, length, anchoring)
		}
		wall.Name = p.wall()
		walls = append(walls, wall)
	}
	return held, walls
}

// end returns the events of the end wall of the left or right arm and the length
// of wall that belongs to each: a step, half of it at the two corners.
func (c *channel) end(b lattice.Block, name string) (events []lattice.Event, length func(x, y float64) float64) {
	site := 0
	if name == "right" {
		site = b.Sites() - 1
	}
	first, _ := b.Time.Nearest(c.stem.length)
	last := b.Slices() - 1
	for n := first; n <= last; n++ {
		events = append(events, b.At(n, site))
	}
	return events, func(_, y float64) float64 {
		if y == b.Time.At(first) || y == b.Time.At(last) {
			return b.Time.Step / 2
		}
		return b.Time.Step
	}
}

// middle is the point half way down an arm, on its middle line; junction is that
// of the square where the arms meet.
func (c *channel) middle(name string) lattice.Event {
	e := c.junction()
	switch name {
	case "stem":
		e.T = c.stem.length / 2
	case "left":
		e.X = -0.5 - c.left.length/2
	case "right":
		e.X = 0.5 + c.right.length/2
	}
	return e
}

func (c *channel) junction() lattice.Event { return lattice.Event{T: c.stem.length + 0.5} }

func degrees(angle float64) float64 { return angle * 180 / math.Pi }
func radians(angle float64) float64 { return angle * math.Pi / 180 }
