package integrate

import (
	"errors"
	"fmt"
	"slices"
	"unicode/utf8"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/store"
)

// WriteCheckpoint writes a checkpoint to an NPZ file, all or nothing, as the
// arrays
//
//	method              (bytes,)              the method's name in UTF-8
//	slice               ()                    the number of the slice
//	memory0, memory1, … (components, sites)   the memory, one array each
//
// Every float64 comes back with the bits it had.
func WriteCheckpoint(path string, c *Checkpoint) error {
	if c == nil {
		return errors.New("integrate: no checkpoint to write")
	}
	if c.Method == "" || c.Slice < 0 || len(c.Memory) == 0 {
		return fmt.Errorf("integrate: checkpoint of the method %q at slice %d with %d arrays; want one that a run has made", c.Method, c.Slice, len(c.Memory))
	}
	name := make([]float64, len(c.Method))
	for i := range name {
		name[i] = float64(c.Method[i])
	}
	arrays := []store.Array{
		{Name: "method", Shape: []int{len(name)}, Data: name},
		{Name: "slice", Data: []float64{float64(c.Slice)}},
	}
	for k, m := range c.Memory {
		if err := m.Check(); err != nil {
			return fmt.Errorf("integrate: checkpoint: array %d: %w", k, err)
		}
		a := store.Array{Name: memoryName(k), Shape: []int{m.Components, m.Sites}}
		for i := range m.Components {
			a.Data = append(a.Data, m.Component(i)...)
		}
		arrays = append(arrays, a)
	}
	return store.WriteNPZ(path, arrays...)
}

func memoryName(k int) string { return fmt.Sprintf("memory%d", k) }

// ReadCheckpoint reads a file that WriteCheckpoint wrote. Missing, further or
// misshapen arrays and values that are not finite are errors that name the file.
func ReadCheckpoint(path string) (*Checkpoint, error) {
	arrays, err := store.ReadNPZ(path)
	if err != nil {
		return nil, err
	}
	c, err := checkpointOf(arrays)
	if err != nil {
		return nil, fmt.Errorf("integrate: %s: %w", path, err)
	}
	return c, nil
}

func checkpointOf(arrays []store.Array) (*Checkpoint, error) {
	if len(arrays) < 3 || arrays[0].Name != "method" || arrays[1].Name != "slice" {
		return nil, fmt.Errorf("%d arrays; want method, slice, memory0 and so on, as a checkpoint has them", len(arrays))
	}
	c := &Checkpoint{}
	name := make([]byte, 0, len(arrays[0].Data))
	for _, v := range arrays[0].Data {
		b := byte(max(0, min(v, 255)))
		if float64(b) != v {
			return nil, fmt.Errorf("method holds %v; want bytes", v)
		}
		name = append(name, b)
	}
	if len(name) == 0 || len(arrays[0].Shape) != 1 || !utf8.Valid(name) {
		return nil, fmt.Errorf("method is %q of shape %v; want a name in UTF-8", name, arrays[0].Shape)
	}
	c.Method = string(name)
	const most = 1 << 53 // the largest whole number of a float64
	if at := arrays[1]; len(at.Shape) != 0 || !(at.Data[0] >= 0 && at.Data[0] <= most) || at.Data[0] != float64(int(at.Data[0])) {
		return nil, fmt.Errorf("slice is %v of shape %v; want one whole number ≥ 0", at.Data, at.Shape)
	}
	c.Slice = int(arrays[1].Data[0])
	for k, a := range arrays[2:] {
		if a.Name != memoryName(k) {
			return nil, fmt.Errorf("array %q; want %q", a.Name, memoryName(k))
		}
		if len(a.Shape) != 2 || slices.Contains(a.Shape, 0) {
			return nil, fmt.Errorf("array %q has the shape %v; want (components, sites)", a.Name, a.Shape)
		}
		m := field.Slice{Data: a.Data, Components: a.Shape[0], Sites: a.Shape[1], Stride: a.Shape[1]}
		if err := m.Check(); err != nil {
			return nil, fmt.Errorf("array %q: %w", a.Name, err)
		}
		c.Memory = append(c.Memory, m)
	}
	return c, nil
}
