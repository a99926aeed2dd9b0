package action_test

import (
	"fmt"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// relaxation integrates u_t = u_xx + u − u³ with zero flux at the ends by the
// implicit rule (Crank–Nicolson for the diffusion), written out here; average is
// the average of u − u³ over a step that it takes, and its derivative by the new
// value.
func relaxation(t *testing.T, b lattice.Block, start []float64, average func(old, fresh float64) (f, df float64)) *field.History {
	t.Helper()
	k, hh := b.Time.Step, b.Space.Step*b.Space.Step
	last := b.Sites() - 1
	laplace := func(u []float64, i int) float64 {
		switch i {
		case 0:
			return 2 * (u[1] - u[0]) / hh
		case last:
			return 2 * (u[last-1] - u[last]) / hh
		}
		return (u[i-1] - 2*u[i] + u[i+1]) / hh
	}
	h := field.NewHistory(b, 1)
	copy(h.Slice(0).Data, start)
	for n := range b.Slices() - 1 {
		old, fresh := h.Slice(n).Data, h.Slice(n+1).Data
		copy(fresh, old)
		for step := 0; ; step++ {
			low, diag, up, rhs := make([]float64, last+1), make([]float64, last+1), make([]float64, last+1), make([]float64, last+1)
			for i := range fresh {
				f, df := average(old[i], fresh[i])
				rhs[i] = old[i] - fresh[i] + k*(0.5*(laplace(old, i)+laplace(fresh, i))+f)
				diag[i] = 1 + k/hh - k*df
				low[i], up[i] = -0.5*k/hh, -0.5*k/hh
			}
			up[0], low[last] = 2*up[0], 2*low[last]
			if addSolution(fresh, low, diag, up, rhs) < 1e-14 {
				break
			}
			if step == 50 {
				t.Fatal("implicit step does not converge")
			}
		}
	}
	return h
}

// addSolution adds the solution of a tridiagonal system to u by Thomas's
// elimination and returns its largest entry.
func addSolution(u, low, diag, up, rhs []float64) (most float64) {
	last := len(u) - 1
	for i := 1; i <= last; i++ {
		f := low[i] / diag[i-1]
		diag[i] -= f * up[i-1]
		rhs[i] -= f * rhs[i-1]
	}
	for i := last; i >= 0; i-- {
		if i < last {
			rhs[i] -= up[i] * rhs[i+1]
		}
		rhs[i] /= diag[i]
		u[i] += rhs[i]
		most = max(most, math.Abs(rhs[i]))
	}
	return most
}

// reversed returns the history backwards.
func reversed(h *field.History) *field.History {
	back := field.NewHistory(h.Block, h.Components)
	for n := range h.Block.Slices() {
		back.Slice(n).CopyFrom(h.Slice(h.Block.Slices() - 1 - n))
	}
	return back
}

// TestUphillIsTwiceTheEnergy asks that a time-reversed relaxation cost 2ΔE
// [Freidlin & Wentzell 1984, chapter 4]: with the midpoint rule up to O(k²); with
// the averaged force, whose square splits exactly, up to the square of the error
// of the trapezoid rule that made the path, O(k⁴); and to rounding if the path is
// one of the averaged force itself. Downhill costs nothing.
func TestUphillIsTwiceTheEnergy(t *testing.T) {
	trapezoid := func(a, b float64) (f, df float64) { return 0.5 * (a - a*a*a + b - b*b*b), 0.5 * (1 - 3*b*b) }
	// −ΔV/Δu for V = ¼(1 − u²)²: ½(a + b)(1 − ½(a² + b²)).
	average := func(a, b float64) (f, df float64) {
		return 0.5 * (a + b) * (1 - 0.5*(a*a+b*b)), 0.5*(1-0.5*(a*a+b*b)) - 0.5*(a+b)*b
	}
	line := lattice.Axis{From: -3, Step: 0.25, Sites: 25}
	start := make([]float64, line.Sites)
	for i := range start { // near the saddle u = 0, both signs, smooth
		start[i] = 0.1 + 0.3*math.Sin(math.Pi*line.At(i)/6)
	}
	errs := map[int][]float64{}
	for _, m := range []int{1, 2, 4} {
		b := lattice.Block{Time: lattice.Axis{Step: 0.2 / float64(m), Sites: 40*m + 1}, Space: line}
		down := relaxation(t, b, start, trapezoid)
		for _, nodes := range []int{1, 2, 3} {
			s := mustFlow(t, b, action.GradientFlow{Energy: action.Wave{Potential: action.Phi4{}}, Nodes: nodes})
			rise := s.Energy(down.Slice(0), 0) - s.Energy(down.Slice(b.Slices()-1), 0)
			if rise < 0.5 {
				t.Fatalf("the relaxation goes down by %g only", rise)
			}
			errs[nodes] = append(errs[nodes], s.Value(reversed(down))-2*rise)
		}
		s := mustFlow(t, b, action.GradientFlow{Energy: action.Wave{Potential: action.Phi4{}}})
		exact := relaxation(t, b, start, average)
		rise := s.Energy(exact.Slice(0), 0) - s.Energy(exact.Slice(b.Slices()-1), 0)
		if v := s.Value(exact); v > 1e-24 { // rounding 1e-14 over k, squared, summed over 10⁴ values hk
			t.Errorf("a relaxation of the averaged force costs %g", v)
		}
		if v := s.Value(reversed(exact)); math.Abs(v-2*rise) > 1e-12 { // rounding of 10⁴ terms
			t.Errorf("its reverse costs %.15g, want 2ΔE = %.15g", v, 2*rise)
		}
	}
	slopes(t, "reversed trapezoid, midpoint action", 2, 0.2, errs[1]...) // the next order is k²/4 of it
	slopes(t, "reversed trapezoid, averaged force", 4, 0.3, errs[3]...)  // the same
	for k, v := range errs[3] {
		if v < 0 || math.Abs(v-errs[2][k]) > 1e-12 { // two nodes are exact for φ⁴: rounding
			t.Errorf("S − 2ΔE is %g with 3 nodes and %g with 2; want the same, ≥ 0", v, errs[2][k])
		}
	}
}

// TestNothingBelowTheQuasiPotential asks on rough histories for S ≥ 2ΔE, and for
// the split of the square, to rounding: with the averaged force S[φ] − S[reversed]
// is 2ΔE for every history.
func TestNothingBelowTheQuasiPotential(t *testing.T) {
	b := block(12, 0.3, 9, 0.5)
	b.Space.Left = lattice.Held
	for _, c := range []struct {
		p     action.Potential
		nodes int
	}{{action.Phi4{}, 2}, {action.Phi6{}, 3}, {action.Polynomial{0, 0.1, 0, 0, 0, 0, 0, 0, 0.125}, 4}} {
		w := action.Wave{Potential: c.p, Kappa: action.Along(func(x float64) float64 { return 1 + 0.2*x }), Source: action.Uniform(0.1)}
		s := mustFlow(t, b, action.GradientFlow{Energy: w, Nodes: c.nodes, Mobility: action.Along(func(x float64) float64 { return 1 + x })})
		for seed := range uint64(10) {
			h := field.NewHistory(b, 1)
			scatter(seed, 1.2, h.Data)
			for n := range b.Slices() {
				h.Set(n, 0, 0, 0.3) // the held end rests
			}
			rise := s.Energy(h.Slice(b.Slices()-1), 0) - s.Energy(h.Slice(0), 0)
			forth, back := s.Value(h), s.Value(reversed(h))
			if math.Abs(forth-back-2*rise) > 1e-13*(forth+back) { // rounding of 100 terms
				t.Errorf("%T: S − S[reversed] = %.14g, want 2ΔE = %.14g", c.p, forth-back, 2*rise)
			}
			if forth < 2*rise {
				t.Errorf("%T: S = %g below 2ΔE = %g", c.p, forth, 2*rise)
			}
		}
	}
}

// TestSplitOfTheSquare asks, on a smooth history and for a potential that is no
// polynomial, that S − S[reversed] be 2ΔE up to O(k²) with one node and O(k⁴) with
// two: Gauss's rule of q nodes is off by (Δφ)^(2q+1) a link, and links number 1/k.
func TestSplitOfTheSquare(t *testing.T) {
	for _, nodes := range []int{1, 2} {
		var errs []float64
		for _, m := range []int{1, 2, 4} {
			b := block(10*m+1, 0.2/float64(m), 9, 0.25)
			s := mustFlow(t, b, action.GradientFlow{Energy: action.Wave{Potential: action.SineGordon{}}, Nodes: nodes})
			h := field.NewHistory(b, 1)
			fill(h, 0, func(x, t float64) float64 { return 2*t + 0.3*math.Cos(math.Pi*x/2)*math.Sin(t) })
			rise := s.Energy(h.Slice(b.Slices()-1), 0) - s.Energy(h.Slice(0), 0)
			errs = append(errs, s.Value(h)-s.Value(reversed(h))-2*rise)
		}
		// The next order is (Δφ)²/20 of it, 0.01.
		slopes(t, fmt.Sprintf("split of the square, %d nodes", nodes), 2*float64(nodes), 0.05, errs...)
	}
}
