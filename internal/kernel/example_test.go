package kernel_test

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/internal/kernel"
)

// A φ⁴ kink at rest on a line with free ends, where the site beyond an end is
// the image of the one inside: after 2 000 steps it has not moved by more than
// the lattice accounts for, h²/24 or so.
func Example() {
	const n, h, k = 401, 0.1, 0.05
	line := kernel.Line{
		Radius: 1, Link: [3]float64{k * k / (h * h)},
		Keep: 1, Pull: k * k, Potential: kernel.Phi4(),
	}
	profile := func(i int) float64 { return math.Tanh((float64(i) - n/2) * h / math.Sqrt2) }
	now, before := make([]float64, n), make([]float64, n)
	for i := range now {
		now[i] = profile(i)
		before[i] = now[i]
	}
	for range 2000 {
		next := before // the slice before is not needed again
		left, right := []float64{now[1], now[0], now[1]}, []float64{now[n-2], now[n-1], now[n-2]}
		line.Leapfrog(next[1:n-1], now, before[1:n-1])
		line.Leapfrog(next[:1], left, before[:1])
		line.Leapfrog(next[n-1:], right, before[n-1:])
		now, before = next, now
	}
	var worst float64
	for i, v := range now {
		worst = max(worst, math.Abs(v-profile(i)))
	}
	fmt.Println(worst < h*h/10)
	// Output: true
}

// The same steps in tiles, for a ring that does not fit the cache. The row
// function is all that knows of the ring.
func ExampleTiles() {
	const n = 20000
	line := kernel.Line{Radius: 1, Link: [3]float64{1}, Keep: 1}
	var slices [2][]float64
	for k := range slices {
		slices[k] = make([]float64, n)
		for i := range n {
			slices[k][i] = math.Exp(-math.Pow(float64(i-19000-k)/20, 2)) // moves by a site a step
		}
	}
	row := func(step, lo, hi int) {
		now, next := slices[(step+1)%2], slices[step%2]
		wrapped := func(i int) {
			window := []float64{now[(i+n-1)%n], now[i], now[(i+1)%n]}
			line.Leapfrog(next[i:i+1], window, next[i:i+1])
		}
		if lo == 0 {
			wrapped(0)
			lo++
		}
		if hi == n {
			wrapped(n - 1)
			hi--
		}
		if lo < hi {
			line.Leapfrog(next[lo:hi], now[lo-1:hi+1], next[lo:hi])
		}
	}
	tiles := kernel.Tiles{Sites: n, Radius: 1, Periodic: true, Workers: 2}
	tiles.Advance(3000, row)
	fmt.Printf("%.6f\n", slices[1][(19000+1+3000)%n])
	// Output: 1.000000
}
