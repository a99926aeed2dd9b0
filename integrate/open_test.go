package integrate_test

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// reflection sends a Gaussian packet against the open right end and returns the
// share of its energy that comes back, by the energy that is left when the
// incident packet would have gone through.
func reflection(t *testing.T, p field.Packet, links action.Links, h, courant, until float64) float64 {
	t.Helper()
	packet, err := field.GaussianPacket(p)
	exact(t, packet, err)
	line := between(span(-60, 60, int(math.Round(60/h))), lattice.Free, lattice.Open)
	clock := span(0, until, int(math.Round(until/(courant*h))))
	s := discrete(t, clock, line, action.Wave{Potential: action.Mass(p.Mass), Links: links})
	start := packet.On(line, 0)
	set := integrate.Settings{Every: -1}
	if courant == 1 {
		set.Second = packet.On(line, clock.Step).Field
	}
	run := evolve(t, s, start, set)
	return s.Energy(run.Final, run.Time).Field() / s.Energy(start, 0).Field()
}

// Without a mass the end is exact at Courant number 1, where both the lattice
// and its end carry f(x − t) unchanged; else the reflection falls with the
// resolution of the packet.
func TestOpenEndMassless(t *testing.T) {
	bump := field.Packet{Wave: field.Wave{Amplitude: 1}, At: -30, Width: 1}
	// The rate at the last slice is a difference of rounding errors.
	if r := math.Sqrt(reflection(t, bump, action.Nearest, 0.1, 1, 60)); !(r <= 1e-12) {
		t.Errorf("Courant number 1: reflected amplitude %.3g; want rounding", r)
	} else {
		t.Logf("Courant number 1: reflected amplitude %.3g", r)
	}
	for _, links := range []action.Links{action.Nearest, action.Fourth, action.Sixth} {
		var bumps, waves []float64
		for _, h := range []float64{0.2, 0.1, 0.05} {
			bumps = append(bumps, math.Sqrt(reflection(t, bump, links, h, 0.8, 60)))
			wave := field.Packet{Wave: field.Wave{Amplitude: 1, Wavenumber: 3}, At: -30, Width: 3}
			waves = append(waves, math.Sqrt(reflection(t, wave, links, h, 0.8, 60)))
		}
		// Half a cell and the centred rate are each good to second order. The wave
		// of wave number 3 has kh = 0.6 at the coarsest level.
		wantOrder(t, fmt.Sprintf("Courant number 0.8, links %d, bump of width 1", links), bumps, 2, 0.3)
		wantOrder(t, fmt.Sprintf("Courant number 0.8, links %d, wave number 3", links), waves, 2, 0.3)
	}
}

// With a mass the end reflects the amplitude |R| = |(ω − ck)/(ω + ck)| of a wave
// of the wave number k, ω² = c²k² + m²: φ_t + cφ_x = 0 at the end, put into
// e^(i(kx − ωt)) + R e^(−i(kx + ωt)). A packet is a Gaussian of wave numbers, of the
// width 1/σ√2 in energy.
func TestOpenEndMassive(t *testing.T) {
	const mass, sigma, h = 1.0, 6.0, 0.025
	for _, k := range []float64{0.5, 1, 2, 4} {
		wave := field.Wave{Amplitude: 1, Wavenumber: k, Mass: mass}
		v := wave.GroupVelocity()
		got := reflection(t, field.Packet{Wave: wave, At: -30, Width: sigma}, action.Fourth, h, 0.8, 60/v)
		mean := func(f func(q, omega float64) float64) float64 {
			return quad.Fixed(func(q float64) float64 {
				omega := math.Hypot(q, mass)
				return f(q, omega) * omega * omega * math.Exp(-sigma*sigma*(q-k)*(q-k))
			}, max(k-1, 1e-3), k+1, 200, nil, 0)
		}
		want := mean(func(q, omega float64) float64 { return math.Pow((omega-q)/(omega+q), 2) }) / mean(func(float64, float64) float64 { return 1 })
		centre := math.Hypot(k, mass)
		t.Logf("k = %g: reflected amplitude %.4f, formula over the packet %.4f, at its centre %.4f", k, math.Sqrt(got), math.Sqrt(want), (centre-k)/(centre+k))
		// The part of the packet's Cauchy data that travels to the left,
		// (m²/ω²)/(2ωσ) of it in amplitude, is left in the energy: below 0.02 at
		// k = 0.5, and squared in the share.
		if !(math.Abs(math.Sqrt(got)-math.Sqrt(want)) <= 0.03*math.Sqrt(want)+1e-3) {
			t.Errorf("k = %g: reflected amplitude %.5f; want %.5f", k, math.Sqrt(got), math.Sqrt(want))
		}
	}
}

// The end takes only energy: with links of every order a ragged field that
// stirs up every frequency stays bounded just below the limit of the step.
func TestOpenEndIsStable(t *testing.T) {
	for _, links := range []action.Links{action.Nearest, action.Fourth, action.Sixth} {
		for _, end := range []lattice.End{lattice.Open, lattice.Free, lattice.Held, lattice.Odd, lattice.Even} {
			line := between(span(0, 3, 30), end, end)
			k := 0.999 * 2 * line.Step / math.Sqrt(links.Mu())
			s := discrete(t, lattice.Axis{Step: k, Sites: 20_001}, line, action.Wave{Links: links})
			start := field.NewState(1, line.Sites)
			for i := 1; i < line.Sites-1; i++ {
				start.Field.Data[i] = math.Sin(float64(i * i)) // all wave numbers
			}
			run := evolve(t, s, start, integrate.Settings{Every: -1})
			// At 0.999 of the limit a bounded mode swings up to √(1/(1 − 0.999²)) = 22
			// times its start.
			if m := run.Final.Field.MaxAbs(); !(m < 100) {
				t.Errorf("links %d, %v ends: grew to %.3g", links, end, m)
			}
		}
	}
}
