package main

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/field"
)

// start returns the lump nearest to the bounce, and its ∫½(∇f)², in the units of the
// well.
//
// In two dimensions ∫½(∇f)² does not change when f is stretched, and the bounce is
// the field for which it is least among all with ∫W = 0 [Coleman, Glaser & Martin
// 1978, Commun. Math. Phys. 58, 211]. For each ratio of radius to wall, ∫W = 0 gives
// the height of the lump, and the ratio that makes ∫½(∇f)² least is taken. That
// is an estimate of the action of the bounce: from above, but for quadrature. The radial equation, multiplied by f′ and
// integrated, then gives the scale: ∫ f′²/r dr = −W(f(0)).
func (w *well) start() (lump field.Lump, estimate float64, err error) {
	estimate = math.Inf(1)
	for ratio := 0.25; ratio < 100; ratio *= 1.05 {
		inside, k := w.balance(newBell(ratio))
		if k < estimate {
			lump, estimate = field.Lump{Inside: inside, Radius: ratio}, k
		}
	}
	if math.IsInf(estimate, 0) {
		return lump, estimate, fmt.Errorf("no lump has ∫(V − V_false) = 0: beyond φ = %g V is hardly lower than in the false vacuum, so that the wall would be too thin for a lattice; want vacua further apart in V", w.field(1))
	}
	b := newBell(lump.Radius)
	var pull float64
	for j, r := range b.r {
		pull += bellStep * lump.Inside * lump.Inside * b.slope[j] * b.slope[j] / r
	}
	lump.Wall = math.Sqrt(pull / -w.shape.at(lump.Inside*math.Tanh(lump.Radius)))
	lump.Radius *= lump.Wall
	return lump, estimate, nil
}

// balance returns the height for which ∫W = 0, and ∫½(∇f)² with it; +∞ if there
// is none.
func (w *well) balance(b bell) (inside, k float64) {
	potential := func(inside float64) (sum float64) {
		for j, r := range b.r {
			sum += r * w.shape.at(inside*b.value[j])
		}
		return sum
	}
	low := 1 / math.Tanh(b.ratio) // turning point at the centre: W > 0 elsewhere
	high := low * w.truth
	if math.IsNaN(high) { // V falls for ever
		for high = 2 * low; potential(high) > 0; high *= 2 {
			if high > 1e3*low {
				return 0, math.Inf(1)
			}
		}
	}
	if potential(high) > 0 {
		return 0, math.Inf(1)
	}
	for range 50 {
		if m := 0.5 * (low + high); potential(m) > 0 {
			low = m
		} else {
			high = m
		}
	}
	for j, r := range b.r {
		k += 2 * math.Pi * bellStep * r * 0.5 * high * high * b.slope[j] * b.slope[j]
	}
	return high, k
}

// A bell is the form of a field.Lump of height 1 with a wall of thickness 1, and its
// slope, at the middles of steps of r.
type bell struct {
	ratio           float64
	r, value, slope []float64
}

const bellStep = 0.04

func newBell(ratio float64) bell {
	b := bell{ratio: ratio}
	for r := bellStep / 2; r < ratio+9; r += bellStep { // 1 − tanh 9 = 3e-8
		outer, inner := math.Tanh(r+ratio), math.Tanh(r-ratio)
		b.r = append(b.r, r)
		b.value = append(b.value, 0.5*(outer-inner))
		b.slope = append(b.slope, 0.5*(inner*inner-outer*outer))
	}
	return b
}
