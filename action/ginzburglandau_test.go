package action_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// TestGinzburgLandauEnergies asks for the energies of the states of n half waves of
// E = ∫₀¹ d·u_x²/2 + (1 − u²)²/4d dx with u = 0 at both ends, d = 0.05, and for the
// barrier on a line with zero flux, with order 2. Independent computation: elliptic
// functions, 30 digits.
func TestGinzburgLandauEnergies(t *testing.T) {
	const d = 0.05
	for _, c := range []struct {
		name string
		end  lattice.End
		want float64
		wave func(x float64) float64
	}{
		{"one half wave", lattice.Held, 0.9428090415761763, func(x float64) float64 { return math.Tanh(x/(d*math.Sqrt2)) * math.Tanh((1-x)/(d*math.Sqrt2)) }},
		{"two half waves", lattice.Held, 1.885601759983912, func(x float64) float64 {
			return math.Tanh(x/(d*math.Sqrt2)) * math.Tanh((0.5-x)/(d*math.Sqrt2)) * math.Tanh((1-x)/(d*math.Sqrt2))
		}},
		// The quasi-potential from −1 to 1 over the one-kink saddle is 2ΔE.
		{"one kink, free ends", lattice.Free, 0.5 * 1.8856180831523526, func(x float64) float64 { return math.Tanh((x - 0.5) / (d * math.Sqrt2)) }},
	} {
		var errs []float64
		for _, m := range []int{64, 128, 256} {
			b := block(2, 1, m+1, 1/float64(m))
			b.Space.Left, b.Space.Right = c.end, c.end
			w := action.Wave{Potential: action.Phi4{}, Kappa: action.Uniform(d), Sigma: action.Uniform(1 / d)}
			s := mustFlow(t, b, action.GradientFlow{Energy: w})
			u := field.NewSlice(1, m+1)
			for i := range u.Data {
				u.Data[i] = c.wave(b.Space.At(i))
			}
			settle(t, u.Data, b.Space.Step, d, c.end == lattice.Held)
			errs = append(errs, s.Energy(u, 0)-c.want)
			flat := field.NewSlice(1, m+1) // a vacuum has no energy but at held ends: φ = 1 everywhere
			for i := range flat.Data {
				flat.Data[i] = 1
			}
			if e := s.Energy(flat, 0); e != 0 {
				t.Errorf("%s: a vacuum has the energy %g", c.name, e)
			}
		}
		slopes(t, c.name, 2, 0.1, errs...) // the next order is (h/d)²/20 of it, 0.005
	}
}

// settle solves d²u_xx + u − u³ = 0 by Newton's method, with u = 0 or u_x = 0 at
// the ends; odd about the middle, u is held there if it starts as zero.
func settle(t *testing.T, u []float64, h, d float64, held bool) {
	t.Helper()
	last := len(u) - 1
	stiff := d * d / (h * h)
	for step := 0; ; step++ {
		low, diag, up, rhs := make([]float64, last+1), make([]float64, last+1), make([]float64, last+1), make([]float64, last+1)
		for i, v := range u {
			left, right := max(i-1, 0), min(i+1, last)
			if !held && i == 0 {
				left = 1
			}
			if !held && i == last {
				right = last - 1
			}
			if held && (i == 0 || i == last) || 2*i == last && math.Abs(v) < 1e-12 {
				diag[i], u[i] = 1, 0
				continue
			}
			rhs[i] = stiff*(u[left]-2*v+u[right]) + v - v*v*v
			diag[i] = 2*stiff - 1 + 3*v*v
			if left < i {
				low[i] -= stiff
			} else {
				up[i] -= stiff
			}
			if right > i {
				up[i] -= stiff
			} else {
				low[i] -= stiff
			}
		}
		most := addSolution(u, low, diag, up, rhs)
		if most < 1e-12 {
			return
		}
		if step == 30 {
			t.Fatalf("Newton's method does not converge: last step %g", most)
		}
	}
}
