package store

import (
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// ring is a history of two components on a periodic line, with one value that is
// not finite.
func ring(t testing.TB) *field.History {
	t.Helper()
	clock := lattice.Axis{From: -1, Step: 0.1, Sites: 4}
	line := lattice.Axis{From: 0.3, Step: 0.7, Sites: 5, Periodic: true, Jump: []float64{2 * math.Pi, 0}}
	b, err := lattice.NewBlock(clock, line)
	if err != nil {
		t.Fatal(err)
	}
	h := field.NewHistory(b, 2)
	for k := range h.Data {
		h.Data[k] = math.Sqrt(float64(k))
	}
	h.Set(3, 1, 2, math.NaN())
	return h
}

func TestHistoryRoundTrip(t *testing.T) {
	h := ring(t)
	path := filepath.Join(t.TempDir(), "h.npy")
	if err := WriteHistory(path, h); err != nil {
		t.Fatal(err)
	}
	a, err := ReadNPY(path)
	if err != nil {
		t.Fatal(err)
	}
	if want := []int{4, 2, 5}; !slices.Equal(a.Shape, want) {
		t.Errorf("stored shape %v; want (slices, components, sites) = %v", a.Shape, want)
	}
	got, err := ReadHistory(path, h.Block)
	if err != nil {
		t.Fatal(err)
	}
	if got.Components != 2 || !sameBits(got.Data, h.Data) {
		t.Error("history came back changed")
	}

	other := h.Block
	other.Space.Sites = 6
	_, err = ReadHistory(path, other)
	if err == nil || !strings.Contains(err.Error(), "shape [4 2 5]; want (slices, components, sites) = (4, at least 1, 6)") {
		t.Errorf("error %v; want both shapes", err)
	}
}

func TestHistoryWithBlock(t *testing.T) {
	whole := ring(t)
	clock := lattice.Axis{Step: 1. / 3, Sites: 2}
	line := lattice.Axis{From: -math.Pi, Step: 1e-3, Sites: 3, Left: lattice.Held, Right: lattice.Odd}
	b, err := lattice.NewBlock(clock, line)
	if err != nil {
		t.Fatal(err)
	}
	for _, h := range []*field.History{whole, field.NewHistory(b, 3)} {
		path := filepath.Join(t.TempDir(), "h.npz")
		if err := WriteHistoryNPZ(path, h); err != nil {
			t.Fatal(err)
		}
		got, err := ReadHistoryNPZ(path)
		if err != nil {
			t.Fatal(err)
		}
		if diff := cmp.Diff(h.Block, got.Block); diff != "" {
			t.Errorf("block changed (-want +got):\n%s", diff)
		}
		if got.Components != h.Components || !sameBits(got.Data, h.Data) {
			t.Error("values changed")
		}
	}
}

func TestBadWholeHistory(t *testing.T) {
	good := func() []Array {
		path := filepath.Join(t.TempDir(), "h.npz")
		if err := WriteHistoryNPZ(path, ring(t)); err != nil {
			t.Fatal(err)
		}
		arrays, err := ReadNPZ(path)
		if err != nil {
			t.Fatal(err)
		}
		return arrays
	}
	find := func(arrays []Array, name string) *Array {
		i := slices.IndexFunc(arrays, func(a Array) bool { return a.Name == name })
		return &arrays[i]
	}
	if _, err := wholeHistory(good()); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		message string
		spoil   func(arrays []Array)
	}{
		{`no array "field"`, func(a []Array) { find(a, "field").Name = "phi" }},
		{`no array "space_jump"`, func(a []Array) { find(a, "space_jump").Name = "jump" }},
		{`"time_axis" has the shape [3]`, func(a []Array) { *find(a, "time_axis") = Array{"time_axis", []int{3}, make([]float64, 3)} }},
		{`"time_jump" has the shape [0 1]`, func(a []Array) { find(a, "time_jump").Shape = []int{0, 1} }},
		{"number of sites is 5.5", func(a []Array) { find(a, "space_axis").Data[2] = 5.5 }},
		{"number of sites is NaN", func(a []Array) { find(a, "space_axis").Data[2] = math.NaN() }},
		{"step -1", func(a []Array) { find(a, "time_axis").Data[1] = -1 }},
		{"left end is 7", func(a []Array) { find(a, "space_axis").Data[3] = 7 }},
		{"right end is -1", func(a []Array) { find(a, "space_axis").Data[4] = -1 }},
		{"periodic is 2", func(a []Array) { find(a, "space_axis").Data[5] = 2 }},
		{"shape [4 2 5]; want (slices, components, sites) = (3,", func(a []Array) { find(a, "time_axis").Data[2] = 3 }},
		{"held", func(a []Array) { find(a, "time_axis").Data[3] = 1 }},
	} {
		arrays := good()
		c.spoil(arrays)
		if _, err := wholeHistory(arrays); err == nil || !strings.Contains(err.Error(), c.message) {
			t.Errorf("error %v; want one with %q", err, c.message)
		}
	}
}

