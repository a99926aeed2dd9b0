package integrate_test

import (
	"context"
	"errors"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

func TestRefusesUnstableStep(t *testing.T) {
	line := span(-5, 10, 100)
	for _, tt := range []struct {
		name   string
		method integrate.Method
		wave   action.Wave
		omega  float64 // of the fastest oscillation
	}{
		// ω² = μ/h² + m², μ = 4, 16/3, 272/45 (symbol of the central differences at θ = π).
		{"massless", integrate.Leapfrog{}, action.Wave{}, 2 / line.Step},
		{"massive", integrate.Leapfrog{}, action.Wave{Potential: action.Mass(3)}, math.Sqrt(4/(line.Step*line.Step) + 9)},
		{"φ⁴ about a vacuum", integrate.Yoshida4{}, action.Wave{Potential: action.Phi4{}, Links: action.Fourth}, math.Sqrt(16./3/(line.Step*line.Step) + 2)},
		{"faster on the right", integrate.RK4{}, action.Wave{Links: action.Sixth, Kappa: action.Along(func(x float64) float64 {
			if x > 0 {
				return 9
			}
			return 1
		})}, 3 * math.Sqrt(272./45) / line.Step},
	} {
		start := field.NewState(1, line.Sites)
		for i := range start.Field.Data {
			start.Field.Data[i] = 1
		}
		limit := tt.method.Limit() / tt.omega
		for _, share := range []float64{0.999, 1.001} {
			k := share * limit
			s := discrete(t, lattice.Axis{Step: k, Sites: 3}, line, tt.wave)
			_, err := integrate.Evolve(context.Background(), s, start, integrate.Settings{Method: tt.method})
			var unstable *integrate.Unstable
			switch {
			case share < 1 && err != nil:
				t.Errorf("%s: step %g of the limit refused: %v", tt.name, share, err)
			case share > 1 && !errors.As(err, &unstable):
				t.Errorf("%s: step %g of the limit: error %v, want *Unstable", tt.name, share, err)
			case share > 1:
				// rounding of a root
				if math.Abs(unstable.Omega-tt.omega) > 1e-12*tt.omega || unstable.Step != k || unstable.Method != tt.method.Name() || math.Abs(unstable.Largest-limit) > 1e-12*limit {
					t.Errorf("%s: %+v; want ω = %g and the largest step %g", tt.name, *unstable, tt.omega, limit)
				}
			}
		}
	}
}

// The limit of RK4 on losses, kd < 2.785 with d = (α + 4β/h²)/ρ: the stability
// function 1 + z + z²/2 + z³/6 + z⁴/24 is 1 again at z = −2.7853 (textbook). Just
// below a run decays, just above it is refused.
func TestRefusesFastLosses(t *testing.T) {
	const alpha, beta, rho = 0.5, 0.3, 2.0
	line := lattice.Axis{Step: 0.1, Sites: 40, Periodic: true}
	d := (alpha + 4*beta/(line.Step*line.Step)) / rho
	w := action.Wave{Alpha: action.Uniform(alpha), Beta: action.Uniform(beta), Rho: action.Uniform(rho)}
	start := field.NewState(1, line.Sites)
	for i := range line.Sites {
		start.Rate.Data[i] = float64(1 - 2*(i%2))
	}
	for _, share := range []float64{0.99, 1.01} {
		s := discrete(t, lattice.Axis{Step: share * 2.785 / d, Sites: 400}, line, w)
		run, err := integrate.Evolve(context.Background(), s, start, integrate.Settings{Method: integrate.RK4{}, Every: -1})
		if share < 1 {
			if err != nil {
				t.Errorf("%g of the limit refused: %v", share, err)
			} else if m := run.Final.Rate.MaxAbs(); m > 1 {
				t.Errorf("%g of the limit: the rate grew to %g", share, m)
			}
			continue
		}
		var unstable *integrate.Unstable
		if !errors.As(err, &unstable) || math.Abs(unstable.Omega-d) > 1e-9*d {
			t.Errorf("%g of the limit: error %v; want *Unstable with the decay %g", share, err, d)
		}
		if _, err := integrate.Evolve(context.Background(), s, start, integrate.Settings{Every: -1}); err != nil {
			t.Errorf("leapfrog: %v; want no limit from losses", err)
		}
	}
}

// A potential that is not bounded below, V = −¼φ⁴, runs away in a finite time
// where the field is largest.
func TestBlowUp(t *testing.T) {
	line := span(-5, 10, 100)
	clock := span(0, 40, 800)
	start := field.NewState(1, line.Sites)
	for i := range line.Sites {
		x := line.At(i)
		start.Field.Data[i] = 0.5 + 0.3*math.Exp(-(x-1)*(x-1))
	}
	w := action.Wave{Potential: action.Polynomial{0, 0, 0, 0, -0.25}}
	for _, m := range []integrate.Method{integrate.Leapfrog{}, integrate.Yoshida4{}, integrate.RK4{}} {
		for _, every := range []int{1, 7, -1} {
			s := discrete(t, clock, line, w)
			run, err := integrate.Evolve(context.Background(), s, start, integrate.Settings{Method: m, Every: every})
			var e *integrate.BlowUp
			if !errors.As(err, &e) {
				t.Fatalf("%s: error %v, want *BlowUp", m.Name(), err)
			}
			if e.Component != 0 || !math.IsNaN(e.Value-e.Value) || math.Abs(e.Event.X-1) > 3 || e.Event.T != clock.At(e.Slice) {
				t.Errorf("%s: %+v; want the first value that is not finite, near x = 1", m.Name(), e)
			}
			if e.LastSlice >= e.Slice || e.Slice-e.LastSlice > 2 || run.Slice != e.LastSlice {
				t.Errorf("%s: blew up at slice %d, last good one %d, run ends at %d", m.Name(), e.Slice, e.LastSlice, run.Slice)
			}
			if err := e.Last.Check(); err != nil {
				t.Errorf("%s: last state: %v", m.Name(), err)
			}
			if every > 0 {
				if err := run.History.Check(); err != nil {
					t.Errorf("%s: history: %v", m.Name(), err)
				}
				if n := run.History.Block.Slices(); n != e.LastSlice/every+1 {
					t.Errorf("%s: %d slices recorded up to slice %d, every %d", m.Name(), n, e.LastSlice, every)
				}
			}
			// the same as a run that stops before
			short := clock
			short.Sites = e.LastSlice + 1
			until := evolve(t, discrete(t, short, line, w), start, integrate.Settings{Method: m, Every: -1})
			if d := until.Final.Field.MaxDifference(e.Last.Field); d != 0 {
				t.Errorf("%s: last state differs by %g from that of a run stopped there", m.Name(), d)
			}
			if d := until.Final.Rate.MaxDifference(e.Last.Rate); d != 0 {
				t.Errorf("%s: last rate differs by %g from that of a run stopped there", m.Name(), d)
			}
			if every == 1 {
				t.Logf("%s: %v", m.Name(), err)
			}
		}
	}
}

// The component of a blow-up is named: the second of two, the first is tame.
func TestBlowUpNamesComponent(t *testing.T) {
	line := span(0, 4, 20)
	clock := span(0, 0.9, 9)
	ends := integrate.Ends{Right: func(c int, tt float64) float64 {
		if c == 1 && tt >= 0.5 {
			return math.Inf(-1)
		}
		return 0
	}}
	s := discrete(t, clock, between(line, lattice.Free, lattice.Held), action.Wave{Components: 2})
	_, err := integrate.Evolve(context.Background(), s, field.NewState(2, line.Sites), integrate.Settings{Ends: ends})
	var e *integrate.BlowUp
	if !errors.As(err, &e) {
		t.Fatalf("error %v, want *BlowUp", err)
	}
	// The rate of slice 4 is a difference of the slices 5 and 3.
	if want := (lattice.Event{T: clock.At(5), X: 4}); e.Component != 1 || e.Slice != 5 || e.Event != want || e.LastSlice != 3 {
		t.Errorf("%v; want component 1 at %v, slice 5, after the finite state of slice 3", e, want)
	}
}
