package field

import (
	"fmt"
	"math"
)

// A Lump is a round region of one value in a sea of another, in the plane of x
// and t: a guess for a bounce or for a critical droplet.
type Lump struct {
	Outside, Inside float64 // values far away and, for a thin wall, at the centre
	X, T            float64 // centre
	Radius          float64 // R ≥ 0, where the wall stands
	Wall            float64 // w > 0, its thickness
}

// NewLump returns the profile
//
//	φ = Outside + (Inside − Outside) (tanh((r + R)/w) − tanh((r − R)/w)) / 2,
//	r² = (x − X)² + (t − T)²,
//
// which has no kink at the centre. For R ≫ w it is a disc with a wall of the form
// of the φ⁴ kink, the thin-wall bounce [Coleman 1977, Phys. Rev. D 15, 2929]; for
// R ≤ w a bell of height (Inside − Outside) tanh(R/w). Numbers out of range are
// errors.
func NewLump(l Lump) (Profile, error) {
	for _, v := range []struct {
		name  string
		value float64
	}{{"outside", l.Outside}, {"inside", l.Inside}, {"centre at x", l.X}, {"centre at t", l.T}, {"radius", l.Radius}, {"wall", l.Wall}} {
		if math.IsNaN(v.value - v.value) {
			return nil, fmt.Errorf("field: lump with %s = %v; want a finite number", v.name, v.value)
		}
	}
	if l.Radius < 0 {
		return nil, fmt.Errorf("field: lump of radius %v; want a number ≥ 0", l.Radius)
	}
	if !(l.Wall > 0) {
		return nil, fmt.Errorf("field: lump with a wall of thickness %v; want a number > 0", l.Wall)
	}
	return func(x, t float64) (value, rate float64) {
		r := math.Hypot(x-l.X, t-l.T)
		outer, inner := math.Tanh((r+l.Radius)/l.Wall), math.Tanh((r-l.Radius)/l.Wall)
		height := 0.5 * (l.Inside - l.Outside)
		value = l.Outside + height*(outer-inner)
		if r > 0 {
			// d tanh = 1 − tanh²
			rate = height * (inner*inner - outer*outer) / l.Wall * (t - l.T) / r
		}
		return value, rate
	}, nil
}
