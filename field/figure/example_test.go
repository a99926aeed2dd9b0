package figure_test

import (
	"bytes"
	"fmt"
	"image/png"
	"log"
	"math"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/figure"
	"github.com/tenter-go/tenter/lattice"
)

// A pulse that moves to the right, its start pinned, and the light cone of that
// event.
func ExampleMap() {
	clock := lattice.Axis{From: 0, Step: 0.1, Sites: 101}
	line := lattice.Axis{From: -10, Step: 0.1, Sites: 201}
	block, err := lattice.NewBlock(clock, line)
	if err != nil {
		log.Fatal(err)
	}
	pulse := field.Profile(func(x, t float64) (value, rate float64) {
		return math.Exp(-(x - t/2) * (x - t/2)), 0
	})
	start := lattice.Event{T: 0, X: 0}
	cone, err := lattice.NewCone(line, start, 1)
	if err != nil {
		log.Fatal(err)
	}
	x, future, _ := cone.Front(line.Positions(nil))

	m := figure.Map{
		History:    pulse.Over(block),
		Title:      "A pulse at half the speed of light",
		XLabel:     "x (m)",
		TLabel:     "ct (m)",
		ValueLabel: "φ (mV)",
		Pins:       []lattice.Event{start},
		Curves:     []figure.Curve{{X: x, Y: future, Label: "light cone"}},
	}
	var file bytes.Buffer
	if err := m.Encode(&file, "png"); err != nil { // or m.Save("pulse.pdf")
		log.Fatal(err)
	}
	size, err := png.DecodeConfig(&file)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(size.Width, "×", size.Height)
	// Output:
	// 945 × 650
}

func ExampleSeries() {
	var energy figure.Curve
	energy.Label = "total"
	for n := range 200 {
		t := 0.1 * float64(n)
		energy.X = append(energy.X, t)
		energy.Y = append(energy.Y, 8+1e-3*math.Cos(t))
	}
	energy.Y = energy.Y[:199] // one value was lost
	s := figure.Series{Curves: []figure.Curve{energy}, ValueLabel: "energy E"}
	fmt.Println(s.Encode(&bytes.Buffer{}, "png"))
	// Output:
	// figure: series: curve 0 ("total") has 200 values of X and 199 of Y; want equally many
}
