package main

import (
	"context"
	"math"
	"os"
	"path/filepath"
	"testing"

	"github.com/tenter-go/tenter/field/store"
	"github.com/tenter-go/tenter/lattice/refine"
)

// quickRun runs the program and returns its results by name.
func quickRun(t *testing.T, coeffs string, vacuum float64) (map[string]refine.Result, string) {
	t.Helper()
	out := t.TempDir()
	if err := run(context.Background(), options{coeffs: coeffs, vacuum: vacuum, quick: true, out: out}); err != nil {
		t.Fatal(err)
	}
	results, err := store.ReadResults(filepath.Join(out, "results.json"))
	if err != nil {
		t.Fatal(err)
	}
	value := map[string]refine.Result{}
	for _, r := range results {
		value[r.Name] = r
	}
	return value, out
}

// V = ½φ² − ½φ³ + (α/8)φ⁴ and what becomes of it under φ → ±φ + const, V → V + const
// and changes of scale: V = M²φ²/2 − kφ³ + (l/4)φ⁴ has φ = (M²/2k)f, α = lM²/(2k²) and
// the action M⁴/(4k²) times that of α. Actions and core values f(0): independent
// computation, shooting of the radial equation.
func TestReference(t *testing.T) {
	for _, c := range []struct {
		name, coeffs         string
		vacuum, action, core float64
		thin                 bool
	}{
		{"α = 0", "0,0,0.5,-0.5", 0, 3.4447969612, 1.5946376021, false},
		{"α = 0.5", "0,0,0.5,-0.5,0.0625", 0.1, 5.0556831819, 1.8752356443, false},
		{"α = 0.9", "0,0,0.5,-0.5,0.1125", 0, 11.882165308, 2.2863675948, true},
		{"mirrored and lifted", "7,0,0.5,0.5,0.0625", -0.1, 5.0556831819, -1.8752356443, false},
		{"M = 4, k = 2, l = 0.25", "0,0,8,-2,0.0625", 0, 16 * 5.0556831819, 4 * 1.8752356443, false},
		// ½(φ−3)² − ½(φ−3)³
		{"moved by 3", "18,-16.5,5,-0.5", 3.2, 3.4447969612, 4.5946376021, false},
	} {
		got, _ := quickRun(t, c.coeffs, c.vacuum)
		for name, want := range map[string]float64{"bounce_action": c.action, "core_value": c.core, "virial": 0, "anisotropy": 0} {
			// An error bar of more than 0.2 % would make the test idle.
			if r := got[name]; !(math.Abs(r.Value-want) <= r.Error && r.Error < 2e-3*c.action) {
				t.Errorf("%s: %v, want %.9g", c.name, r, want)
			}
		}
		if got["negative_modes"].Value != 1 || got["zero_modes_held"].Value != 2 || !(got["smallest_eigenvalue"].Value > 0.01) {
			t.Errorf("%s: %v, %v, %v", c.name, got["negative_modes"], got["zero_modes_held"], got["smallest_eigenvalue"])
		}
		if _, ok := got["thin_wall_action"]; ok != c.thin {
			t.Errorf("%s: thin_wall_action is there: %v, want %v", c.name, ok, c.thin)
		}
	}
}

// The tension and the depth of V = ¼(φ² − 1)² + ε(φ − 1)/2 tend to 2√2/3 and ε [Coleman 1977, Phys.
// Rev. D 15, 2929]; both are off by O(ε).
func TestThinWall(t *testing.T) {
	const eps = 2e-2
	w, err := newWell(polynomial{0.25 - eps/2, eps / 2, -0.5, 0, 0.25}, 1)
	if err != nil {
		t.Fatal(err)
	}
	if want := math.Pi * 8 / 9 / eps; math.Abs(w.thinAction()/want-1) > 10*eps {
		t.Errorf("thin-wall action %g, want %g to a few ε", w.thinAction(), want)
	}
}

func TestRefusals(t *testing.T) {
	const good = "0,0,0.5,-0.5,0.1125"
	for name, o := range map[string]options{
		"no number":         {coeffs: "0,0,zwei"},
		"empty":             {},
		"not finite":        {coeffs: "0,0,0.5,NaN"},
		"quadratic":         {coeffs: "0,0,0.5,0,0"},
		"no minimum":        {coeffs: "0,0,-0.5,0,-1"},
		"true vacuum":       {coeffs: good, vacuum: 2.4},
		"degenerate":        {coeffs: "0.25,0,-0.5,0,0.25", vacuum: 1},
		"single well":       {coeffs: "0,0,0.5,0,1"},
		"massless":          {coeffs: "0,0,0,0,1,-1"},
		"vacuum not finite": {coeffs: good, vacuum: math.Inf(1)},
		"nearly degenerate": {coeffs: "0,0,0.5,-0.5,0.12499"},
		"small box":         {coeffs: good, box: 3},
		"box not finite":    {coeffs: good, box: math.NaN()},
		"negative spacing":  {coeffs: good, spacing: -0.1},
		"coarse":            {coeffs: good, spacing: 5},
		"too many unknowns": {coeffs: good, spacing: 1e-3},
	} {
		o.quick, o.out = true, t.TempDir()
		if err := run(context.Background(), o); err == nil {
			t.Errorf("%s: no error", name)
		} else {
			t.Logf("%s: %v", name, err)
		}
	}
}

func TestQuickRunWritesFiles(t *testing.T) {
	_, out := quickRun(t, "0,0,0.5,-0.5", 0)
	for _, file := range []string{"results.json", "map.png", "profile.png", "potential.png", "bounce.npz"} {
		if s, err := os.Stat(filepath.Join(out, file)); err != nil || s.Size() == 0 {
			t.Errorf("%s: %v", file, err)
		}
	}
}
