package minimize

import (
	"fmt"
	"math"
	"runtime"

	"github.com/tenter-go/tenter/internal/nested"
	"gonum.org/v1/gonum/mat"
)

// edged solves systems with the matrix
//
//	K = [ A   B ]
//	    [ Cᵀ  D ]
//
// of a sparse symmetric A of order n, which may be indefinite and singular, and
// m dense rows and columns. What is factorised is the symmetric
//
//	M = [ A   C  ]
//	    [ Cᵀ  D₀ ]
//
// with the rows of C scaled to the size of A, so that a null vector of A that C
// is not orthogonal to does no harm: A itself is never divided by. K differs from
// M in its last m columns, which the formula of Woodbury accounts for. Since M is
// congruent to A ⊕ Σ, Σ = D₀ − CᵀA⁻¹C, and Σ⁻¹ is the last block of M⁻¹, the inertia of
// A follows from that of M and that of a matrix of order m. [Hager 1989, SIAM Rev.
// 31, 221; Govaerts 2000, Numerical Methods for Bifurcations of Dynamical
// Equilibria, chapter 3]
type edged struct {
	n, m     int
	symbolic *nested.Symbolic
	factor   *nested.Factor
	values   []float64 // of M, those of A first

	row, column []float64   // scales of the rows Cᵀ and the columns B
	inverse     [][]float64 // last m columns of M⁻¹
	change      [][]float64 // M⁻¹(K − M), its last m columns
	small       *mat.LU     // 1 + the last m rows of change
	corner      *mat.SymDense
	buffer      []float64
}

// newEdged analyses A with m borders. The pattern of A is not changed.
func newEdged(a *nested.Pattern, m int) (*edged, error) {
	p := *a
	p.N += m
	p.Row = append(p.Row[:a.N:a.N], make([]int32, m)...)
	p.Col = append(p.Col[:a.N:a.N], make([]int32, m)...)
	p.Ptr = p.Ptr[: a.N+1 : a.N+1]
	p.Adj = p.Adj[:len(a.Adj):len(a.Adj)]
	for j := range m {
		for u := range a.N + j + 1 {
			p.Adj = append(p.Adj, int32(u))
		}
		p.Ptr = append(p.Ptr, len(p.Adj))
		p.Last = append(p.Last, int32(a.N+j))
	}
	symbolic, err := nested.Analyse(p)
	if err != nil {
		return nil, fmt.Errorf("minimize: %w", err)
	}
	b := &edged{n: a.N, m: m, symbolic: symbolic, values: make([]float64, len(p.Adj))}
	b.row, b.column = make([]float64, m), make([]float64, m)
	b.buffer = make([]float64, p.N)
	for range m {
		b.inverse = append(b.inverse, make([]float64, p.N))
		b.change = append(b.change, make([]float64, p.N))
	}
	return b, nil
}

// A singularMatrix is the error of a bordered matrix that is singular to working
// accuracy.
type singularMatrix struct {
	nullity int
	sigma   float64 // estimate of the smallest singular value of M
	unknown int     // where its null vector is largest; n or above: a border
}

func (e *singularMatrix) Error() string {
	return fmt.Sprintf("matrix is singular: %d pivots vanish, the smallest singular value is %.3g", e.nullity, e.sigma)
}

// Factor prepares solves with K. a holds the values of A; columns B, rows Cᵀ and
// corner D, D[i][j] in row i, are not changed. The error is a *singularMatrix or
// that of values that are not finite.
func (b *edged) Factor(a []float64, columns, rows, corner [][]float64) error {
	var size float64
	for _, v := range a {
		size = max(size, math.Abs(v))
	}
	if size == 0 {
		size = 1
	}
	copy(b.values, a)
	for j := range b.m {
		b.row[j], b.column[j] = scaleTo(size, rows[j]), scaleTo(size, columns[j])
	}
	if err := b.symmetric(len(a), rows, 0); err != nil {
		return err
	}
	if b.m == 0 {
		if null := b.factor.Nullity(); null > 0 {
			return b.singular(null)
		}
		return nil
	}
	// Σ may vanish by accident, which has nothing to do with K.
	const most = 1e6
	accident := b.factor.Nullity() > 0
	for i := range b.m {
		for j := range b.m {
			accident = accident || math.Abs(b.corner.At(i, j))*size > most
		}
	}
	shift := 0.0
	if accident {
		shift = size
		if err := b.symmetric(len(a), rows, shift); err != nil {
			return err
		}
	}
	if null := b.factor.Nullity(); null > 0 {
		return b.singular(null)
	}
	small := mat.NewDense(b.m, b.m, nil)
	for j, z := range b.change {
		for u, v := range columns[j] {
			z[u] = v*b.column[j] - rows[j][u]*b.row[j]
		}
		for i := range b.m {
			z[b.n+i] = corner[i][j] * b.row[i] * b.column[j]
		}
		z[b.n+j] -= shift
		b.factor.Solve(z, z)
		for i := range b.m {
			small.Set(i, j, z[b.n+i])
		}
		small.Set(j, j, 1+small.At(j, j))
	}
	b.small = new(mat.LU)
	b.small.Factorize(small)
	if c := b.small.Cond(); !(c < 1e14) {
		return b.singular(1)
	}
	return nil
}

