package action

import (
	"math"

	"github.com/tenter-go/tenter/internal/kernel"
	"github.com/tenter-go/tenter/lattice"
)

// slope writes φ_x to dst by the central difference of the links' order, with
// the mirror images or the wrapped field beyond the ends. stretch is φ_x
// prescribed at a free left and right end. part is working memory for a slice.
func (e *elastic) slope(dst, part, phi []float64, jump float64, stretch [2]float64) {
	n, r := len(dst), e.radius
	from := min(r, n)
	to := max(from, n-r)
	clear(dst[from:to])
	for k, w := range e.w {
		d := k + 1
		// The weights of the central first difference are b_d·d/2h.
		weight := w * e.line.Step * float64(d) / 2
		if from < to {
			kernel.AddScaled(part[from:to], phi[from+d:], -1, phi[from-d:])
			kernel.AddScaled(dst[from:to], dst[from:to], weight, part[from:to])
		}
		near := func(i int) {
			if k == 0 {
				dst[i] = 0
			}
			difference := e.beyond(phi, i+d, jump, stretch) - e.beyond(phi, i-d, jump, stretch)
			dst[i] = math.FMA(difference, weight, dst[i])
		}
		for i := range from {
			near(i)
		}
		for i := to; i < n; i++ {
			near(i)
		}
	}
}

// beyond returns the field at site i, which may lie outside of the axis.
func (e *elastic) beyond(phi []float64, i int, jump float64, stretch [2]float64) float64 {
	n := e.line.Sites
	switch {
	case i >= 0 && i < n:
		return phi[i]
	case e.line.Periodic && i < 0:
		return phi[i+n] - jump
	case e.line.Periodic:
		return phi[i-n] + jump
	case i < 0:
		return image(phi[0], phi[-i], e.line.Left) + float64(2*float64(i)*e.line.Step*stretch[0])
	}
	m := i - (n - 1)
	return image(phi[n-1], phi[n-1-m], e.line.Right) + float64(2*float64(m)*e.line.Step*stretch[1])
}

func image(end, inside float64, kind lattice.End) float64 {
	if kind.Unknown() {
		return inside
	}
	return float64(2*end) - inside
}
