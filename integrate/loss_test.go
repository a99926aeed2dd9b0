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

// A solution made up, φ = cos(qx − 0.7) sin(1.1t + 0.2) + 0.3x, and the source
// that it takes under sine-Gordon with the losses α and β:
//
//	J = φ_tt + αφ_t − φ_xx − βφ_xxt + sin φ.
type made struct{ q, slope, alpha, beta float64 }

func (m made) at(x, t float64) (value, rate float64) {
	c := math.Cos(m.q*x - 0.7)
	return c*math.Sin(1.1*t+0.2) + m.slope*x, 1.1 * c * math.Cos(1.1*t+0.2)
}

func (m made) source(x, t float64) float64 {
	phi, rate := m.at(x, t)
	wave := phi - m.slope*x
	return -1.21*wave + m.alpha*rate + m.q*m.q*(wave+m.beta*rate) + math.Sin(phi)
}

// flux returns κφ_x + βφ_xt.
func (m made) flux(x, t float64) float64 {
	s := -m.q * math.Sin(m.q*x-0.7)
	return s*math.Sin(1.1*t+0.2) + m.slope + m.beta*1.1*s*math.Cos(1.1*t+0.2)
}

// Losses keep leapfrog's order 2 at every kind of end, and RK4 agrees.
func TestOrderWithLosses(t *testing.T) {
	for _, tt := range []struct {
		name string
		m    made
		end  lattice.End
		ring bool
	}{
		{"α, held", made{q: 1.3, slope: 0.3, alpha: 0.5}, lattice.Held, false},
		{"α, free with flux", made{q: 1.3, slope: 0.3, alpha: 0.5}, lattice.Free, false},
		{"α, ring", made{q: math.Pi / 2, alpha: 0.5}, lattice.Free, true},
		{"β, held", made{q: 1.3, slope: 0.3, beta: 0.4}, lattice.Held, false},
		{"β, free with flux κφ_x + βφ_xt", made{q: 1.3, slope: 0.3, beta: 0.4}, lattice.Free, false},
		{"β, ring", made{q: math.Pi / 2, beta: 0.4}, lattice.Free, true},
		{"α and β, held", made{q: 1.3, slope: 0.3, alpha: 0.5, beta: 0.4}, lattice.Held, false},
		{"α and β, free with flux", made{q: 1.3, slope: 0.3, alpha: 0.5, beta: 0.4}, lattice.Free, false},
	} {
		for _, method := range []integrate.Method{integrate.Leapfrog{}, integrate.RK4{}} {
			var errs []float64
			for l := range 3 {
				line := between(span(-2, 4, 40<<l), tt.end, tt.end)
				if tt.ring {
					line = lattice.Axis{From: -2, Step: 4 / float64(int(40)<<l), Sites: 40 << l, Periodic: true}
				}
				w := action.Wave{Potential: action.SineGordon{}, Source: action.Over(tt.m.source)}
				if tt.m.alpha > 0 {
					w.Alpha = action.Uniform(tt.m.alpha)
				}
				if tt.m.beta > 0 {
					w.Beta = action.Uniform(tt.m.beta)
				}
				var ends integrate.Ends
				value := func(x float64) func(int, float64) float64 {
					return func(_ int, t float64) float64 {
						v, _ := tt.m.at(x, t)
						return v
					}
				}
				switch {
				case tt.ring:
				case tt.end == lattice.Held:
					ends = integrate.Ends{Left: value(-2), Right: value(2)}
				default:
					w.LeftFlux, w.RightFlux = action.Over(tt.m.flux), action.Over(tt.m.flux)
				}
				steps := 60 << l
				if method.Name() == "RK4" && tt.m.beta > 0 {
					steps *= 8 << l // explicit: the loss needs 4βk/h² < 2.7
				}
				s := discrete(t, span(0, 3, steps), line, w)
				run := evolve(t, s, field.Profile(tt.m.at).On(line, 0), integrate.Settings{Method: method, Every: -1, Ends: ends})
				end := field.Profile(tt.m.at).On(line, run.Time)
				// the rate too, where there is an equation for it
				errs = append(errs, max(run.Final.Field.MaxDifference(end.Field), run.Final.Rate.Part(1, line.Sites-1).MaxDifference(end.Rate.Part(1, line.Sites-1))))
			}
			// The wave is resolved by 48 sites at the coarsest level: the next term
			// is below a hundredth; the start and the ends leave others of h³.
			wantOrder(t, fmt.Sprintf("%s, %s", tt.name, method.Name()), errs, 2, 0.15)
		}
	}
}

