package action

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Back undoes Step: both solve the same residual, which leapfrog makes symmetric
// in time but for ρ before and after. What is lost is the rounding of values of
// order one, a few 1e-16 a step and its growth over 40 steps.
func TestBackUndoesStep(t *testing.T) {
	b, err := lattice.NewBlock(lattice.Axis{Step: 0.05, Sites: 41}, lattice.Axis{From: -2, Step: 0.1, Sites: 41, Right: lattice.Held})
	if err != nil {
		t.Fatal(err)
	}
	s, err := New(b, Wave{
		Potential: Phi4{}, Links: Fourth, LeftFlux: Uniform(0.2),
		Rho:    Over(func(x, t float64) float64 { return 1 + 0.3*math.Sin(3*t+x) }),
		Source: Over(func(x, t float64) float64 { return t * x }),
	})
	if err != nil {
		t.Fatal(err)
	}
	first := field.NewSlice(1, 41)
	for i := range first.Data {
		first.Data[i] = math.Tanh(b.Space.At(i))
	}
	h := field.Repeat(b, first)
	m := s.March()
	for n := 1; n < 40; n++ {
		m.Step(h.Slice(n+1), h.Slice(n), h.Slice(n-1), n)
	}
	back := field.Repeat(b, first)
	back.Slice(39).CopyFrom(h.Slice(39))
	back.Slice(40).CopyFrom(h.Slice(40))
	for n := 39; n > 0; n-- {
		m.Back(back.Slice(n-1), back.Slice(n), back.Slice(n+1), n)
	}
	if d := back.MaxDifference(h); d > 1e-12 || h.Slice(40).MaxDifference(first) < 0.1 {
		t.Errorf("the march there and back differs by %.3g", d)
	}
}
