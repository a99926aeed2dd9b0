package store

import (
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"github.com/tenter-go/tenter/lattice/refine"
)

func TestResults(t *testing.T) {
	results := []refine.Result{
		{Name: "arrival_time", Value: 40.25, Error: 0.003, Unit: "1/ω_J"},
		{Name: "count", Value: 1, Error: 0},
		{Name: "no_bar", Value: -1e-300, Error: math.NaN(), Unit: "<a & b>"},
		{Name: "lost", Value: math.NaN(), Error: math.Inf(1)},
		{Name: "gone", Value: math.Inf(-1), Error: math.NaN()},
	}
	path := filepath.Join(t.TempDir(), "results.json")
	if err := WriteResults(path, results); err != nil {
		t.Fatal(err)
	}
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	// What another program sees.
	var seen []map[string]any
	if err := json.Unmarshal(text, &seen); err != nil {
		t.Fatalf("not JSON: %v\n%s", err, text)
	}
	want := []map[string]any{
		{"name": "arrival_time", "value": 40.25, "error": 0.003, "unit": "1/ω_J"},
		{"name": "count", "value": 1.0, "error": 0.0, "unit": ""},
		{"name": "no_bar", "value": -1e-300, "error": nil, "unit": "<a & b>"},
		{"name": "lost", "value": nil, "error": nil, "unit": ""},
		{"name": "gone", "value": nil, "error": nil, "unit": ""},
	}
	if diff := cmp.Diff(want, seen); diff != "" {
		t.Errorf("file (-want +got):\n%s", diff)
	}
	got, err := ReadResults(path)
	if err != nil {
		t.Fatal(err)
	}
	// What is not finite comes back as NaN.
	results[3].Error, results[4].Value = math.NaN(), math.NaN()
	if diff := cmp.Diff(results, got, cmpopts.EquateNaNs()); diff != "" {
		t.Errorf("read back (-want +got):\n%s", diff)
	}

	if err := WriteResults(path, nil); err != nil {
		t.Fatal(err)
	}
	if text, err := os.ReadFile(path); err != nil || strings.TrimSpace(string(text)) != "[]" {
		t.Errorf("no results are %q, %v; want an empty list", text, err)
	}
}

func TestBadResults(t *testing.T) {
	path := filepath.Join(t.TempDir(), "results.json")
	for _, bad := range [][]refine.Result{
		{{Value: 1}},
		{{Name: "a"}, {Name: "a"}},
		{{Name: "a", Error: -1}},
	} {
		if err := WriteResults(path, bad); err == nil {
			t.Errorf("no error for %v", bad)
		}
	}
	for text, message := range map[string]string{
		``:                                 "EOF",
		`{"name": "a"}`:                    "cannot unmarshal",
		`[{"value": 1}]`:                   "result 0 has no name",
		`[{"name": "a", "value": "many"}]`: "cannot unmarshal",
		`[] []`:                            "more text",
	} {
		if _, err := decodeResults([]byte(text)); err == nil || !strings.Contains(err.Error(), message) {
			t.Errorf("%s: error %v; want one with %q", text, err, message)
		}
	}
}
