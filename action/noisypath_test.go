package action_test

import (
	"fmt"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// TestFreeDiffusionAndOrnsteinUhlenbeck asks for the cheapest way from 0 to
// a cos qx in the time T without a potential and in V = ½m²φ². In the continuum it
// costs λa²‖cos‖²/(1 − e^(−2λT)), λ = m² + q² [Ornstein–Uhlenbeck; by hand]. On the
// lattice, with λ = m² + (4/h²) sin²(qh/2) and ρ = (1 − ½λk)/(1 + ½λk),
//
//	φ(n) ∝ ρ^(N−n)(1 − ρ^(2n))/(1 − ρ^(2N)),  S = λa²‖cos‖²/(1 − ρ^(2N))
//
// (by hand: the recursion φ(n+1) = ρφ(n) + noise has geometric optimal noise). With
// q = m = 0 that is a straight line and S = a²L/2T.
func TestFreeDiffusionAndOrnsteinUhlenbeck(t *testing.T) {
	const a, length, mobility = 0.8, 2.0, 0.7
	for _, c := range []struct{ m, wave float64 }{{0, 0}, {0, 1}, {0, 3}, {1.5, 0}, {1, 2}} {
		b := block(41, 0.05, 17, length/16)
		links := float64(b.Slices() - 1)
		k, h := b.Time.Step, b.Space.Step
		s := mustFlow(t, b, action.GradientFlow{Energy: action.Wave{Potential: action.Mass(c.m)}, Mobility: action.Uniform(mobility)})
		q := math.Pi * c.wave / length
		lambda := mobility * (c.m*c.m + math.Pow(2/h*math.Sin(q*h/2), 2))
		rho := (1 - lambda*k/2) / (1 + lambda*k/2)
		norm := length / 2
		if c.wave == 0 {
			norm = length
		}
		path := field.NewHistory(b, 1)
		for n := range b.Slices() {
			amplitude := a * math.Pow(rho, links-float64(n)) * (1 - math.Pow(rho, 2*float64(n))) / (1 - math.Pow(rho, 2*links))
			if lambda == 0 {
				amplitude = a * float64(n) / links
			}
			for i := range b.Sites() {
				path.Set(n, 0, i, amplitude*math.Cos(q*b.Space.At(i)))
			}
		}
		want := lambda / mobility * a * a * norm / (1 - math.Pow(rho, 2*links))
		if lambda == 0 {
			want = a * a * norm / (2 * mobility * b.Time.Length())
		}
		if got := s.Value(path); math.Abs(got-want) > 1e-12*want { // 700 terms
			t.Errorf("m = %g, wave %g: S = %.15g, want %.15g", c.m, c.wave, got, want)
		}
		// It is stationary inside. The gradient at the ends sets the scale.
		g := s.Gradient(nil, path)
		for n := 1; n < b.Slices()-1; n++ {
			if r := g.Slice(n).MaxAbs(); r > 1e-11*g.MaxAbs() { // differences of numbers 1/(λk) larger
				t.Errorf("m = %g, wave %g: ∂S/∂φ is %g of %g at slice %d", c.m, c.wave, r, g.MaxAbs(), n)
			}
		}
	}
}

// TestDoubleWellPaths finds the cheapest way of x′ = x − x³ + noise from −1 to 1 in
// the time T, a uniform field on a line of length 1, by Newton's method with the
// exact second variation. Independent computation (quadrature of the first
// integral): 1.075509657672681 for T = 2, 0.5798547732699724 for T = 5, falling to
// 2ΔE = ½ for T → ∞.
func TestDoubleWellPaths(t *testing.T) {
	for _, c := range []struct{ duration, want float64 }{{2, 1.075509657672681}, {5, 0.5798547732699724}} {
		for _, nodes := range []int{1, 3} {
			var errs []float64
			for _, slices := range []int{21, 41, 81} {
				b := block(slices, c.duration/float64(slices-1), 2, 1)
				s := mustFlow(t, b, action.GradientFlow{Energy: action.Wave{Potential: action.Phi4{}}, Nodes: nodes})
				h := field.NewHistory(b, 1)
				fill(h, 0, func(_, t float64) float64 { return math.Tanh(4*(t/c.duration-0.5)) / math.Tanh(2) })
				newton(t, s, h, func(n, _ int) bool { return n > 0 && n < slices-1 })
				errs = append(errs, s.Value(h)-c.want)
			}
			// The next order is k² of it, 0.06 at most.
			slopes(t, fmt.Sprintf("double well, T = %g, %d nodes", c.duration, nodes), 2, 0.1, errs...)
		}
	}
}
