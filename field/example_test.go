package field_test

import (
	"fmt"
	"log"
	"math"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A fluxon at half the speed of light, as Cauchy data on a line.
func ExampleSineGordonKink() {
	line := lattice.Axis{From: -2, Step: 1, Sites: 5}
	kink, err := field.SineGordonKink(field.Moving{Speed: 0.5})
	if err != nil {
		log.Fatal(err)
	}
	start := kink.On(line, 0)
	for i := range line.Sites {
		fmt.Printf("x = %2g: φ = %.4f, φ_t = %.4f\n", line.At(i), start.Field.At(0, i), start.Rate.At(0, i))
	}
	// Output:
	// x = -2: φ = 0.3960, φ_t = -0.2271
	// x = -1: φ = 1.2212, φ_t = -0.6621
	// x =  0: φ = 3.1416, φ_t = -1.1547
	// x =  1: φ = 5.0620, φ_t = -0.6621
	// x =  2: φ = 5.8872, φ_t = -0.2271
}

// A breather swings between 4 atan(√(1 − ω²)/ω) and its negative.
func ExampleSineGordonBreather() {
	breather, err := field.SineGordonBreather(field.Breather{Frequency: 0.6})
	if err != nil {
		log.Fatal(err)
	}
	period := 2 * math.Pi / 0.6
	for _, t := range []float64{0, period / 2} {
		value, _ := breather(0, t)
		fmt.Printf("%.6f\n", value)
	}
	// Output:
	// 3.709181
	// -3.709181
}

// An antikink in the sector (0, −1) is named by the vacua it joins.
func ExamplePhi6Kink() {
	p, err := field.Phi6Kink(0, -1, field.Moving{At: 3})
	if err != nil {
		log.Fatal(err)
	}
	for _, x := range []float64{-20, 3, 20} {
		value, _ := p(x, 0)
		fmt.Printf("%.4f\n", value)
	}
	_, err = field.Phi6Kink(-1, 1, field.Moving{})
	fmt.Println(err)
	// Output:
	// -0.0000
	// -0.7071
	// -1.0000
	// field: φ⁶ kink in the sector (-1, 1); want (0, 1), (1, 0), (-1, 0) or (0, -1)
}

// A φ⁴ kink and antikink that approach each other: the vacuum between them is
// counted twice, so it is taken off once.
func ExampleSuperpose() {
	kink, err := field.Phi4Kink(field.Moving{At: -10, Speed: 0.3})
	if err != nil {
		log.Fatal(err)
	}
	antikink, err := field.Phi4Antikink(field.Moving{At: 10, Speed: -0.3})
	if err != nil {
		log.Fatal(err)
	}
	pair := field.Superpose(-1, kink, antikink)
	for _, x := range []float64{-20, 0, 20} {
		value, _ := pair(x, 0)
		fmt.Printf("%.4f\n", value)
	}
	// Output:
	// -1.0000
	// 1.0000
	// -1.0000
}

// A history carried to a block of twice the resolution, as a guess to start a
// finer solve from.
func ExampleHistory_Resample() {
	block := lattice.Block{
		Time:  lattice.Axis{Step: 0.5, Sites: 5},
		Space: lattice.Axis{From: -1, Step: 0.5, Sites: 5},
	}
	h := field.NewHistory(block, 1)
	for n := range block.Slices() {
		for i := range block.Sites() {
			e := block.At(n, i)
			h.Set(n, 0, i, e.X*e.X*e.T)
		}
	}
	fine, err := h.Resample(block.Refine(2), field.Cubic)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(fine.Block.Slices(), fine.Block.Sites())
	fmt.Printf("%.4f at %v\n", fine.At(3, 0, 1), fine.Block.At(3, 1))
	// Output:
	// 9 9
	// 0.4219 at (x, t) = (-0.75, 0.75)
}

// A view shares the memory of what it was taken from.
func ExampleHistory_Slice() {
	h := field.NewHistory(lattice.Block{
		Time:  lattice.Axis{Step: 1, Sites: 2},
		Space: lattice.Axis{Step: 1, Sites: 3},
	}, 2)
	h.Slice(1).Component(0)[2] = 5
	fmt.Println(h.Data)
	// Output: [0 0 0 0 0 0 0 0 5 0 0 0]
}
