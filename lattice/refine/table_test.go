package refine_test

import (
	"encoding/json"
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"github.com/tenter-go/tenter/lattice/refine"
)

func TestResultString(t *testing.T) {
	for _, tt := range []struct {
		r    refine.Result
		want string
	}{
		{refine.Result{Name: "speed", Value: 0.618253197, Error: 0.0000123}, "speed = 0.618253 ± 1.2e-05"},
		{refine.Result{Name: "arrival", Value: 123.456, Error: 0.5, Unit: "s"}, "arrival = 123.46 ± 0.5 s"},
		{refine.Result{Name: "count", Value: 1}, "count = 1 ± 0"},
		{refine.Result{Name: "lost", Value: 0.5, Error: math.NaN()}, "lost = 0.5 ± ?"},
		{refine.Result{Name: "small", Value: 1e-9, Error: 0.25}, "small = 1e-09 ± 0.25"},
		{refine.Result{Name: "gone", Value: math.NaN(), Error: math.NaN()}, "gone = NaN ± ?"},
	} {
		if got := tt.r.String(); got != tt.want {
			t.Errorf("%q, want %q", got, tt.want)
		}
	}
}

func TestResultJSON(t *testing.T) {
	rs := []refine.Result{
		{Name: "speed", Value: 0.618, Error: 0.002, Unit: "c"},
		{Name: "count", Value: 1, Error: math.NaN()},
		{Name: "gone", Value: math.Inf(1), Error: 0},
	}
	data, err := json.Marshal(rs)
	if err != nil {
		t.Fatal(err)
	}
	want := `[{"name":"speed","value":0.618,"error":0.002,"unit":"c"},` +
		`{"name":"count","value":1,"error":null,"unit":""},` +
		`{"name":"gone","value":null,"error":0,"unit":""}]`
	if string(data) != want {
		t.Errorf("JSON %s\nwant %s", data, want)
	}
	var back []refine.Result
	if err := json.Unmarshal(data, &back); err != nil {
		t.Fatal(err)
	}
	rs[2].Value = math.NaN() // JSON has no infinity
	if diff := cmp.Diff(rs, back, cmpopts.EquateNaNs()); diff != "" {
		t.Errorf("read back (-want +got):\n%s", diff)
	}
	var r refine.Result
	if err := json.Unmarshal([]byte(`{"name": "x", "value": "seven"}`), &r); err == nil {
		t.Error("a value that is no number: no error")
	}
}

// The columns line up, and the reason stands where the bar is missing.
func TestTablePrints(t *testing.T) {
	table, err := refine.Study{Block: unit, Order: 4}.Run(t.Context(), trapezoid)
	if err != nil {
		t.Fatal(err)
	}
	lines := strings.Split(strings.TrimRight(table.String(), "\n"), "\n")
	if len(lines) != 4 {
		t.Fatalf("%d lines, want a heading and three quantities:\n%s", len(lines), table)
	}
	column := func(line, word string) int {
		before, _, found := strings.Cut(line, word)
		if !found {
			t.Fatalf("no %q in %q", word, line)
		}
		return len([]rune(before))
	}
	status := column(lines[0], "status")
	for j, word := range []string{"no error bar: observed order 2.00, expected 4", "asymptotic", "exact at every level"} {
		if got := column(lines[j+1], word); got != status {
			t.Errorf("%q at column %d, its heading at %d:\n%s", word, got, status, table)
		}
	}
	for j, r := range table.Results() {
		if r.Name != table.Estimates[j].Name || r.Value != table.Estimates[j].Value {
			t.Errorf("result %d is %v", j, r)
		}
	}
	if _, ok := table.Get("nothing"); ok {
		t.Error("found an estimate of nothing")
	}
	var text strings.Builder
	if n, err := table.WriteTo(&text); err != nil || n != int64(text.Len()) || text.String() != table.String() {
		t.Errorf("WriteTo: %d bytes, %v; want %d and the text of String", n, err, text.Len())
	}
}
