package minimize

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

func swing(t *testing.T, b lattice.Block, d action.Density, start *field.History, given Given, set *PeriodicSettings) *Orbit {
	t.Helper()
	o, err := Periodic(context.Background(), b, d, start, given, set)
	if err != nil {
		t.Fatalf("%v\n%+v", err, o)
	}
	return o
}

// sampled is the history of a profile on a block.
func sampled(b lattice.Block, p field.Profile) *field.History {
	h := field.NewHistory(b, 1)
	for n := range b.Slices() {
		h.Slice(n).CopyFrom(p.On(b.Space, b.Time.At(n)).Field)
	}
	return h
}

// breatherBlock is half a breather of frequency ω, mirrored at x = 0, for one
// period in n slices on links of length h.
func breatherBlock(omega, long, h float64, n int) lattice.Block {
	return lattice.Block{
		Time:  lattice.Axis{Step: 2 * math.Pi / omega / float64(n), Sites: n, Periodic: true},
		Space: lattice.Axis{Step: h, Sites: int(long/h+0.5) + 1, Left: lattice.Even},
	}
}

// The sine-Gordon breather of frequency ω has the energy 16√(1 − ω²), here half of
// it, the amplitude 4 atan(√(1 − ω²)/ω) (Rajaraman 1982, Solitons and Instantons)
// and the action −10.706436295375 of a period at ω = 0.8 (independent
// computation: two-dimensional quadrature). Given one of frequency, energy and
// amplitude the lattice gives the others to order 2. What the lattice adds to the
// equation drives a small standing wave of 3ω in the box; at ω = 0.6 the length is
// one at which it is far from resonance, qL = 5.5π with q² = 9ω² − 1.
func TestSineGordonBreather(t *testing.T) {
	for _, tc := range []struct {
		omega, long float64
		slices      int
	}{{0.6, 11.6, 26}, {0.8, 20, 20}} {
		e := math.Sqrt(1 - tc.omega*tc.omega)
		energy, amplitude := 8*e, 4*math.Atan(e/tc.omega)
		errs := map[string][]float64{}
		note := func(name string, v float64) { errs[name] = append(errs[name], v) }
		for k, h := range []float64{0.4, 0.2, 0.1} {
			b := breatherBlock(tc.omega, tc.long, h, tc.slices<<k)
			start := sampled(b, profile(field.SineGordonBreather(field.Breather{Frequency: tc.omega})))
			wave := action.Wave{Potential: action.SineGordon{}}
			o := swing(t, b, wave, start, Frequency(tc.omega), nil)
			note("energy at the frequency", o.Energy-energy)
			note("amplitude at the frequency", o.History.At(0, 0, 0)-amplitude)
			if tc.omega == 0.8 {
				note("action at the frequency", o.Action+10.706436295375/2)
			}
			if o.Holding > 1e-9 { // by symmetry in time nothing has to hold the phase
				t.Errorf("phase is held by %.3g", o.Holding)
			}
			o = swing(t, b, wave, start, Energy(energy), nil)
			note("frequency at the energy", o.Frequency-tc.omega)
			// The orbit solves the equation of its own block.
			again := newAction(t, o.History.Block.Time, o.History.Block.Space, wave)
			if r := again.Residual(nil, o.History).MaxAbs(); r > o.Report.Tolerance || math.Abs(o.History.Block.Time.Length()-o.Period) > 1e-14*o.Period {
				t.Errorf("residual %.3g on its block, period %.15g", r, o.Period)
			}
			if math.Abs(o.Energy-energy) > 1e-10 { // 1e-10 of the scale of the equation
				t.Errorf("energy %.15g, given %.15g", o.Energy, energy)
			}
			o = swing(t, b, wave, start, Amplitude{Value: amplitude}, nil)
			note("frequency at the amplitude", o.Frequency-tc.omega)
			if d := o.History.At(0, 0, 0) - amplitude; math.Abs(d) > 1e-10 {
				t.Errorf("amplitude is off by %.3g", d)
			}
		}
		for name, e := range errs {
			// h⁴ and k⁴ beside h² and k² at h = 0.2 and 40 slices a period
			if order := math.Log2(e[1] / e[2]); !(math.Abs(order-2) < 0.1) {
				t.Errorf("ω = %g: %s: errors %.4g, order %.3f; want 2", tc.omega, name, e, order)
			}
		}
	}
}

