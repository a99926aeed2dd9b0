package action

import (
	"sync"

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

// Sum adds potentials of equally many components. It declares no distance of
// vacua.
type Sum []Potential

// Components returns N.
func (e Each) Components() int { return e.N }

// Value implements Potential.
func (e Each) Value(dst []float64, phi field.Slice, at Sites) {
	clear(dst)
	term := borrow(1, phi.Sites)
	defer term.giveBack()
	part := term.Component(0)
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
	term := borrow(1, len(dst))
	defer term.giveBack()
	part := term.Component(0)
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
	term := borrow(dst.Components, dst.Sites)
	defer term.giveBack()
	for _, p := range s {
		p.Slope(term.Slice, phi, at)
		dst.Axpy(1, term.Slice)
	}
}

// Curvature implements Potential.
func (s Sum) Curvature(dst, phi field.Slice, at Sites) {
	dst.Zero()
	term := borrow(dst.Components, dst.Sites)
	defer term.giveBack()
	for _, p := range s {
		p.Curvature(term.Slice, phi, at)
		dst.Axpy(1, term.Slice)
	}
}

// A loan is working memory for one term of a sum, borrowed so that a march
// allocates nothing.
type loan struct{ field.Slice }

var loans = sync.Pool{New: func() any { return new(loan) }}

func borrow(components, sites int) *loan {
	l := loans.Get().(*loan)
	if n := components * sites; cap(l.Data) < n {
		l.Data = make([]float64, n)
	}
	l.Data = l.Data[:components*sites]
	l.Components, l.Sites, l.Stride = components, sites, sites
	return l
}

func (l *loan) giveBack() { loans.Put(l) }
