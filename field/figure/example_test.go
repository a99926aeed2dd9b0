package figure_test

import (
	"bytes"
	"fmt"
	"image/gif"
	"image/png"
	"log"
	"math"
	"time"

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

// A membrane on a square frame relaxes from a bump to rest.
func ExampleAnimation() {
	side := lattice.Axis{From: -1, Step: 0.05, Sites: 41}
	block, err := lattice.NewBlock(side, side)
	if err != nil {
		log.Fatal(err)
	}
	a := figure.Animation{
		Title:      "Relaxation of a membrane",
		XLabel:     "x (m)",
		TLabel:     "y (m)",
		ValueLabel: "height φ (mm)",
		Page:       figure.Page{Width: 140, Height: 120},
	}
	for k := range 20 {
		tau := 0.05 * float64(k)
		lowest := field.Profile(func(x, y float64) (value, rate float64) {
			return math.Exp(-math.Pi*math.Pi/2*tau) * math.Cos(math.Pi/2*x) * math.Cos(math.Pi/2*y), 0
		})
		a.Frames = append(a.Frames, figure.Frame{
			History: lowest.Over(block),
			Caption: fmt.Sprintf("τ = %.2f", tau),
		})
	}
	var file bytes.Buffer
	if err := a.Encode(&file); err != nil { // or a.Save("membrane.gif")
		log.Fatal(err)
	}
	film, err := gif.DecodeAll(&file)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(len(film.Image), "frames of", film.Config.Width, "×", film.Config.Height)
	// Output:
	// 20 frames of 551 × 472
}

// A kink passes through an antikink, every fourth slice a frame.
func ExampleMotion() {
	block, err := lattice.NewBlock(
		lattice.Axis{From: -10, Step: 0.25, Sites: 81},
		lattice.Axis{From: -15, Step: 0.1, Sites: 301},
	)
	if err != nil {
		log.Fatal(err)
	}
	pair, err := field.SineGordonKinkAntikink(field.Collision{Speed: 0.6})
	if err != nil {
		log.Fatal(err)
	}
	m := figure.Motion{
		History:    pair.Over(block),
		Every:      4,
		XLabel:     "x (λ_J)",
		ValueLabel: "φ (rad)",
		TimeUnit:   "1/ω_p",
		Delay:      80 * time.Millisecond,
	}
	var file bytes.Buffer
	if err := m.Encode(&file); err != nil { // or m.Save("pair.gif")
		log.Fatal(err)
	}
	film, err := gif.DecodeAll(&file)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(len(film.Image), "frames, of", 10*film.Delay[0], "ms each")
	// Output:
	// 21 frames, of 80 ms each
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
