package action_test

import (
	"fmt"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// every kind of end, and a ring with a jump.
func everyLine(h float64, sites int, jump float64) map[string]lattice.Axis {
	line := lattice.Axis{From: -h * float64(sites-1) / 2, Step: h, Sites: sites}
	lines := map[string]lattice.Axis{}
	for _, left := range []lattice.End{lattice.Free, lattice.Held, lattice.Open, lattice.Even, lattice.Odd} {
		for _, right := range []lattice.End{left, lattice.Free, lattice.Held} {
			l := line
			l.Left, l.Right = left, right
			lines[fmt.Sprintf("%v–%v", left, right)] = l
		}
	}
	line.Periodic, line.Jump = true, []float64{jump}
	lines["ring"] = line
	return lines
}

// largestTerm returns the largest of |ρ(h/k)Δ_tφ|, |κ(k/h)Δ_xφ| and |hkV′| over
// the block, for ρ = κ = 1.
func largestTerm(s *action.Discrete, h *field.History) float64 {
	b := h.Block
	dt, dx := b.Time.Step, b.Space.Step
	slope := field.NewSlice(1, b.Sites())
	var size float64
	for n := range b.Slices() {
		phi := h.Slice(n)
		row := phi.Component(0)
		for i := 1; i < len(row); i++ {
			size = max(size, dt/dx*math.Abs(row[i]-row[i-1]))
		}
		if n > 0 {
			size = max(size, dx/dt*phi.MaxDifference(h.Slice(n-1)))
		}
		s.Density().Potential.Slope(slope, phi, action.Sites{T: b.Time.At(n), X: b.Space.Positions(nil)})
		size = max(size, dx*dt*slope.MaxAbs())
	}
	return size
}

// largestEquation returns the largest |value| of a history where the field
// equation holds.
func largestEquation(s *action.Discrete, g *field.History) float64 {
	var size float64
	for n := 1; n < g.Block.Slices()-1; n++ {
		row := g.Slice(n).Component(0)
		lo, hi := 0, len(row)
		if s.HeldLeft() {
			lo++
		}
		if s.HeldRight() {
			hi--
		}
		size = max(size, field.SliceOf(row[lo:hi]).MaxAbs())
	}
	return size
}

// TestMarchIsStationary asks that ∂S/∂φ vanish to rounding at every event of a
// marched history that has an equation, for every density of the catalogue, link
// order and end; where there are losses or open ends, the residual.
//
// Tolerance: 1e-11 of the largest of |ρ(h/k)Δ_tφ|, |κ(k/h)Δ_xφ|, |hkV′| over
// the block. One rounding of φ itself is 2⁻⁵³·|φ|·h/k in ∂S/∂φ, here some 1e-15
// of the largest term.
func TestMarchIsStationary(t *testing.T) {
	densities := catalogue()
	densities[1].p = action.Polynomial{0.3, -0.2, 0.5, 0.1, 0.25} // bounded below
	var worst float64
	for _, d := range densities {
		for _, links := range everyLinks {
			jump := 1.0
			if d.name == "sine-Gordon" {
				jump = 2 * math.Pi
			}
			for name, line := range everyLine(0.25, 61, jump) {
				for _, lossy := range []bool{false, true} {
					b := lattice.Block{Time: lattice.Axis{From: 1, Step: 0.1, Sites: 300}, Space: line}
					w := action.Wave{Potential: d.p, Links: links}
					if lossy {
						w.Alpha, w.Beta = action.Uniform(0.05), action.Uniform(0.02)
					}
					s := mustNew(t, b, w)
					start := field.State{Field: field.NewSlice(1, line.Sites), Rate: field.NewSlice(1, line.Sites)}
					scatter(1, 0.2, start.Rate.Data)
					for i := range line.Sites {
						// A ring carries a step of the size of the jump, a line a pulse.
						x := line.At(i)
						if line.Periodic {
							start.Field.Data[i] = jump * 2 / math.Pi * math.Atan(math.Exp(2*x))
						} else {
							start.Field.Data[i] = 0.8 * math.Exp(-x*x)
						}
					}
					h := marchFrom(s, start)
					hk := b.Space.Step * b.Time.Step
					var off float64
					if s.Conservative() == nil {
						off = largestEquation(s, s.Gradient(nil, h))
					} else {
						off = hk * largestEquation(s, s.Residual(nil, h))
					}
					ratio := off / largestTerm(s, h)
					worst = max(worst, ratio)
					if !(ratio <= 1e-11) || h.Check() != nil {
						t.Errorf("%s, links of order %d, %s, lossy %v: max|∂S/∂φ| is %.3g of the largest term; want ≤ 1e-11", d.name, links, name, lossy, ratio)
					}
				}
			}
		}
	}
	t.Logf("max|∂S/∂φ| on marched histories is at most %.2g of the largest term", worst)
}

// TestMarchIsStationaryInhomogeneous is the same with everything that varies in
// x and t, prescribed fluxes and moving held ends.
func TestMarchIsStationaryInhomogeneous(t *testing.T) {
	wave := func(base, size float64) action.Coefficient {
		return action.Over(func(x, t float64) float64 { return base + size*math.Sin(2*x+3*t) })
	}
	for _, links := range everyLinks {
		for name, line := range everyLine(0.25, 61, 2*math.Pi) {
			w := action.Wave{Potential: action.SineGordon{}, Links: links, Rho: wave(1, 0.3), Kappa: wave(1, 0.3), Sigma: wave(1, 0.5), Source: wave(0.1, 0.2)}
			if !line.Periodic && line.Left == lattice.Free {
				w.LeftFlux = wave(0, 0.5)
			}
			if !line.Periodic && line.Right == lattice.Free {
				w.RightFlux = wave(0.5, 0.5)
			}
			b := lattice.Block{Time: lattice.Axis{From: 1, Step: 0.1, Sites: 200}, Space: line}
			s := mustNew(t, b, w)
			h := field.NewHistory(b, 1)
			scatter(3, 0.01, h.Slice(0).Data)
			scatter(4, 0.01, h.Slice(1).Data)
			for n := range b.Slices() { // held ends shake
				if s.HeldLeft() {
					h.Set(n, 0, 0, 0.5*math.Sin(b.Time.At(n)))
				}
				if s.HeldRight() {
					h.Set(n, 0, line.Sites-1, 0.1*b.Time.At(n))
				}
			}
			march(s, h)
			off := b.Space.Step * b.Time.Step * largestEquation(s, s.Residual(nil, h))
			if s.Conservative() == nil {
				off = max(off, largestEquation(s, s.Gradient(nil, h)))
			}
			// The bar and its reason are those of TestMarchIsStationary.
			if ratio := off / largestTerm(s, h); !(ratio <= 1e-11) || h.Check() != nil {
				t.Errorf("links of order %d, %s: max|∂S/∂φ| is %.3g of the largest term; want ≤ 1e-11", links, name, ratio)
			}
		}
	}
}
