package minimize_test

import (
	"context"
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/minimize"
)

// A fluxon at rest at t = 0 that is asked to pass x = 1 at t = 3, which it would
// not do by itself: the field equation has to give way.
func ExampleLeastResidual() {
	block, err := lattice.NewBlock(
		lattice.Axis{Step: 0.1, Sites: 41},
		lattice.Axis{From: -5, Step: 0.2, Sites: 51},
	)
	if err != nil {
		fmt.Println(err)
		return
	}
	s, err := action.New(block, action.Wave{Potential: action.SineGordon{}})
	if err != nil {
		fmt.Println(err)
		return
	}
	kink, err := field.SineGordonKink(field.Moving{})
	if err != nil {
		fmt.Println(err)
		return
	}
	first := kink.On(block.Space, 0).Field

	held := constraint.On(block)
	held.Slice(0, first)
	held.Slice(1, first)
	held.Event(3, 1, math.Pi)
	found, err := minimize.LeastResidual(context.Background(), s, held, field.Repeat(block, first), nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	r := found.Report
	fmt.Printf("%v: %d equations, %d unknowns\n", r.Status, r.Rows, r.Unknowns)
	fmt.Printf("%s, largest %.2f\n", r.Reason, r.After.Max)
	// Output:
	// converged: 1989 equations, 1988 unknowns
	// gradient of the cost vanishes, the conditions leave a residual, largest 0.65
}

// The soap film of −Δu = 1 over a square, in one Newton step.
func ExampleMinimum() {
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
	found, err := minimize.Minimum(context.Background(), s, held, field.NewHistory(block, 1), nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%s, %d step\n", found.Report.Method, found.Report.Iterations)
	fmt.Printf("u at the centre: %.4f\n", found.History.At(16, 0, 16))
	// Output:
	// damped Newton, nested-dissection Cholesky, 1 step
	// u at the centre: 0.0736
}

// The massless wave equation between two times has no answer or many if a normal
// mode fits: 8 × 12 intervals have three null vectors.
func ExampleStationary() {
	block, err := lattice.NewBlock(
		lattice.Axis{Step: 1, Sites: 13},
		lattice.Axis{Step: 1, Sites: 9, Left: lattice.Held, Right: lattice.Held},
	)
	if err != nil {
		fmt.Println(err)
		return
	}
	s, err := action.New(block, action.Wave{})
	if err != nil {
		fmt.Println(err)
		return
	}
	held := constraint.On(block)
	first := field.NewSlice(1, 9)
	for i := range first.Data {
		first.Data[i] = math.Sin(math.Pi * block.Space.At(i) / 8)
	}
	held.Slice(0, first)
	held.Slice(12, field.NewSlice(1, 9))
	start := field.NewHistory(block, 1)

	found, err := minimize.Stationary(context.Background(), s, held, start, nil)
	fmt.Printf("%v, nullity %d, error %t\n", found.Report.Status, found.Report.Inertia.Nullity, err != nil)

	found, err = minimize.Stationary(context.Background(), s, held, start, &minimize.Settings{MinimumNorm: true})
	fmt.Printf("%v, nullity %d, error %t\n", found.Report.Status, found.Report.Inertia.Nullity, err != nil)
	fmt.Printf("half way, in the middle: %.4f\n", found.History.At(6, 0, 4))
	// Output:
	// singular, nullity 3, error true
	// converged, nullity 3, error false
	// half way, in the middle: -0.7071
}

// The bounce of the false vacuum 0 of V = ½φ² − ½φ³, on a quarter of the plane whose
// free sides are its axes of symmetry.
func ExampleSaddle() {
	side := lattice.Axis{Step: 0.2, Sites: 61}
	block, err := lattice.NewBlock(side, side)
	if err != nil {
		fmt.Println(err)
		return
	}
	s, err := action.New(block, action.Wave{
		Potential: action.Polynomial{0, 0, 0.5, -0.5},
		Signature: action.Euclidean,
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	guess, err := field.NewLump(field.Lump{Inside: 1.5, Radius: 1.5, Wall: 1.5})
	if err != nil {
		fmt.Println(err)
		return
	}
	held := constraint.On(block)
	held.Slice(60, field.NewSlice(1, 61))
	held.Right(func(float64) float64 { return 0 })
	found, err := minimize.Saddle(context.Background(), s, held, guess.Over(block), nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("action %.3f, core %.3f\n", 4*found.Report.CostAfter, found.History.At(0, 0, 0))
	fmt.Printf("index %d, lowest eigenvalue %.2f\n", found.Report.Inertia.Index, found.Report.Inertia.Negative[0])
	// Output:
	// action 3.434, core 1.599
	// index 1, lowest eigenvalue -1.65
}

// A pendulum chain at rest at two times, one turn apart: which history joins
// them? The start is a straight line in time; shooting corrects its first step.
func ExampleStraight() {
	block, err := lattice.NewBlock(
		lattice.Axis{Step: 0.1, Sites: 21},
		lattice.Axis{Step: 0.25, Sites: 17, Periodic: true},
	)
	if err != nil {
		fmt.Println(err)
		return
	}
	s, err := action.New(block, action.Wave{Potential: action.SineGordon{}})
	if err != nil {
		fmt.Println(err)
		return
	}
	first, last := field.NewSlice(1, 17), field.NewSlice(1, 17)
	for i := range last.Data {
		last.Data[i] = 2 * math.Pi
	}
	held := constraint.On(block)
	held.Slice(0, first)
	held.Slice(20, last)
	start, err := minimize.Straight(held, field.NewHistory(block, 1))
	if err != nil {
		fmt.Println(err)
		return
	}
	found, err := minimize.LeastResidual(context.Background(), s, held, start, &minimize.Settings{Strategy: minimize.Shooting})
	if err != nil {
		fmt.Println(err)
		return
	}
	h := found.History
	fmt.Printf("%v by %v\n", found.Report.Status, found.Report.Strategy)
	fmt.Printf("half way at half time: %.4f = %.4f\n", h.At(10, 0, 3), math.Pi)
	// Output:
	// converged by shooting
	// half way at half time: 3.1416 = 3.1416
}
