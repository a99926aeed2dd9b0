package main

import (
	"context"
	"fmt"

	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/lattice/refine"
	"github.com/tenter-go/tenter/minimize"
)

// alignment is the angle of least energy in a channel.
type alignment struct {
	channel *channel
	region  *lattice.Region
	angle   *field.History
	energy  float64 // elastic energy and anchoring costs
	costs   []float64
	report  minimize.Report
}

// settle finds the angle of least energy on a block, starting from the angle of
// an earlier solution on the same block or, without one, from the mean of what
// the walls ask for, each with the weight of its strength.
func (c *channel) settle(ctx context.Context, b lattice.Block, before *alignment) (*alignment, error) {
	region, err := c.within(b, "")
	if err != nil {
		return nil, err
	}
	s, err := elastic(region)
	if err != nil {
		return nil, err
	}
	start := c.mean(b)
	if before != nil {
		start = before.angle
	}
	held, walls := c.conditions(region)
	found, err := minimize.Minimum(ctx, s, held, start, nil)
	if err != nil {
		return nil, err
	}
	a := &alignment{channel: c, region: region, angle: found.History, energy: found.Report.CostAfter, report: found.Report}
	return a, a.charge(held, walls)
}

// charge works out what each wall costs.
func (a *alignment) charge(held *constraint.Set, walls []*constraint.Cost) error {
	free, err := held.Free(a.angle)
	if err != nil {
		return err
	}
	for _, wall := range walls {
		a.costs = append(a.costs, free.CostOf(wall, a.angle))
	}
	return nil
}

func (c *channel) mean(b lattice.Block) *field.History {
	var sum, total float64
	for _, p := range c.parts() {
		sum += p.strength * p.easy
		total += p.strength
	}
	h := field.NewHistory(b, 1)
	for k := range h.Data {
		h.Data[k] = sum / total
	}
	return h
}

// at returns the angle at a site of the lattice.
func (a *alignment) at(e lattice.Event) float64 {
	n, _ := a.angle.Block.Time.Nearest(e.T)
	i, _ := a.angle.Block.Space.Nearest(e.X)
	return a.angle.At(n, 0, i)
}

// deviation returns how far the wall of an arm has yielded: the mean of θ − easy
// along it.
func (a *alignment) deviation(p part) float64 {
	b := a.angle.Block
	var sum float64
	if p.name == "stem" {
		first, _ := b.Space.Nearest(-0.5)
		last, _ := b.Space.Nearest(0.5)
		for i := first; i <= last; i++ {
			weight := b.Space.Step
			if i == first || i == last {
				weight /= 2
			}
			sum += weight * a.angle.At(0, 0, i)
		}
	} else {
		events, length := a.channel.end(b, p.name)
		for _, e := range events {
			sum += length(e.X, e.T) * a.at(e)
		}
	}
	return sum - p.easy // the walls are of length 1
}

// elasticIn returns the elastic energy of one piece of the channel.
func (a *alignment) elasticIn(piece string) (float64, error) {
	r, err := a.channel.within(a.angle.Block, piece)
	if err != nil {
		return 0, err
	}
	s, err := elastic(r)
	if err != nil {
		return 0, err
	}
	return s.Value(a.angle), nil
}

// A turn is what follows when the easy angle of one wall is turned, by unit angle.
type turn struct {
	felt   map[string]float64 // change of θ in the middle of every arm
	torque float64            // change of the energy: the torque on that wall, in K
}

// nudge is the angle by which a wall is turned either way.
const nudge = 0.1 // degrees

// turned returns the effect of turning each wall, in the order of parts, by
// solving again with the wall turned either way. The central difference is good to
// the square of the nudge, 3e-6.
func (a *alignment) turned(ctx context.Context) ([]turn, error) {
	var turns []turn
	for k := range a.channel.parts() {
		t := turn{felt: map[string]float64{}}
		for _, sign := range []float64{1, -1} {
			c := *a.channel
			c.parts()[k].easy += sign * radians(nudge)
			moved, err := c.settle(ctx, a.angle.Block, a)
			if err != nil {
				return nil, fmt.Errorf("with the %s turned by %g°: %w", c.parts()[k].wall(), sign*nudge, err)
			}
			per := sign / (2 * radians(nudge))
			for _, p := range c.parts() {
				t.felt[p.name] += per * moved.at(c.middle(p.name))
			}
			t.torque += per * moved.energy
		}
		turns = append(turns, t)
	}
	return turns, nil
}

// quantities returns everything that is measured.
func (a *alignment) quantities(turns []turn) ([]refine.Quantity, error) {
	qs := []refine.Quantity{{Name: "energy", Value: a.energy, Unit: "K"}}
	parts := a.channel.parts()
	pieces := []string{"junction"}
	for _, p := range parts {
		pieces = append(pieces, p.name)
	}
	for _, piece := range pieces {
		e, err := a.elasticIn(piece)
		if err != nil {
			return nil, err
		}
		qs = append(qs, refine.Quantity{Name: "elastic_" + piece, Value: e, Unit: "K"})
	}
	for k, p := range parts {
		qs = append(qs, refine.Quantity{Name: "cost_" + p.name, Value: a.costs[k], Unit: "K"},
			refine.Quantity{Name: "deviation_" + p.name, Value: degrees(a.deviation(p)), Unit: "deg"},
			refine.Quantity{Name: "torque_" + p.name, Value: turns[k].torque, Unit: "K"})
	}
	qs = append(qs, refine.Quantity{Name: "angle_junction", Value: degrees(a.at(a.channel.junction())), Unit: "deg"})
	for _, p := range parts {
		qs = append(qs, refine.Quantity{Name: "angle_" + p.name, Value: degrees(a.at(a.channel.middle(p.name))), Unit: "deg"})
	}
	for k, wall := range parts {
		for _, p := range parts {
			qs = append(qs, refine.Quantity{Name: "felt_" + wall.name + "_in_" + p.name, Value: turns[k].felt[p.name]})
		}
	}
	return qs, nil
}
