package main

import (
	"context"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"testing"
)

// On an infinite uniform line the speed is 1/√(1 + (α/a(γ))²), a(0.2) =
// 0.1580565896: independent computation, the saddle-to-saddle orbit of the
// driven pendulum. The first-order a = πγ/4 [McLaughlin & Scott 1978, Phys. Rev.
// A 18, 1652] is slower by 1.50e-3.
func TestTerminalSpeed(t *testing.T) {
	d := delayLine{length: 120, loss: 0.1, bias: 0.2, uniform: true}
	b, err := d.block(0.1)
	if err != nil {
		t.Fatal(err)
	}
	table, _, err := d.study(context.Background(), b)
	if err != nil {
		t.Fatal(err)
	}
	speed, ok := table.Get("terminal_speed")
	if !ok || !speed.Status.Bounded() {
		t.Fatalf("no terminal speed with an error bar: %+v", speed)
	}
	exact := 1 / math.Hypot(1, d.loss/0.1580565896)
	if math.Abs(speed.Value-exact) > speed.Error {
		t.Errorf("terminal speed %.6f ± %.1e, want %.6f", speed.Value, speed.Error, exact)
	}
	if got := speed.Value - d.firstOrderSpeed(); math.Abs(got-1.50e-3) > 5e-5 { // the error bar
		t.Errorf("%.3e faster than to first order, want 1.50e-3", got)
	}
}

func TestRefusals(t *testing.T) {
	good := delayLine{length: 160, loss: 0.1, bias: 0.2}
	for name, change := range map[string]func(*delayLine){
		"short":     func(d *delayLine) { d.length = 3 },
		"no length": func(d *delayLine) { d.length = math.NaN() },
		"gain":      func(d *delayLine) { d.loss = -0.1 },
		"no bias":   func(d *delayLine) { d.bias = 0 },
		"overdrive": func(d *delayLine) { d.bias = 1 },
	} {
		d := good
		change(&d)
		if err := run(context.Background(), d, 0.1, t.TempDir()); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
	if err := run(context.Background(), good, 2, t.TempDir()); err == nil {
		t.Error("spacing of 2: no error")
	}
}

// The quick run must write what the full one does.
func TestQuickRun(t *testing.T) {
	out := t.TempDir()
	if err := run(context.Background(), delayLine{length: 60, loss: 0.1, bias: 0.2}, 0.2, out); err != nil {
		t.Fatal(err)
	}
	text, err := os.ReadFile(filepath.Join(out, "results.json"))
	if err != nil {
		t.Fatal(err)
	}
	var rows []struct {
		Name  string
		Value *float64
	}
	if err := json.Unmarshal(text, &rows); err != nil {
		t.Fatal(err)
	}
	value := map[string]float64{}
	for _, r := range rows {
		if r.Value != nil {
			value[r.Name] = *r.Value
		}
	}
	if d, ok := value["block_distance"]; !ok || d > 1e-8 {
		t.Errorf("block_distance %g, want at most 1e-8", d)
	}
	// One fluxon, but for tails of e⁻⁶ at the end of a line of 60.
	if c := value["fluxon_count"]; math.Abs(c-1) > 1e-2 {
		t.Errorf("fluxon_count %g, want 1", c)
	}
	for _, name := range []string{"arrival_time", "terminal_speed", "energy_residual"} {
		if v, ok := value[name]; !ok || !(v > 0) {
			t.Errorf("%s is %g, want a number above 0", name, v)
		}
	}
	for _, file := range []string{"map.png", "profiles.png", "energy.png", "window.png", "history.npz"} {
		if _, err := os.Stat(filepath.Join(out, file)); err != nil {
			t.Error(err)
		}
	}
}