// A Klein–Gordon field between held ends swings with the frequency of the lattice,
// sin(ωk/2) = ½kΩ, Ω² = m² + (4/h²)sin²(qh/2), at any amplitude: with N slices a
// period T = 2N sin(π/N)/Ω (von Neumann's analysis of leapfrog; Strikwerda 2004,
// Finite Difference Schemes, chapter 5). The energy is that of an oscillator.
func TestLinearOscillationInABox(t *testing.T) {
	const links, slices, h, mass = 12, 10, 0.25, 0.7
	for mode := 1; mode <= 3; mode++ {
		q := math.Pi * float64(mode) / (links * h)
		omega := math.Sqrt(mass*mass + math.Pow(2/h*math.Sin(q*h/2), 2))
		want := 2 * slices * math.Sin(math.Pi/slices) / omega
		b := lattice.Block{
			Time:  lattice.Axis{Step: 1.1 * want / slices, Sites: slices, Periodic: true},
			Space: lattice.Axis{Step: h, Sites: links + 1, Left: lattice.Held, Right: lattice.Held},
		}
		start := field.NewHistory(b, 1)
		for n := range slices {
			for i := 1; i < links; i++ {
				start.Set(n, 0, i, 0.9*math.Sin(q*h*float64(i))*math.Cos(2*math.Pi*float64(n)/slices))
			}
		}
		at := b.Space.At(2)
		const a = 0.8
		o := swing(t, b, action.Wave{Potential: action.Mass(mass)}, start, Amplitude{X: at, Value: a * math.Sin(q*at)}, nil)
		if d := o.Period/want - 1; math.Abs(d) > 1e-12 { // rounding times the condition
			t.Errorf("mode %d: period %.15g, want %.15g", mode, o.Period, want)
		}
		for n := range slices {
			for i := range links + 1 {
				v := a * math.Sin(q*h*float64(i)) * math.Cos(2*math.Pi*float64(n)/slices)
				if d := o.History.At(n, 0, i) - v; math.Abs(d) > 1e-12 {
					t.Fatalf("mode %d: off by %.3g at (%d, %d)", mode, d, n, i)
				}
			}
		}
		// ¼ a²Ω² times the length, exactly: the mean over links of the kinetic
		// and over slices of the other energy are equal, ⅛a²Ω² times it.
		if e := 0.25 * a * a * omega * omega * links * h; math.Abs(o.Energy-e) > 1e-12 {
			t.Errorf("mode %d: energy %.15g, want %.15g", mode, o.Energy, e)
		}
	}
}

// A φ⁴ oscillon of small amplitude ε has ω² = 2 − ε² and the energy 4ε/3, half of
// which lies right of its centre, to relative order ε² (two-time expansion;
// Dashen, Hasslacher & Neveu 1975, Phys. Rev. D 11, 3424). The period is that for
// which leapfrog has this frequency, and what is left of the step and the spacing
// is below ε²/30.
func TestSmallOscillon(t *testing.T) {
	const slices, h = 96, 0.5
	var rest []float64
	for _, e := range []float64{0.28284271247461906, 0.2, 0.1414213562373095} {
		omega := math.Sqrt(2 - e*e)
		period := 2 * slices * math.Sin(math.Pi/slices) / omega
		b := breatherBlock(2*math.Pi/period, 12/e, h, slices)
		start := field.NewHistory(b, 1)
		for n := range slices {
			for i := range b.Sites() {
				v := e * math.Sqrt(2./3) / math.Cosh(e*b.Space.At(i)) * math.Cos(2*math.Pi*float64(n)/slices)
				start.Set(n, 0, i, 1+v)
			}
		}
		o := swing(t, b, action.Wave{Potential: action.Phi4{}}, start, Period(period), nil)
		if o.History.At(0, 0, 0) < 1+0.3*e {
			t.Fatalf("ε = %g: the oscillon is gone, %v", e, o.Report)
		}
		rest = append(rest, o.Energy/(2*e/3)-1)
	}
	if order := 2 * math.Log2(rest[1]/rest[2]); !(math.Abs(order-2) < 0.25) { // ε⁴ at ε² = 0.04, and the lattice
		t.Errorf("relative errors %.4g, order %.3f in ε; want 2", rest, order)
	}
	r, q := 2*rest[2]-rest[1], 2*rest[1]-rest[0]
	if limit := (4*r - q) / 3; math.Abs(limit) > 1e-3 { // k²ω²/12 = 3.6e-4 and ε⁶ = 5e-4
		t.Errorf("relative errors %.4g tend to %.3g as ε → 0; want 0", rest, limit)
	}
}

// A whole breather in the middle of a line, with phase and position held, is the
// mirrored half twice.
func TestPositionIsHeld(t *testing.T) {
	const omega, h = 0.8, 0.4
	half := breatherBlock(omega, 12, h, 16)
	p := profile(field.SineGordonBreather(field.Breather{Frequency: omega}))
	wave := action.Wave{Potential: action.SineGordon{}}
	one := swing(t, half, wave, sampled(half, p), Frequency(omega), nil)
	whole := half
	whole.Space = lattice.Axis{From: -12, Step: h, Sites: 61}
	two := swing(t, whole, wave, sampled(whole, p), Frequency(omega), &PeriodicSettings{HoldPosition: true})
	// both to 1e-10 of the equation, over the softest mode that is not held
	if math.Abs(two.Energy-2*one.Energy) > 1e-8 || math.Abs(two.History.At(0, 0, 30)-one.History.At(0, 0, 0)) > 1e-8 {
		t.Errorf("energy %.12g, twice the half %.12g", two.Energy, 2*one.Energy)
	}
	if two.Holding > 1e-9 { // by symmetry
		t.Errorf("position is held by %.3g", two.Holding)
	}
}

