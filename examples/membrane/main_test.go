package main

import (
	"context"
	"math"
	"os"
	"path/filepath"
	"testing"

	"github.com/tenter-go/tenter/field/store"
)

// The quick run writes all there is, and its error bar holds the sag of the free
// membrane: 0.0736713532815 at the centre of the unit square under unit
// pressure, from public test suites and a series.
func TestQuickRun(t *testing.T) {
	out := t.TempDir()
	if err := run(context.Background(), membrane{pressure: 4, top: -0.12, bend: 1}, 8, out); err != nil {
		t.Fatal(err)
	}
	results, err := store.ReadResults(filepath.Join(out, "results.json"))
	if err != nil {
		t.Fatal(err)
	}
	seen := map[string]bool{}
	for _, r := range results {
		seen[r.Name] = true
		if r.Name == "free_sag" && !(math.Abs(r.Value-0.0736713532815) <= r.Error) {
			t.Errorf("%v; the error bar misses 0.0736713532815", r)
		}
		// The dome carries part of the whole pressure of 4.
		if r.Name == "dome_push" && !(r.Value > 0.5 && r.Value < 4) {
			t.Errorf("%v; want a part of the pressure", r)
		}
	}
	for _, name := range []string{"free_sag", "energy", "dome_push", "contact_area"} {
		if !seen[name] {
			t.Errorf("no result %q", name)
		}
	}
	for _, file := range []string{"shape.png", "section.png", "relaxation.gif"} {
		if _, err := os.Stat(filepath.Join(out, file)); err != nil {
			t.Error(err)
		}
	}
}

func TestRefusals(t *testing.T) {
	for name, c := range map[string]struct {
		m     membrane
		links int
	}{
		"dome above the rim": {membrane{pressure: 4, top: 0.1, bend: 1}, 8},
		"bowl":               {membrane{pressure: 4, top: -0.1, bend: -1}, 8},
		"no pressure":        {membrane{top: -0.1, bend: 1}, 8},
		"NaN":                {membrane{pressure: math.NaN(), top: -0.1, bend: 1}, 8},
		"odd":                {membrane{pressure: 4, top: -0.1, bend: 1}, 9},
		"coarse":             {membrane{pressure: 4, top: -0.1, bend: 1}, 2},
	} {
		if err := run(context.Background(), c.m, c.links, t.TempDir()); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
}
