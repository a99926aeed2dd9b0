package integrate_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// phi4Pair returns a φ⁴ kink and antikink at ±10 that meet with the speed v,
// tanh[γ(x + 10 − vt)/√2] − tanh[γ(x − 10 + vt)/√2] − 1 at t = 0.
func phi4Pair(t *testing.T, v float64) field.Profile {
	kink, err := field.Phi4Kink(field.Moving{At: -10, Speed: v})
	exact(t, kink, err)
	antikink, err := field.Phi4Antikink(field.Moving{At: 10, Speed: -v})
	exact(t, antikink, err)
	return field.Superpose(-1, kink, antikink)
}

// phi4Half returns the collision on the right half of the line, which is even,
// up to a free end at x = 120 that no signal reaches and returns from in time.
func phi4Half(t *testing.T, v, h, k, until float64, observers ...integrate.Observer) *integrate.Run {
	t.Helper()
	line := between(span(0, 120, int(math.Round(120/h))), lattice.Even, lattice.Free)
	s := discrete(t, span(0, until, int(math.Round(until/k))), line, action.Wave{Potential: action.Phi4{}, Links: action.Sixth})
	return evolve(t, s, phi4Pair(t, v).On(line, 0), integrate.Settings{Method: integrate.Yoshida4{}, Every: -1, Observers: observers})
}

// Values of φ(0, t), independent computation: eighth-order differences,
// fourth-order splitting, the same half line, converged to 3e-9.
func TestPhi4CollisionValues(t *testing.T) {
	for _, tt := range []struct {
		v    float64
		want map[float64]float64
	}{
		{0.2, map[float64]float64{25: 0.99706016, 50: 0.895336235, 100: 0.990100251}},
		{0.3, map[float64]float64{25: 0.897839686, 50: 0.947936231, 100: 1.006395718}},
	} {
		var errs []float64
		for l := range 3 {
			h := 0.2 / float64(int(1)<<l)
			var worst float64
			watch := integrate.Watch{Every: 500 << l, Do: func(m *integrate.Moment) error {
				if want, ok := tt.want[math.Round(m.Time)]; ok {
					worst = max(worst, math.Abs(m.Field().At(0, 0)-want))
				}
				return nil
			}}
			phi4Half(t, tt.v, h, h/4, 100, watch)
			errs = append(errs, worst)
		}
		// Space is of order 6 and leads at the coarser levels, time is of order 4.
		p := math.Log2(errs[1] / errs[2])
		t.Logf("v = %g: φ(0, t) off by %.3g, order %.2f of the last two", tt.v, errs, p)
		if !(p > 3.7 && p < 6.3) || !(errs[2] <= 1e-6) {
			t.Errorf("v = %g: φ(0, t) off by %.3g; want 1e-6 at h = 0.05, falling at order 4", tt.v, errs)
		}
	}
}

// collisions counts how often the centre, 1 between the solitons, goes below 0:
// once for each time they meet.
type collisions struct {
	met    int
	inside bool
}

func (c *collisions) Stride() int { return 1 }

func (c *collisions) Observe(m *integrate.Moment) error {
	p := m.Field().At(0, 0)
	if !c.inside && p < 0 {
		c.inside = true
		c.met++
	}
	if p > 0.5 {
		c.inside = false
	}
	return nil
}

// At v = 0.3 the pair escapes after one collision at the speed 0.13863 (5e-6):
// slope of the outermost zero over the last 60 units of time of T = 10/v + 150,
// independent computation as above.
func TestPhi4Escape(t *testing.T) {
	const v, want = 0.3, 0.13863
	var speeds []float64
	for l := range 2 {
		h := 0.2 / float64(int(1)<<l)
		var c collisions
		var times, places []float64
		track := integrate.Watch{Every: 8 << l, Do: func(m *integrate.Moment) error {
			if m.Time > 10/v+90 {
				times = append(times, m.Time)
				places = append(places, outermost(m.Action.Block().Space, m.Field().Component(0), 0))
			}
			return nil
		}}
		const steps = 3667 // of k = h/4 up to 10/v + 150
		phi4Half(t, v, h, (10/v+150)/float64(int(steps)<<l), 10/v+150, &c, track)
		speeds = append(speeds, fittedSlope(times, places))
		if c.met != 1 {
			t.Errorf("h = %g: the pair met %d times; want once", h, c.met)
		}
	}
	t.Logf("exit speed %.7f; want %.5f", speeds, want)
	// The source gives five digits.
	if !(math.Abs(speeds[1]-want) <= 5e-6) {
		t.Errorf("exit speed %.7f; want %.5f ± 5e-6", speeds, want)
	}
}

// At v = 0.18, below the first two-bounce window (0.1925635, independent
// computation), the pair is captured [Campbell, Schonfeld & Wingate 1983,
// Physica D 9, 1, from memory]: it meets again and again and never parts.
func TestPhi4Capture(t *testing.T) {
	const v = 0.18
	var c collisions
	var farthest float64
	watch := integrate.Watch{Every: 10, Do: func(m *integrate.Moment) error {
		if m.Time > 10/v {
			if x := outermost(m.Action.Block().Space, m.Field().Component(0), 0); x > farthest {
				farthest = x
			}
		}
		return nil
	}}
	phi4Half(t, v, 0.1, 0.05, 200, &c, watch)
	t.Logf("v = %g: met %d times until t = 200, never farther than ±%.2f after the first", v, c.met, farthest)
	// Their potential well is a few widths 2√2 wide.
	if c.met < 3 || farthest > 5 {
		t.Errorf("v = %g: met %d times, as far as ±%.2f apart; want a bound pair", v, c.met, farthest)
	}
}
