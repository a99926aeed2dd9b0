package action_test

import (
	"fmt"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// TestPrescribedFlux asks that fields that solve the continuum equation with a
// flux at both free ends be exact zeros of the residual: φ = a + (f/κ)x with
// κφ_x = f for every order of the links, and φ = xt with κφ_x + βφ_xt = κt + β
// for nearest-neighbour links, which are those of β. Both are linear in x and t,
// so that every difference quotient is exact.
func TestPrescribedFlux(t *testing.T) {
	const kappa, beta, f = 2, 0.5, 0.75
	steady := action.Uniform(f)
	growing := action.Over(func(_, t float64) float64 { return kappa*t + beta })
	for _, c := range []struct {
		name string
		w    action.Wave
		phi  func(x, t float64) float64

		moving bool // φ_xt ≠ 0
	}{
		{"steady", action.Wave{LeftFlux: steady, RightFlux: steady}, func(x, _ float64) float64 { return 3 + f/kappa*x }, false},
		{"steady with β", action.Wave{LeftFlux: steady, RightFlux: steady, Beta: action.Uniform(beta)}, func(x, _ float64) float64 { return 3 + f/kappa*x }, false},
		{"growing with β", action.Wave{LeftFlux: growing, RightFlux: growing, Beta: action.Uniform(beta)}, func(x, t float64) float64 { return x * t }, true},
	} {
		for _, links := range everyLinks {
			for _, sites := range []int{4, 11} {
				b := block(5, 0.125, sites, 0.5)
				w := c.w
				w.Kappa, w.Links = action.Uniform(kappa), links
				if c.moving && links != action.Nearest {
					continue // of order 2: see TestFluxOrder
				}
				s := mustNew(t, b, w)
				h := field.NewHistory(b, 1)
				for n := range b.Slices() {
					for i := range sites {
						h.Set(n, 0, i, c.phi(b.Space.At(i), b.Time.At(n)))
					}
				}
				// Terms κφ/h² up to 40, a few roundings each.
				if r := s.Residual(nil, h).MaxAbs(); !(r <= 1e-13) {
					t.Errorf("%s, links of order %d on %d sites: residual %g; want 0", c.name, links, sites, r)
				}
			}
		}
	}
}

// TestFluxOrder marches a driven line with the solution sin(x − t),
//
//	φ_tt = (φ_x + βφ_xt)_x + J,  J = −β cos(x − t),
//
// whose flux cos(x − t) + β sin(x − t) is prescribed at both ends, and asks for
// the order 2 in h at a fixed Courant number. With β that is the order for wide
// links too: β lives on nearest-neighbour links, the weights of a flux on the
// others.
func TestFluxOrder(t *testing.T) {
	wave := field.Profile(func(x, t float64) (value, rate float64) { return math.Sin(x - t), -math.Cos(x - t) })
	for _, beta := range []float64{0, 0.25} {
		for _, links := range everyLinks {
			if beta == 0 && links != action.Nearest {
				continue // between 2 and the order of the links
			}
			flux := action.Over(func(x, t float64) float64 { return math.Cos(x-t) + beta*math.Sin(x-t) })
			source := action.Over(func(x, t float64) float64 { return -beta * math.Cos(x-t) })
			var errs []float64
			for _, h := range []float64{0.1, 0.05, 0.025} {
				b := block(int(math.Round(4/(0.5*h)))+1, 0.5*h, int(math.Round(3/h))+1, h)
				s := mustNew(t, b, action.Wave{Links: links, LeftFlux: flux, RightFlux: flux, Source: source, Beta: action.Uniform(beta)})
				errs = append(errs, marchFrom(s, wave.On(b.Space, 0)).MaxDifference(wave.Over(b)))
			}
			// The next term is h or h² of the leading one, and the maximum wanders.
			slopes(t, fmt.Sprintf("driven line, links of order %d, β = %g", links, beta), 2, 0.1, errs...)
		}
	}
}
