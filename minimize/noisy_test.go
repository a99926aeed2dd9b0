package minimize

import (
	"context"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// The least action of a noisy double well from one vacuum to the other, in a
// long time, is twice the energy of the barrier [Freidlin & Wentzell 1984, Random
// Perturbations of Dynamical Systems, chapter 4, theorem 3.1, from memory]. On a
// ring shorter than 2π the barrier is the uniform field 0, with ΔE = L/4: the
// path goes uphill against the flow and falls for nothing.
func TestLeastActionOverABarrier(t *testing.T) {
	ring := lattice.Axis{Step: 0.5, Sites: 4, Periodic: true}
	for _, span := range []float64{12, 20} {
		b, err := lattice.NewBlock(lattice.Axis{Step: 0.1, Sites: int(span/0.1) + 1}, ring)
		if err != nil {
			t.Fatal(err)
		}
		flow, err := action.NewNoisyFlow(b, action.GradientFlow{Energy: action.Wave{Potential: action.Phi4{}}})
		if err != nil {
			t.Fatal(err)
		}
		held := constraint.On(b)
		start := field.NewHistory(b, 1)
		for n := range b.Slices() { // a straight line from −1 to 1
			for i := range ring.Sites {
				start.Set(n, 0, i, 2*float64(n)/float64(b.Slices()-1)-1)
			}
		}
		held.Slice(0, start.Slice(0))
		held.Slice(b.Slices()-1, start.Slice(b.Slices()-1))
		found, err := Minimum(context.Background(), flow, held, start, nil)
		if err != nil {
			t.Fatalf("T = %g: %v", span, err)
		}
		// The finite time costs about e^{−T/2}, the stays near the vacua and the
		// top taking the rates 2 and 1; the averaged force keeps S ≥ 2ΔE exactly.
		want := 2 * ring.Length() / 4
		excess := found.Report.CostAfter - want
		if excess < -1e-9 || excess > math.Exp(-span/2) {
			t.Errorf("T = %g: action %.9f, want %g and at most %.1e more", span, found.Report.CostAfter, want, math.Exp(-span/2))
		}
		t.Logf("T = %g: action exceeds 2ΔE by %.2e, %d steps", span, excess, found.Report.Iterations)
	}
}
