package field_test

import (
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/field"
)

// sineGordon returns 1 − cos φ without cancellation.
func sineGordon(phi float64) float64 { s := math.Sin(phi / 2); return 2 * s * s }

func TestSineGordonEquation(t *testing.T) {
	ok := must(t)
	for name, p := range map[string]field.Profile{
		"kink at rest":       ok(field.SineGordonKink(field.Moving{})),
		"kink":               ok(field.SineGordonKink(field.Moving{At: 1, Speed: 0.5})),
		"antikink":           ok(field.SineGordonAntikink(field.Moving{At: -1, Speed: -0.3})),
		"breather":           ok(field.SineGordonBreather(field.Breather{Frequency: 0.6})),
		"boosted breather":   ok(field.SineGordonBreather(field.Breather{Moving: field.Moving{At: 2, Speed: 0.4}, Frequency: 0.8, Phase: 1})),
		"kink and antikink":  ok(field.SineGordonKinkAntikink(field.Collision{Speed: 0.4, At: 0.5, Time: 1})),
		"kink and kink":      ok(field.SineGordonKinkKink(field.Collision{Speed: 0.5, At: 0.5, Time: -1})),
		"slow breather":      ok(field.SineGordonBreather(field.Breather{Frequency: 0.3})),
		"leftgoing breather": ok(field.SineGordonBreather(field.Breather{Moving: field.Moving{Speed: -0.4}, Frequency: 0.6})),
	} {
		t.Run(name, func(t *testing.T) { checkEquation(t, p, 1, math.Sin, nothing) })
	}
}

// Energies and momenta: sg_kink_mass, sg_KKbar_exact and sg_boosted_breather of
// the published closed forms E = 8γ, P = 8γv, E = 16γ and E = 16γ√(1 − ω²)
// [Rajaraman 1982, Solitons and Instantons; Perring & Skyrme 1962, Nucl. Phys.
// 31, 550; from memory, confirmed by independent computation: quadrature].
func TestSineGordonEnergy(t *testing.T) {
	ok := must(t)
	g := func(v float64) float64 { return 1 / math.Sqrt(1-v*v) }
	for _, tt := range []struct {
		name             string
		p                field.Profile
		energy, momentum float64
	}{
		{"kink at rest", ok(field.SineGordonKink(field.Moving{})), 8, 0},
		{"kink", ok(field.SineGordonKink(field.Moving{Speed: 0.6})), 8 * g(0.6), 8 * g(0.6) * 0.6},
		{"antikink", ok(field.SineGordonAntikink(field.Moving{Speed: -0.6})), 8 * g(0.6), -8 * g(0.6) * 0.6},
		{"breather 0.6", ok(field.SineGordonBreather(field.Breather{Frequency: 0.6})), 16 * 0.8, 0},
		{"breather 0.95", ok(field.SineGordonBreather(field.Breather{Frequency: 0.95, Phase: 0.7})), 16 * math.Sqrt(1-0.95*0.95), 0},
		{"boosted breather", ok(field.SineGordonBreather(field.Breather{Moving: field.Moving{Speed: 0.5}, Frequency: 0.6})), 16 * g(0.5) * 0.8, 16 * g(0.5) * 0.8 * 0.5},
		{"kink and antikink", ok(field.SineGordonKinkAntikink(field.Collision{Speed: 0.4})), 17.4574312188794, 0},
		{"kink and kink", ok(field.SineGordonKinkKink(field.Collision{Speed: 0.4})), 17.4574312188794, 0},
	} {
		for _, at := range []float64{0, 1.3, 9} {
			// The slope is good to 1e-12 at every one of a few hundred sites that
			// matter; tails beyond |x| = 80 are below e^(−2·0.31·70) = 1e-19.
			const tolerance = 1e-10
			if e := energyOf(tt.p, at, 80, sineGordon); math.Abs(e-tt.energy) > tolerance {
				t.Errorf("%s at t = %g: energy %.15g, want %.15g", tt.name, at, e, tt.energy)
			}
			if m := momentumOf(tt.p, at, 80); math.Abs(m-tt.momentum) > tolerance {
				t.Errorf("%s at t = %g: momentum %.15g, want %.15g", tt.name, at, m, tt.momentum)
			}
		}
	}
}

