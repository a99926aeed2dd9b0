package actiontest_test

import (
	"fmt"
	"log"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/action/actiontest"
	"github.com/tenter-go/tenter/lattice"
)

// A slip in V″ is found and located.
func ExamplePotential() {
	right := action.Scalar{V: math.Cosh, D1: math.Sinh, D2: math.Cosh}
	fmt.Println(actiontest.Potential(right, actiontest.Settings{}))

	wrong := right
	wrong.D2 = math.Sinh
	err := actiontest.Potential(wrong, actiontest.Settings{Low: 1, High: 1.000001, Step: 0.1, X: []float64{0.5}, T: []float64{2}})
	fmt.Printf("%.53s…\n", err)
	// Output:
	// <nil>
	// actiontest: curvature V″ at φ = 1, x = 0.5, t = 2 is …
}

// A density is tested on small blocks with every kind of end.
func ExampleDensity() {
	lossy := action.Wave{
		Potential: action.SineGordon{},
		Links:     action.Fourth,
		Alpha:     action.Uniform(0.05),
		Beta:      action.Uniform(0.01),
		Source:    action.Over(func(x, t float64) float64 { return 0.3 * math.Sin(t) }),
	}
	fmt.Println(actiontest.Density(lossy, actiontest.Settings{}))
	// Output: <nil>
}

// Any action of a whole block is tested in the same way, here that of a noisy
// relaxation.
func ExampleFunctional() {
	block := lattice.Block{Time: lattice.Axis{Step: 0.1, Sites: 5}, Space: lattice.Axis{Step: 0.25, Sites: 9}}
	flow, err := action.NewNoisyFlow(block, action.GradientFlow{Energy: action.Wave{Potential: action.Phi4{}}})
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(actiontest.Functional(flow, actiontest.Settings{}))
	// Output: <nil>
}
