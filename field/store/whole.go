package store

import (
	"fmt"
	"slices"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// An axis is stored as the six numbers From, Step, Sites, Left, Right, Periodic.
// The place of an end in endCodes is its number in the file.
var endCodes = [...]lattice.End{lattice.Free, lattice.Held, lattice.Open, lattice.Even, lattice.Odd}

// WriteHistoryNPZ writes a history with its block to an NPZ file of the arrays
//
//	field       (slices, components, sites)
//	t           (slices,)   the times, for other programs
//	x           (sites,)    the positions, for other programs
//	time_axis   (6,)        from, step, sites, left, right, periodic
//	space_axis  (6,)        the same for space
//	time_jump   (any,)      gain of each component once around, if periodic
//	space_jump  (any,)      the same for space
//
// where an end is 0 free, 1 held, 2 open, 3 even, 4 odd, and periodic is 0 or 1.
func WriteHistoryNPZ(path string, h *field.History) error {
	values, err := arrayOf(h)
	if err != nil {
		return err
	}
	values.Name = "field"
	b := h.Block
	if _, err := lattice.NewBlock(b.Time, b.Space); err != nil {
		return fmt.Errorf("store: history: %w", err)
	}
	row := func(name string, data []float64) Array {
		return Array{Name: name, Shape: []int{len(data)}, Data: data}
	}
	return WriteNPZ(path, values,
		row("t", b.Time.Positions(nil)),
		row("x", b.Space.Positions(nil)),
		row("time_axis", axisNumbers(b.Time)),
		row("space_axis", axisNumbers(b.Space)),
		row("time_jump", b.Time.Jump),
		row("space_jump", b.Space.Jump))
}

// ReadHistoryNPZ reads a history and its block from a file that WriteHistoryNPZ
// wrote. Arrays t and x are not used, and further arrays are ignored.
func ReadHistoryNPZ(path string) (*field.History, error) {
	arrays, err := ReadNPZ(path)
	if err != nil {
		return nil, err
	}
	h, err := wholeHistory(arrays)
	if err != nil {
		return nil, fmt.Errorf("store: %s: %w", path, err)
	}
	return h, nil
}

func wholeHistory(arrays []Array) (*field.History, error) {
	named := map[string]Array{}
	for _, a := range arrays {
		named[a.Name] = a
	}
	for _, name := range []string{"field", "time_axis", "space_axis", "time_jump", "space_jump"} {
		if _, ok := named[name]; !ok {
			return nil, fmt.Errorf("no array %q; want a history written with its block", name)
		}
	}
	clock, err := axisFrom(named["time_axis"], named["time_jump"])
	if err != nil {
		return nil, err
	}
	line, err := axisFrom(named["space_axis"], named["space_jump"])
	if err != nil {
		return nil, err
	}
	b, err := lattice.NewBlock(clock, line)
	if err != nil {
		return nil, err
	}
	return historyOn(b, named["field"])
}

func axisNumbers(a lattice.Axis) []float64 {
	periodic := 0.0
	if a.Periodic {
		periodic = 1
	}
	return []float64{
		a.From, a.Step, float64(a.Sites),
		float64(slices.Index(endCodes[:], a.Left)),
		float64(slices.Index(endCodes[:], a.Right)),
		periodic,
	}
}

func axisFrom(numbers, jump Array) (lattice.Axis, error) {
	if !slices.Equal(numbers.Shape, []int{6}) {
		return lattice.Axis{}, fmt.Errorf("array %q has the shape %v; want (6,)", numbers.Name, numbers.Shape)
	}
	if len(jump.Shape) != 1 {
		return lattice.Axis{}, fmt.Errorf("array %q has the shape %v; want one dimension", jump.Name, jump.Shape)
	}
	whole := func(place int, what string, limit float64) (int, error) {
		v := numbers.Data[place]
		if !(v >= 0 && v <= limit) || v != float64(int(v)) {
			return 0, fmt.Errorf("array %q: %s is %v; want a whole number from 0 to %g", numbers.Name, what, v, limit)
		}
		return int(v), nil
	}
	a := lattice.Axis{From: numbers.Data[0], Step: numbers.Data[1]}
	var err error
	if a.Sites, err = whole(2, "the number of sites", 1<<30); err != nil {
		return lattice.Axis{}, err
	}
	last := float64(len(endCodes) - 1)
	left, err := whole(3, "the left end", last)
	if err != nil {
		return lattice.Axis{}, err
	}
	right, err := whole(4, "the right end", last)
	if err != nil {
		return lattice.Axis{}, err
	}
	periodic, err := whole(5, "periodic", 1)
	if err != nil {
		return lattice.Axis{}, err
	}
	a.Left, a.Right, a.Periodic = endCodes[left], endCodes[right], periodic == 1
	if len(jump.Data) > 0 {
		a.Jump = jump.Data
	}
	if err := a.Check(); err != nil {
		return lattice.Axis{}, fmt.Errorf("array %q: %w", numbers.Name, err)
	}
	return a, nil
}
