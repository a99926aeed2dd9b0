package action

import (
	"math"

	"github.com/tenter-go/tenter/field"
	"gonum.org/v1/gonum/num/hyperdual"
)

// Sites says where the values handed to a Potential stand: the time, and the
// position of each site.
type Sites struct {
	T float64
	X []float64
}

// A Potential is the term V(φ; x, t) of a density, evaluated on many sites at
// once. The catalogue types of this package are Potentials, and any type with
// these methods is one. Methods must not keep or change their arguments other
// than dst, must overwrite dst, and may be called from several goroutines.
//
// φ has Components() components. Use [Scalar] or [Auto] to make a Potential
// from a function of one number.
type Potential interface {
	// Components returns the number of components that V depends on.
	Components() int

	// Value writes V at site i to dst[i].
	Value(dst []float64, phi field.Slice, at Sites)

	// Slope writes ∂V/∂φ_a at site i to component a of dst.
	Slope(dst, phi field.Slice, at Sites)

	// Curvature writes ∂²V/∂φ_a∂φ_b at site i to component a·Components() + b
	// of dst.
	Curvature(dst, phi field.Slice, at Sites)
}

// Scalar makes a Potential of one component from V and its first two
// derivatives, given as functions of φ. Package actiontest checks them against
// each other.
type Scalar struct {
	V, D1, D2 func(phi float64) float64
}

// Components returns 1.
func (s Scalar) Components() int { return 1 }

// Value implements Potential.
func (s Scalar) Value(dst []float64, phi field.Slice, _ Sites) { apply(dst, phi, s.V) }

// Slope implements Potential.
func (s Scalar) Slope(dst, phi field.Slice, _ Sites) { apply(dst.Component(0), phi, s.D1) }

// Curvature implements Potential.
func (s Scalar) Curvature(dst, phi field.Slice, _ Sites) {
	apply(dst.Component(0), phi, s.D2)
}

func apply(dst []float64, phi field.Slice, f func(float64) float64) {
	for i, p := range phi.Component(0) {
		dst[i] = f(p)
	}
}

// Auto makes a Potential of one component from V alone, written with gonum's
// hyperdual numbers; V′ and V″ are exact to rounding.
//
//	action.Auto(func(p hyperdual.Number) hyperdual.Number {
//		return hyperdual.Cosh(p)
//	})
type Auto func(phi hyperdual.Number) hyperdual.Number

// Components returns 1.
func (f Auto) Components() int { return 1 }

// Value implements Potential.
func (f Auto) Value(dst []float64, phi field.Slice, _ Sites) {
	apply(dst, phi, func(p float64) float64 { return f(hyperdual.Number{Real: p}).Real })
}

// Slope implements Potential.
func (f Auto) Slope(dst, phi field.Slice, _ Sites) {
	apply(dst.Component(0), phi, func(p float64) float64 {
		return f(hyperdual.Number{Real: p, E1mag: 1}).E1mag
	})
}

// Curvature implements Potential.
func (f Auto) Curvature(dst, phi field.Slice, _ Sites) {
	apply(dst.Component(0), phi, func(p float64) float64 {
		return f(hyperdual.Number{Real: p, E1mag: 1, E2mag: 1}).E1E2mag
	})
}

// vacuumSpacing returns the distance between neighbouring vacua that a
// potential declares, or NaN.
func vacuumSpacing(p Potential) float64 {
	if v, ok := p.(interface{ VacuumSpacing() float64 }); ok {
		return v.VacuumSpacing()
	}
	return math.NaN()
}
