package main

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"gonum.org/v1/gonum/mat"
)

func TestMedian(t *testing.T) {
	for _, c := range []struct {
		v    []float64
		want float64
	}{{[]float64{3}, 3}, {[]float64{9, 1, 4}, 4}, {[]float64{8, 2, 4, 1}, 3}} {
		if got := median(c.v); got != c.want {
			t.Errorf("median(%v) = %v, want %v", c.v, got, c.want)
		}
	}
}

// The peers must do the arithmetic that the library does. They start with two
// equal slices.
func TestPeersAgree(t *testing.T) {
	const sites, steps = 64, 100
	dir := t.TempDir()
	for _, c := range []struct {
		peer      *peer
		potential action.Potential
	}{
		{newPeer(dir, "phi4"), action.Phi4{}},
		{newPeer(dir, "sine", "-DSINE"), action.SineGordon{}},
	} {
		if c.peer.err != nil {
			t.Logf("C compiler: %v", c.peer.err)
			return
		}
		b := lattice.Block{Time: lattice.Axis{Step: 0.05, Sites: steps + 2}, Space: lattice.Axis{Step: 0.1, Sites: sites}}
		s, err := action.New(b, action.Wave{Potential: c.potential})
		if err != nil {
			t.Fatal(err)
		}
		h := field.NewHistory(b, 1)
		profile(h.Slice(0).Data)
		h.Slice(1).CopyFrom(h.Slice(0))
		m := s.March()
		for n := 1; n <= steps; n++ {
			m.Step(h.Slice(n+1), h.Slice(n), h.Slice(n-1), n)
		}
		ns, phi, err := c.peer.output(sites, steps)
		if err != nil || !(ns > 0) {
			t.Fatalf("peer printed %v ns per site, %v", ns, err)
		}
		// The same 100 steps with other rounding: 100 · a few 1e-16.
		if want := h.At(steps+1, 0, sites/3); math.Abs(phi-want) > 1e-12 {
			t.Errorf("%T: peer ends at %v, the library at %v", c.potential, phi, want)
		}
	}
}

// The thirteen-point matrix must be the square of the five-point one.
func TestGridMatrix(t *testing.T) {
	const n = 5
	dense := func(points int) *mat.SymDense {
		p, values := gridMatrix(n, points)
		m := mat.NewSymDense(p.N, nil)
		for i := range p.N {
			for k := p.Ptr[i]; k < p.Ptr[i+1]; k++ {
				m.SetSym(i, int(p.Adj[k]), values[k])
			}
		}
		return m
	}
	var square mat.Dense
	five := dense(5)
	square.Mul(five, five)
	if !mat.EqualApprox(&square, dense(13), 1e-12) { // sums of five products below 20
		t.Errorf("thirteen-point matrix is not the square:\n%v", mat.Formatted(dense(13)))
	}
}