func TestPeriodicStops(t *testing.T) {
	b := breatherBlock(0.6, 16, 0.4, 20)
	start := sampled(b, profile(field.SineGordonBreather(field.Breather{Frequency: 0.6})))
	wave := action.Wave{Potential: action.SineGordon{}}
	ctx, cancel := context.WithCancel(context.Background())
	o, err := Periodic(ctx, b, wave, start, Energy(6.4), &PeriodicSettings{Watch: func(Step, *field.History) { cancel() }, Trace: true})
	var failed *NotConverged
	if !errors.As(err, &failed) || !errors.Is(err, context.Canceled) || o.Report.Status != Stopped || len(o.Report.Trace) != 1 {
		t.Errorf("%v", err)
	}
	if _, err = Periodic(context.Background(), b, wave, start, Energy(6.4), &PeriodicSettings{Iterations: 1}); !errors.As(err, &failed) {
		t.Errorf("%v", err)
	}
	// No breather has more energy than a kink and an antikink, 16, half 8.
	if o, err = Periodic(context.Background(), b, wave, start, Energy(80), nil); !errors.As(err, &failed) {
		t.Errorf("%v: %v", err, o)
	}
	if s := o.Report.String(); !strings.Contains(s, "periodic history") || !strings.Contains(s, "gradient") {
		t.Errorf("%s", s)
	}
}

func TestWrongPeriodic(t *testing.T) {
	b := breatherBlock(0.6, 8, 0.4, 20)
	start := sampled(b, profile(field.SineGordonBreather(field.Breather{Frequency: 0.6})))
	wave := action.Wave{Potential: action.SineGordon{}}
	open := b
	open.Time.Periodic = false
	still := field.Repeat(b, start.Slice(0))
	held := b
	held.Space.Right = lattice.Held
	flat := field.NewHistory(b, 1)
	for n := range b.Slices() {
		for i := range b.Sites() {
			flat.Set(n, 0, i, math.Cos(2*math.Pi*float64(n)/20))
		}
	}
	for _, tc := range []struct {
		name  string
		b     lattice.Block
		d     action.Density
		start *field.History
		given Given
		set   *PeriodicSettings
		says  []string
	}{
		{"nothing given", b, wave, start, nil, nil, []string{"nothing given"}},
		{"clock with ends", open, wave, start, Period(1), nil, []string{"clock with ends"}},
		{"no start", b, wave, nil, Period(1), nil, []string{"without a start"}},
		{"no density", b, nil, start, Period(1), nil, []string{"density is nil"}},
		{"negative period", b, wave, start, Period(-1), nil, []string{"period -1"}},
		{"frequency zero", b, wave, start, Frequency(0), nil, []string{"frequency 0"}},
		{"energy NaN", b, wave, start, Energy(math.NaN()), nil, []string{"energy NaN"}},
		{"amplitude off the line", b, wave, start, Amplitude{X: 99, Value: 1}, nil, []string{"amplitude", "99"}},
		{"amplitude of no component", b, wave, start, Amplitude{Component: 1, Value: 1}, nil, []string{"component 1"}},
		{"amplitude infinite", b, wave, start, Amplitude{Value: math.Inf(1)}, nil, []string{"+Inf"}},
		{"amplitude where held", held, wave, start, Amplitude{X: 8, Value: 1}, nil, []string{"x = 8", "held"}},
		{"start of another shape", b, wave, field.NewHistory(b, 2), Period(1), nil, []string{"start history"}},
		{"start at rest", b, wave, still, Period(1), nil, []string{"does not move"}},
		{"position of a flat start", b, wave, flat, Period(1), &PeriodicSettings{HoldPosition: true}, []string{"same at all sites"}},
		{"losses", b, action.Wave{Alpha: action.Uniform(1)}, start, Period(1), nil, []string{"refused", "loss α"}},
		{"Euclidean", b, action.Wave{Signature: action.Euclidean}, start, Period(1), nil, []string{"refused", "Euclidean"}},
		{"driven", b, action.Wave{Source: action.Over(func(x, t float64) float64 { return math.Cos(0.6 * t) })}, start, Period(1), nil, []string{"refused", "depends on time"}},
		{"too large", b, wave, start, Period(1), &PeriodicSettings{Memory: 1}, []string{"above the limits"}},
	} {
		t.Run(tc.name, func(t *testing.T) {
			o, err := Periodic(context.Background(), tc.b, tc.d, tc.start, tc.given, tc.set)
			if err == nil || o != nil {
				t.Fatalf("%v", o)
			}
			for _, word := range tc.says {
				if !strings.Contains(err.Error(), word) {
					t.Errorf("%q does not say %q", err, word)
				}
			}
		})
	}
}
