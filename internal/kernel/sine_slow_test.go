//go:build slow

package kernel

import (
	"math/rand/v2"
	"testing"
)

// TestSlowSineAccuracy is where the figure in the comment of Sin comes from.
func TestSlowSineAccuracy(t *testing.T) {
	worst := worstSine(arguments(rand.New(rand.NewPCG(17, 18)), 100_000, reach))
	t.Logf("sin: %.4f units in the last place at %v; cos: %.4f at %v", worst[0].err, worst[0].x, worst[1].err, worst[1].x)
	for _, w := range worst {
		if w.err > sineBound {
			t.Errorf("at %v the error is %.4f units in the last place, want %v at most", w.x, w.err, sineBound)
		}
	}
}
