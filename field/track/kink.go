package track

import (
	"fmt"

	"github.com/tenter-go/tenter/lattice"
)

// Vacua are the values at which a potential is lowest, and what counts as the
// centre of a kink between two of them.
type Vacua struct {
	Values []float64 // in increasing order, at least two

	// Centres[k] is the value of the field in the middle of a kink between
	// Values[k] and Values[k+1]; nil means half way. The φ⁶ kink, which is not
	// symmetric, has its energy around ±1/√2.
	Centres []float64

	// Margin is by how much, in units of the field, a passage must clear the
	// centre on both sides. Zero takes every passage; with noise, a few times its
	// amplitude keeps one kink from being counted as several.
	Margin float64
}

// A Kink is a passage from one vacuum to a neighbouring one. Left and Right are
// the numbers of the vacua beside it.
type Kink struct {
	X           float64
	Left, Right int
}

// Charge returns 1 for a kink, which rises from left to right, and −1 for an
// antikink.
func (k Kink) Charge() int { return k.Right - k.Left }

// Check returns an error that names what makes no sense.
func (v Vacua) Check() error {
	if len(v.Values) < 2 {
		return fmt.Errorf("track: %d vacua; want at least two", len(v.Values))
	}
	if v.Centres != nil && len(v.Centres) != len(v.Values)-1 {
		return fmt.Errorf("track: %d centres between %d vacua; want %d or none", len(v.Centres), len(v.Values), len(v.Values)-1)
	}
	if !(v.Margin >= 0) {
		return fmt.Errorf("track: margin %g; want a number ≥ 0", v.Margin)
	}
	for k := range len(v.Values) - 1 {
		low, high, c := v.Values[k], v.Values[k+1], v.centre(k)
		if !(low+v.Margin < c && c+v.Margin < high) {
			return fmt.Errorf("track: centre %g with margin %g between the vacua %g and %g; want them in increasing order with the margin between", c, v.Margin, low, high)
		}
	}
	return nil
}

func (v Vacua) centre(k int) float64 {
	if v.Centres != nil {
		return v.Centres[k]
	}
	return 0.5 * (v.Values[k] + v.Values[k+1])
}

// Near returns the number of the vacuum to which the value phi belongs: that of
// the centres below it.
func (v Vacua) Near(phi float64) int {
	k := 0
	for k < len(v.Values)-1 && phi > v.centre(k) {
		k++
	}
	return k
}

// Find appends the kinks of phi on the line to dst, from left to right, and
// returns it. The values must be finite and one for every site, else it panics
// or places a kink at NaN.
func (v Vacua) Find(dst []Kink, line lattice.Axis, phi []float64) []Kink {
	return v.find(dst, newRow(line, phi, line.JumpOf(0)))
}

func (v Vacua) find(dst []Kink, r row) []Kink {
	now := v.Near(r.at(0))
	settled := 0 // the last site that lies in the vacuum now beyond doubt
	for i := 1; i <= r.line.Links(); i++ {
		p := r.at(i)
		for now < len(v.Values)-1 && p > v.centre(now)+v.Margin {
			dst = append(dst, Kink{X: r.passage(settled, i, v.centre(now)), Left: now, Right: now + 1})
			now++
		}
		for now > 0 && p <= v.centre(now-1)-v.Margin {
			dst = append(dst, Kink{X: r.passage(settled, i, v.centre(now-1)), Left: now, Right: now - 1})
			now--
		}
		if v.Near(p) == now {
			settled = i
		}
	}
	return dst
}