// sg_breather_amplitude: φ(0, 0) = 4 atan(√(1−ω²)/ω) [independent computation:
// 40-digit arithmetic].
func TestBreatherAmplitude(t *testing.T) {
	for _, tt := range []struct{ frequency, want float64 }{
		{0.6, 3.709180872006449},
		{0.8, 2.574004435173138},
		{0.95, 1.270241717166085},
	} {
		p := must(t)(field.SineGordonBreather(field.Breather{Moving: field.Moving{At: 3}, Frequency: tt.frequency}))
		value, rate := p(3, 0)
		if math.Abs(value-tt.want) > 2e-15 { // four roundings at 3.7
			t.Errorf("ω = %g: amplitude %.16g, want %.16g", tt.frequency, value, tt.want)
		}
		if rate != 0 {
			t.Errorf("ω = %g: rate %v at the turning point, want 0", tt.frequency, rate)
		}
	}
}

// Special relativity: a breather carried along at v swings with the period
// 2πγ/ω at its centre and, at one time of the lattice, is the breather at rest
// with lengths divided by γ.
func TestBreatherDilationAndContraction(t *testing.T) {
	const w, v = 0.6, 0.8 // γ = 5/3
	ok := must(t)
	moving := ok(field.SineGordonBreather(field.Breather{Moving: field.Moving{Speed: v}, Frequency: w}))
	rest := ok(field.SineGordonBreather(field.Breather{Frequency: w}))

	centre := func(at float64) float64 { value, _ := moving(v*at, at); return value }
	first := root(t, centre, 0.1, 8)
	second := root(t, centre, first+4, first+12)
	// Half a period between zeros; bisection ends at rounding of t ≈ 15.
	if got, want := 2*(second-first), 2*math.Pi/w*5/3; math.Abs(got-want) > 1e-13*want {
		t.Errorf("period at the centre %.15g, want 2πγ/ω = %.15g", got, want)
	}

	// Where the moving breather is at its largest everywhere at once, along
	// t = vx, it is the breather at rest seen at x/γ.
	for _, x := range []float64{-4, -1, 0.5, 2, 6} {
		got, _ := moving(x, v*x)
		want, _ := rest(x*3/5, 0)
		if math.Abs(got-want) > 1e-14 { // a few roundings at φ ≤ 4
			t.Errorf("boosted breather at x = %g: %.15g, want %.15g", x, got, want)
		}
	}

	// A kink's width between φ = π/2 and 3π/2 is 2 ln(1 + √2)/γ.
	kink := ok(field.SineGordonKink(field.Moving{Speed: v}))
	at := func(level float64) float64 {
		return root(t, func(x float64) float64 { value, _ := kink(x, 0); return value - level }, -9, 9)
	}
	if got, want := at(3*math.Pi/2)-at(math.Pi/2), 2*math.Log(1+math.Sqrt2)*3/5; math.Abs(got-want) > 1e-14 {
		t.Errorf("width of the kink %.15g, want %.15g", got, want)
	}
}

// sg_collision_shift: each soliton ends 2√(1−v²) ln(1/v) ahead of free flight
// [Perring & Skyrme 1962, Nucl. Phys. 31, 550; from memory, confirmed by
// independent computation: exact solutions at t = 60].
func TestCollisionShift(t *testing.T) {
	ok := must(t)
	for _, tt := range []struct{ speed, shift float64 }{
		{0.4, 1.6795886549599206},
		{0.5, 1.2005661338529436},
	} {
		const late = 60.0
		// The rightgoing soliton: left of the centre before, right of it after.
		follow := func(p field.Profile, before, after float64) float64 {
			place := func(at, level float64) float64 {
				x := tt.speed * at
				return root(t, func(x float64) float64 { v, _ := p(x, at); return v - level }, x-5, x+5)
			}
			return place(late, after) - place(-late, before) - 2*late*tt.speed
		}
		for name, got := range map[string]float64{
			"kink and antikink": follow(ok(field.SineGordonKinkAntikink(field.Collision{Speed: tt.speed})), math.Pi, -math.Pi),
			"kink and kink":     follow(ok(field.SineGordonKinkKink(field.Collision{Speed: tt.speed})), -math.Pi, math.Pi),
		} {
			// The other soliton still pulls by e^(−2γv·60) < 1e-22; what is left is
			// the rounding of positions near 30 and of φ near π.
			if math.Abs(got-tt.shift) > 3e-14 {
				t.Errorf("%s at v = %g: shift %.15g, want %.15g", name, tt.speed, got, tt.shift)
			}
		}
	}
}

