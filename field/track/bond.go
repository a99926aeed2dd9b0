package track

import (
	"math"

	"github.com/tenter-go/tenter/lattice"
)

// An Outcome says what becomes of two kinks that have met.
type Outcome uint8

// The outcomes.
const (
	Undecided Outcome = iota // too near each other, or too close to call
	Escape                   // they draw apart for good
	Capture                  // they cannot part, or will come back
)

// String returns the outcome in lower case.
func (o Outcome) String() string {
	return [...]string{"undecided", "escape", "capture"}[o]
}

// A Bond is what a kink and an antikink of equal mass are to each other. Where
// each turns the tail
//
//	φ ≈ vacuum ∓ Tail·e^(−Decay·x)
//
// towards the other, they attract with the energy −2·Tail²·Decay·e^(−Decay·d) at
// the distance d, to leading order [Manton 1979, Nucl. Phys. B 150, 397; from
// memory]. With that, φ⁴ kinks (Tail 2, Decay √2) attract with −8√2e^(−√2d),
// sine-Gordon kinks (Tail 4, Decay 1) with −32e^(−d).
type Bond struct {
	Mass  float64 // of either at rest
	Tail  float64
	Decay float64
}

// Attraction returns 2·Tail²·Decay·e^(−Decay·d).
func (b Bond) Attraction(d float64) float64 {
	return 2 * b.Tail * b.Tail * b.Decay * math.Exp(-b.Decay*d)
}

// Fate tells what becomes of two kinks at the distance d which draw apart, each
// at the given speed: Escape if their kinetic energy Mass·speed² is more than ten
// times what holds them, Capture if it is less than a tenth of that or if they
// are drawing together, else Undecided. It is Undecided as well where they are so
// near that the leading order is no guide, Decay·d < 6. The speed is that of the
// centres, averaged over their wobble, and d the distance in the middle of that
// time; what they may yet exchange with the wobble is as small as the attraction.
func (b Bond) Fate(d, speed float64) Outcome {
	kinetic, hold := b.Mass*speed*speed, b.Attraction(d)
	switch {
	case b.Decay*d < 6:
		return Undecided
	case speed > 0 && kinetic > 10*hold:
		return Escape
	case speed <= 0 || 10*kinetic < hold:
		return Capture
	}
	return Undecided
}

// Spent tells from the energy in a stretch of the line around two kinks that have
// met whether they can still part: Capture if it is less than twice the mass of
// one by more than the share margin, else Undecided. What has left the stretch
// must be going outwards, so that nothing comes back.
func (b Bond) Spent(energy, margin float64) Outcome {
	if energy < 2*b.Mass*(1-margin) {
		return Capture
	}
	return Undecided
}

// Content returns ∫e dx of a density over the sites of the line from a ≤ x ≤ b,
// with the weights of the line: the energy there, if it is an energy density. It
// panics unless there is a value for every site.
func Content(line lattice.Axis, density []float64, a, b float64) float64 {
	r := newRow(line, density, 0)
	var sum float64
	for i, e := range r.v {
		if x := line.At(i); a <= x && x <= b {
			sum += line.Weight(i) * e
		}
	}
	return sum * line.Step
}
