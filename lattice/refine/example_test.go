package refine_test

import (
	"context"
	"encoding/json"
	"fmt"
	"log"
	"math"
	"os"

	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/lattice/refine"
)

// The mass of the φ⁴ kink, 2√2/3 = 0.942809…, from nearest-neighbour links.
func ExampleStudy() {
	study := refine.Study{
		Block: lattice.Block{
			Time:  lattice.Axis{Step: 0.2, Sites: 2},
			Space: lattice.Axis{From: -32, Step: 0.4, Sites: 161},
		},
		Order: 2,
	}
	mass := func(_ context.Context, b lattice.Block) ([]refine.Quantity, error) {
		line := b.Space
		kink := func(i int) float64 { return math.Tanh(line.At(i) / math.Sqrt2) }
		var stretch, potential float64
		for i := range line.Links() {
			d := (kink(i+1) - kink(i)) / line.Step
			stretch += d * d / 2 * line.Step
		}
		for i := range line.Sites {
			v := 1 - kink(i)*kink(i)
			potential += line.Weight(i) * v * v / 4 * line.Step
		}
		return []refine.Quantity{
			{Name: "mass", Value: stretch + potential},
			{Name: "charge", Value: (kink(line.Sites-1) - kink(0)) / 2},
		}, nil
	}
	table, err := study.Run(context.Background(), mass)
	if err != nil {
		log.Fatal(err)
	}
	for _, e := range table.Estimates {
		fmt.Printf("%v, %v\n", e.Result(), e.Status)
	}
	if err := json.NewEncoder(os.Stdout).Encode(table.Results()[1:]); err != nil {
		log.Fatal(err)
	}
	// Output:
	// mass = 0.94281 ± 0.0002, asymptotic
	// charge = 1 ± 0, exact at every level
	// [{"name":"charge","value":1,"error":0,"unit":""}]
}

// Plain numbers will do, here from levels three times finer each.
func ExampleExtrapolate() {
	e := refine.Extrapolate([]float64{1.9, 1.1, 1.0111}, 3, 2)
	fmt.Printf("%.3f ± %.3f, order %.1f\n", e.Value, e.Error, e.Order)

	e = refine.Extrapolate([]float64{1.9, 0.9, 1.3}, 3, 2)
	fmt.Println(e.Value, e.Error, e.Reason)
	// Output:
	// 1.000 ± 0.014, order 2.0
	// 1.3 NaN differences change sign: -1, then 0.4
}
