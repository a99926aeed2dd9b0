package constraint_test

import (
	"errors"
	"fmt"

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
