package action

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// The residual of an interior slice sees its two neighbours and nothing else, so
// a window gives the same bits for it, tables included.
func TestWindowKeepsTheResidual(t *testing.T) {
	b, err := lattice.NewBlock(lattice.Axis{From: 1, Step: 0.5, Sites: 9}, lattice.Axis{Step: 1, Sites: 6, Left: lattice.Held})
	if err != nil {
		t.Fatal(err)
	}
	table := func(n int, low float64) Table {
		v := make(Table, n)
		for k := range v {
			v[k] = low + math.Abs(math.Sin(float64(k)))
		}
		return v
	}
	s, err := New(b, Wave{
		Potential: SineGordon{}, Rho: table(8*6, 1), Kappa: PerComponent{table(9*5, 1)}, Sigma: table(6, 1),
		Source: table(9*6, -1), Alpha: Over(func(x, t float64) float64 { return x * t }), RightFlux: table(9, 0),
	})
	if err != nil {
		t.Fatal(err)
	}
	h := field.NewHistory(b, 1)
	for e := range h.Data {
		h.Data[e] = math.Cos(float64(e * e))
	}
	part, err := s.Window(2, 7)
	if err != nil {
		t.Fatal(err)
	}
	cut, err := h.Window(2, 7, 0, 6)
	if err != nil {
		t.Fatal(err)
	}
	whole, got := s.Residual(nil, h), part.Residual(nil, cut)
	for n := 3; n < 6; n++ {
		if d := got.Slice(n - 2).MaxDifference(whole.Slice(n)); d != 0 {
			t.Errorf("residual of slice %d differs by %v in the window", n, d)
		}
	}
	if _, err := s.Window(7, 8); err == nil {
		t.Error("no error from a window of one slice")
	}
}
