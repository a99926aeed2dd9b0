package minimize_test

import (
	"context"
	"fmt"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/minimize"
)

// The membrane of ExampleMinimum falls to its shape in a relaxation time of its
// own, in implicit steps.
func ExampleRelax() {
	side := lattice.Axis{Step: 1. / 32, Sites: 33}
	block, err := lattice.NewBlock(side, side)
	if err != nil {
		fmt.Println(err)
		return
	}
	s, err := action.New(block, action.Wave{Signature: action.Euclidean, Source: action.Uniform(1)})
	if err != nil {
		fmt.Println(err)
		return
	}
	zero := func(float64) float64 { return 0 }
	held := constraint.On(block)
	held.Slice(0, field.NewSlice(1, 33))
	held.Slice(32, field.NewSlice(1, 33))
	held.Left(zero)
	held.Right(zero)
	_, err = minimize.Relax(context.Background(), s, held, field.NewHistory(block, 1), &minimize.RelaxSettings{
		Implicit: true, Step: 0.005, Until: 0.2, Every: 10,
		Watch: func(f minimize.Frame) { fmt.Printf("τ = %.2f: u = %.4f\n", f.Tau, f.History.At(16, 0, 16)) },
	})
	if err != nil {
		fmt.Println(err)
	}
	// Output:
	// τ = 0.00: u = 0.0000
	// τ = 0.05: u = 0.0418
	// τ = 0.10: u = 0.0611
	// τ = 0.15: u = 0.0687
	// τ = 0.20: u = 0.0717
}
