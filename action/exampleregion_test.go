package action_test

import (
	"fmt"
	"log"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"gonum.org/v1/gonum/num/hyperdual"
)

// A density is written once; waves of any shape that run to one side solve the
// Born–Infeld equation.
func ExampleNewCells() {
	block := lattice.Block{
		Time:  lattice.Axis{Step: 0.01, Sites: 21},
		Space: lattice.Axis{From: -3, Step: 0.02, Sites: 301},
	}
	whole, err := lattice.NewRegion(block, nil)
	if err != nil {
		log.Fatal(err)
	}
	one := hyperdual.Number{Real: 1}
	s, err := action.NewCells(whole, action.AutoLagrangian{
		L: func(_, rate, tilt []hyperdual.Number, _ lattice.Event) hyperdual.Number {
			root := hyperdual.Add(hyperdual.Sub(one, hyperdual.Mul(rate[0], rate[0])), hyperdual.Mul(tilt[0], tilt[0]))
			return hyperdual.Sub(one, hyperdual.Sqrt(root)) // 1 − √(1 − φ_t² + φ_x²)
		},
	})
	if err != nil {
		log.Fatal(err)
	}
	h := field.NewHistory(block, 1)
	for n := range block.Slices() {
		for i := range block.Sites() {
			e := block.At(n, i)
			h.Set(n, 0, i, 0.5*math.Exp(-(e.X-e.T)*(e.X-e.T)))
		}
	}
	g := s.Gradient(nil, h)
	var most float64
	for n := 1; n < block.Slices()-1; n++ {
		most = max(most, g.Slice(n).Part(1, block.Sites()-1).MaxAbs()/(0.01*0.02))
	}
	fmt.Println("the equation holds to order h²:", most < 1e-3)
	// Output: the equation holds to order h²: true
}

// The potential energy of a membrane on an L: events count with the share of the
// cells around them.
func ExampleNewShaped() {
	block := lattice.Block{Time: lattice.Axis{Step: 0.1, Sites: 21}, Space: lattice.Axis{Step: 0.1, Sites: 21}}
	l, err := lattice.NewRegion(block, func(centre lattice.Event) bool { return centre.T < 1 || centre.X < 1 })
	if err != nil {
		log.Fatal(err)
	}
	s, err := action.NewShaped(l, action.Wave{Signature: action.Euclidean, Source: action.Uniform(1)})
	if err != nil {
		log.Fatal(err)
	}
	h := field.NewHistory(block, 1)
	for k := range h.Data {
		h.Data[k] = 0.5
	}
	fmt.Printf("S = −∫Jφ = %.3f on the area 3\n", s.Value(h))
	fmt.Println(s.Region().Inside(10, 10), s.Region().Inside(11, 11))
	// Output:
	// S = −∫Jφ = -1.500 on the area 3
	// true false
}

// A field that climbs from the vacuum −1 to the saddle 0 pays at least twice the
// energy difference, 2·¼L. A straight line in time pays more: over 5 time units,
// ½∫(φ_t + V′)²dt = 0.5405.
func ExampleNewNoisyFlow() {
	block := lattice.Block{Time: lattice.Axis{Step: 0.1, Sites: 51}, Space: lattice.Axis{Step: 0.1, Sites: 11}}
	s, err := action.NewNoisyFlow(block, action.GradientFlow{Energy: action.Wave{Potential: action.Phi4{}}})
	if err != nil {
		log.Fatal(err)
	}
	h := field.NewHistory(block, 1)
	for n := range block.Slices() {
		for i := range block.Sites() {
			h.Set(n, 0, i, -1+block.Time.At(n)/5)
		}
	}
	rise := s.Energy(h.Slice(50), 5) - s.Energy(h.Slice(0), 0)
	fmt.Printf("2ΔE = %.3f, S = %.3f\n", 2*rise, s.Value(h))
	// Output: 2ΔE = 0.500, S = 0.540
}
