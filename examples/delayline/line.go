package main

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// delayLine is the invented line, in units of the Josephson length, the inverse
// plasma frequency and the energy scale that makes a resting fluxon weigh 8.
type delayLine struct {
	length, loss, bias float64
	uniform            bool
}

const (
	launchAt = 0.10 // of the length: where the fluxon starts
	oddFrom  = 0.20 // of the length: the odd stretch
	oddTo    = 0.35
	oddKappa = 0.8 // κ on the odd stretch
	oddEdge  = 1.0 // width of its edges
	arriveAt = 0.90
	slopeA   = 0.6 // the terminal speed is read between these
	slopeB   = 0.8
)

func (d delayLine) check() error {
	switch {
	case !(d.length >= 40) || math.IsInf(d.length, 0):
		return fmt.Errorf("-length %g; want a finite length of at least 40 Josephson lengths, room for a fluxon and its tails", d.length)
	case !(d.loss >= 0) || math.IsInf(d.loss, 0):
		return fmt.Errorf("-loss %g; want a finite number ≥ 0", d.loss)
	case !(d.bias > 0 && d.bias < 1):
		return fmt.Errorf("-bias %g; want a number between 0 and 1: at 0 nothing drives the fluxon, at 1 the line leaves the zero-voltage state", d.bias)
	}
	return nil
}

// kappa is the coupling along the line.
func (d delayLine) kappa(x float64) float64 {
	if d.uniform {
		return 1
	}
	edge := func(share float64) float64 { return math.Tanh((x - share*d.length) / oddEdge) }
	return 1 + (oddKappa-1)*0.5*(edge(oddFrom)-edge(oddTo))
}

// density is φ_tt + αφ_t = (κφ_x)_x − sin φ − γ. The bias γ is counted positive
// where it drives a fluxon to the right, so the line rests at −arcsin γ.
func (d delayLine) density() action.Wave {
	return action.Wave{
		Potential: action.SineGordon{},
		Kappa:     action.Along(d.kappa),
		Alpha:     action.Uniform(d.loss),
		Source:    action.Uniform(-d.bias),
	}
}

func (d delayLine) background() float64 { return -math.Asin(d.bias) }

// firstOrderSpeed is the speed at which bias and loss balance for an undeformed
// fluxon, 1/√(1 + (4α/πγ)²) [McLaughlin & Scott 1978, Phys. Rev. A 18, 1652].
func (d delayLine) firstOrderSpeed() float64 {
	return 1 / math.Hypot(1, 4*d.loss/(math.Pi*d.bias))
}

// launchSpeed is firstOrderSpeed, kept below 0.995 for lines with little loss,
// where it tends to 1 and the fluxon would be narrower than the lattice.
func (d delayLine) launchSpeed() float64 { return min(d.firstOrderSpeed(), 0.995) }

// start is a fluxon on the background.
func (d delayLine) start(line lattice.Axis) (field.State, error) {
	kink, err := field.SineGordonKink(field.Moving{At: launchAt * d.length, Speed: d.launchSpeed()})
	if err != nil {
		return field.State{}, err
	}
	return field.Superpose(d.background(), kink).On(line, 0), nil
}

// block is the coarsest block: a hundred links or a multiple of it, so that
// every place named above is a site, and time enough for a slow fluxon.
func (d delayLine) block(spacing float64) (lattice.Block, error) {
	links := 100 * max(1, int(math.Round(d.length/spacing/100)))
	h := d.length / float64(links)
	k := 0.8 * h
	most := 20 + 1.6*(arriveAt-launchAt)*d.length/d.launchSpeed()
	return lattice.NewBlock(
		lattice.Axis{Step: k, Sites: int(most/k) + 1},
		lattice.Axis{Step: h, Sites: links + 1},
	)
}