// scaleTo returns the factor that gives the vector v the length size.
func scaleTo(size float64, v []float64) float64 {
	if s := length(v); s > 0 {
		return size / s
	}
	return 1
}

// length returns the Euclidean length of v.
func length(v []float64) float64 {
	var sum float64
	for _, x := range v {
		sum += x * x
	}
	return math.Sqrt(sum)
}

// symmetric factorises M with D₀ = shift, A having so many values, and finds the
// last columns of its inverse.
func (b *edged) symmetric(inner int, rows [][]float64, shift float64) (err error) {
	at := b.values[inner:]
	for j, c := range rows {
		for u, v := range c {
			at[u] = v * b.row[j]
		}
		clear(at[b.n : b.n+j])
		at[b.n+j] = shift
		at = at[b.n+j+1:]
	}
	if b.factor == nil {
		b.factor, err = b.symbolic.LDLT(b.values, runtime.GOMAXPROCS(0))
	} else {
		err = b.factor.Refactor(b.values)
	}
	if err != nil || b.m == 0 {
		return err
	}
	for j, x := range b.inverse {
		clear(x)
		x[b.n+j] = 1
		b.factor.Solve(x, x)
	}
	b.corner = mat.NewSymDense(b.m, nil)
	for i := range b.m {
		for j := range i + 1 {
			b.corner.SetSym(i, j, 0.5*(b.inverse[j][b.n+i]+b.inverse[i][b.n+j]))
		}
	}
	return nil
}

// symmetricOnly factorises A without borders; a singular A is no error.
func (b *edged) symmetricOnly(a []float64) error {
	copy(b.values, a)
	return b.symmetric(len(a), nil, 0)
}

func (b *edged) singular(null int) error {
	sigma, _, at := b.factor.Smallest(12)
	return &singularMatrix{nullity: null, sigma: sigma, unknown: at}
}

// Solve writes the solution (x, y) for the right-hand side (f, g) to x and y,
// which may be f and g.
func (b *edged) Solve(x, y, f, g []float64) {
	z := b.buffer
	copy(z, f)
	for i, v := range g {
		z[b.n+i] = v * b.row[i]
	}
	b.factor.Solve(z, z)
	if b.m > 0 {
		w := mat.NewVecDense(b.m, append([]float64(nil), z[b.n:]...))
		// The condition has been looked at.
		_ = b.small.SolveVecTo(w, false, w)
		for j, c := range b.change {
			v := w.AtVec(j)
			for u := range z {
				z[u] -= v * c[u]
			}
		}
	}
	copy(x, z[:b.n])
	for j := range y {
		y[j] = z[b.n+j] * b.column[j]
	}
}

// Negative returns the number of negative eigenvalues of A, and false if it is
// not known because A is singular to working accuracy.
func (b *edged) Negative() (n int, known bool) {
	_, n, _, known = b.factor.Inertia()
	if b.m == 0 || !known {
		return n, known
	}
	var eigen mat.EigenSym
	if !eigen.Factorize(b.corner, false) {
		return 0, false
	}
	var most float64
	for _, v := range b.inverse {
		most = max(most, length(v))
	}
	for _, v := range eigen.Values(nil) {
		if math.Abs(v) < 1e-14*most {
			return 0, false
		}
		if v < 0 {
			n--
		}
	}
	return n, true
}

// Sign returns the sign of det K.
func (b *edged) Sign() int {
	_, sign := b.factor.LogDet()
	if b.m > 0 && b.small.Det() < 0 {
		sign = -sign
	}
	return sign
}
