package action

import (
	"math"

	"github.com/tenter-go/tenter/field"
)

// A bender is a Potential that has third derivatives too. CurvatureAlong writes
// the derivative of the curvature along a direction d, Σ_c ∂³V/∂φ_a∂φ_b∂φ_c d_c,
// at site i to component a·Components() + b of dst. The catalogue has it, and a
// type of one's own may.
type bender interface {
	CurvatureAlong(dst, phi, direction field.Slice, at Sites)
}

// curvatureAlong writes the derivative of the curvature of p along a direction.
// For a potential without third derivatives it takes differences of the fourth
// order of V″, with steps of up to 2·reach in φ.
func curvatureAlong(dst field.Slice, p Potential, phi, direction field.Slice, at Sites) {
	if b, ok := p.(bender); ok {
		b.CurvatureAlong(dst, phi, direction, at)
		return
	}
	dst.Zero()
	size := direction.MaxAbs()
	if size == 0 {
		return
	}
	// The error is reach⁴/30 of V⁽⁷⁾ and 1.5ε/reach of V″: 3e-14 and 3e-13.
	const reach = 1e-3
	eps := reach / size
	moved, part := borrow(phi.Components, phi.Sites), borrow(dst.Components, dst.Sites)
	defer moved.giveBack()
	defer part.giveBack()
	for _, s := range [...][2]float64{{1, 8}, {-1, -8}, {2, -1}, {-2, 1}} {
		moved.CopyFrom(phi)
		moved.Axpy(s[0]*eps, direction)
		p.Curvature(part.Slice, moved.Slice, at)
		dst.Axpy(s[1]/(12*eps), part.Slice)
	}
}

// bends reports whether p has third derivatives, all of its parts included.
func bends(p Potential) bool {
	switch v := p.(type) {
	case Each:
		return bends(v.Potential)
	case Sum:
		for _, q := range v {
			if !bends(q) {
				return false
			}
		}
		return true
	}
	_, ok := p.(bender)
	return ok
}

// along writes V‴(φ)·d of a potential of one component.
func along(dst, phi, direction field.Slice, third func(phi float64) float64) {
	row, d := dst.Component(0), direction.Component(0)
	for i, p := range phi.Component(0) {
		row[i] = third(p) * d[i]
	}
}

// CurvatureAlong writes the derivative of V″ along a direction, zero here.
func (none) CurvatureAlong(dst, _, _ field.Slice, _ Sites) { dst.Zero() }

// CurvatureAlong writes the derivative of V″ along a direction, zero here.
func (Mass) CurvatureAlong(dst, _, _ field.Slice, _ Sites) { dst.Zero() }

// CurvatureAlong writes the derivative of the curvature along a direction, zero
// here.
func (Bilinear) CurvatureAlong(dst, _, _ field.Slice, _ Sites) { dst.Zero() }

// CurvatureAlong writes the derivative of V″ along a direction, V‴d.
func (c Polynomial) CurvatureAlong(dst, phi, direction field.Slice, _ Sites) {
	along(dst, phi, direction, func(p float64) float64 {
		var v float64
		for k := len(c) - 1; k >= 3; k-- {
			v = v*p + float64(k*(k-1)*(k-2))*c[k]
		}
		return v
	})
}

// CurvatureAlong writes the derivative of V″ along a direction, V‴d.
func (Phi4) CurvatureAlong(dst, phi, direction field.Slice, _ Sites) {
	along(dst, phi, direction, func(p float64) float64 { return 6 * p })
}

// CurvatureAlong writes the derivative of V″ along a direction, V‴d.
func (Phi6) CurvatureAlong(dst, phi, direction field.Slice, _ Sites) {
	along(dst, phi, direction, func(p float64) float64 { return p * (60*p*p - 24) })
}

// CurvatureAlong writes the derivative of V″ along a direction, V‴d.
func (SineGordon) CurvatureAlong(dst, phi, direction field.Slice, _ Sites) {
	along(dst, phi, direction, func(p float64) float64 { return -math.Sin(p) })
}

// CurvatureAlong writes the derivative of V″ along a direction, V‴d.
func (d DoubleSineGordon) CurvatureAlong(dst, phi, direction field.Slice, _ Sites) {
	along(dst, phi, direction, func(p float64) float64 { return -math.Sin(p) - 0.125*d.Eta*math.Sin(0.5*p) })
}

// CurvatureAlong writes the derivative of the curvature along a direction; that
// of a potential that has no such method by differences.
func (e Each) CurvatureAlong(dst, phi, direction field.Slice, at Sites) {
	dst.Zero()
	for c := range e.N {
		curvatureAlong(field.SliceOf(dst.Component(c*e.N+c)), e.Potential, field.SliceOf(phi.Component(c)), field.SliceOf(direction.Component(c)), at)
	}
}

// CurvatureAlong writes the derivative of the curvature along a direction; those
// of terms that have no such method by differences.
func (s Sum) CurvatureAlong(dst, phi, direction field.Slice, at Sites) {
	dst.Zero()
	term := borrow(dst.Components, dst.Sites)
	defer term.giveBack()
	for _, p := range s {
		curvatureAlong(term.Slice, p, phi, direction, at)
		dst.Axpy(1, term.Slice)
	}
}
