package action_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack/lapack64"
	"gonum.org/v1/gonum/mat"
)

// TestPoissonOnAnL solves −Δu = 1 on the L (−1, 1)² less a quadrant, u = 0 on its
// rim, and asks for ∫|∇u|² = 0.2140758 (a standard case of the adaptive finite
// element literature; from memory). Near the re-entrant corner u goes like
// r^(2/3), so that energies of a uniform lattice are off by h^(4/3) [Grisvard
// 1985, Elliptic Problems in Nonsmooth Domains], beside the h² of the links.
func TestPoissonOnAnL(t *testing.T) {
	var energies []float64
	for _, m := range []int{8, 16, 32, 64} {
		b := block(2*m+1, 1/float64(m), 2*m+1, 1/float64(m))
		b.Time.From, b.Space.From = -1, -1
		r := mustRegion(t, b, func(e lattice.Event) bool { return e.T < 0 || e.X < 0 })
		s := mustShaped(t, r, action.Wave{Signature: action.Euclidean, Source: action.Uniform(1)})
		u := field.NewHistory(b, 1)
		newton(t, s, u, func(n, i int) bool { return r.Event(n, i) == 1 })
		// S = ½∫|∇u|² − ∫u is −½∫|∇u|² at its minimum.
		energies = append(energies, -2*s.Value(u))
	}
	const want = 0.2140758
	// extrapolate removes the error of one order.
	extrapolate := func(e []float64, order float64) (better []float64) {
		f := math.Exp2(order)
		for k := range e[1:] {
			better = append(better, (f*e[k+1]-e[k])/(f-1))
		}
		return better
	}
	corner := extrapolate(energies, 2)
	var errs []float64
	for _, e := range corner {
		errs = append(errs, e-want)
	}
	slopes(t, "Poisson on an L", 4./3, 0.05, errs...) // what is left is h^(4/3) = 0.06 of it at 1/8
	best := extrapolate(corner, 4./3)
	// The last change bounds what is left, which falls by 2^(8/3) a level.
	left := math.Abs(best[len(best)-1] - best[len(best)-2])
	t.Logf("extrapolated energy %.8f ± %.0g", best[len(best)-1], left)
	if got := best[len(best)-1]; math.Abs(got-want) > left+5e-8 { // and half a digit of the value quoted
		t.Errorf("extrapolated energy %.8f, want %.7f", got, want)
	}
}

// stationary is what newton needs of an action.
type stationary interface {
	Block() lattice.Block
	Gradient(dst, h *field.History) *field.History
	SecondVariationMatrix(dst *action.Matrix, h *field.History) *action.Matrix
}

// newton solves ∂S/∂φ = 0 at the free events of a history of one component and
// returns how many steps it took, by banded Cholesky factors.
func newton(t *testing.T, s stationary, h *field.History, free func(n, i int) bool) (steps int) {
	t.Helper()
	place := make([]int, len(h.Data))
	var unknowns []int
	for k := range h.Data {
		place[k] = -1
		if n, _, i := h.Place(k); free(n, i) {
			place[k] = len(unknowns)
			unknowns = append(unknowns, k)
		}
	}
	var band int
	m := s.SecondVariationMatrix(nil, h)
	for _, k := range unknowns {
		columns, _ := m.Row(k)
		for _, j := range columns {
			band = max(band, place[j]-place[k])
		}
	}
	for steps = 1; steps <= 40; steps++ {
		m = s.SecondVariationMatrix(m, h)
		g := s.Gradient(nil, h)
		delta := blas64.General{Rows: len(unknowns), Cols: 1, Stride: 1, Data: make([]float64, len(unknowns))}
		a := mat.NewSymBandDense(len(unknowns), band, nil)
		for p, k := range unknowns {
			delta.Data[p] = -g.Data[k]
			columns, values := m.Row(k)
			for q, j := range columns {
				if place[j] >= p {
					a.SetSymBand(p, place[j], values[q])
				}
			}
		}
		factor, ok := lapack64.Pbtrf(a.RawSymBand())
		if !ok {
			t.Fatalf("step %d: the second variation is not positive definite", steps)
		}
		lapack64.Pbtrs(factor, delta)
		var most float64
		for p, k := range unknowns {
			h.Data[k] += delta.Data[p]
			most = max(most, math.Abs(delta.Data[p]))
		}
		if most < 1e-10 { // quadratic convergence: the next step is rounding
			return steps
		}
	}
	t.Fatal("Newton's method does not converge")
	return steps
}
