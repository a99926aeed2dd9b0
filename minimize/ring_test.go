package minimize

import (
	"context"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"gonum.org/v1/gonum/mathext"
)

// A pair is the static kink and antikink at opposite places of a ring of length L
// for V = ¼(1 − φ²)²,
//
//	φ = a sn(x/w, k),  a² = 2k²/(1 + k²),  w² = 1 + k²,  L = 4K(k)w,
//
// the sphaleron between the vacua −1 and 1. Its energy is ∫φ_x² + LV(a) by the
// first integral ½φ_x² = V(φ) − V(a), where ∫φ_x² = 4a²/w · ∫₀ᴷ cn²dn², and its
// small oscillations are Lamé's equation with n = 2, whose band edges are known:
// on the ring the lowest are λ₀ = 1 − 2√(1 − k² + k⁴)/(1 + k²) < 0, the translation 0
// and 3k²/(1 + k²) [Whittaker & Watson 1927, Modern Analysis, 22.11, 23.7; Manton &
// Samols 1988, Phys. Lett. B 207, 179, for the sphaleron on a circle].
func pair(length float64) (energy, amplitude, lowest, next float64) {
	lo, hi := 0.0, 1.0 // k²
	for range 200 {
		m := (lo + hi) / 2
		if 4*mathext.CompleteK(m)*math.Sqrt(1+m) < length {
			lo = m
		} else {
			hi = m
		}
	}
	m := lo
	square, width := 2*m/(1+m), math.Sqrt(1+m)
	k, e := mathext.CompleteK(m), mathext.CompleteE(m)
	slope := 4 * square / width * ((1+m)*e - (1-m)*k) / (3 * m)
	top := (1 - square) * (1 - square) / 4
	return slope + length*top, math.Sqrt(square), 1 - 2*math.Sqrt(1-m+m*m)/(1+m), 3 * m / (1 + m)
}

// Index 1 with the translation held; without it the lattice adds one negative
// eigenvalue or none. Energy and eigenvalues are of order 2. Two slices 0.5 apart
// make a static field: a change with time has λ ≥ 4/0.5² − 1 and does not count.
func TestPairOnARing(t *testing.T) {
	// independent computation: twice the Neumann problem on half of the ring
	for length, want := range map[float64]float64{8: 2 * 0.9005075227916559, 12: 2 * 0.9404563014895868, 20: 2 * 0.9428008799919562} {
		if e, _, _, _ := pair(length); math.Abs(e-want) > 1e-13 { // K of a modulus bisected to rounding
			t.Errorf("L = %g: energy %.15f, want %.15f", length, e, want)
		}
	}
	for _, length := range []float64{8, 12} {
		energy, amplitude, lowest, next := pair(length)
		var off, offLow, offNext [3]float64
		for k, n := range []int{32, 64, 128} {
			line := lattice.Axis{Step: length / float64(n), Sites: n, Periodic: true}
			clock := lattice.Axis{Step: 0.5, Sites: 2}
			s := newAction(t, clock, line, action.Wave{Potential: action.Phi4{}, Signature: action.Euclidean})
			start := field.Profile(func(x, t float64) (float64, float64) {
				return amplitude * math.Sin(2*math.Pi*(x+0.1)/length), 0
			}).Over(s.Block())
			found, err := Saddle(context.Background(), s, nil, start, &Settings{Shifts: InSpace})
			if err != nil {
				t.Fatalf("L = %g, n = %d: %v", length, n, err)
			}
			i := found.Report.Inertia
			if i.Index != 1 || i.ZeroModesHeld != 1 || len(i.Negative) != 1 {
				t.Fatalf("L = %g, n = %d: %v, negative %v", length, n, i, i.Negative)
			}
			off[k] = found.Report.CostAfter/clock.Length() - energy
			offLow[k] = i.Negative[0] - lowest
			if offNext[k] = i.Smallest - next; -lowest < next {
				offNext[k] = i.Smallest - lowest
			}
			raw, err := Stationary(context.Background(), s, nil, start, &Settings{Shifts: InSpace})
			if err != nil || raw.Report.Inertia.Index != 1 || raw.History.MaxDifference(found.History) > 1e-9 {
				// both to 1e-10 of the largest term over eigenvalues of order 1
				t.Errorf("L = %g, n = %d: stationary %v, %v", length, n, raw.Report.Inertia, err)
			}
		}
		for name, e := range map[string][3]float64{"energy": off, "lowest eigenvalue": offLow, "smallest eigenvalue": offNext} {
			if order := math.Log2(e[1] / e[2]); math.Abs(order-2) > 0.05 { // h⁴ beside h²
				t.Errorf("L = %g: %s off by %.3g, order %.3f; want 2", length, name, e, order)
			}
		}
	}
}
