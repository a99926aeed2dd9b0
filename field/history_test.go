package field_test

import (
	"testing"

	"github.com/google/go-cmp/cmp"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// numbered returns a history whose values are 100n + 10c + i.
func numbered(slices, components, sites int) *field.History {
	h := field.NewHistory(lattice.Block{
		Time:  lattice.Axis{Step: 0.5, Sites: slices},
		Space: lattice.Axis{From: -1, Step: 0.25, Sites: sites},
	}, components)
	for n := range slices {
		for c := range components {
			for i := range sites {
				h.Set(n, c, i, float64(100*n+10*c+i))
			}
		}
	}
	return h
}

// The layout is a contract: NumPy opens the data as (slices, components, sites).
func TestHistoryLayout(t *testing.T) {
	h := numbered(2, 2, 3)
	want := []float64{0, 1, 2, 10, 11, 12, 100, 101, 102, 110, 111, 112}
	if diff := cmp.Diff(want, h.Data); diff != "" {
		t.Errorf("data (-want +got):\n%s", diff)
	}
	for k := range h.Data {
		n, c, i := h.Place(k)
		if got := h.Index(n, c, i); got != k {
			t.Errorf("Index(Place(%d)) = %d", k, got)
		}
	}
	if diff := cmp.Diff([]float64{12, 112}, h.TimeSeries(nil, 1, 2)); diff != "" {
		t.Errorf("time series (-want +got):\n%s", diff)
	}
}

func TestHistoryViewsShareMemory(t *testing.T) {
	h := numbered(3, 2, 4)
	h.Slice(1).Part(2, 4).Component(1)[1] = -5
	if got := h.At(1, 1, 3); got != -5 {
		t.Errorf("a write through Slice, Part and Component did not arrive: got %v, want -5", got)
	}
	c := h.Clone()
	w, err := h.Window(1, 3, 1, 4)
	if err != nil {
		t.Fatal(err)
	}
	c.Set(0, 0, 0, 77)
	w.Set(0, 0, 0, 88)
	if h.At(0, 0, 0) != 0 || h.At(1, 0, 1) != 101 {
		t.Error("a write to a clone or window reached the original")
	}
	if grown := append(h.Slice(0).Data, 1); &grown[0] == &h.Data[0] {
		t.Error("appending to a slice's data writes into the next slice")
	}
}

func TestHistoryWindow(t *testing.T) {
	h := numbered(4, 2, 5)
	w, err := h.Window(1, 3, 2, 5)
	if err != nil {
		t.Fatal(err)
	}
	want := []float64{102, 103, 104, 112, 113, 114, 202, 203, 204, 212, 213, 214}
	if diff := cmp.Diff(want, w.Data); diff != "" {
		t.Errorf("data (-want +got):\n%s", diff)
	}
	if got, want := w.Block.At(0, 0), h.Block.At(1, 2); got != want {
		t.Errorf("first event at %v, want %v", got, want)
	}
	if _, err := h.Window(0, 5, 0, 5); err == nil {
		t.Error("a window of five slices of four: no error")
	}
}

func TestStateCopies(t *testing.T) {
	s := field.AtRest(field.SliceOf([]float64{1, 2, 3}))
	c := s.Clone()
	c.Rate.Data[0] = 4
	if s.Rate.Data[0] != 0 {
		t.Error("a write to a clone reached the state")
	}
	s.CopyFrom(c)
	if s.Rate.Data[0] != 4 {
		t.Error("CopyFrom left the rate")
	}
	s.Field.Data[1] = 9
	if c.Field.Data[1] != 2 {
		t.Error("CopyFrom shares memory")
	}
}
