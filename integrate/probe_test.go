package integrate_test

import (
	"context"
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
)

// A kink started 0.15 on its way passes x = 3 at t = (3 + 5)/0.5 − 0.15, when the
// field there is π. The reading is a cubic between the slices observed, of
// fourth order in their interval, beside the lattice's own error of 1e-6.
func TestProbeCrossing(t *testing.T) {
	kink, err := field.SineGordonKink(field.Moving{At: -5, Speed: 0.5})
	exact(t, kink, err)
	line := span(-20, 40, 800)
	at, err := line.Index(3)
	if err != nil {
		t.Fatal(err)
	}
	s := discrete(t, span(0, 20, 800), line, action.Wave{Potential: action.SineGordon{}, Links: action.Sixth})
	var errs []float64
	for _, every := range []int{40, 20, 10} {
		probe := &integrate.Probe{Every: every, Sites: []int{at, 0}}
		start := kink.On(line, 0.15)
		evolve(t, s, start, integrate.Settings{Method: integrate.Yoshida4{}, Every: -1, Observers: []integrate.Observer{probe}})
		errs = append(errs, math.Abs(probe.Crossing(0, math.Pi)-15.85))
		if v := probe.Crossing(1, math.Pi); !math.IsNaN(v) {
			t.Errorf("crossing at %g where nothing passes; want NaN", v)
		}
		if len(probe.Times) != 800/every+1 || len(probe.Values[0]) != len(probe.Times) {
			t.Errorf("every %d: %d times, %d values", every, len(probe.Times), len(probe.Values[0]))
		}
	}
	t.Logf("crossing off by %.3g", errs)
	// The passing takes 1/γv = 1.7 of time. A cubic misses by at most
	// (interval/1.7)⁴·3/128·max|d⁴(4 atan eˢ)/ds⁴|, the last about 4, which over the
	// rate γv·2 at the crossing is 1e-2 at the interval 1 and 4e-5 at 0.25; the
	// fourth derivative vanishes at the crossing itself, which saves most of it.
	if !(errs[0] <= 3e-3) || !(errs[2] <= 1e-5) {
		t.Errorf("crossing off by %.3g; want 3e-3 at the interval 1 and 1e-5 at 0.25", errs)
	}
}

func TestProbeOffTheLine(t *testing.T) {
	s, start, set := driven(t, integrate.Leapfrog{})
	set.Observers = []integrate.Observer{&integrate.Probe{Sites: []int{3, 51}}}
	if _, err := integrate.Evolve(context.Background(), s, start, set); err == nil || !strings.Contains(err.Error(), "site 51 of 51") {
		t.Errorf("error %v; want one that names the site", err)
	}
}
