package kernel

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// A cloth is a field with the ends that row has to deal with: free ends by
// images, or a ring by the far side.
type cloth struct {
	line     Line
	periodic bool
	slices   [2][]float64 // slice n stands in slices[n mod 2]
	steps    int          // made before
}

func newCloth(line Line, n int, periodic bool) *cloth {
	r := rand.New(rand.NewPCG(9, uint64(n)))
	c := &cloth{line: line, periodic: periodic}
	for k := range c.slices {
		c.slices[k] = random(r, n, 0, 1)
	}
	return c
}

// row advances the sites lo … hi−1 from slice step to step+1.
func (c *cloth) row(step, lo, hi int) {
	now, next := c.slices[(c.steps+step)%2], c.slices[(c.steps+step+1)%2]
	r, n := c.line.Radius, len(now)
	left, right := max(lo, min(r, hi)), min(hi, max(n-r, lo))
	if left >= right { // all of it near an end
		c.edge(next, now, lo, hi)
		return
	}
	if lo < left {
		c.edge(next, now, lo, left)
	}
	c.line.Leapfrog(next[left:right], now[left-r:right+r], next[left:right])
	if right < hi {
		c.edge(next, now, right, hi)
	}
}

// edge advances sites whose neighbours may lie beyond an end.
func (c *cloth) edge(next, now []float64, lo, hi int) {
	r := c.line.Radius
	var window [7]float64
	for i := lo; i < hi; i++ {
		for d := -r; d <= r; d++ {
			window[d+r] = now[c.neighbour(i+d)]
		}
		c.line.Leapfrog(next[i:i+1], window[:2*r+1], next[i:i+1])
	}
}

func (c *cloth) neighbour(i int) int {
	n := len(c.slices[0])
	switch {
	case c.periodic:
		return (i + n) % n
	case i < 0:
		return -i
	case i >= n:
		return 2*(n-1) - i
	}
	return i
}

func TestTilesGiveTheBitsOfAPlainLoop(t *testing.T) {
	const steps = 45
	for _, potential := range []Potential{Phi4(), Sine()} {
		for _, line := range lines(potential)[1:] {
			for _, periodic := range []bool{false, true} {
				for _, n := range []int{13, 64, 1000, 5001} {
					want := newCloth(line, n, periodic)
					for s := range steps {
						want.row(s, 0, n)
					}
					for _, shape := range []struct{ width, depth, workers int }{
						{0, 0, 0}, {16, 3, 1}, {17, 100, 2}, {64, 8, 3}, {100, 7, 4}, {333, 16, 5}, {256, 32, 6}, {50, 1, 7}, {1000, 44, 8},
					} {
						got := newCloth(line, n, periodic)
						tiles := Tiles{
							Sites: n, Radius: line.Radius, Periodic: periodic,
							Width: shape.width, Depth: shape.depth, Workers: shape.workers,
						}
						tiles.Advance(20, got.row)
						got.steps += 20
						tiles.Advance(steps-20, got.row)
						name := fmt.Sprintf("radius %d, %d sites, periodic %t, %+v", line.Radius, n, periodic, shape)
						for k := range want.slices {
							for i, w := range want.slices[k] {
								if g := got.slices[k][i]; math.Float64bits(g) != math.Float64bits(w) {
									t.Fatalf("%s: site %d is %x, want %x", name, i, g, w)
								}
							}
						}
					}
				}
			}
		}
	}
}

// TestTilesOrder checks the promise of Advance itself: every step of every site
// is made once, after what it reads and before what it overwrites.
func TestTilesOrder(t *testing.T) {
	for _, periodic := range []bool{false, true} {
		for n := 7; n < 120; n += 3 {
			for radius := 1; radius <= 3; radius++ {
				at := make([]int, n) // slice that a site has reached
				tiles := Tiles{Sites: n, Radius: radius, Periodic: periodic, Width: 5 + n/3, Depth: 9}
				const steps = 23
				tiles.Advance(steps, func(step, lo, hi int) {
					if lo < 0 || hi > n || lo >= hi {
						t.Fatalf("row of sites %d … %d of %d", lo, hi-1, n)
					}
					for i := lo; i < hi; i++ {
						if at[i] != step {
							t.Fatalf("n = %d: step %d at site %d, which is at slice %d", n, step, i, at[i])
						}
						for j := i - radius; j <= i+radius; j++ {
							k := j
							if periodic {
								k = (j + n) % n
							}
							if k < 0 || k >= n {
								continue
							}
							// Slices step+1 stand where step−1 stood: step is still there.
							if !(k >= lo && k < hi) && at[k] != step && at[k] != step+1 {
								t.Fatalf("n = %d: step %d at site %d reads site %d, which is at slice %d", n, step, i, k, at[k])
							}
						}
					}
					for i := lo; i < hi; i++ {
						at[i]++
					}
				})
				for i, s := range at {
					if s != steps {
						t.Fatalf("n = %d: site %d made %d steps, want %d", n, i, s, steps)
					}
				}
			}
		}
	}
}
