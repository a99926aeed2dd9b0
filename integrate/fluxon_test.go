package integrate_test

import (
	"fmt"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// One fluxon on a ring of the length 40 under bias γ and loss α, until its speed
// has settled: the exact speed is 0.92250229 for γ = 0.3, α = 0.1, 0.84506673 for
// γ = 0.2, α = 0.1 and 0.89863067 for γ = 0.5, α = 0.2 (independent computation: saddle-to-saddle orbit of
// f″ = sin f − γ − af′, v = 1/√(1 + (α/a)²), and a direct solution on this ring).
// [McLaughlin & Scott 1978, Phys. Rev. A 18, 1652, from memory] gives its
// first order a = πγ/4 and the voltage <φ_t> = 2πv/L.
func TestFluxonOnRing(t *testing.T) {
	const length = 40.0
	for _, tt := range []struct{ bias, alpha, want float64 }{{0.3, 0.1, 0.92250229}, {0.2, 0.1, 0.84506673}, {0.5, 0.2, 0.89863067}} {
		for _, m := range []integrate.Method{integrate.RK4{}, integrate.Leapfrog{}} {
			var errs []float64
			for l := range 3 {
				line := lattice.Axis{Step: 0.2 / float64(int(1)<<l), Sites: 200 << l, Periodic: true, Jump: []float64{2 * math.Pi}}
				clock := span(0, 300, 3000<<l)
				w := action.Wave{Potential: action.SineGordon{}, Source: action.Uniform(tt.bias), Alpha: action.Uniform(tt.alpha), Links: action.Sixth}
				s := discrete(t, clock, line, w)
				kink, err := field.SineGordonKink(field.Moving{At: length / 2, Speed: 0.9})
				exact(t, kink, err)
				start := field.Superpose(math.Asin(tt.bias), kink).On(line, 0)
				voltage := &integrate.MeanRate{From: 250, Every: 10}
				evolve(t, s, start, integrate.Settings{Method: m, Every: -1, Observers: []integrate.Observer{voltage}})
				errs = append(errs, math.Abs(voltage.Value()*length/(2*math.Pi)-tt.want))
			}
			name := fmt.Sprintf("γ = %g, α = %g, %s", tt.bias, tt.alpha, m.Name())
			if m.Name() == "leapfrog" {
				wantOrder(t, name, errs, 2, 0.2)
				continue
			}
			t.Logf("%s: speed off by %.3g", name, errs)
			// The source gives 1e-8; e^(−αt) = 1e-11 of the start is left.
			if !(errs[2] <= 1e-6) || !(errs[0] > 8*errs[1]) {
				t.Errorf("%s: speed off by %.3g; want 1e-6 and order 4", name, errs)
			}
		}
	}
}

// The voltage is the speed of the fluxon: <φ_t> = 2πv/L, v taken from where the
// field passes through π more than at the far side.
func TestMeanRateIsSpeed(t *testing.T) {
	const length, bias = 40.0, 0.3
	line := lattice.Axis{Step: 0.1, Sites: 400, Periodic: true, Jump: []float64{2 * math.Pi}}
	w := action.Wave{Potential: action.SineGordon{}, Source: action.Uniform(bias), Alpha: action.Uniform(0.1), Links: action.Sixth}
	s := discrete(t, span(0, 240, 4800), line, w)
	kink, err := field.SineGordonKink(field.Moving{At: length / 2, Speed: 0.9})
	exact(t, kink, err)
	voltage := &integrate.MeanRate{From: 200}
	var times, places []float64
	track := integrate.Watch{Every: 5, Do: func(m *integrate.Moment) error {
		if m.Time < 200 {
			return nil
		}
		// The background grows by 2π each time the fluxon has gone round.
		phi := m.Field().Component(0)
		turns := math.Floor((phi[0] - math.Asin(bias)) / (2 * math.Pi))
		x := outermost(line, phi, math.Asin(bias)+math.Pi+2*math.Pi*turns)
		if math.IsNaN(x) || x < 1 || x > length-1 {
			return nil // at the seam
		}
		if n := len(places); n > 0 {
			x += length * math.Round((places[n-1]+0.25*0.92-x)/length)
		}
		times, places = append(times, m.Time), append(places, x)
		return nil
	}}
	evolve(t, s, field.Superpose(math.Asin(bias), kink).On(line, 0), integrate.Settings{Every: -1, Observers: []integrate.Observer{voltage, track}})
	// A kink that rises to the right is pushed to the left by a positive bias.
	v := fittedSlope(times, places)
	t.Logf("speed of the crossing %.8f, mean rate × L/2π %.8f", v, voltage.Value()*length/(2*math.Pi))
	// Interpolating the crossing costs (h/width)⁴/50 over 40 units of length.
	if off := math.Abs(math.Abs(v) - voltage.Value()*length/(2*math.Pi)); !(off <= 2e-6) {
		t.Errorf("speed of the crossing %v, mean rate × L/2π %v", v, voltage.Value()*length/(2*math.Pi))
	}
}
