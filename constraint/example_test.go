package constraint_test

import (
	"errors"
	"fmt"
	"math"

	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

func Example() {
	block, err := lattice.NewBlock(
		lattice.Axis{Step: 0.1, Sites: 11}, // t = 0 … 1
		lattice.Axis{Step: 0.2, Sites: 6},  // x = 0 … 1
	)
	if err != nil {
		fmt.Println(err)
		return
	}
	held := constraint.On(block)
	held.Slice(0, field.NewSlice(1, 6))
	held.Event(0.5, 0.4, 1)
	held.Rate(9, field.NewSlice(1, 6)) // at rest at t = 0.9

	free, err := held.Free(field.NewHistory(block, 1))
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(free.Values(), "values,", free.Fixed(), "fixed,", free.N, "unknowns")

	held.Event(0.5, 0.4, 1.1)
	var c *constraint.Conflict
	if errors.As(held.Err(), &c) {
		fmt.Println(c.Event, "cannot be", c.First, "and", c.Second)
	}
	// Output:
	// 66 values, 7 fixed, 53 unknowns
	// (x, t) = (0.4, 0.5) cannot be 1 and 1.1
}

// Two walls of a liquid-crystal cell ask for different angles, each at a price.
func ExampleSet_CostSlice() {
	cell, err := lattice.NewBlock(
		lattice.Axis{Step: 0.25, Sites: 5}, // across the cell
		lattice.Axis{Step: 0.5, Sites: 3},  // along it
	)
	if err != nil {
		fmt.Println(err)
		return
	}
	held := constraint.On(cell)
	lower := held.CostSlice(0, nil, constraint.RapiniPapoular{W: 4, Easy: 0})
	upper := held.CostSlice(4, nil, constraint.RapiniPapoular{W: 1, Easy: math.Pi / 2})
	upper.Name = "upper wall"

	tilted := field.Repeat(cell, field.SliceOf([]float64{0.3, 0.3, 0.3}))
	free, err := held.Free(tilted)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("lower %.3f, upper %.3f\n", free.CostOf(lower, tilted), free.CostOf(upper, tilted))
	fmt.Println(free.Misfits(tilted)[0])
	// Output:
	// lower 0.175, upper 0.456
	// upper wall at (x, t) = (0.5, 1), component 0: asked 1.5708, got 0.3, 0.676 σ, cost 0.228167
}

// A value between sites, and the mean of a slice as an observation.
func ExampleLinear() {
	block, err := lattice.NewBlock(lattice.Axis{Step: 0.5, Sites: 3}, lattice.Axis{Step: 1, Sites: 5})
	if err != nil {
		fmt.Println(err)
		return
	}
	held := constraint.On(block)
	held.Event(0.5, 1, 2)
	held.Between(0.5, 1.25, 3, field.Linear)
	held.Mean(2, 0.5).Soft(0.1)
	free, err := held.Free(field.NewHistory(block, 1))
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, row := range free.HardRows() { // ¾ of the pin is on the right-hand side
		fmt.Println(row.Name, row.Weight, "·", row.Unknown, "=", row.Value)
	}
	fmt.Printf("cost %.4g\n", free.Cost(field.NewHistory(block, 1)))
	// Output:
	// value between sites [0.25] · [6] = 1.5
	// cost 12.5
}

// Half of the way from one set of conditions to another.
func ExampleBlend() {
	block, err := lattice.NewBlock(lattice.Axis{Step: 1, Sites: 3}, lattice.Axis{Step: 1, Sites: 3})
	if err != nil {
		fmt.Println(err)
		return
	}
	from, to := constraint.On(block), constraint.On(block)
	from.Event(2, 1, 0)
	to.Event(2, 1, math.Pi)
	half, err := constraint.Blend(from, to, 0.5)
	if err != nil {
		fmt.Println(err)
		return
	}
	free, err := half.Free(field.NewHistory(block, 1))
	if err != nil {
		fmt.Println(err)
		return
	}
	_, value := free.At(7)
	fmt.Printf("%.4f\n", value)

	to.Observe(1, 1, 0, 0.1)
	_, err = constraint.Blend(from, to, 0.5)
	fmt.Println(err)
	// Output:
	// 1.5708
	// constraint: the observation of component 0 at (x, t) = (1, 1) is in the second set of a blend and not in the first; want the same conditions in both
}

// quartic is the penalty (φ² − 1)².
type quartic struct{}

func (quartic) At(phi float64) (cost, slope, curvature float64) {
	w := phi*phi - 1
	return w * w, 4 * phi * w, 12*phi*phi - 4
}

func ExampleCheckPenalty() {
	fmt.Println(constraint.CheckPenalty(quartic{}, -2, 0, 0.5, 1))
	// Output: <nil>
}
