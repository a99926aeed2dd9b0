package minimize_test

import (
	"context"
	"fmt"
	"math"
	"slices"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/minimize"
)

// The Bratu problem u″ + λeᵘ = 0 on the unit interval, on a narrow ring of two equal
// slices: from λ = 0 the branch rises to a fold and returns with one unstable
// direction.
func ExampleContinue() {
	block, err := lattice.NewBlock(
		lattice.Axis{Step: 0.01, Sites: 2, Periodic: true},
		lattice.Axis{Step: 1. / 64, Sites: 65, Left: lattice.Held, Right: lattice.Held},
	)
	if err != nil {
		fmt.Println(err)
		return
	}
	exp := func(u float64) float64 { return -math.Exp(u) }
	family := func(lambda float64) (minimize.Functional, *constraint.Set, error) {
		s, err := action.New(block, action.Wave{
			Potential: action.Scalar{V: exp, D1: exp, D2: exp},
			Sigma:     action.Uniform(lambda),
			Signature: action.Euclidean,
		})
		return s, nil, err
	}
	branch, err := minimize.Continue(context.Background(), family, 0, field.NewHistory(block, 1), &minimize.ContinuationSettings{
		At: []float64{2}, Low: 0, High: 4,
		Stop: func(p minimize.Point) bool { return p.Kind == minimize.Asked && p.Slope < 0 },
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, p := range branch.Points {
		if p.Kind != minimize.Passing {
			fmt.Printf("%v: λ = %.4f, u(½) = %.4f\n", p.Kind, p.Parameter, p.History.At(0, 0, 32))
		}
	}
	first, last := branch.Points[0], branch.Points[len(branch.Points)-1]
	fmt.Println("unstable directions before and after:", first.Index, last.Index)
	// Output:
	// asked: λ = 2.0000, u(½) = 0.3290
	// fold: λ = 3.5134, u(½) = 1.1868
	// asked: λ = 2.0000, u(½) = 2.8953
	// unstable directions before and after: 0 1
}

// Half a sine-Gordon breather, mirrored at x = 0, of the energy 4.8: the whole has
// 9.6 = 16√(1 − ω²) with ω = 0.8.
func ExamplePeriodic() {
	block, err := lattice.NewBlock(
		lattice.Axis{Step: 0.2, Sites: 40, Periodic: true}, // a guess of the period: 8
		lattice.Axis{Step: 0.2, Sites: 81, Left: lattice.Even},
	)
	if err != nil {
		fmt.Println(err)
		return
	}
	breather, err := field.SineGordonBreather(field.Breather{Frequency: 2 * math.Pi / 8})
	if err != nil {
		fmt.Println(err)
		return
	}
	start := field.NewHistory(block, 1)
	for n := range block.Slices() {
		start.Slice(n).CopyFrom(breather.On(block.Space, block.Time.At(n)).Field)
	}
	orbit, err := minimize.Periodic(context.Background(), block, action.Wave{Potential: action.SineGordon{}}, start, minimize.Energy(4.8), nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("ω = %.3f, amplitude %.3f\n", orbit.Frequency, orbit.History.At(0, 0, 0))
	// Output:
	// ω = 0.801, amplitude 2.575
}

// Every stationary state of u″ + u − u³ = 0 on an interval of length 5 with natural
// ends, from a few starts. Up to the sign there are three, with 0, 1 and 2 unstable
// directions.
func ExampleTakeCensus() {
	block, err := lattice.NewBlock(
		lattice.Axis{Step: 0.25, Sites: 2, Periodic: true},
		lattice.Axis{Step: 0.1, Sites: 51},
	)
	if err != nil {
		fmt.Println(err)
		return
	}
	s, err := action.New(block, action.Wave{Potential: action.Phi4{}, Signature: action.Euclidean})
	if err != nil {
		fmt.Println(err)
		return
	}
	var starts []*field.History
	for n := range 6 {
		h := field.NewHistory(block, 1)
		for e := range h.Data {
			_, _, i := h.Place(e)
			h.Data[e] = 0.8 * math.Cos(float64(n)*math.Pi*block.Space.At(i)/5)
		}
		starts = append(starts, h)
	}
	solve := func(ctx context.Context, start *field.History) (*minimize.Found, error) {
		return minimize.LeastResidual(ctx, s, nil, start, &minimize.Settings{Tolerance: 1e-10})
	}
	negative := func(h *field.History) *field.History {
		g := h.Clone()
		for e := range g.Data {
			g.Data[e] = -g.Data[e]
		}
		return g
	}
	census, err := minimize.TakeCensus(context.Background(), solve, slices.Values(starts), &minimize.CensusSettings{
		Of: s, Most: 1e-8, Symmetries: []func(*field.History) *field.History{negative},
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, r := range census.Residents {
		fmt.Printf("energy %.4f, %d unstable directions\n", r.Action/block.Time.Length(), r.Index)
	}
	// Output:
	// energy 0.0000, 0 unstable directions
	// energy 0.9328, 1 unstable directions
	// energy 1.2500, 2 unstable directions
}
