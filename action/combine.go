package action

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
)

// Each puts a potential of one component on each of N components, which it does
// not couple.
type Each struct {
	Potential Potential
	N         int
}

// Bilinear is the coupling V = ½Σ M[a][b]φ_aφ_b of a symmetric matrix M.
type Bilinear [][]float64

// Sum adds potentials of equally many components. A sum of one component
// declares no vacua.
type Sum []Potential

// Components returns N.
func (e Each) Components() int { return e.N }

// Value implements Potential.
func (e Each) Value(dst []float64, phi field.Slice, at Sites) {
	clear(dst)
	part := make([]float64, phi.Sites)
	for c := range e.N {
		e.Potential.Value(part, field.SliceOf(phi.Component(c)), at)
		for i, v := range part {
			dst[i] += v
		}
	}
}

// Slope implements Potential.
func (e Each) Slope(dst, phi field.Slice, at Sites) {
	for c := range e.N {
		e.Potential.Slope(field.SliceOf(dst.Component(c)), field.SliceOf(phi.Component(c)), at)
	}
}

// Curvature implements Potential.
func (e Each) Curvature(dst, phi field.Slice, at Sites) {
	dst.Zero()
	for c := range e.N {
		e.Potential.Curvature(field.SliceOf(dst.Component(c*e.N+c)), field.SliceOf(phi.Component(c)), at)
	}
}

// VacuumSpacing returns what the potential of each component declares.
func (e Each) VacuumSpacing() float64 { return vacuumSpacing(e.Potential) }

// Components returns the number of rows.
func (m Bilinear) Components() int { return len(m) }

// Value implements Potential.
func (m Bilinear) Value(dst []float64, phi field.Slice, _ Sites) {
	clear(dst)
	for a, row := range m {
		pa := phi.Component(a)
		for b, v := range row {
			pb := phi.Component(b)
			for i := range dst {
				dst[i] += 0.5 * v * pa[i] * pb[i]
			}
		}
	}
}

// Slope implements Potential.
func (m Bilinear) Slope(dst, phi field.Slice, _ Sites) {
	dst.Zero()
	for a, row := range m {
		d := dst.Component(a)
		for b, v := range row {
			for i, p := range phi.Component(b) {
				d[i] += v * p
			}
		}
	}
}

// Curvature implements Potential.
func (m Bilinear) Curvature(dst, _ field.Slice, _ Sites) {
	for a, row := range m {
		for b, v := range row {
			Uniform(v).sample(dst.Component(a*len(m)+b), 0, nil, 0, 0)
		}
	}
}

// Components returns the number of components of the first term.
func (s Sum) Components() int {
	if len(s) == 0 {
		return 0
	}
	return s[0].Components()
}

// Value implements Potential.
func (s Sum) Value(dst []float64, phi field.Slice, at Sites) {
	clear(dst)
	part := make([]float64, len(dst))
	for _, p := range s {
		p.Value(part, phi, at)
		for i, v := range part {
			dst[i] += v
		}
	}
}

// Slope implements Potential.
func (s Sum) Slope(dst, phi field.Slice, at Sites) {
	dst.Zero()
	part := field.NewSlice(dst.Components, dst.Sites)
	for _, p := range s {
		p.Slope(part, phi, at)
		dst.Axpy(1, part)
	}
}

// Curvature implements Potential.
func (s Sum) Curvature(dst, phi field.Slice, at Sites) {
	dst.Zero()
	part := field.NewSlice(dst.Components, dst.Sites)
	for _, p := range s {
		p.Curvature(part, phi, at)
		dst.Axpy(1, part)
	}
}

// checkPotential returns an error if a combination does not fit together.
func checkPotential(p Potential) error {
	switch v := p.(type) {
	case nil:
		return fmt.Errorf("action: potential is nil; want a Potential")
	case Each:
		if v.N < 1 {
			return fmt.Errorf("action: Each on %d components; want at least 1", v.N)
		}
		if err := checkPotential(v.Potential); err != nil {
			return err
		}
		if n := v.Potential.Components(); n != 1 {
			return fmt.Errorf("action: Each of a potential of %d components; want one of 1", n)
		}
	case Sum:
		if len(v) == 0 {
			return fmt.Errorf("action: sum of no potentials; want at least 1")
		}
		for k, q := range v {
			if err := checkPotential(q); err != nil {
				return err
			}
			if q.Components() != v.Components() {
				return fmt.Errorf("action: term %d of a sum has %d components, term 0 has %d; want equally many", k, q.Components(), v.Components())
			}
		}
	case Bilinear:
		for a, row := range v {
			if len(row) != len(v) {
				return fmt.Errorf("action: row %d of a bilinear coupling has %d numbers; want %d", a, len(row), len(v))
			}
			for b := range row {
				if v[a][b] != v[b][a] {
					return fmt.Errorf("action: bilinear coupling has M[%d][%d] = %v and M[%d][%d] = %v; want a symmetric matrix", a, b, v[a][b], b, a, v[b][a])
				}
			}
		}
	case Scalar:
		if v.V == nil || v.D1 == nil || v.D2 == nil {
			return fmt.Errorf("action: Scalar with a nil function; want V, V′ and V″ (or use Auto)")
		}
	case Auto:
		if v == nil {
			return fmt.Errorf("action: nil Auto; want a function")
		}
	case Polynomial:
		if len(v) == 0 {
			return fmt.Errorf("action: polynomial of no coefficients; want at least c[0]")
		}
	}
	if n := p.Components(); n < 1 {
		return fmt.Errorf("action: potential of %d components; want at least 1", n)
	}
	return nil
}
