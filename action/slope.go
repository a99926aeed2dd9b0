package action

import "github.com/tenter-go/tenter/lattice"

// slope writes φ_x to dst by the central difference of the links' order, with
// the mirror images or the wrapped field beyond the ends. stretch is φ_x
// prescribed at a free left and right end.
func (e *elastic) slope(dst, phi []float64, jump float64, stretch [2]float64) {
	h := e.line.Step
	for i := range dst {
		var s float64
		for k, w := range e.w {
			d := k + 1
			// The weights of the central first difference are b_d·d/2h.
			s += w * h * float64(d) / 2 * (e.beyond(phi, i+d, jump, stretch) - e.beyond(phi, i-d, jump, stretch))
		}
		dst[i] = s
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
		return image(phi[0], phi[-i], e.line.Left) + 2*float64(i)*e.line.Step*stretch[0]
	}
	m := i - (n - 1)
	return image(phi[n-1], phi[n-1-m], e.line.Right) + 2*float64(m)*e.line.Step*stretch[1]
}

func image(end, inside float64, kind lattice.End) float64 {
	if kind.Unknown() {
		return inside
	}
	return 2*end - inside
}
