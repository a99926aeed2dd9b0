package refine

import (
	"context"
	"fmt"

	"github.com/tenter-go/tenter/lattice"
)

// A Quantity is one measured number of a block.
type Quantity struct {
	Name  string
	Value float64
	Unit  string  // as it should be printed; empty for a pure number
	Order float64 // expected order of convergence; 0 means that of the Study
}

// A Measure runs on one block and returns its quantities, the same names in the
// same order on every block.
type Measure func(ctx context.Context, b lattice.Block) ([]Quantity, error)

// Along says which axes of a block are refined.
type Along uint8

// The axes to refine.
const (
	BothAxes  Along = iota // time and space together: a constant Courant number
	TimeAxis               // the time step only
	SpaceAxis              // the spacing only
)

// A Study says how to refine. Only Block must be set.
type Study struct {
	Block  lattice.Block // the coarsest level
	Levels int           // how many levels; 0 means 3
	Factor int           // how much finer each is than the one before; 0 means 2
	Order  float64       // expected order of every quantity that has none of its own; 0 means unknown
	Along  Along
}

// Blocks returns the block of every level, coarse to fine. It is an error if a
// setting is out of range or the block makes no sense.
func (s Study) Blocks() ([]lattice.Block, error) {
	levels, factor := s.levels(), s.factor()
	switch {
	case levels < 3:
		return nil, fmt.Errorf("refine: study of %d levels; want at least 3, or 0 for 3", s.Levels)
	case factor < 2:
		return nil, fmt.Errorf("refine: study with the factor %d; want at least 2, or 0 for 2", s.Factor)
	case s.Along > SpaceAxis:
		return nil, fmt.Errorf("refine: study along(%d); want BothAxes, TimeAxis or SpaceAxis", s.Along)
	}
	if err := checkOrder("study", s.Order); err != nil {
		return nil, err
	}
	if _, err := lattice.NewBlock(s.Block.Time, s.Block.Space); err != nil {
		return nil, err
	}
	blocks := []lattice.Block{s.Block}
	for level := 1; level < levels; level++ {
		b := blocks[level-1]
		if s.Along != SpaceAxis {
			b.Time = b.Time.Refine(factor)
		}
		if s.Along != TimeAxis {
			b.Space = b.Space.Refine(factor)
		}
		if _, err := lattice.NewBlock(b.Time, b.Space); err != nil {
			return nil, fmt.Errorf("refine: level %d: %w", level, err)
		}
		blocks = append(blocks, b)
	}
	return blocks, nil
}

// Run measures on every level, coarse to fine, and returns the table of
// estimates in the order of the quantities. If the context is done or a measure
// fails, the error names the level and the table holds the levels before it,
// with the status TooFewLevels where they are fewer than three; it is nil only
// if the study itself makes no sense. Quantities whose names differ between
// levels, or are empty or given twice, are an error.
func (s Study) Run(ctx context.Context, measure Measure) (*Table, error) {
	blocks, err := s.Blocks()
	if err != nil {
		return nil, err
	}
	table := &Table{}
	var first []Quantity
	var values [][]float64
	for level, b := range blocks {
		var found []Quantity
		if err = ctx.Err(); err == nil {
			found, err = measure(ctx, b)
		}
		if err == nil && level == 0 {
			first, values = found, make([][]float64, len(found))
			err = checkNames(found)
		} else if err == nil {
			err = compareNames(first, found)
		}
		if err != nil {
			err = fmt.Errorf("refine: level %d of %d slices × %d sites: %w", level, b.Slices(), b.Sites(), err)
			break
		}
		table.Blocks = append(table.Blocks, b)
		for j, q := range found {
			values[j] = append(values[j], q.Value)
		}
	}
	if len(table.Blocks) == 0 {
		return table, err
	}
	for j, q := range first {
		order := q.Order
		if order == 0 {
			order = s.Order
		}
		e := Extrapolate(values[j], float64(s.factor()), order)
		e.Name, e.Unit = q.Name, q.Unit
		table.Estimates = append(table.Estimates, e)
	}
	return table, err
}

func (s Study) levels() int {
	if s.Levels == 0 {
		return 3
	}
	return s.Levels
}

func (s Study) factor() int {
	if s.Factor == 0 {
		return 2
	}
	return s.Factor
}

func checkOrder(of string, order float64) error {
	if !(order >= 0 && order <= 64) {
		return fmt.Errorf("refine: %s with the expected order %v; want 0 for unknown, or at most 64", of, order)
	}
	return nil
}

func checkNames(qs []Quantity) error {
	seen := make(map[string]bool)
	for j, q := range qs {
		switch {
		case q.Name == "":
			return fmt.Errorf("quantity %d has no name", j)
		case seen[q.Name]:
			return fmt.Errorf("quantity %q is given twice", q.Name)
		}
		seen[q.Name] = true
		if err := checkOrder(fmt.Sprintf("quantity %q", q.Name), q.Order); err != nil {
			return err
		}
	}
	return nil
}

func compareNames(want, got []Quantity) error {
	if len(got) != len(want) {
		return fmt.Errorf("%d quantities, level 0 gave %d; want the same on every level", len(got), len(want))
	}
	for j := range got {
		if got[j].Name != want[j].Name {
			return fmt.Errorf("quantity %d is %q, on level 0 it was %q; want the same on every level", j, got[j].Name, want[j].Name)
		}
	}
	return nil
}
