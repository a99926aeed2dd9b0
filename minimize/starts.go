package minimize

import (
	"fmt"
	"math"
	"math/rand/v2"

	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
)

// Straight returns the history that satisfies the conditions and joins, at every
// site, the values held at different times by straight lines. Before the first
// and after the last of them it is constant; sites at which nothing is held keep
// the values of the start. For the two-time problem it is as good a cold start
// as the first slice repeated is for Cauchy data.
//
// Errors are those of constraint.Set.Free, and a nil set.
func Straight(held *constraint.Set, start *field.History) (*field.History, error) {
	if held == nil {
		return nil, fmt.Errorf("minimize: straight start without conditions; want a set that holds something")
	}
	free, err := held.Free(start)
	if err != nil {
		return nil, fmt.Errorf("minimize: straight start: %w", err)
	}
	h := start.Clone()
	straighten(h, free)
	return h, nil
}

// straighten joins the fixed values of each site and writes the rest to fit.
func straighten(h *field.History, free *constraint.Unknowns) {
	b := h.Block
	size := h.Components * b.Sites()
	for at := range size {
		last := -1 // slice of the fixed value before
		for n := range b.Slices() {
			k, v := free.At(n*size + at)
			if k >= 0 {
				continue
			}
			if last < 0 {
				for m := range n {
					h.Data[m*size+at] = v
				}
			} else {
				from := h.Data[last*size+at]
				for m := last + 1; m < n; m++ {
					h.Data[m*size+at] = from + (v-from)*float64(m-last)/float64(n-last)
				}
			}
			h.Data[n*size+at] = v
			last = n
		}
		if last >= 0 {
			for m := last + 1; m < b.Slices(); m++ {
				h.Data[m*size+at] = h.Data[last*size+at]
			}
		}
	}
	free.Scatter(h, free.Gather(nil, h))
}

// Vary returns a copy of a history with a smooth pattern added to it, a
// different one for each number and the same one for the same number: a sum of
// standing waves sin aπτ · sin bπξ, with a and b up to 4, τ and ξ going from 0 to
// 1 along the axes, and normally distributed amplitudes that make its root mean
// square about the given one. Pattern 0 is nothing. A problem with several
// solutions, such as the two-time one, shows them to solves that start from
// several variations.
func Vary(h *field.History, number int, rms float64) *field.History {
	h = h.Clone()
	if number == 0 {
		return h
	}
	const waves = 4
	random := rand.New(rand.NewPCG(uint64(number), 0))
	clock, line := h.Block.Time, h.Block.Space
	for c := range h.Components {
		var amplitude [waves][waves]float64
		for a := range waves {
			for b := range waves {
				amplitude[a][b] = 2 * rms / waves * random.NormFloat64()
			}
		}
		for n := range clock.Sites {
			row := h.Slice(n).Component(c)
			for a := range waves {
				swing := math.Sin(float64(a+1) * math.Pi * float64(n) / float64(clock.Links()))
				for b := range waves {
					for i := range row {
						row[i] += amplitude[a][b] * swing * math.Sin(float64(b+1)*math.Pi*float64(i)/float64(line.Links()))
					}
				}
			}
		}
	}
	return h
}
