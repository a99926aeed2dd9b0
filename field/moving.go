package field

import (
	"fmt"
	"math"
)

// Moving says where a kink or breather is and how fast it goes, in units in
// which waves travel at the speed 1. The zero value is at rest at the origin.
type Moving struct {
	At    float64 // position of the centre at t = 0
	Speed float64 // speed v, −1 < v < 1; positive to the right
}

// check returns an error that names what is wrong with the motion of the thing
// called name.
func (m Moving) check(name string) error {
	if math.IsNaN(m.At - m.At) {
		return fmt.Errorf("field: %s at x = %v; want a finite position", name, m.At)
	}
	if !(math.Abs(m.Speed) < 1) {
		return fmt.Errorf("field: %s with the speed %v; want a speed above -1 and below 1, in units of the wave speed", name, m.Speed)
	}
	return nil
}

// gamma returns the Lorentz factor 1/√(1 − v²), written so that it keeps its
// digits near |v| = 1.
func gamma(v float64) float64 { return 1 / math.Sqrt((1-v)*(1+v)) }

// boost carries the static solution f to the speed of m: the value is
// f(ξ) with ξ = γ(x − At − vt), the rate −γv f′(ξ).
func boost(m Moving, f func(xi float64) (value, slope float64)) Profile {
	g := gamma(m.Speed)
	return func(x, t float64) (value, rate float64) {
		value, slope := f(g * (x - m.At - m.Speed*t))
		return value, -g * m.Speed * slope
	}
}
