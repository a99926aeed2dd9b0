package main

import (
	"context"
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/minimize"
)

// watch is an invented record of a fluxon on a line of 20 Josephson lengths: how
// it was launched, and what four pickups read as it went by.
type watch struct {
	misread float64 // by how much one reading is off
	noise   float64 // strength q of the noise that the equation is allowed
}

const (
	halfLine = 10.0
	until    = 8.0
	launchAt = -4.0
	speed    = 0.5
	alpha    = 0.05 // loss through the junction
	beta     = 0.1  // loss along the electrodes; it lets single events have a limit of order 2
	bias     = 0.07
	suspect  = 2 // the reading that is off
)

// A reading is the phase difference that a pickup shows.
type reading struct {
	lattice.Event
	phi float64
}

// readings returns the record: what the launch makes of the field, rounded to
// 0.05 rad, but for the misread one.
func (w watch) readings() []reading {
	all := []reading{
		{lattice.Event{T: 2.4, X: -2.8}, 3.10},
		{lattice.Event{T: 4.0, X: -2.0}, 3.05},
		{lattice.Event{T: 4.8, X: -1.2}, 3.95},
		{lattice.Event{T: 5.6, X: -1.2}, 3.05},
	}
	all[suspect].phi += w.misread
	return all
}

// events are where and when the pickups were read.
func (w watch) events() []lattice.Event {
	var all []lattice.Event
	for _, r := range w.readings() {
		all = append(all, r.Event)
	}
	return all
}

func (w watch) block(h float64) (lattice.Block, error) {
	k := h / 2
	return lattice.NewBlock(
		lattice.Axis{Step: k, Sites: int(math.Round(until/k)) + 1},
		lattice.Axis{From: -halfLine, Step: h, Sites: int(math.Round(2*halfLine/h)) + 1},
	)
}

// account is what one lattice makes of the record.
type account struct {
	found     *minimize.Found
	residual  *field.History
	verdict   *minimize.Verdict
	influence *minimize.Influence // of the suspect reading
	shares    minimize.Shares
}

// settle finds the history that meets launch and readings with the least noise,
// and asks what they do to each other.
func (w watch) settle(ctx context.Context, b lattice.Block) (*account, error) {
	s, err := action.New(b, action.Wave{
		Potential: action.SineGordon{},
		Alpha:     action.Uniform(alpha), Beta: action.Uniform(beta), Source: action.Uniform(-bias),
	})
	if err != nil {
		return nil, err
	}
	kink, err := field.SineGordonKink(field.Moving{At: launchAt, Speed: speed})
	if err != nil {
		return nil, err
	}
	start := field.Superpose(-math.Asin(bias), kink).On(b.Space, 0)
	run, err := integrate.Evolve(ctx, s, start, integrate.Settings{})
	if err != nil {
		return nil, err
	}
	// The launch, which by itself determines the history, and the readings.
	held := constraint.On(b)
	held.Slice(0, run.History.Slice(0))
	held.Slice(1, run.History.Slice(1))
	for _, r := range w.readings() {
		held.Event(r.T, r.X, r.phi)
	}
	set := &minimize.Settings{ResidualScale: w.noise}
	a := new(account)
	if a.found, err = minimize.LeastResidual(ctx, s, held, run.History, set); err != nil {
		return nil, err
	}
	a.residual = s.Residual(nil, a.found.History)

	response, err := minimize.NewResponse(s, held, a.found, set)
	if err != nil {
		return nil, err
	}
	if a.verdict, err = response.Verdict(ctx, nil); err != nil {
		return nil, err
	}
	at := w.readings()[suspect].Event
	influences, err := response.Of(minimize.Change{Part: minimize.PinnedValue, Event: at})
	if err != nil {
		return nil, err
	}
	a.influence = influences[0]
	cone, err := lattice.NewCone(b.Space, at, 1)
	if err != nil {
		return nil, err
	}
	a.shares = a.influence.Shares(cone)
	return a, nil
}

// pushes returns the reactions of the readings, the largest first.
func (a *account) pushes() []constraint.Reaction {
	var events []constraint.Reaction
	for _, r := range a.found.Reactions {
		if r.Kind == "event" {
			events = append(events, r)
		}
	}
	return events
}

// first returns what the verdict would give up first.
func (a *account) first() (minimize.Relief, error) {
	if len(a.verdict.Reliefs) == 0 {
		return minimize.Relief{}, fmt.Errorf("launch and readings agree to rounding, so there is nothing to judge; want another -misread")
	}
	return a.verdict.Reliefs[0], nil
}

// value returns the field at the first event of a relief.
func (a *account) value(r minimize.Relief) float64 {
	h := a.found.History
	n, _ := h.Block.Time.Nearest(r.Event.T)
	i, _ := h.Block.Space.Nearest(r.Event.X)
	return h.At(n, 0, i)
}
