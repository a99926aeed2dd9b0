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

// A wave sent down the line by an end that is moved, f(t − x) (d'Alembert,
// textbook), and a wall that holds the other end.
func TestDrivenEnd(t *testing.T) {
	f := func(u float64) float64 { // a smooth pulse, 0 for u ≤ 0 to 1e-15
		return math.Exp(-(u - 6) * (u - 6))
	}
	for _, m := range methods {
		var errs []float64
		for l := range 3 {
			line := between(span(0, 10, 100<<l), lattice.Held, lattice.Held)
			clock := span(0, 20, 300<<l)
			s := discrete(t, clock, line, action.Wave{})
			ends := integrate.Ends{Left: func(_ int, t float64) float64 { return f(t) }}
			start := field.NewState(1, line.Sites)
			run := evolve(t, s, start, integrate.Settings{Method: m, Ends: ends})
			var worst float64
			for n := range clock.Sites {
				for i := range line.Sites {
					x, tt := line.At(i), clock.At(n)
					// out and back from the wall at 10; the echo meets the end at 26
					worst = max(worst, math.Abs(run.History.At(n, 0, i)-f(tt-x)+f(tt-20+x)))
				}
			}
			errs = append(errs, worst)
			for n := range clock.Sites {
				if got := run.History.At(n, 0, 0); got != f(clock.At(n)) {
					t.Fatalf("%s: left end is %v at slice %d; want %v", m.Name(), got, n, f(clock.At(n)))
				}
				if got := run.History.At(n, 0, line.Sites-1); got != 0 {
					t.Fatalf("%s: right end is %v at slice %d; want the start's 0", m.Name(), got, n)
				}
			}
		}
		// Nearest-neighbour links: order 2 in space whatever the method.
		wantOrder(t, m.Name(), errs, 2, 0.15)
	}
}

// The order in time of RK4 beside an end that moves is 4, and 2 with β, which
// needs the rate of the end.
func TestRK4BesideDrivenEnd(t *testing.T) {
	line := between(span(0, 5, 20), lattice.Held, lattice.Free)
	for _, tt := range []struct {
		w     action.Wave
		order float64
	}{
		{action.Wave{Potential: action.SineGordon{}}, 4},
		{action.Wave{Potential: action.SineGordon{}, Beta: action.Uniform(0.1)}, 2},
	} {
		final := func(steps int) field.Slice {
			s := discrete(t, span(0, 6, steps), line, tt.w)
			ends := integrate.Ends{Left: func(_ int, t float64) float64 { return math.Sin(2 * t) }}
			return evolve(t, s, field.NewState(1, line.Sites), integrate.Settings{Method: integrate.RK4{}, Ends: ends, Every: -1}).Final.Field
		}
		ref := final(3200) // of an error of (50/3200)², ⁴ of the first
		var errs []float64
		for _, steps := range []int{50, 100, 200} {
			errs = append(errs, final(steps).MaxDifference(ref))
		}
		// (kω)² of the first term, kω = 0.24 to 0.06 for the driven wave
		wantOrder(t, fmt.Sprintf("order %g expected", tt.order), errs, tt.order, 0.3)
	}
}

// An even or odd end is the middle of a line twice as long.
func TestHalfLinesAreWholeLines(t *testing.T) {
	for _, tt := range []struct {
		end    lattice.End
		parity float64
		start  func(x float64) (value, rate float64)
	}{
		{lattice.Even, 1, func(x float64) (float64, float64) { return 2 * math.Cos(x) * math.Exp(-x*x/9), math.Exp(-x * x) }},
		{lattice.Odd, -1, func(x float64) (float64, float64) { return 3 * math.Tanh(x), x * math.Exp(-x*x) }},
	} {
		for _, links := range []action.Links{action.Nearest, action.Fourth, action.Sixth} {
			for _, m := range methods {
				half := between(span(0, 8, 40), tt.end, lattice.Free)
				whole := span(-8, 16, 80)
				w := action.Wave{Potential: action.SineGordon{}, Links: links}
				clock := span(0, 10, 100)
				final := func(line lattice.Axis) field.Slice {
					start := field.NewState(1, line.Sites)
					for i := range line.Sites {
						start.Field.Data[i], start.Rate.Data[i] = tt.start(line.At(i))
					}
					return evolve(t, discrete(t, clock, line, w), start, integrate.Settings{Method: m, Every: -1}).Final.Field
				}
				a, b := final(half), final(whole)
				var worst float64
				for i := range half.Sites {
					worst = max(worst, math.Abs(a.Data[i]-b.Data[40+i]), math.Abs(a.Data[i]-tt.parity*b.Data[40-i]))
				}
				// 100 steps of rounding 1e-16·(ωk)⁻², grown by at most e^t on the way:
				// in fact it stays near 1e-13.
				if worst > 1e-12 {
					t.Errorf("%v end, links %d, %s: half line off the whole one by %.3g", tt.end, links, m.Name(), worst)
				}
			}
		}
	}
}

// Two fluxons on a ring of twice the length are one on a ring.
func TestRingRepeats(t *testing.T) {
	kink, err := field.SineGordonKink(field.Moving{At: 5, Speed: 0.4})
	exact(t, kink, err)
	one := lattice.Axis{Step: 0.2, Sites: 50, Periodic: true, Jump: []float64{2 * math.Pi}}
	two := lattice.Axis{Step: 0.2, Sites: 100, Periodic: true, Jump: []float64{4 * math.Pi}}
	clock := span(0, 10, 100)
	for _, m := range methods {
		for _, links := range []action.Links{action.Nearest, action.Sixth} {
			w := action.Wave{Potential: action.SineGordon{}, Links: links, Source: action.Uniform(0.1)}
			a := kink.On(one, 0)
			b := field.NewState(1, two.Sites)
			for i := range two.Sites {
				b.Field.Data[i] = a.Field.Data[i%50] + 2*math.Pi*float64(i/50)
				b.Rate.Data[i] = a.Rate.Data[i%50]
			}
			set := integrate.Settings{Method: m, Every: -1}
			x := evolve(t, discrete(t, clock, one, w), a, set).Final.Field
			y := evolve(t, discrete(t, clock, two, w), b, set).Final.Field
			var worst float64
			for i := range two.Sites {
				worst = max(worst, math.Abs(y.Data[i]-x.Data[i%50]-2*math.Pi*float64(i/50)))
			}
			if worst > 1e-12 { // as above
				t.Errorf("%s: off by %.3g", fmt.Sprintf("%s, links %d", m.Name(), links), worst)
			}
		}
	}
}
