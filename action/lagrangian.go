package action

import (
	"fmt"

	"github.com/tenter-go/tenter/lattice"
	"gonum.org/v1/gonum/num/hyperdual"
)

// A Lagrangian is a density L(φ, φ_t, φ_x; x, t) of N components, evaluated at
// one place. Its derivatives are numbered like the 3N numbers of a [Jet]: first
// those by φ, then by φ_t, then by φ_x, component by component. Methods must
// overwrite dst, must not keep or change the jet, and may be called from several
// goroutines.
//
// [AutoLagrangian] makes one from L alone. The derivatives of a type of one's own
// are checked by package actiontest.
type Lagrangian interface {
	// Components returns the number N of components.
	Components() int

	// Value returns L.
	Value(j Jet) float64

	// Slope writes the 3N first derivatives of L to dst.
	Slope(dst []float64, j Jet)

	// Curvature writes the second derivatives to dst, a symmetric matrix of
	// 3N × 3N, row-major.
	Curvature(dst []float64, j Jet)
}

// A Jet is a field at one event: the components of φ, φ_t and φ_x there.
type Jet struct {
	At              lattice.Event
	Phi, Rate, Tilt []float64 // φ, φ_t and φ_x, a number a component
}

// newJet returns a jet on the 3N numbers of q.
func newJet(q []float64) Jet {
	n := len(q) / 3
	return Jet{Phi: q[:n:n], Rate: q[n : 2*n : 2*n], Tilt: q[2*n:]}
}

// AutoLagrangian is a Lagrangian written once, with gonum's hyperdual numbers;
// its derivatives are exact to rounding.
//
//	stringLike := action.AutoLagrangian{L: func(_, rate, tilt []hyperdual.Number, _ lattice.Event) hyperdual.Number {
//		… // 1 − √(1 − φ_t² + φ_x²)
//	}}
//
// L must be smooth where it is evaluated. It costs one call for a value, 3N for
// a slope and 3N(3N + 1)/2 for a curvature, at every corner of every cell.
type AutoLagrangian struct {
	N int // number of components; 0 means 1

	// L is the density at φ, φ_t and φ_x, a number a component.
	L func(phi, rate, tilt []hyperdual.Number, at lattice.Event) hyperdual.Number
}

// Components returns N, or 1 if it is zero.
func (a AutoLagrangian) Components() int {
	if a.N == 0 {
		return 1
	}
	return a.N
}

// numbers returns the jet as hyperdual numbers.
func (a AutoLagrangian) numbers(j Jet) []hyperdual.Number {
	q := make([]hyperdual.Number, 0, 3*len(j.Phi))
	for _, part := range [...][]float64{j.Phi, j.Rate, j.Tilt} {
		for _, v := range part {
			q = append(q, hyperdual.Number{Real: v})
		}
	}
	return q
}

func (a AutoLagrangian) at(q []hyperdual.Number, e lattice.Event) hyperdual.Number {
	n := len(q) / 3
	return a.L(q[:n:n], q[n:2*n:2*n], q[2*n:], e)
}

// Value implements Lagrangian.
func (a AutoLagrangian) Value(j Jet) float64 { return a.at(a.numbers(j), j.At).Real }

// Slope implements Lagrangian.
func (a AutoLagrangian) Slope(dst []float64, j Jet) {
	q := a.numbers(j)
	for k := range q {
		q[k].E1mag = 1
		dst[k] = a.at(q, j.At).E1mag
		q[k].E1mag = 0
	}
}

// Curvature implements Lagrangian.
func (a AutoLagrangian) Curvature(dst []float64, j Jet) {
	q := a.numbers(j)
	n := len(q)
	for k := range q {
		q[k].E1mag = 1
		for l := k; l < n; l++ {
			q[l].E2mag = 1
			dst[k*n+l] = a.at(q, j.At).E1E2mag
			dst[l*n+k] = dst[k*n+l]
			q[l].E2mag = 0
		}
		q[k].E1mag = 0
	}
}

// checkLagrangian returns an error if l cannot be evaluated at all.
func checkLagrangian(l Lagrangian) error {
	switch v := l.(type) {
	case nil:
		return fmt.Errorf("action: Lagrangian is nil; want a Lagrangian such as AutoLagrangian")
	case AutoLagrangian:
		if v.L == nil {
			return fmt.Errorf("action: AutoLagrangian with a nil function; want L")
		}
	}
	if n := l.Components(); n < 1 {
		return fmt.Errorf("action: Lagrangian of %d components; want at least 1", n)
	}
	return nil
}
