package nested

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// Smallest estimates the eigenvalue of least modulus, which is the smallest
// singular value σ = min |Av|/|v| of the symmetric matrix, by that many steps of
// the Lanczos method for A⁻¹ with full reorthogonalisation (ten are enough for
// two digits in most cases; 1 is least). sigma is |Av| for the unit vector v that
// is returned, and hence never below σ but for rounding; at is the index of v's
// entry of largest modulus, which is positive: where the null vector of a nearly
// singular matrix lives. The start is fixed, so a second call gives the same bits.
//
// It keeps one vector a step. [Ericsson & Ruhe 1980, Math. Comp. 35, 1251]
func (f *Factor) Smallest(iterations int) (sigma float64, vector []float64, at int) {
	n := f.s.n
	steps := min(max(iterations, 1), n)
	basis := make([][]float64, 1, steps)
	basis[0] = scattered(n)
	var diagonal, beside []float64
	for {
		k := len(basis) - 1
		w := make([]float64, n)
		f.Solve(w, basis[k])
		before := norm2(w)
		diagonal = append(diagonal, dot(w, basis[k]))
		for range 2 { // once leaves errors of the size of rounding times |A⁻¹|
			for _, v := range basis {
				subtract(w, v, dot(w, v))
			}
		}
		b := norm2(w)
		if len(basis) == steps || b <= 1e-14*before { // the space is invariant
			break
		}
		for i := range w {
			w[i] /= b
		}
		beside = append(beside, b)
		basis = append(basis, w)
	}

	t := mat.NewSymDense(len(basis), nil)
	for i, d := range diagonal {
		t.SetSym(i, i, d)
		if i+1 < len(basis) {
			t.SetSym(i, i+1, beside[i])
		}
	}
	best := 0
	weight := make([]float64, len(basis))
	weight[0] = 1
	var eig mat.EigenSym
	if eig.Factorize(t, true) {
		values := eig.Values(nil)
		for i, v := range values {
			if math.Abs(v) > math.Abs(values[best]) {
				best = i
			}
		}
		var vectors mat.Dense
		eig.VectorsTo(&vectors)
		mat.Col(weight, best, &vectors)
	}
	vector = make([]float64, n)
	for k, v := range basis {
		subtract(vector, v, -weight[k])
	}
	for i, v := range vector {
		if math.Abs(v) > math.Abs(vector[at]) {
			at = i
		}
	}
	scale := math.Copysign(1/norm2(vector), vector[at])
	for i := range vector {
		vector[i] *= scale
	}
	zero := make([]float64, n)
	f.r, f.low = grown(f.r, n), grown(f.low, n)
	f.residual(f.r, vector, zero)
	return norm2(f.r), vector, at
}

// scattered returns a unit vector that is not orthogonal to anything in
// particular: fractional parts of multiples of the golden ratio's square root.
func scattered(n int) []float64 {
	x := make([]float64, n)
	const step = 0.78615137775742328607
	for i := range x {
		_, x[i] = math.Modf(step * float64(i+1))
		x[i] = 2*x[i] - 1 + 0.1
	}
	scale := 1 / norm2(x)
	for i := range x {
		x[i] *= scale
	}
	return x
}

func norm2(x []float64) float64 {
	top := largest(x)
	if top == 0 || math.IsInf(top, 1) {
		return top
	}
	sum := 0.0
	for _, v := range x {
		sum += (v / top) * (v / top)
	}
	return top * math.Sqrt(sum)
}
