package store

import (
	"fmt"
	"io"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// WriteHistory writes the values of a history to an NPY file, as an array of
// shape (slices, components, sites). The block is not in the file.
func WriteHistory(path string, h *field.History) error {
	a, err := arrayOf(h)
	if err != nil {
		return err
	}
	return WriteNPY(path, a)
}

// ReadHistory reads a history that lies on the block b from an NPY file of shape
// (slices, components, sites). Any number of components is accepted; other
// numbers of slices and sites than those of b are an error.
func ReadHistory(path string, b lattice.Block) (*field.History, error) {
	a, err := ReadNPY(path)
	if err != nil {
		return nil, err
	}
	h, err := historyOn(b, a)
	if err != nil {
		return nil, fmt.Errorf("store: %s: %w", path, err)
	}
	return h, nil
}

// WriteState writes a state to an NPY file, as an array of shape (2, components,
// sites): the field, then the rate.
func WriteState(path string, s field.State) error {
	if !s.Field.SameShape(s.Rate) {
		return fmt.Errorf("store: state with a field of %d components × %d sites and a rate of %d × %d", s.Field.Components, s.Field.Sites, s.Rate.Components, s.Rate.Sites)
	}
	if s.Field.Components < 1 || s.Field.Sites < 1 {
		return fmt.Errorf("store: state of %d components × %d sites; want at least 1 × 1", s.Field.Components, s.Field.Sites)
	}
	return Replace(path, func(w io.Writer) error {
		if _, err := w.Write(header([]int{2, s.Field.Components, s.Field.Sites})); err != nil {
			return err
		}
		if err := writeSlice(w, s.Field); err != nil {
			return err
		}
		return writeSlice(w, s.Rate)
	})
}

// ReadState reads a state from an NPY file of shape (2, components, sites).
func ReadState(path string) (field.State, error) {
	a, err := ReadNPY(path)
	if err != nil {
		return field.State{}, err
	}
	if len(a.Shape) != 3 || a.Shape[0] != 2 || len(a.Data) == 0 {
		return field.State{}, fmt.Errorf("store: %s: array of shape %v; want a state, (2, components, sites)", path, a.Shape)
	}
	components, sites := a.Shape[1], a.Shape[2]
	part := func(data []float64) field.Slice {
		return field.Slice{Data: data, Components: components, Sites: sites, Stride: sites}
	}
	half := components * sites
	return field.State{Field: part(a.Data[:half:half]), Rate: part(a.Data[half:])}, nil
}

// arrayOf returns the values of h, sharing memory.
func arrayOf(h *field.History) (Array, error) {
	if h == nil {
		return Array{}, fmt.Errorf("store: no history")
	}
	a := Array{Shape: []int{h.Block.Slices(), h.Components, h.Block.Sites()}, Data: h.Data}
	if h.Components < 1 {
		return Array{}, fmt.Errorf("store: history of %d components; want at least 1", h.Components)
	}
	if err := a.check(); err != nil {
		return Array{}, fmt.Errorf("store: history: %w", err)
	}
	return a, nil
}

// historyOn lays an array over a block, sharing memory.
func historyOn(b lattice.Block, a Array) (*field.History, error) {
	if len(a.Shape) != 3 || a.Shape[0] != b.Slices() || a.Shape[1] < 1 || a.Shape[2] != b.Sites() {
		return nil, fmt.Errorf("array of shape %v; want (slices, components, sites) = (%d, at least 1, %d) for the block", a.Shape, b.Slices(), b.Sites())
	}
	return &field.History{Block: b, Components: a.Shape[1], Data: a.Data}, nil
}

func writeSlice(w io.Writer, s field.Slice) error {
	for c := range s.Components {
		if err := writeFloats(w, s.Component(c)); err != nil {
			return err
		}
	}
	return nil
}
