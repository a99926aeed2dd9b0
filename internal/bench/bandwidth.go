package main

import (
	"time"

	"github.com/tenter-go/tenter/internal/kernel"
)

// bandwidth returns what the memory delivers to one core in GB/s, by the triad
// a = b + s·c on arrays beyond the caches, 24 bytes an element: the best of a few.
func bandwidth() float64 {
	const n, rounds = 8_000_000, 5
	a, b, c := make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range a {
		a[i], b[i], c[i] = 0, 1, float64(i) // touch the pages
	}
	var best float64
	for range rounds {
		begun := time.Now()
		kernel.AddScaled(a, b, 3, c)
		best = max(best, 24*n/float64(time.Since(begun).Nanoseconds()))
	}
	return best
}
