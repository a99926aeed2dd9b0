package track_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/track"
	"github.com/tenter-go/tenter/lattice"
)

var pi = math.Pi

func exact(t *testing.T) func(field.Profile, error) field.Profile {
	return func(p field.Profile, err error) field.Profile {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
		return p
	}
}

// follow tracks a profile on a line at the times from, from + step, … to.
func follow(t *testing.T, k *track.Kinks, p field.Profile, from, to, step float64) {
	t.Helper()
	for n := range int(math.Round((to-from)/step)) + 1 {
		at := from + float64(n)*step
		if err := k.Add(at, p.On(k.Line, at).Field); err != nil {
			t.Fatal(err)
		}
	}
}

func speed(t *testing.T, p *track.Path, from, to float64) track.Line {
	t.Helper()
	l, err := p.Speed(from, to)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

var wholeLine = lattice.Axis{From: -60, Step: 0.1, Sites: 1201}

// Each soliton ends 2√(1 − v²) ln(1/v) ahead of free flight
// (sg_collision_shift_v0.4 and _v0.5) [Perring & Skyrme 1962, Nucl. Phys. 31,
// 550; from memory, confirmed by independent computation: the exact solution in
// 40 digits].
func TestSineGordonShift(t *testing.T) {
	for _, c := range []struct{ v, shift float64 }{
		{0.4, 1.6795886549599206},
		{0.5, 1.2005661338529436},
	} {
		// The cubic is off by 3h⁴/128·|φ⁗|/|φ_x| ≤ 1.5e-6, φ⁗/φ_x ≤ ½γ³ within a
		// step of the centre; tails of the other soliton are e⁻²⁰ at t = ±30.
		const tolerance = 3e-6
		t.Run(fmt.Sprintf("kink-antikink at %g", c.v), func(t *testing.T) {
			k := &track.Kinks{Line: wholeLine, Vacua: track.Vacua{Values: []float64{-2 * pi, 0, 2 * pi}}}
			follow(t, k, exact(t)(field.SineGordonKinkAntikink(field.Collision{Speed: c.v})), -60, 60, 0.5)
			if n := len(k.Paths()); n != 2 {
				t.Fatalf("%d paths; want 2", n)
			}
			for n, v := range []float64{c.v, -c.v} { // the kink comes from the left
				p := k.Paths()[n]
				before, after := speed(t, p, -60, -30), speed(t, p, 30, 60)
				if p.Bounces() != 1 || p.Ended {
					t.Errorf("path %d: %d bounces, ended %v; want 1, false", n, p.Bounces(), p.Ended)
				}
				if charge := p.Kinks[len(p.Kinks)-1].Charge(); charge != p.Kinks[0].Charge() {
					t.Errorf("path %d: the charge has changed to %d", n, charge)
				}
				if math.Abs(before.Speed-v) > 1e-6 || math.Abs(after.Speed-v) > 1e-6 {
					t.Errorf("path %d: speeds %.8f and %.8f; want %g", n, before.Speed, after.Speed, v)
				}
				if got := (after.X(0) - before.X(0)) * math.Copysign(1, v); math.Abs(got-c.shift) > tolerance {
					t.Errorf("path %d: shift %.8f; want %.8f", n, got, c.shift)
				}
			}
		})
		t.Run(fmt.Sprintf("kink-kink at %g", c.v), func(t *testing.T) {
			k := &track.Kinks{Line: wholeLine, Vacua: track.Vacua{Values: []float64{-2 * pi, 0, 2 * pi}}}
			follow(t, k, exact(t)(field.SineGordonKinkKink(field.Collision{Speed: c.v})), -60, 60, 0.5)
			if n := len(k.Paths()); n != 2 {
				t.Fatalf("%d paths; want 2", n)
			}
			// They never merge: the left one comes with v, the right one leaves with it.
			left, right := k.Paths()[0], k.Paths()[1]
			if left.Bounces() != 0 || right.Bounces() != 0 {
				t.Errorf("%d and %d mergers; want none", left.Bounces(), right.Bounces())
			}
			before, after := speed(t, left, -60, -30), speed(t, right, 30, 60)
			if got := after.X(0) - before.X(0); math.Abs(got-c.shift) > tolerance {
				t.Errorf("shift %.8f; want %.8f", got, c.shift)
			}
		})
	}
}

// On the half line the path of the one partner that is seen goes on after the
// collision, with whatever comes back from the mirror.
func TestHalfLine(t *testing.T) {
	k := &track.Kinks{Line: lattice.Axis{Step: 0.1, Sites: 601, Left: lattice.Even}, Vacua: track.Vacua{Values: []float64{-2 * pi, 0, 2 * pi}}}
	follow(t, k, exact(t)(field.SineGordonKinkAntikink(field.Collision{Speed: 0.4})), -60, 60, 0.25)
	if n := len(k.Paths()); n != 1 {
		t.Fatalf("%d paths; want 1", n)
	}
	p := k.Paths()[0]
	if p.Bounces() != 1 || math.Abs(p.Merged[0]) > 2 {
		t.Errorf("merged at %v; want once, about t = 0", p.Merged)
	}
	before, after := speed(t, p, -60, -30), speed(t, p, 30, 60)
	if math.Abs(before.Speed+0.4) > 1e-6 || math.Abs(after.Speed-0.4) > 1e-6 {
		t.Errorf("speeds %.8f and %.8f; want ∓0.4", before.Speed, after.Speed)
	}
	// Half of the shift against x = ±vt at each end: see TestSineGordonShift.
	if got, want := after.X(0), 1.6795886549599206/2; math.Abs(got-want) > 3e-6 {
		t.Errorf("ahead by %.8f; want %.8f", got, want)
	}
}

// The places of φ⁴ and φ⁶ kinks between sites are found to fourth order.
func TestPlacesConverge(t *testing.T) {
	ok := exact(t)
	for _, c := range []struct {
		name  string
		vacua track.Vacua
		build func(field.Moving) field.Profile
	}{
		{"φ⁴", track.Vacua{Values: []float64{-1, 1}}, func(m field.Moving) field.Profile { return ok(field.Phi4Kink(m)) }},
		{"φ⁶", track.Vacua{Values: []float64{-1, 0, 1}, Centres: []float64{-math.Sqrt(0.5), math.Sqrt(0.5)}}, func(m field.Moving) field.Profile { return ok(field.Phi6Kink(1, 0, m)) }},
	} {
		var worst []float64
		for _, h := range []float64{0.4, 0.2, 0.1} {
			line := lattice.Axis{From: -8, Step: h, Sites: int(16/h) + 1}
			var off float64
			for n := range 40 {
				at := -1 + 0.05*float64(n) + 0.0137
				found := c.vacua.Find(nil, line, c.build(field.Moving{At: at, Speed: 0.3}).On(line, 0).Field.Component(0))
				if len(found) != 1 {
					t.Fatalf("%s at %g: found %v; want one kink", c.name, at, found)
				}
				off = max(off, math.Abs(found[0].X-at))
			}
			worst = append(worst, off)
		}
		p := math.Log2(worst[1] / worst[2])
		t.Logf("%s: off by %.2g, order %.2f", c.name, worst, p)
		// The φ⁴ kink has no fourth derivative at its centre, and gains an order.
		if !(p > 3.7 && p < 5.3) || worst[2] > 1e-5 {
			t.Errorf("%s: off by %.2g, order %.2f; want order 4 or 5", c.name, worst, p)
		}
	}
}

// Noise of 0.05 makes false passages near the centre of a slow broad kink. A
// margin of four times that takes them for one.
func TestNoise(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	line := lattice.Axis{From: -20, Step: 0.02, Sites: 2001}
	kink := exact(t)(field.Phi4Kink(field.Moving{At: -5, Speed: 0.2}))
	plain := track.Vacua{Values: []float64{-1, 1}}
	k := &track.Kinks{Line: line, Vacua: track.Vacua{Values: []float64{-1, 1}, Margin: 0.2}}
	most := 0
	for n := range 200 {
		at := 0.25 * float64(n)
		s := kink.On(line, at).Field
		for i := range s.Data {
			s.Data[i] += 0.1 * (rng.Float64() - 0.5)
		}
		most = max(most, len(plain.Find(nil, line, s.Data)))
		if err := k.Add(at, s); err != nil {
			t.Fatal(err)
		}
	}
	if most < 3 {
		t.Errorf("at most %d passages without a margin: the noise does nothing", most)
	}
	if len(k.Paths()) != 1 || k.Paths()[0].Ended {
		t.Fatalf("%d paths; want one kink all the way", len(k.Paths()))
	}
	l := speed(t, k.Paths()[0], 0, 100)
	// A place is off by about 0.029/φ_x = 0.04, so 200 of them make ± 2e-4.
	if got := math.Abs(l.Speed - 0.2); got > 4*l.SpeedError || l.SpeedError > 3e-4 {
		t.Errorf("speed %.5f ± %.5f; want 0.2 ± 0.0002", l.Speed, l.SpeedError)
	}
}

// Around a ring a fluxon passes the seam without a jump of its path.
func TestRing(t *testing.T) {
	const length, v = 20.0, 0.5
	line := lattice.Axis{Step: 0.1, Sites: 200, Periodic: true, Jump: []float64{2 * pi}}
	kink := exact(t)(field.SineGordonKink(field.Moving{At: 10, Speed: v}))
	k := &track.Kinks{Line: line, Vacua: track.Vacua{Values: []float64{-2 * pi, 0, 2 * pi, 4 * pi, 6 * pi, 8 * pi}}}
	laps := func(x, at float64) (float64, float64) { // the kink and its images
		turns := math.Floor((v*at + length/2 - x + 10) / length)
		value, rate := kink(x+length*turns, at)
		return value, rate
	}
	follow(t, k, laps, 0, 60, 0.5)
	for _, p := range k.Paths() {
		if len(p.Times) == 121 {
			if l := speed(t, p, 0, 60); math.Abs(l.Speed-v) > 1e-4 {
				t.Errorf("speed %.6f; want %g", l.Speed, v)
			}
			return
		}
	}
	t.Errorf("%d paths, none of them all the way round", len(k.Paths()))
}

func TestKinksRefuse(t *testing.T) {
	for name, v := range map[string]track.Vacua{
		"one vacuum":     {Values: []float64{1}},
		"order":          {Values: []float64{1, -1}},
		"centres":        {Values: []float64{-1, 0, 1}, Centres: []float64{0.5}},
		"centre outside": {Values: []float64{-1, 1}, Centres: []float64{2}},
		"margin":         {Values: []float64{-1, 1}, Margin: 1.5},
		"NaN":            {Values: []float64{-1, 1}, Margin: math.NaN()},
	} {
		k := track.Kinks{Line: lattice.Axis{Step: 1, Sites: 5}, Vacua: v}
		if err := k.Add(0, field.NewSlice(1, 5)); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
	k := track.Kinks{Line: lattice.Axis{Step: 1, Sites: 5}, Vacua: track.Vacua{Values: []float64{-1, 1}}}
	for n, at := range []float64{0, 1, 1} {
		if err := k.Add(at, field.NewSlice(1, 5)); (err != nil) != (n == 2) {
			t.Errorf("slice %d at t = %g: error %v", n, at, err)
		}
	}
}

// A history is followed as the slices of a run are.
func TestFollowHistory(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 0.5, Sites: 81}, Space: lattice.Axis{From: -20, Step: 0.2, Sites: 201}}
	kink := exact(t)(field.Phi4Kink(field.Moving{At: -8, Speed: 0.7}))
	k := &track.Kinks{Vacua: track.Vacua{Values: []float64{-1, 1}}}
	if err := k.Follow(kink.Over(b)); err != nil {
		t.Fatal(err)
	}
	// It leaves the line at t = 40: x = 20.
	if len(k.Paths()) != 1 {
		t.Fatalf("%d paths; want 1", len(k.Paths()))
	}
	// φ⁗ at the centre vanishes: places are off by a few h⁵.
	if l := speed(t, k.Paths()[0], 0, 40); math.Abs(l.Speed-0.7) > 1e-5 {
		t.Errorf("speed %.7f; want 0.7", l.Speed)
	}
}
