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

// A density is put on a block; the discrete action, its gradient and the energy
// come from the result. The kink has the energy 8.
func Example() {
	clock := lattice.Axis{Step: 0.05, Sites: 41}
	line := lattice.Axis{From: -20, Step: 0.1, Sites: 401}
	block, err := lattice.NewBlock(clock, line)
	if err != nil {
		log.Fatal(err)
	}
	s, err := action.New(block, action.Wave{Potential: action.SineGordon{}, Links: action.Sixth})
	if err != nil {
		log.Fatal(err)
	}
	kink, err := field.SineGordonKink(field.Moving{})
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("energy %.6f\n", s.Energy(kink.On(line, 0), 0).Total())

	history := kink.Over(block)
	fmt.Printf("action over 2 time units %.5f\n", s.Value(history))
	fmt.Println("residual of order h⁶:", s.Residual(nil, history).MaxAbs() < 1e-6)
	// Output:
	// energy 8.000000
	// action over 2 time units -16.00000
	// residual of order h⁶: true
}

// washboard is the tilted potential V = (1 − cos φ) − γφ of a biased junction.
type washboard struct{ gamma float64 }

func (washboard) Components() int { return 1 }

func (w washboard) Value(dst []float64, phi field.Slice, _ action.Sites) {
	for i, p := range phi.Component(0) {
		dst[i] = 1 - math.Cos(p) - w.gamma*p
	}
}

func (w washboard) Slope(dst, phi field.Slice, _ action.Sites) {
	d := dst.Component(0)
	for i, p := range phi.Component(0) {
		d[i] = math.Sin(p) - w.gamma
	}
}

func (washboard) Curvature(dst, phi field.Slice, _ action.Sites) {
	d := dst.Component(0)
	for i, p := range phi.Component(0) {
		d[i] = math.Cos(p)
	}
}

// Any type with the methods of Potential is one.
func ExamplePotential() {
	block := lattice.Block{
		Time:  lattice.Axis{Step: 0.05, Sites: 3},
		Space: lattice.Axis{Step: 0.1, Sites: 101},
	}
	s, err := action.New(block, action.Wave{Potential: washboard{gamma: 0.6}})
	if err != nil {
		log.Fatal(err)
	}
	flat := field.NewSlice(1, 101)
	for i := range flat.Data {
		flat.Data[i] = math.Asin(0.6)
	}
	// Small oscillations about the minimum have ω² = cos(arcsin γ).
	_, curvature := s.MaxFrequency(flat)
	fmt.Printf("%.3f\n", curvature)
	// Output: 0.800
}

// Auto needs V alone.
func ExampleAuto() {
	v := action.Auto(func(p hyperdual.Number) hyperdual.Number {
		return hyperdual.Cosh(p) // the sinh-Gordon equation, up to a constant
	})
	phi := field.SliceOf([]float64{0, 1})
	slope := field.NewSlice(1, 2)
	v.Slope(slope, phi, action.Sites{X: []float64{0, 0}})
	fmt.Printf("%.6f %.6f\n", slope.At(0, 0), slope.At(0, 1))
	// Output: 0.000000 1.175201
}

// A march makes every next slice from the two before it.
func ExampleMarch() {
	block := lattice.Block{
		Time:  lattice.Axis{Step: 0.08, Sites: 126},
		Space: lattice.Axis{From: -15, Step: 0.1, Sites: 301},
	}
	s, err := action.New(block, action.Wave{Potential: action.SineGordon{}})
	if err != nil {
		log.Fatal(err)
	}
	kink, err := field.SineGordonKink(field.Moving{At: -5, Speed: 0.6})
	if err != nil {
		log.Fatal(err)
	}
	h := field.NewHistory(block, 1)
	start := kink.On(block.Space, 0)
	h.Slice(0).CopyFrom(start.Field)
	m := s.March()
	m.Start(h.Slice(1), start, 0)
	for n := 1; n < block.Slices()-1; n++ {
		m.Step(h.Slice(n+1), h.Slice(n), h.Slice(n-1), n)
	}
	last := block.Slices() - 1
	exact := kink.On(block.Space, block.Time.At(last)).Field
	fmt.Printf("off by %.2f after 10 time units\n", h.Slice(last).MaxDifference(exact))
	fmt.Println("stationary:", s.Residual(nil, h).MaxAbs() < 1e-9)
	// Output:
	// off by 0.01 after 10 time units
	// stationary: true
}

// Losses have no action, and say so.
func ExampleDiscrete_Conservative() {
	block := lattice.Block{Time: lattice.Axis{Step: 0.05, Sites: 3}, Space: lattice.Axis{Step: 0.1, Sites: 101}}
	s, err := action.New(block, action.Wave{
		Potential: action.SineGordon{},
		Source:    action.Uniform(0.3),
		Sigma:     action.Along(func(x float64) float64 { return 1 + 0.1*math.Sin(x) }),
		Alpha:     action.Uniform(0.05),
	})
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(s.Conservative())
	// Output: action: loss α does not come from an action; evolve, or ask for the least residual
}
