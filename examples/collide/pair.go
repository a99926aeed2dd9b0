package main

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/track"
)

// pair is a kind of collision, all of which are even about x = 0: the half line
// x ≥ 0 with an even end there is enough.
type pair struct {
	title        string
	potential    action.Potential
	outer, inner float64 // the vacua beyond and between the two
	vacua        track.Vacua
	left, right  func(field.Moving) (field.Profile, error)
	bond         track.Bond // the tails are those in the inner vacuum
	beyond       float64    // decay of the tails in the outer vacuum
	separation   float64    // half of it, at the start
}

// newPair returns the pair of a potential and an order.
func newPair(potential, order string, eta float64) (*pair, error) {
	if order != "kink-antikink" && order != "antikink-kink" {
		return nil, fmt.Errorf("-order %q; want kink-antikink or antikink-kink", order)
	}
	first := order == "kink-antikink"
	pi := math.Pi
	p := &pair{separation: 10}
	switch potential {
	case "phi4":
		p.title = "φ⁴"
		p.potential = action.Phi4{}
		p.outer, p.inner = -1, 1
		p.left, p.right = field.Phi4Kink, field.Phi4Antikink
		p.vacua.Values = []float64{-1, 1}
		p.bond, p.beyond = track.Bond{Mass: 2 * math.Sqrt2 / 3, Tail: 2, Decay: math.Sqrt2}, math.Sqrt2
	case "phi6":
		p.title = "φ⁶"
		p.potential = action.Phi6{}
		p.outer, p.inner = 0, 1
		rise := func(m field.Moving) (field.Profile, error) { return field.Phi6Kink(0, 1, m) }
		fall := func(m field.Moving) (field.Profile, error) { return field.Phi6Kink(1, 0, m) }
		p.left, p.right = rise, fall
		p.vacua.Values = []float64{-1, 0, 1}
		p.vacua.Centres = []float64{-math.Sqrt(0.5), math.Sqrt(0.5)} // the kink's value at ξ = 0
		p.bond, p.beyond = track.Bond{Mass: 0.25, Tail: 0.5, Decay: 2}, 1
		if !first { // not the mirror image: another collision
			p.outer, p.inner = 1, 0
			p.left, p.right = fall, rise
			p.bond.Tail, p.bond.Decay, p.beyond = 1, 1, 2
			p.separation = 15
		}
	case "sinegordon":
		p.title = "Sine-Gordon"
		p.potential = action.SineGordon{}
		p.inner = 2 * pi
		p.left, p.right = field.SineGordonKink, field.SineGordonAntikink
		p.vacua.Values = []float64{-4 * pi, -2 * pi, 0, 2 * pi, 4 * pi}
		p.bond, p.beyond = track.Bond{Mass: 8, Tail: 4, Decay: 1}, 1
	case "doublesinegordon":
		if !(eta > 0) || math.IsInf(eta, 0) {
			return nil, fmt.Errorf("-eta %g; want a finite number > 0, for which kinks join 0 and 4π", eta)
		}
		p.title = fmt.Sprintf("Double sine-Gordon (η = %g)", eta)
		p.potential = action.DoubleSineGordon{Eta: eta}
		p.inner = 4 * pi
		p.left = func(m field.Moving) (field.Profile, error) { return field.DoubleSineGordonKink(eta, m) }
		p.right = func(m field.Moving) (field.Profile, error) { return field.DoubleSineGordonAntikink(eta, m) }
		p.vacua.Values = []float64{-8 * pi, -4 * pi, 0, 4 * pi, 8 * pi}
		// ∫√(2V)dφ from 0 to 4π, and the tail of the profile, both elementary.
		mu := math.Sqrt(1 + eta/4)
		p.bond = track.Bond{Mass: 16*mu + 4*eta*math.Asinh(2/math.Sqrt(eta)), Tail: 8 * math.Sqrt((4+eta)/eta), Decay: mu}
		p.beyond = mu
	default:
		return nil, fmt.Errorf("-potential %q; want phi4, phi6, sinegordon or doublesinegordon", potential)
	}
	if !first && potential != "phi6" {
		// The same collision with φ for −φ, shifted to the vacua of the list.
		p.outer, p.inner = p.inner, p.outer
		p.left, p.right = p.right, p.left
	}
	p.title += " " + order
	return p, nil
}

// start is the pair at t = 0: the two at the distance given by the separation,
// each with the speed v towards the other, added.
func (p *pair) start(v float64) (field.Profile, error) {
	left, err := p.left(field.Moving{At: -p.separation, Speed: v})
	if err != nil {
		return nil, err
	}
	right, err := p.right(field.Moving{At: p.separation, Speed: -v})
	if err != nil {
		return nil, err
	}
	return field.Superpose(-p.inner, left, right), nil
}
