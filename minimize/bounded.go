package minimize

import "github.com/tenter-go/tenter/internal/nested"

// bounds keeps the unknowns between two values by an active set: an unknown
// that stands at a bound and is pushed against it does not move. Steps of the
// others are cut at the bounds, the projected Newton method [Bertsekas 1982,
// SIAM J. Control Optim. 20, 221].
//
// By itself that moves the rim of the active set by about one event a step.
// Sweeps over the model after the cut move it by one event each at a small part
// of the price, so that the number of steps hardly grows with the lattice
// [Gräser & Kornhuber 2009, J. Comput. Math. 27, 1].
type bounds struct {
	low, high []float64
	active    []bool
	count     int
	after     []float64 // see sweep
}

// sweeps follow each step. Ten cost about as much as a factorisation of 10⁴
// unknowns; twenty save few steps more.
const sweeps = 10

// newBounds returns nil for no bounds.
func newBounds(low, high []float64) *bounds {
	if low == nil {
		return nil
	}
	return &bounds{low: low, high: high, active: make([]bool, len(low)), after: make([]float64, len(low))}
}

// choose sets the active set at x for the gradient g, which has the linear
// conditions taken off.
func (b *bounds) choose(x, g []float64) {
	b.count = 0
	for u, v := range x {
		b.active[u] = v <= b.low[u] && g[u] > 0 || v >= b.high[u] && g[u] < 0
		if b.active[u] {
			b.count++
		}
	}
}

// cut shortens the step δ from x so that no unknown passes a bound.
func (b *bounds) cut(delta, x []float64) {
	for u, d := range delta {
		delta[u] = min(max(x[u]+d, b.low[u]), b.high[u]) - x[u]
	}
}

// shorten scales the step δ from x so that no unknown passes a bound; unlike
// cut it keeps the direction, and with it linear conditions.
func (b *bounds) shorten(delta, x []float64) {
	scale := 1.0
	for u, d := range delta {
		switch {
		case x[u]+d > b.high[u]:
			scale = min(scale, (b.high[u]-x[u])/d)
		case x[u]+d < b.low[u]:
			scale = min(scale, (b.low[u]-x[u])/d)
		}
	}
	for u := range delta {
		delta[u] *= scale
	}
	b.cut(delta, x) // for rounding
}

// isolate uncouples the active unknowns in the values of a matrix: their rows
// become those of the identity times their diagonal.
func (b *bounds) isolate(p *nested.Pattern, values []float64) {
	if b.count == 0 {
		return
	}
	for i := range p.N {
		for k := p.Ptr[i]; k < p.Ptr[i+1]; k++ {
			if j := int(p.Adj[k]); j != i && (b.active[i] || b.active[j]) {
				values[k] = 0
			}
		}
	}
}

// sweep improves the step δ from x by one pass of projected Gauss–Seidel over the
// quadratic model gᵀδ + ½δᵀ(H + λ)δ: each unknown in turn goes to its minimum
// between its bounds, so that the model never rises.
func (b *bounds) sweep(h *hessian, lambda float64, g, x, delta []float64) {
	p := h.pattern
	after := b.after // what the unknowns that come later do to each
	clear(after)
	for i := range p.N {
		for k := p.Ptr[i]; k < h.diagonal[i]; k++ {
			after[p.Adj[k]] += h.values[k] * delta[i]
		}
	}
	for i := range p.N {
		slope := g[i] + after[i]
		for k := p.Ptr[i]; k < h.diagonal[i]; k++ {
			slope += h.values[k] * delta[p.Adj[k]]
		}
		if curvature := h.values[h.diagonal[i]] + lambda; curvature > 0 {
			delta[i] = min(max(-slope/curvature, b.low[i]-x[i]), b.high[i]-x[i])
		}
	}
}
