package minimize

import "github.com/tenter-go/tenter/internal/nested"

// bounds keeps the unknowns between two values by an active set: an unknown
// that stands at a bound and is pushed against it does not move. Steps of the
// others are cut at the bounds, the projected Newton method [Bertsekas 1982,
// SIAM J. Control Optim. 20, 221].
type bounds struct {
	low, high []float64
	active    []bool
	count     int
}

// newBounds returns nil for no bounds.
func newBounds(low, high []float64) *bounds {
	if low == nil {
		return nil
	}
	return &bounds{low: low, high: high, active: make([]bool, len(low))}
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
