//go:build slow

package main

import (
	"context"
	"fmt"
	"math"
	"testing"

	"github.com/tenter-go/tenter/field/track"
)

// Critical speeds at their watch times, independent computation: half line with
// even reflection, eighth-order differences, fourth-order symplectic splitting,
// half separation 10; for φ⁴ at T = 400 confirmed by a Fourier code on the whole
// line, 0.25985354(1).
func TestSlowCriticalSpeed(t *testing.T) {
	for _, c := range []struct {
		potential   string
		watch, want float64
		tolerance   float64 // of the source
	}{
		{"phi4", 200, 0.2591972, 2e-6},
		{"phi4", 400, 0.25985354, 2e-8},
		{"phi6", 400, 0.2893686, 1.5e-6},
	} {
		t.Run(fmt.Sprintf("%s until %g", c.potential, c.watch), func(t *testing.T) {
			t.Parallel()
			got := results(t, job{potential: c.potential, order: "kink-antikink", critical: true, watch: c.watch, spacing: 0.2})["critical_speed"]
			t.Log(got)
			if !(math.Abs(got.Value-c.want) <= got.Error+c.tolerance) || !(got.Error < 1e-6) {
				t.Errorf("%v; want %.8f ± %g, with an error bar below 1e-6", got, c.want, c.tolerance)
			}
		})
	}
}

// Edges of two-bounce windows watched until T = 500, ± 3e-6, and the exit speeds
// of their peaks over the last 50 units of time, ± 1e-3 by the wobble; independent
// computation as above. The lattice of a scan shifts critical speeds by 2.7e-6 for
// its spacing and 1.6e-6 for its step.
func TestSlowWindows(t *testing.T) {
	p := newTestPair(t, "phi4", "kink-antikink")
	run := func(v float64) *flight {
		return fly(t, collision{pair: p, speed: v, spacing: 0.2, step: 0.2 / 8, until: 500, window: lastUnits, stop: stop{capture: true}})
	}
	const near = 1e-5
	for _, w := range []struct{ low, high, peak, exit float64 }{
		{0.1925635, 0.2034351, 0.198815, 0.15954},
		{0.2240358, 0.2288569, 0.226808, 0.19605},
		{0.2371269, 0.2396461, 0.238575, 0.20786},
	} {
		for _, in := range []float64{w.low + near, w.peak, w.high - near} {
			if f := run(in); len(f.met) != 2 {
				t.Errorf("v = %.6f, in the window: met at %v", in, f.met)
			} else if in == w.peak && math.Abs(f.exitSpeed()-w.exit) > 1e-3 {
				t.Errorf("v = %.6f: exit speed %.6f; want %.5f", in, f.exitSpeed(), w.exit)
			}
		}
		for _, out := range []float64{w.low - near, w.high + near} {
			if f := run(out); len(f.met) == 2 {
				t.Errorf("v = %.6f, outside of the window: met at %v", out, f.met)
			}
		}
	}
}

// A pair that is dropped as captured never escapes afterwards, however long one
// looks: the same runs to the end.
func TestSlowCaptureIsFinal(t *testing.T) {
	p := newTestPair(t, "phi4", "kink-antikink")
	dropped := 0
	for k := range 60 {
		c := collision{pair: p, speed: 0.18 + 0.0013*float64(k), spacing: 0.2, step: 0.05, until: 500, window: lastUnits}
		whole, err := c.run(context.Background())
		if err != nil {
			t.Fatal(err)
		}
		c.stop.capture = true
		if early := fly(t, c); early.outcome != whole.outcome {
			t.Errorf("v = %g: %v, but %v when stopped early", c.speed, whole.outcome, early.outcome)
		} else if early.outcome == track.Capture && len(early.met) < len(whole.met) {
			dropped++
		}
	}
	if dropped < 20 { // more than half of this range is captured
		t.Errorf("only %d of 60 runs were stopped early", dropped)
	}
}
