package minimize

import (
	"math"
	"math/rand/v2"
	"slices"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"
)

// An eigenpair is an eigenvalue of the second variation per hk on the
// constrained space, and its vector of unit length in the metric.
type eigenpair struct {
	value  float64
	vector []float64
}

// A lanczos is what so many steps of the Lanczos method for A⁻¹ on the
// constrained space have found. It sees the eigenvalues of A nearest to zero on
// either side first, and of equal ones only one. [Ericsson & Ruhe 1980, Math.
// Comp. 35, 1251]
type lanczos struct {
	b       *bordered
	basis   [][]float64
	theta   []float64 // eigenvalues of the tridiagonal matrix, rising: 1/λ
	weights mat.Dense
	off     []float64 // error bounds of theta
}

// nearest runs the method, with full reorthogonalisation.
func (b *bordered) nearest(steps int) *lanczos {
	n := len(b.root)
	steps = min(steps, n-len(b.rows))
	v := scattered(n, 1)
	b.project(v)
	floats.Scale(1/floats.Norm(v, 2), v)
	basis := [][]float64{v}
	var diagonal, beside []float64
	var size float64 // of A⁻¹, as far as it is known
	for {
		k := len(basis) - 1
		w := make([]float64, n)
		b.solve(w, basis[k])
		size = max(size, floats.Norm(w, 2))
		diagonal = append(diagonal, floats.Dot(w, basis[k]))
		for range 2 { // once leaves errors of the size of rounding times |A⁻¹|
			b.project(w)
			for _, u := range basis {
				floats.AddScaled(w, -floats.Dot(w, u), u)
			}
		}
		length := floats.Norm(w, 2)
		beside = append(beside, length)
		if len(basis) >= steps || length <= 1e-13*size { // the space is invariant
			break
		}
		floats.Scale(1/length, w)
		basis = append(basis, w)
	}
	m := len(basis)
	t := mat.NewSymDense(m, nil)
	for i := range m {
		t.SetSym(i, i, diagonal[i])
		if i+1 < m {
			t.SetSym(i, i+1, beside[i])
		}
	}
	var eig mat.EigenSym
	if !eig.Factorize(t, true) {
		panic("minimize: eigenvalues of a tridiagonal matrix did not converge")
	}
	l := &lanczos{b: b, basis: basis, theta: eig.Values(nil), off: make([]float64, m)}
	eig.VectorsTo(&l.weights)
	for i := range m {
		l.off[i] = beside[m-1] * math.Abs(l.weights.At(m-1, i))
	}
	return l
}

// pair returns the i-th eigenpair, its value by Rayleigh's quotient.
func (l *lanczos) pair(i int) eigenpair {
	x, image := make([]float64, len(l.b.root)), make([]float64, len(l.b.root))
	for k, u := range l.basis {
		floats.AddScaled(x, l.weights.At(k, i), u)
	}
	floats.Scale(1/floats.Norm(x, 2), x)
	l.b.mul(image, x)
	return eigenpair{floats.Dot(image, x), x}
}

// smallest returns the pair of least |λ|.
func (l *lanczos) smallest() eigenpair {
	if last := len(l.theta) - 1; math.Abs(l.theta[last]) > math.Abs(l.theta[0]) {
		return l.pair(last)
	}
	return l.pair(0)
}

// positive returns the pair of least positive λ. There must be one.
func (l *lanczos) positive() eigenpair { return l.pair(len(l.theta) - 1) }

// negative returns the pairs of negative λ that are good to 1 %, at most most of
// them, the lowest first.
func (l *lanczos) negative(most int) []eigenpair {
	var pairs []eigenpair
	for i, v := range l.theta {
		if v < 0 && l.off[i] < 0.01*-v && len(pairs) < most {
			pairs = append(pairs, l.pair(i))
		}
	}
	slices.Reverse(pairs)
	return pairs
}

// scattered returns a vector that is not orthogonal to anything in particular,
// the same for the same seed.
func scattered(n int, seed uint64) []float64 {
	r := rand.New(rand.NewPCG(seed, 0))
	x := make([]float64, n)
	for i := range x {
		x[i] = r.Float64() - 0.4
	}
	return x
}
