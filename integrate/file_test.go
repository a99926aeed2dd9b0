package integrate_test

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/store"
	"github.com/tenter-go/tenter/integrate"
)

// A run that goes on from a file ends with the bits of one that never stopped.
func TestCheckpointFile(t *testing.T) {
	for _, m := range methods {
		s, start, set := driven(t, m)
		whole := evolve(t, s, start, set)
		first := cancelled(t, s, start, set, 75)
		path := filepath.Join(t.TempDir(), "run.npz")
		// once more over an old file
		for range 2 {
			if err := integrate.WriteCheckpoint(path, first.Checkpoint); err != nil {
				t.Fatal(err)
			}
		}
		read, err := integrate.ReadCheckpoint(path)
		if err != nil {
			t.Fatal(err)
		}
		if diff := cmp.Diff(first.Checkpoint, read); diff != "" {
			t.Errorf("%s: checkpoint changed on file (-want +got):\n%s", m.Name(), diff)
		}
		set.Resume = read
		second := evolve(t, s, start, set)
		for i, v := range whole.Final.Field.Data {
			if math.Float64bits(v) != math.Float64bits(second.Final.Field.Data[i]) {
				t.Fatalf("%s: site %d is %v after a restart from a file, %v without", m.Name(), i, second.Final.Field.Data[i], v)
			}
		}
		left, err := os.ReadDir(filepath.Dir(path))
		if err != nil || len(left) != 1 {
			t.Errorf("%s: folder holds %v (%v); want the checkpoint alone", m.Name(), left, err)
		}
	}
}

// Several components, a stride wider than the sites, and signed zero.
func TestCheckpointFileKeepsShapeAndSign(t *testing.T) {
	wide := field.NewSlice(2, 9)
	for i := range wide.Data {
		wide.Data[i] = float64(i)
	}
	wide.Data[3] = math.Copysign(0, -1)
	c := &integrate.Checkpoint{Method: "Störmer–Verlet", Slice: 12345678901, Memory: []field.Slice{wide.Part(2, 7), wide}}
	path := filepath.Join(t.TempDir(), "c.npz")
	if err := integrate.WriteCheckpoint(path, c); err != nil {
		t.Fatal(err)
	}
	read, err := integrate.ReadCheckpoint(path)
	if err != nil {
		t.Fatal(err)
	}
	if read.Method != c.Method || read.Slice != c.Slice || len(read.Memory) != 2 {
		t.Fatalf("read %q at slice %d with %d arrays", read.Method, read.Slice, len(read.Memory))
	}
	for k, m := range c.Memory {
		if diff := cmp.Diff(m.Clone(), read.Memory[k]); diff != "" {
			t.Errorf("array %d (-want +got):\n%s", k, diff)
		}
	}
	if !math.Signbit(read.Memory[0].At(0, 1)) {
		t.Error("the sign of a zero is lost")
	}
}

func TestCheckpointFileRefuses(t *testing.T) {
	folder := t.TempDir()
	name := []float64{'R', 'K', '4'}
	method := store.Array{Name: "method", Shape: []int{3}, Data: name}
	slice := store.Array{Name: "slice", Data: []float64{7}}
	memory := store.Array{Name: "memory0", Shape: []int{1, 2}, Data: []float64{1, 2}}
	with := func(a store.Array, f func(a *store.Array)) store.Array {
		a.Data = append([]float64(nil), a.Data...)
		f(&a)
		return a
	}
	for _, tt := range []struct {
		name   string
		arrays []store.Array
		want   string
	}{
		{"nothing", nil, "0 arrays"},
		{"no memory", []store.Array{method, slice}, "2 arrays"},
		{"wrong order", []store.Array{slice, method, memory}, "want method, slice"},
		{"a gap in the memory", []store.Array{method, slice, with(memory, func(a *store.Array) { a.Name = "memory1" })}, `array "memory1"; want "memory0"`},
		{"negative slice", []store.Array{method, with(slice, func(a *store.Array) { a.Data[0] = -1 }), memory}, "slice is [-1]"},
		{"half a slice", []store.Array{method, with(slice, func(a *store.Array) { a.Data[0] = 2.5 }), memory}, "slice is [2.5]"},
		{"two slices", []store.Array{method, {Name: "slice", Shape: []int{2}, Data: []float64{1, 2}}, memory}, "of shape [2]"},
		{"no name", []store.Array{{Name: "method", Shape: []int{0}}, slice, memory}, `method is ""`},
		{"a name that is not bytes", []store.Array{with(method, func(a *store.Array) { a.Data[1] = 300 }), slice, memory}, "method holds 300"},
		{"a name that is not UTF-8", []store.Array{with(method, func(a *store.Array) { a.Data[1] = 0xff }), slice, memory}, "want a name in UTF-8"},
		{"a flat memory", []store.Array{method, slice, with(memory, func(a *store.Array) { a.Shape = []int{2} })}, `array "memory0" has the shape [2]`},
		{"NaN", []store.Array{method, slice, with(memory, func(a *store.Array) { a.Data[1] = math.NaN() })}, "component 0 is NaN at site 1"},
	} {
		path := filepath.Join(folder, "bad.npz")
		if err := store.WriteNPZ(path, tt.arrays...); err != nil {
			t.Fatal(err)
		}
		if _, err := integrate.ReadCheckpoint(path); err == nil || !strings.Contains(err.Error(), tt.want) || !strings.Contains(err.Error(), "bad.npz") {
			t.Errorf("%s: error %v; want one that names the file and says %q", tt.name, err, tt.want)
		}
	}
	good := filepath.Join(folder, "good.npz")
	c := &integrate.Checkpoint{Method: "RK4", Memory: []field.Slice{field.NewSlice(1, 3)}}
	if err := integrate.WriteCheckpoint(good, c); err != nil {
		t.Fatal(err)
	}
	bytes, err := os.ReadFile(good)
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(folder, "short.npz"), bytes[:len(bytes)/2], 0o644); err != nil {
		t.Fatal(err)
	}
	if _, err := integrate.ReadCheckpoint(filepath.Join(folder, "short.npz")); err == nil || !strings.Contains(err.Error(), "short.npz") {
		t.Errorf("truncated file: error %v; want one that names it", err)
	}
	c.Memory[0].Data[2] = math.Inf(1)
	for what, c := range map[string]*integrate.Checkpoint{"no checkpoint": nil, "want one that a run has made": {}, "array 0: field: component 0 is +Inf at site 2": c} {
		if err := integrate.WriteCheckpoint(good, c); err == nil || !strings.Contains(err.Error(), what) {
			t.Errorf("error %v does not say %q", err, what)
		}
	}
	// The good file is still the old one.
	if after, err := os.ReadFile(good); err != nil || string(after) != string(bytes) {
		t.Errorf("a refused write changed the file (%v)", err)
	}
}
