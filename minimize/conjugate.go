package minimize

import (
	"context"
	"math"

	"github.com/tenter-go/tenter/field"
)

// conjugate takes Newton steps whose linear systems are solved by conjugate
// gradients, for as long as they halve the gradient, and judges the outcome.
// [Hestenes & Stiefel 1952, J. Res. NBS 49, 409]
func (m *minimum) conjugate(ctx context.Context) (*Found, error) {
	c := &conjugate{m: m, in: m.h.Clone(), out: m.h.Clone()}
	const most = 20
	curved := true
	for range most {
		if ctx.Err() != nil || m.rep.After.Max == 0 {
			break
		}
		var delta []float64
		if delta, curved = c.solve(ctx); !curved {
			break
		}
		value, after := m.evaluate(delta)
		before := m.rep.After.Max
		if !(after < before) {
			break
		}
		m.rep.Corrections++
		m.accept(value)
		m.measure()
		if after > 0.5*before {
			break
		}
	}
	switch {
	case m.rep.After.Max <= m.rep.Tolerance && curved:
		return m.finish(Converged, "gradient within the tolerance; the second variation was not factorised", nil)
	case ctx.Err() != nil:
		return m.finish(Stopped, context.Cause(ctx).Error(), context.Cause(ctx))
	case !curved:
		return m.finish(Singular, "second variation has a direction of no positive curvature", nil)
	}
	return m.finish(Stalled, "no step lowers the gradient", nil)
}

// conjugate solves linear systems with the second variation of a minimum.
type conjugate struct {
	m       *minimum
	in, out *field.History
}

// solve returns an approximate solution of S″δ = −g, to a thousandth of g. It
// returns false if it meets a direction of no positive curvature.
func (c *conjugate) solve(ctx context.Context) (delta []float64, ok bool) {
	m := c.m
	n := m.free.N
	delta = make([]float64, n)
	rest, along, image := make([]float64, n), make([]float64, n), make([]float64, n)
	var square float64
	for u, g := range m.grad {
		rest[u], along[u] = -g, -g
		square += g * g
	}
	target := 1e-6 * square
	for range 20 * (int(math.Sqrt(float64(n))) + 10) {
		if square <= target || ctx.Err() != nil {
			break
		}
		m.free.Expand(c.in, along)
		m.second.MulVec(c.out.Data, c.in.Data)
		m.free.Reduce(image, c.out)
		var curvature float64
		for u, a := range along {
			curvature += a * image[u]
		}
		if !(curvature > 0) {
			return delta, false
		}
		step := square / curvature
		var next float64
		for u, a := range along {
			delta[u] += step * a
			rest[u] -= step * image[u]
			next += rest[u] * rest[u]
		}
		for u, r := range rest {
			along[u] = r + next/square*along[u]
		}
		square = next
	}
	return delta, true
}
