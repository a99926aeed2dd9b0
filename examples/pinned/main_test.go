package main

import (
	"context"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
)

// The verdict names the reading that was falsified, and what all else tells of it
// is what the launch evolves to on a finer lattice.
func TestWrongReadingIsNamed(t *testing.T) {
	w := watch{misread: 0.8, noise: 0.1}
	b, err := w.block(0.2)
	if err != nil {
		t.Fatal(err)
	}
	a, err := w.settle(context.Background(), b)
	if err != nil {
		t.Fatal(err)
	}
	best, err := a.first()
	if err != nil {
		t.Fatal(err)
	}
	wrong := w.readings()[suspect]
	if best.Kind != "event" || math.Abs(best.Event.T-wrong.T)+math.Abs(best.Event.X-wrong.X) > 1e-9 || a.verdict.Tied != 1 {
		t.Fatalf("%v", a.verdict)
	}
	if first := a.pushes()[0]; first.Event != best.Event {
		t.Errorf("the hardest-working reading is %v", first)
	}

	fine, err := w.block(0.05)
	if err != nil {
		t.Fatal(err)
	}
	s, err := action.New(fine, action.Wave{
		Potential: action.SineGordon{}, Alpha: action.Uniform(alpha), Beta: action.Uniform(beta), Source: action.Uniform(-bias),
	})
	if err != nil {
		t.Fatal(err)
	}
	kink, err := field.SineGordonKink(field.Moving{At: launchAt, Speed: speed})
	if err != nil {
		t.Fatal(err)
	}
	run, err := integrate.Evolve(context.Background(), s, field.Superpose(-math.Asin(bias), kink).On(fine.Space, 0), integrate.Settings{})
	if err != nil {
		t.Fatal(err)
	}
	n, i, err := fine.Index(wrong.Event)
	if err != nil {
		t.Fatal(err)
	}
	// The record is rounded to 0.05, and the coarse lattice is off by 0.01.
	if got, want := a.value(best)+best.Move, run.History.At(n, 0, i); math.Abs(got-want) > 0.05 {
		t.Errorf("all else tells %.3f, the launch %.3f", got, want)
	}
}

func TestResults(t *testing.T) {
	out := t.TempDir()
	if err := run(context.Background(), watch{misread: 0.8, noise: 0.1}, 0.4, out); err != nil {
		t.Fatal(err)
	}
	data, err := os.ReadFile(filepath.Join(out, "results.json"))
	if err != nil {
		t.Fatal(err)
	}
	var results []struct {
		Name  string
		Value float64
		Error *float64
	}
	if err := json.Unmarshal(data, &results); err != nil {
		t.Fatal(err)
	}
	got := make(map[string]float64)
	for _, r := range results {
		got[r.Name] = r.Value
		if r.Error == nil {
			t.Errorf("%s has no error bar", r.Name)
		}
	}
	if !(got["relaxed_cost"] < 0.01*got["cost"]) || !(got["outside_share"] > 0 && got["outside_share"] < 1) || !(got["largest_reaction"] > 0) {
		t.Errorf("%v", got)
	}
	for _, name := range []string{"history.png", "residual.png", "influence.png"} {
		if _, err := os.Stat(filepath.Join(out, name)); err != nil {
			t.Error(err)
		}
	}
}

func TestWrongFlags(t *testing.T) {
	for _, c := range []struct {
		w       watch
		spacing float64
	}{
		{watch{0.8, 0}, 0.4},
		{watch{0.8, math.NaN()}, 0.4},
		{watch{3, 0.1}, 0.4},
		{watch{0.8, 0.1}, 0.5},
		{watch{0.8, 0.1}, math.NaN()},
		{watch{0.8, 0.1}, 0.3}, // the readings are not on the lattice
	} {
		if run(context.Background(), c.w, c.spacing, t.TempDir()) == nil {
			t.Errorf("%+v, spacing %g: no error", c.w, c.spacing)
		}
	}
}