// Far from the meeting the collision is made of a free kink and antikink, each
// half the shift ahead: the kink comes from the left, as the name says.
func TestCollisionBegins(t *testing.T) {
	const v, early = 0.5, -40.0
	ok := must(t)
	half := math.Sqrt(1-v*v) * math.Log(1/v)
	both := ok(field.SineGordonKinkAntikink(field.Collision{Speed: v}))
	apart := field.Superpose(-2*math.Pi,
		ok(field.SineGordonKink(field.Moving{At: -half, Speed: v})),
		ok(field.SineGordonAntikink(field.Moving{At: half, Speed: -v})))
	for x := -40.0; x <= 40; x += 0.7 {
		a, ra := both(x, early)
		b, rb := apart(x, early)
		// The tails overlap by 4e^(−γ·2·20) at most.
		if math.Abs(a-b) > 1e-14 || math.Abs(ra-rb) > 1e-14 {
			t.Errorf("x = %g: (%.15g, %.15g), want (%.15g, %.15g)", x, a, ra, b, rb)
		}
	}
}

func TestSineGordonErrors(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for _, tt := range []struct {
		name  string
		build func() (field.Profile, error)
		want  string
	}{
		{"kink as fast as light", func() (field.Profile, error) { return field.SineGordonKink(field.Moving{Speed: 1}) }, "speed 1;"},
		{"kink faster than light", func() (field.Profile, error) { return field.SineGordonKink(field.Moving{Speed: -1.2}) }, "speed -1.2"},
		{"kink without a speed", func() (field.Profile, error) { return field.SineGordonKink(field.Moving{Speed: nan}) }, "speed NaN"},
		{"kink nowhere", func() (field.Profile, error) { return field.SineGordonKink(field.Moving{At: inf}) }, "x = +Inf"},
		{"antikink", func() (field.Profile, error) { return field.SineGordonAntikink(field.Moving{Speed: 3}) }, "antikink with the speed 3"},
		{"breather too fast", func() (field.Profile, error) {
			return field.SineGordonBreather(field.Breather{Moving: field.Moving{Speed: 2}, Frequency: 0.5})
		}, "speed 2"},
		{"breather of frequency 0", func() (field.Profile, error) { return field.SineGordonBreather(field.Breather{}) }, "frequency 0;"},
		{"breather of frequency 1", func() (field.Profile, error) { return field.SineGordonBreather(field.Breather{Frequency: 1}) }, "frequency 1;"},
		{"breather out of phase", func() (field.Profile, error) {
			return field.SineGordonBreather(field.Breather{Frequency: 0.5, Phase: nan})
		}, "phase NaN"},
		{"collision at rest", func() (field.Profile, error) { return field.SineGordonKinkAntikink(field.Collision{}) }, "antikink with the speed 0"},
		{"collision of leftgoers", func() (field.Profile, error) { return field.SineGordonKinkKink(field.Collision{Speed: -0.5}) }, "speed -0.5"},
		{"collision never", func() (field.Profile, error) {
			return field.SineGordonKinkKink(field.Collision{Speed: 0.5, Time: inf})
		}, "t = +Inf"},
	} {
		p, err := tt.build()
		if err == nil || p != nil {
			t.Errorf("%s: no error", tt.name)
			continue
		}
		if !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: error %q does not say %q", tt.name, err, tt.want)
		}
	}
}