func TestBadHistory(t *testing.T) {
	path := filepath.Join(t.TempDir(), "h")
	short := ring(t)
	short.Data = short.Data[1:]
	none := ring(t)
	none.Components = 0
	for name, h := range map[string]*field.History{"nil": nil, "short": short, "no components": none} {
		if err := WriteHistory(path, h); err == nil {
			t.Errorf("%s: no error from WriteHistory", name)
		}
		if err := WriteHistoryNPZ(path, h); err == nil {
			t.Errorf("%s: no error from WriteHistoryNPZ", name)
		}
	}
	if _, err := os.Stat(path); err == nil {
		t.Error("a file was left")
	}
}

func TestStateRoundTrip(t *testing.T) {
	h := ring(t)
	s := field.State{Field: h.Slice(0).Part(1, 4), Rate: h.Slice(3).Part(1, 4)} // strided views
	path := filepath.Join(t.TempDir(), "s.npy")
	if err := WriteState(path, s); err != nil {
		t.Fatal(err)
	}
	a, err := ReadNPY(path)
	if err != nil {
		t.Fatal(err)
	}
	if want := []int{2, 2, 3}; !slices.Equal(a.Shape, want) {
		t.Errorf("stored shape %v; want (2, components, sites) = %v", a.Shape, want)
	}
	got, err := ReadState(path)
	if err != nil {
		t.Fatal(err)
	}
	for c := range 2 {
		if !sameBits(got.Field.Component(c), s.Field.Component(c)) || !sameBits(got.Rate.Component(c), s.Rate.Component(c)) {
			t.Errorf("component %d changed", c)
		}
	}
}

func TestBadState(t *testing.T) {
	path := filepath.Join(t.TempDir(), "s.npy")
	if err := WriteState(path, field.State{Field: field.NewSlice(1, 3), Rate: field.NewSlice(1, 4)}); err == nil {
		t.Error("no error for a rate of another shape")
	}
	if err := WriteState(path, field.State{}); err == nil {
		t.Error("no error for an empty state")
	}
	for _, shape := range [][]int{{6}, {3, 1, 2}, {2, 0, 3}} {
		n, err := volume(shape)
		if err != nil {
			t.Fatal(err)
		}
		if err := WriteNPY(path, Array{Shape: shape, Data: make([]float64, n)}); err != nil {
			t.Fatal(err)
		}
		if _, err := ReadState(path); err == nil || !strings.Contains(err.Error(), "want a state, (2, components, sites)") {
			t.Errorf("shape %v: error %v; want one with the right shape", shape, err)
		}
	}
}

func TestHistoryWriter(t *testing.T) {
	h := ring(t)
	folder := t.TempDir()
	path := filepath.Join(folder, "h.npy")
	w, err := NewHistoryWriter(path, h.Components, h.Block.Sites())
	if err != nil {
		t.Fatal(err)
	}
	for n := range h.Block.Slices() {
		if err := w.Append(h.Slice(n)); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Append(field.NewSlice(1, 5)); err == nil || !strings.Contains(err.Error(), "slice 4 has 1 components × 5 sites; want 2 × 5") {
		t.Errorf("error %v; want both shapes", err)
	}
	if w.Slices() != 4 {
		t.Errorf("%d slices; want 4", w.Slices())
	}
	if _, err := os.Stat(path); err == nil {
		t.Error("the file is there before Close")
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	w.Discard()
	if err := w.Append(h.Slice(0)); err == nil {
		t.Error("no error from Append after Close")
	}
	if err := w.Close(); err == nil {
		t.Error("no error from the second Close")
	}
	streamed, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if err := WriteHistory(path, h); err != nil {
		t.Fatal(err)
	}
	at1, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if string(streamed) != string(at1) {
		t.Error("a history written slice by slice has other bytes than one written at once")
	}

	w, err = NewHistoryWriter(path, 2, 5)
	if err != nil {
		t.Fatal(err)
	}
	if err := w.Append(h.Slice(0)); err != nil {
		t.Fatal(err)
	}
	w.Discard()
	onlyFile(t, folder, "h.npy", string(at1))

	if _, err := NewHistoryWriter(path, 0, 5); err == nil {
		t.Error("no error for no components")
	}
}