// A single site-independent oscillation, φ_tt + αφ_t + m²φ = 0 (textbook), over
// many periods: the decay must not drift.
func TestDampedOscillation(t *testing.T) {
	const alpha, mass, until = 0.2, 1.0, 20.0
	omega := math.Sqrt(mass*mass - alpha*alpha/4)
	want := math.Exp(-alpha*until/2) * (math.Cos(omega*until) + alpha/(2*omega)*math.Sin(omega*until))
	var errs []float64
	for l := range 3 {
		line := span(0, 2, 10)
		s := discrete(t, span(0, until, 200<<l), line, action.Wave{Potential: action.Mass(mass), Alpha: action.Uniform(alpha)})
		start := field.NewState(1, line.Sites)
		for i := range start.Field.Data {
			start.Field.Data[i] = 1
		}
		run := evolve(t, s, start, integrate.Settings{Every: -1})
		errs = append(errs, math.Abs(run.Final.Field.At(0, 3)-want))
	}
	wantOrder(t, "damped oscillation", errs, 2, 0.05) // (k·m)² = 0.01
}

// Bias and losses do work; the account closes at order 2.
func TestLedgerBalances(t *testing.T) {
	kink, err := field.SineGordonKink(field.Moving{Speed: 0.5})
	exact(t, kink, err)
	packet, err := field.GaussianPacket(field.Packet{Wave: field.Wave{Amplitude: 0.5, Wavenumber: 2, Mass: 1}, At: 6, Width: 1.5})
	exact(t, packet, err)
	for _, tt := range []struct {
		name string
		w    action.Wave
		end  lattice.End
	}{
		{"bias and α", action.Wave{Alpha: action.Uniform(0.1)}, lattice.Free},
		{"bias, α and β", action.Wave{Alpha: action.Uniform(0.1), Beta: action.Uniform(0.05)}, lattice.Free},
		{"bias, α and open ends", action.Wave{Alpha: action.Uniform(0.1)}, lattice.Open},
		{"bias, α and flux at the ends", action.Wave{Alpha: action.Uniform(0.1), LeftFlux: action.Over(func(_, t float64) float64 { return 0.5 * math.Sin(t) })}, lattice.Free},
	} {
		var errs []float64
		for l := range 3 {
			line := between(span(-12, 24, 120<<l), tt.end, tt.end)
			w := tt.w
			w.Potential, w.Source = action.SineGordon{}, action.Uniform(0.3)
			s := discrete(t, span(0, 12, 75<<l), line, w)
			ledger := &integrate.Ledger{}
			evolve(t, s, field.Superpose(math.Asin(0.3), kink, packet).On(line, 0), integrate.Settings{Every: -1, Observers: []integrate.Observer{ledger}})
			errs = append(errs, ledger.Residual())
			if e := ledger.Entries[len(ledger.Entries)-1]; !(e.Loss < 0) || tt.end == lattice.Open && !(e.Ends < -0.1) {
				t.Errorf("%s: losses did the work %g, the ends %g; want both to take energy", tt.name, e.Loss, e.Ends)
			}
		}
		wantOrder(t, tt.name, errs, 2, 0.3) // the account is a difference of terms of k² and h² of either sign
	}
}
