package lattice_test

import (
	"fmt"
	"log"

	"github.com/tenter-go/tenter/lattice"
)

func Example() {
	clock := lattice.Axis{From: 0, Step: 0.08, Sites: 501}
	line := lattice.Axis{From: -40, Step: 0.1, Sites: 801}
	block, err := lattice.NewBlock(clock, line)
	if err != nil {
		log.Fatal(err)
	}
	n, i, err := block.Index(lattice.Event{T: 12, X: -13.5})
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(n, i)
	fmt.Printf("Courant number %.1f\n", block.Courant(1))

	_, _, err = block.Index(lattice.Event{T: 12.03, X: 0})
	fmt.Println(err)
	// Output:
	// 150 265
	// Courant number 0.8
	// event (x, t) = (0, 12.03): time: lattice: position 12.03 is 0.375 steps from the nearest site, 12; place it on a site or ask for interpolation by name
}

// A ring has as many links as sites, and the field may gain something on the
// way around: 2π for one fluxon.
func ExampleAxis_periodic() {
	ring := lattice.Axis{Step: 0.5, Sites: 16, Periodic: true, Jump: []float64{6.283185307179586}}
	i, err := ring.Index(9)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(ring.Length(), i)
	// Output: 8 2
}

func ExampleAxis_Refine() {
	coarse := lattice.Axis{From: -1, Step: 0.5, Sites: 5, Left: lattice.Held}
	fine := coarse.Refine(2)
	fmt.Println(fine.Sites, fine.Step, fine.Left)
	_, err := fine.Coarsen(3)
	fmt.Println(err)
	// Output:
	// 9 0.25 held
	// lattice: cannot coarsen 8 links by 3; want a divisor
}

func ExampleCone() {
	line := lattice.Axis{From: -5, Step: 0.5, Sites: 21}
	cone, err := lattice.NewCone(line, lattice.Event{T: 1, X: 0}, 2)
	if err != nil {
		log.Fatal(err)
	}
	for _, e := range []lattice.Event{{T: 2, X: 1}, {T: 2, X: 3}, {T: 0, X: -1}} {
		switch cone.Side(e) {
		case lattice.Future:
			fmt.Println(e, "hears of the apex")
		case lattice.Past:
			fmt.Println(e, "can act on the apex")
		case lattice.Outside:
			fmt.Println(e, "neither")
		}
	}
	// Output:
	// (x, t) = (1, 2) hears of the apex
	// (x, t) = (3, 2) neither
	// (x, t) = (-1, 0) can act on the apex
}
