package integrate_test

import (
	"fmt"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// solutions returns exact solutions of φ_tt − φ_xx + sin φ = 0 that live on
// |x| < 12 for 0 ≤ t ≤ 20, and fall off like e^(−γ|x|) or faster than e^(−0.8|x|)
// beyond [Perring & Skyrme 1962, Nucl. Phys. 31, 550, from memory].
func solutions(t *testing.T) []struct {
	name    string
	profile field.Profile
} {
	kink, err := field.SineGordonKink(field.Moving{At: -5, Speed: 0.5})
	exact(t, kink, err)
	breather, err := field.SineGordonBreather(field.Breather{Frequency: 0.6})
	exact(t, breather, err)
	boosted, err := field.SineGordonBreather(field.Breather{Moving: field.Moving{At: -5, Speed: 0.5}, Frequency: 0.6, Phase: 1})
	exact(t, boosted, err)
	collision := field.Collision{Speed: 0.5, Time: 10}
	pair, err := field.SineGordonKinkAntikink(collision)
	exact(t, pair, err)
	kinks, err := field.SineGordonKinkKink(collision)
	exact(t, kinks, err)
	return []struct {
		name    string
		profile field.Profile
	}{
		{"kink, v = 0.5", kink},
		{"breather at rest, ω = 0.6", breather},
		{"breather at v = 0.5", boosted},
		{"kink and antikink through each other, v = 0.5", pair},
		{"two kinks off each other, v = 0.5", kinks},
	}
}

// missBy evolves a profile over the time 20 and returns the largest error.
func missBy(t *testing.T, p field.Profile, m integrate.Method, order action.Links, h, k float64) float64 {
	t.Helper()
	line, clock := span(-35, 70, int(math.Round(70/h))), span(0, 20, int(math.Round(20/k)))
	s := discrete(t, clock, line, action.Wave{Potential: action.SineGordon{}, Links: order})
	run := evolve(t, s, p.On(line, 0), integrate.Settings{Method: m, Every: -1})
	return run.Final.Field.MaxDifference(p.On(line, run.Time).Field)
}

// Space and time refined together, at Courant number 0.8, 0.5 and 0.5. The order is that of
// the worse of the two.
func TestSineGordonSolutions(t *testing.T) {
	for _, sol := range solutions(t) {
		for _, tt := range []struct {
			method  integrate.Method
			links   action.Links
			courant float64
			order   float64
			slack   float64
		}{
			// The terms of h⁴ change the slope by (h/width)² ≈ 0.1 at the coarsest level.
			{integrate.Leapfrog{}, action.Nearest, 0.8, 2, 0.15},
			{integrate.Yoshida4{}, action.Fourth, 0.5, 4, 0.3},
			{integrate.RK4{}, action.Fourth, 0.5, 4, 0.3},
		} {
			var errs []float64
			for _, h := range []float64{0.2, 0.1, 0.05} {
				errs = append(errs, missBy(t, sol.profile, tt.method, tt.links, h, tt.courant*h))
			}
			wantOrder(t, fmt.Sprintf("%s, %s, links %d", sol.name, tt.method.Name(), tt.links), errs, tt.order, tt.slack)
		}
	}
}

// The order in the time step alone, on a lattice whose own error is below the
// errors measured: the reference is the same lattice with a step so short that
// RK4 is exact to rounding.
func TestOrderInTime(t *testing.T) {
	pair, err := field.SineGordonKinkAntikink(field.Collision{Speed: 0.5, Time: 3})
	exact(t, pair, err)
	line := span(-20, 40, 200)
	final := func(m integrate.Method, steps int) field.State {
		s := discrete(t, span(0, 6, steps), line, action.Wave{Potential: action.SineGordon{}})
		return evolve(t, s, pair.On(line, 0), integrate.Settings{Method: m, Every: -1}).Final
	}
	ref := final(integrate.RK4{}, 3200) // (k/0.1)⁴ of the error at k = 0.1: 1e-7 of it
	for _, tt := range []struct {
		method integrate.Method
		order  float64
	}{{integrate.Leapfrog{}, 2}, {integrate.Yoshida4{}, 4}, {integrate.RK4{}, 4}} {
		var value, rate []float64
		for _, steps := range []int{60, 120, 240} {
			st := final(tt.method, steps)
			value = append(value, st.Field.MaxDifference(ref.Field))
			rate = append(rate, st.Rate.MaxDifference(ref.Rate))
		}
		// The next term is (kω)² of the first, ω ≈ 2 for what a collision stirs up.
		wantOrder(t, tt.method.Name()+", field", value, tt.order, 0.2)
		wantOrder(t, tt.method.Name()+", rate", rate, tt.order, 0.2)
	}
}

// The order in the spacing alone: RK4 with the step 0.02 is good to 1e-9.
func TestOrderInSpace(t *testing.T) {
	kink, err := field.SineGordonKink(field.Moving{At: -5, Speed: 0.5})
	exact(t, kink, err)
	for _, order := range []action.Links{action.Nearest, action.Fourth, action.Sixth} {
		var errs []float64
		for _, h := range []float64{0.4, 0.2, 0.1} {
			errs = append(errs, missBy(t, kink, integrate.RK4{}, order, h, 0.02))
		}
		// (h/width)² = 0.2 at the coarsest level, times the ratio of the next two
		// coefficients, which is near one.
		wantOrder(t, fmt.Sprintf("links %d", order), errs, float64(order), 0.3)
	}
}

// After a collision each soliton is 2√(1−v²) ln(1/v) ahead of free flight
// [Perring & Skyrme 1962, from memory]; 1.2005661338529436 at v = 0.5
// (independent computation: closed form and exact solutions at t = 60).
func TestSineGordonShift(t *testing.T) {
	const want, v, each = 1.2005661338529436, 0.5, 18.0
	c := field.Collision{Speed: v, Time: each}
	pair, err := field.SineGordonKinkAntikink(c)
	exact(t, pair, err)
	kinks, err := field.SineGordonKinkKink(c)
	exact(t, kinks, err)
	for _, tt := range []struct {
		name          string
		profile       field.Profile
		before, after float64 // the field half-way up the right soliton
	}{
		{"kink and antikink", pair, math.Pi, -math.Pi},
		{"two kinks", kinks, math.Pi, math.Pi},
	} {
		var errs []float64
		for l := range 3 {
			// The right half of the line: the pair is even, the kinks are odd.
			end := lattice.Even
			if tt.before == tt.after {
				end = lattice.Odd
			}
			line := between(span(0, 30, 300<<l), end, lattice.Free)
			s := discrete(t, span(0, 2*each, 720<<l), line, action.Wave{Potential: action.SineGordon{}, Links: action.Sixth})
			start := tt.profile.On(line, 0)
			run := evolve(t, s, start, integrate.Settings{Method: integrate.Yoshida4{}, Every: -1})
			before := outermost(line, start.Field.Component(0), tt.before)
			after := outermost(line, run.Final.Field.Component(0), tt.after)
			errs = append(errs, math.Abs(before+after-2*v*each-want))
		}
		t.Logf("%s: shift off by %.3g", tt.name, errs)
		// At t = ±18 the solitons are e^(−2γvt) = 1e-9 from their free flight;
		// the steps are as in TestSineGordonSolutions, order 4 in time.
		wantOrder(t, tt.name, errs, 4, 0.3)
		if last := errs[2]; !(last <= 5e-8) {
			t.Errorf("%s: shift off by %.3g; want 5e-8", tt.name, errs)
		}
	}
}
