package minimize

import (
	"cmp"
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

// nearest returns the eigenpairs nearest to zero that so many steps of the
// Lanczos method for A⁻¹ find, with full reorthogonalisation, by growing
// |eigenvalue|: at most most of them, only the first of which is returned
// whatever its accuracy, the others to 1 %. Of equal eigenvalues it sees one.
// [Ericsson & Ruhe 1980, Math. Comp. 35, 1251]
func (b *bordered) nearest(steps, most int) []eigenpair {
	n := len(b.root)
	v := scattered(n, 1)
	b.project(v)
	floats.Scale(1/floats.Norm(v, 2), v)
	basis := [][]float64{v}
	var diagonal, beside []float64
	for {
		k := len(basis) - 1
		w := make([]float64, n)
		b.solve(w, basis[k])
		before := floats.Norm(w, 2)
		diagonal = append(diagonal, floats.Dot(w, basis[k]))
		for range 2 { // once leaves errors of the size of rounding times |A⁻¹|
			for _, u := range basis {
				floats.AddScaled(w, -floats.Dot(w, u), u)
			}
		}
		length := floats.Norm(w, 2)
		beside = append(beside, length)
		if len(basis) == min(steps, n) || length <= 1e-13*before { // the space is invariant
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
	theta := eig.Values(nil)
	var weights mat.Dense
	eig.VectorsTo(&weights)
	order := make([]int, m)
	for i := range order {
		order[i] = i
	}
	slices.SortFunc(order, func(i, j int) int { return cmp.Compare(math.Abs(theta[j]), math.Abs(theta[i])) })
	var pairs []eigenpair
	for rank, i := range order {
		if len(pairs) == most {
			break
		}
		if off := beside[m-1] * math.Abs(weights.At(m-1, i)); rank > 0 && off > 0.01*math.Abs(theta[i]) {
			continue
		}
		x := make([]float64, n)
		for k, u := range basis {
			floats.AddScaled(x, weights.At(k, i), u)
		}
		floats.Scale(1/floats.Norm(x, 2), x)
		b.mul(v, x)
		pairs = append(pairs, eigenpair{floats.Dot(v, x), x})
	}
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
