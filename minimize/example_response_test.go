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

// A fluxon at rest is seen at x = 0 twice, as it should be, and at x = 1 once.
// Which sighting is to be given up, and what does it bear on?
func ExampleResponse() {
	ctx := context.Background()
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
	held.Event(1.5, 0, math.Pi)
	held.Event(2.5, 1, math.Pi)
	held.Event(3.5, 0, math.Pi)
	found, err := minimize.LeastResidual(ctx, s, held, field.Repeat(block, first), nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	r, err := minimize.NewResponse(s, held, found, nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	v, err := r.Verdict(ctx, nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, relief := range v.Reliefs {
		fmt.Printf("%s at %v: %d value(s), saves %.0f %%\n", relief.Kind, relief.Event, relief.Values, 100*relief.Saving/v.Cost)
	}

	seen := lattice.Event{T: 2.5, X: 1}
	bearing, err := r.Of(minimize.Change{Part: minimize.PinnedValue, Event: seen})
	if err != nil {
		fmt.Println(err)
		return
	}
	cone, err := lattice.NewCone(block.Space, seen, 1)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("outside of its light cone: %.0f %%\n", 100*bearing[0].Shares(cone).Outside)
	// Output:
	// event at (x, t) = (1, 2.5): 1 value(s), saves 100 %
	// slice at (x, t) = (-5, 0): 51 value(s), saves 100 %
	// slice at (x, t) = (-5, 0.1): 51 value(s), saves 100 %
	// event at (x, t) = (0, 3.5): 1 value(s), saves 48 %
	// event at (x, t) = (0, 1.5): 1 value(s), saves 7 %
	// outside of its light cone: 63 %
}
