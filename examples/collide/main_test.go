package main

import (
	"context"
	"math"
	"os"
	"path/filepath"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/store"
	"github.com/tenter-go/tenter/field/track"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/lattice/refine"
)

func newTestPair(t *testing.T, potential, order string) *pair {
	t.Helper()
	p, err := newPair(potential, order, 2)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func fly(t *testing.T, c collision) *flight {
	t.Helper()
	f, err := c.run(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// results runs a job and returns what it wrote.
func results(t *testing.T, j job) map[string]refine.Result {
	t.Helper()
	j.out = t.TempDir()
	if err := j.run(context.Background()); err != nil {
		t.Fatal(err)
	}
	rows, err := store.ReadResults(filepath.Join(j.out, "results.json"))
	if err != nil {
		t.Fatal(err)
	}
	byName := map[string]refine.Result{}
	for _, r := range rows {
		byName[r.Name] = r
	}
	return byName
}

// Independent computation: half line with even reflection, eighth-order
// differences, fourth-order symplectic splitting, half separation 10; slope of the
// outermost zero over the last 60 units of time of T = 10/v + 150.
func TestExitSpeed(t *testing.T) {
	for _, c := range []struct {
		order            string
		v, exit, bounces float64
	}{
		{"kink-antikink", 0.3, 0.13863, 1},
		{"antikink-kink", 0.2268, 0.196045, 2}, // the same with φ for −φ
		{"kink-antikink", 0.4, 0.278874, 1},
	} {
		got := results(t, job{potential: "phi4", order: c.order, speed: c.v, spacing: 0.2})
		// The source gives 5e-6.
		if e := got["exit_speed"]; math.Abs(e.Value-c.exit) > 5e-6 || !(e.Error < 5e-6) {
			t.Errorf("v = %g: exit speed %v; want %g ± 5e-6", c.v, e, c.exit)
		}
		if b, o := got["bounces"].Value, got["outcome"].Value; b != c.bounces || o != 1 {
			t.Errorf("v = %g: %g bounces, outcome %g; want %g and 1", c.v, b, o, c.bounces)
		}
	}
}

// Below the first two-bounce window, at 0.1925635 (independent computation as
// above), the pair is captured [Campbell, Schonfeld & Wingate 1983, Physica D 9,
// 1; from memory].
func TestCapture(t *testing.T) {
	p := newTestPair(t, "phi4", "kink-antikink")
	c := collision{pair: p, speed: 0.18, spacing: 0.2, step: 0.05, until: 10/0.18 + 150, window: 60}
	f := fly(t, c)
	if f.outcome != track.Capture || f.exitSpeed() != 0 || len(f.met) < 3 {
		t.Errorf("outcome %v, exit speed %g, met at %v; want a capture after some collisions", f.outcome, f.exitSpeed(), f.met)
	}
	// Radiation must have left it with less than two kinks long before the end.
	c.stop.capture = true
	if g := fly(t, c); g.outcome != track.Capture || len(g.met) >= len(f.met) {
		t.Errorf("stopped early: outcome %v after %d collisions, of %d in all", g.outcome, len(g.met), len(f.met))
	}
}

// Sine-Gordon kinks pass through each other at any speed and lose none of it
// [Perring & Skyrme 1962, Nucl. Phys. 31, 550]; the start misses a solution by
// e⁻²⁰ and the lattice by 1e-6.
func TestSineGordonPasses(t *testing.T) {
	for _, order := range []string{"kink-antikink", "antikink-kink"} {
		p := newTestPair(t, "sinegordon", order)
		f := fly(t, collision{pair: p, speed: 0.4, spacing: 0.2, step: 0.05, until: 175, window: 60})
		if f.outcome != track.Escape || len(f.met) != 1 || math.Abs(f.exitSpeed()-0.4) > 1e-6 {
			t.Errorf("%s: %v with the speed %.8f after %d collisions; want an escape with 0.4 after one", order, f.outcome, f.exitSpeed(), len(f.met))
		}
	}
}

// The critical speed for the watch time 200 is 0.2591972(20), independent
// computation as above; this lattice is off by less than 2e-6.
func TestCriticalSides(t *testing.T) {
	s := critical{pair: newTestPair(t, "phi4", "kink-antikink"), watch: 200}
	b := lattice.Block{Time: lattice.Axis{Step: 0.025, Sites: 8001}, Space: lattice.Axis{Step: 0.1, Sites: 1001}}
	again, err := s.meetAgain(context.Background(), b, 0.2591972-5e-6, 0.2591972+5e-6, 0.5)
	if err != nil {
		t.Fatal(err)
	}
	if !again[0] || again[1] || again[2] {
		t.Errorf("second collision at 5e-6 below, 5e-6 above, and 0.5: %v; want only below", again)
	}
}

// The growing and shrinking line changes nothing that is looked at, beyond
// rounding: the fixed one is longer at the start and at the end.
func TestLineIsLongEnough(t *testing.T) {
	p := newTestPair(t, "phi4", "kink-antikink")
	c := collision{pair: p, speed: 0.3, spacing: 0.2, step: 0.05, until: 120, window: 40}
	short := fly(t, c)
	c.picture = 10
	long := fly(t, c)
	// Roundings of 1e-16 grow with the wobble, over some 1e4 substeps.
	if d := math.Abs(short.exit.Speed - long.exit.Speed); d > 1e-11 {
		t.Errorf("exit speeds %.15g and %.15g on the line that grows and the one that does not", short.exit.Speed, long.exit.Speed)
	}
	c.picture, c.stop.bounces = 0, 2 // now the end is cut to the middle
	c.speed, c.until = 0.259, 200
	cut := fly(t, c)
	c.stop.bounces = 0
	whole := fly(t, c)
	if len(cut.met) != 2 || math.Abs(cut.met[1]-whole.met[1]) > 1e-9 {
		t.Errorf("met at %v where only the middle counts, at %v else", cut.met, whole.met)
	}
}

// The masses and tails that decide between escape and capture are those of the
// kinks: the energy of the pair at rest is twice the mass less the attraction.
func TestBonds(t *testing.T) {
	for _, c := range []struct{ potential, order string }{
		{"phi4", "kink-antikink"}, {"phi4", "antikink-kink"},
		{"phi6", "kink-antikink"}, {"phi6", "antikink-kink"},
		{"sinegordon", "kink-antikink"}, {"sinegordon", "antikink-kink"},
		{"doublesinegordon", "kink-antikink"}, {"doublesinegordon", "antikink-kink"},
	} {
		p := newTestPair(t, c.potential, c.order)
		p.separation = 5 / p.bond.Decay
		start, err := p.start(0)
		if err != nil {
			t.Fatal(err)
		}
		line := lattice.Axis{From: -60, Step: 0.02, Sites: 6001}
		s, err := action.New(lattice.Block{Time: lattice.Axis{Step: 0.01, Sites: 2}, Space: line}, action.Wave{Potential: p.potential, Links: action.Sixth})
		if err != nil {
			t.Fatal(err)
		}
		state := start.On(line, 0)
		for i, want := range map[int]float64{0: p.outer, 3000: p.inner, 6000: p.outer} {
			if got := state.Field.At(0, i); math.Abs(got-want) > 0.2 { // tails e⁻⁵ of some units
				t.Errorf("%v: φ = %g at x = %g; want %g", c, got, line.At(i), want)
			}
		}
		missing := 2*p.bond.Mass - s.Energy(field.AtRest(state.Field), 0).Field()
		// The next order is smaller by about ten times e⁻¹⁰.
		if ratio := missing / p.bond.Attraction(2*p.separation); math.Abs(ratio-1) > 0.02 {
			t.Errorf("%v: energy %.6g below two masses, %.4f of the attraction", c, missing, ratio)
		}
		if got := p.vacua.Find(nil, line, state.Field.Component(0)); len(got) != 2 || math.Abs(got[1].X-p.separation) > 0.02 {
			t.Errorf("%v: kinks %v; want them at ±%g", c, got, p.separation)
		}
	}
}

func TestWindows(t *testing.T) {
	table := store.Table{Header: []string{"speed", "bounces", "exit_speed"}}
	for k, b := range []float64{2, 5, 2, 2, 2, 3, 2, 1} {
		table.Rows = append(table.Rows, []float64{0.2 + 0.01*float64(k), b, 0.1 * float64(k)})
	}
	j := job{speeds: speedRange{0.2, 0.27, 8}}
	ws := j.windows(table)
	if len(ws) != 3 {
		t.Fatalf("%d windows; want 3", len(ws))
	}
	if ws[0].lowSeen || !ws[0].hiSeen || !ws[1].lowSeen {
		t.Errorf("edges seen: %+v", ws)
	}
	if w := ws[1]; math.Abs(w.low-0.215) > 1e-12 || math.Abs(w.high-0.245) > 1e-12 || math.Abs(w.centre-0.23) > 1e-12 || w.exit != table.Rows[3][2] {
		t.Errorf("second window %+v; want 0.215 to 0.245 around 0.23", w)
	}
	if widest(ws) != 1 {
		t.Errorf("widest window is %d; want 1", widest(ws))
	}
}

func TestRefusals(t *testing.T) {
	good := job{potential: "phi4", order: "kink-antikink", spacing: 0.2, speed: 0.3}
	for name, change := range map[string]func(*job){
		"potential":  func(j *job) { j.potential = "phi8" },
		"order":      func(j *job) { j.order = "kink-kink" },
		"eta":        func(j *job) { j.potential, j.eta = "doublesinegordon", -1 },
		"fast":       func(j *job) { j.speed = 1 },
		"backwards":  func(j *job) { j.speed = -0.1 },
		"coarse":     func(j *job) { j.spacing = 2 },
		"long step":  func(j *job) { j.step = 0.2 },
		"watch":      func(j *job) { j.watch = math.NaN() },
		"too short":  func(j *job) { j.speed, j.critical, j.watch = 0, true, 20 },
		"scan watch": func(j *job) { j.speed, j.speeds, j.watch = 0, speedRange{0.2, 0.3, 2}, 20 },
		"no critical speed": func(j *job) {
			j.potential, j.speed, j.critical, j.watch = "sinegordon", 0, true, 100
		},
	} {
		j := good
		change(&j)
		j.out = t.TempDir()
		if err := j.run(context.Background()); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
	var r speedRange
	for _, s := range []string{"", "0.1:0.2", "0.2:0.1:5", "0:0.5:3", "0.1:1:3", "0.1:0.2:1", "a:b:c"} {
		if err := r.Set(s); err == nil {
			t.Errorf("-scan %q: no error", s)
		}
	}
}

// A scan of four speeds around the first windows writes all that a long one does.
func TestScanFiles(t *testing.T) {
	out := t.TempDir()
	j := job{potential: "phi4", order: "kink-antikink", spacing: 0.2, step: 0.05, watch: 200, speeds: speedRange{0.18, 0.24, 4}, out: out}
	if err := j.run(context.Background()); err != nil {
		t.Fatal(err)
	}
	rows, err := store.ReadResults(filepath.Join(out, "results.json"))
	if err != nil {
		t.Fatal(err)
	}
	// 0.2 is in a window, 0.18, 0.22 and 0.24 are not (phi4_window_n3, n4 and n5,
	// independent computation as above).
	if rows[0].Name != "two_bounce_windows" || rows[0].Value != 1 || rows[3].Name != "window_1_centre" || math.Abs(rows[3].Value-0.2) > 1e-12 {
		t.Errorf("results %v; want one window, around 0.2", rows)
	}
	for _, name := range []string{"scan-phi4-kink-antikink.csv", "scan.png", "bounces.png", "scan-map.png"} {
		if _, err := os.Stat(filepath.Join(out, name)); err != nil {
			t.Error(err)
		}
	}
}
