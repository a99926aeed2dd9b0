package track_test

import (
	"fmt"
	"log"
	"math"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/track"
	"github.com/tenter-go/tenter/lattice"
)

// A kink and an antikink pass through each other; both come out ahead of where
// free flight would have taken them.
func Example() {
	collision, err := field.SineGordonKinkAntikink(field.Collision{Speed: 0.5})
	if err != nil {
		log.Fatal(err)
	}
	block, err := lattice.NewBlock(
		lattice.Axis{From: -60, Step: 0.5, Sites: 241},
		lattice.Axis{From: -40, Step: 0.1, Sites: 801},
	)
	if err != nil {
		log.Fatal(err)
	}
	kinks := &track.Kinks{Vacua: track.Vacua{Values: []float64{-2 * math.Pi, 0, 2 * math.Pi}}}
	if err := kinks.Follow(collision.Over(block)); err != nil {
		log.Fatal(err)
	}
	kink := kinks.Paths()[0]
	before, err := kink.Speed(-60, -30)
	if err != nil {
		log.Fatal(err)
	}
	after, err := kink.Speed(30, 60)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("%d bounce, speed %.4f, ahead by %.4f\n", kink.Bounces(), after.Speed, after.X(0)-before.X(0))
	// Output: 1 bounce, speed 0.5000, ahead by 1.2006
}
