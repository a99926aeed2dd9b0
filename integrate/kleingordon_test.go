package integrate_test

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// The retarded Green function of φ_tt − φ_xx + m²φ = δ(t)δ(x),
// ½θ(t − |x|)J₀(m√(t² − x²)) (textbook), convolved with a source that is
// Gaussian in x and t. At the coarsest level the source's full width at half
// height is 9 spacings.
func TestKleinGordonGreenFunction(t *testing.T) {
	const mass, sigma, tau, from, until = 1.0, 0.5, 0.5, 4.0, 12.0
	source := func(x, tt float64) float64 {
		return math.Exp(-x*x/(2*sigma*sigma) - (tt-from)*(tt-from)/(2*tau*tau))
	}
	// At x, by Gauss–Legendre in light-cone coordinates of the source event,
	// u = t − x and v = t + x, with which the cone is a quadrant.
	exact := func(x float64) float64 {
		u0, v0 := until-x, until+x
		low := from - 9*sigma // the source is below 1e-17 there
		return quad.Fixed(func(u float64) float64 {
			return quad.Fixed(func(v float64) float64 {
				g := 0.5 * math.J0(mass*math.Sqrt(max(0, (u0-u)*(v0-v))))
				return 0.5 * g * source((v-u)/2, (u+v)/2)
			}, low, min(v0, from+9*sigma), 80, nil, 0)
		}, low, min(u0, from+9*sigma), 80, nil, 0)
	}
	places := []float64{0, 1.5, 3, 6}
	var errs []float64
	for l := range 3 {
		links := 320 << l
		line := span(-20, 40, links)
		clock := span(0, until, 128<<l)
		s := discrete(t, clock, line, action.Wave{Potential: action.Mass(mass), Source: action.Over(source)})
		run := evolve(t, s, field.NewState(1, line.Sites), integrate.Settings{Every: -1})
		var worst float64
		for _, x := range places {
			i, err := line.Index(x)
			if err != nil {
				t.Fatal(err)
			}
			worst = max(worst, math.Abs(run.Final.Field.At(0, i)-exact(x)))
		}
		errs = append(errs, worst)
	}
	// The next term is (h/σ)² = 1/16 of the first at the coarsest level.
	wantOrder(t, "Klein–Gordon, Gaussian source", errs, 2, 0.1)
}

// φ_tt − φ_xx + φ = 0 from exp(−x²) at rest: φ(0, t), independent computation:
// Fourier integral.
func TestKleinGordonGaussian(t *testing.T) {
	want := map[float64]float64{1: 0.0281048528, 5: 0.2869186516, 10: -0.044208771, 20: -0.0574331157}
	for _, tt := range []struct {
		method integrate.Method
		links  action.Links
		order  float64
		slack  float64
	}{
		{integrate.Leapfrog{}, action.Nearest, 2, 0.1},
		// Time is of order 4, space of order 6: 4, or more where space leads.
		{integrate.Yoshida4{}, action.Sixth, 4, 0.3},
		{integrate.RK4{}, action.Sixth, 4, 0.3},
	} {
		var errs []float64
		for l := range 3 {
			// Half of the line: the solution is even.
			line := between(span(0, 28, 224<<l), lattice.Even, lattice.Held)
			clock := span(0, 20, 320<<l)
			s := discrete(t, clock, line, action.Wave{Potential: action.Mass(1), Links: tt.links})
			start := field.NewState(1, line.Sites)
			for i := range line.Sites {
				start.Field.Data[i] = math.Exp(-line.At(i) * line.At(i))
			}
			run := evolve(t, s, start, integrate.Settings{Method: tt.method, Every: 16 << l})
			var worst float64
			for at, value := range want {
				n, err := run.History.Block.Time.Index(at)
				if err != nil {
					t.Fatal(err)
				}
				worst = max(worst, math.Abs(run.History.At(n, 0, 0)-value))
			}
			errs = append(errs, worst)
		}
		wantOrder(t, tt.method.Name(), errs, tt.order, tt.slack)
	}
}
