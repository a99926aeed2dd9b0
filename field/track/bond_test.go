package track_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/track"
	"github.com/tenter-go/tenter/lattice"
)

// The attraction is what a pair lacks in energy against two kinks alone, by
// quadrature of the superposition: 8√2e^(−√2d) for φ⁴, 32e^(−d) for sine-Gordon
// [Perring & Skyrme 1962, Nucl. Phys. 31, 550; Manton 1979, Nucl. Phys. B 150,
// 397; from memory].
func TestAttraction(t *testing.T) {
	ok := exact(t)
	for _, c := range []struct {
		name   string
		bond   track.Bond
		pair   func(half float64) field.Profile
		v      func(u float64) float64
		factor float64
	}{
		{"φ⁴", track.Bond{Mass: 2 * math.Sqrt2 / 3, Tail: 2, Decay: math.Sqrt2}, func(half float64) field.Profile {
			return field.Superpose(-1, ok(field.Phi4Kink(field.Moving{At: -half})), ok(field.Phi4Antikink(field.Moving{At: half})))
		}, func(u float64) float64 { return (1 - u*u) * (1 - u*u) / 4 }, 8 * math.Sqrt2},
		{"sine-Gordon", track.Bond{Mass: 8, Tail: 4, Decay: 1}, func(half float64) field.Profile {
			return field.Superpose(-2*pi, ok(field.SineGordonKink(field.Moving{At: -half})), ok(field.SineGordonAntikink(field.Moving{At: half})))
		}, func(u float64) float64 { s := math.Sin(u / 2); return 2 * s * s }, 32},
	} {
		const d = 10
		if got, want := c.bond.Attraction(d), c.factor*math.Exp(-c.bond.Decay*d); math.Abs(got/want-1) > 1e-12 {
			t.Errorf("%s: attraction %.9g at d = %v; want %.9g", c.name, got, d, want)
		}
		line := lattice.Axis{From: -40, Step: 0.02, Sites: 4001}
		phi := c.pair(d/2).On(line, 0).Field.Data
		e := make([]float64, len(phi))
		for i := 2; i < len(phi)-2; i++ {
			slope := (8*(phi[i+1]-phi[i-1]) - (phi[i+2] - phi[i-2])) / (12 * line.Step)
			e[i] = slope*slope/2 + c.v(phi[i])
		}
		missing := 2*c.bond.Mass - track.Content(line, e, -40, 40)
		// The next order is smaller by d·e^(−Decay·d) ≤ 5e-4; slopes of order h⁴ put
		// 1e-8 on energies of order 10, against an attraction of 1e-3 or 8e-6.
		if got := missing / c.bond.Attraction(d); math.Abs(got-1) > 5e-3 {
			t.Errorf("%s: energy is less by %.6g, %.5f of the attraction", c.name, missing, got)
		}
	}
}

func TestFate(t *testing.T) {
	b := track.Bond{Mass: 2 * math.Sqrt2 / 3, Tail: 2, Decay: math.Sqrt2}
	for _, c := range []struct {
		d, speed float64
		want     track.Outcome
	}{
		{20, 0.1, track.Escape},
		{20, -0.1, track.Capture},    // drawing together
		{8, 1e-4, track.Capture},     // will turn: 1e-8 against 1e-4
		{8, 0.0121, track.Undecided}, // kinetic energy equal to the attraction
		{2, 0.3, track.Undecided},    // too near
	} {
		if got := b.Fate(c.d, c.speed); got != c.want {
			t.Errorf("d = %g, speed %g: %v; want %v", c.d, c.speed, got, c.want)
		}
	}
	for energy, want := range map[float64]track.Outcome{1.8: track.Capture, 1.89: track.Undecided} { // 2·Mass = 1.8856
		if got := b.Spent(energy, 1e-3); got != want {
			t.Errorf("energy %g: %v; want %v", energy, got, want)
		}
	}
}
