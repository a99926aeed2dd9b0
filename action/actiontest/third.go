package actiontest

import (
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// thirds holds CurvatureAlong, if the potential has it, against differences of
// Curvature along a random direction.
func (c *sample) thirds(f *findings, s Settings) {
	p, ok := c.p.(interface {
		CurvatureAlong(dst, phi, direction field.Slice, at action.Sites)
	})
	if !ok {
		return
	}
	n, sites := c.phi.Components, c.phi.Sites
	direction := field.NewSlice(n, sites)
	unit(s.random(), direction.Data)
	given := field.NewSlice(n*n, sites)
	for i := range given.Data {
		given.Data[i] = math.NaN()
	}
	p.CurvatureAlong(given, c.phi, direction, c.at)
	q := slopeOf(n*n*sites, s.Step, func(dst []float64, eps float64) {
		phi := c.phi.Clone()
		phi.Axpy(eps, direction)
		c.p.Curvature(field.Slice{Data: dst, Components: n * n, Sites: sites, Stride: sites}, phi, c.at)
	})
	j := newJudge(s, q, given.Data)
	for k, v := range given.Data {
		if size, text := j.verdict(k, v); size > 0 {
			name := curvatureName(n, k/sites/n, k/sites%n)
			f.add("third "+name, size, "CurvatureAlong, derivative of %s at %s %s of Curvature; a type that embeds another inherits its method", name, c.place(k%sites), text)
		}
	}
}
