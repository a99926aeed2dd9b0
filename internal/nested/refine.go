package nested

import "math"

// maxSteps bounds the steps of Refine; a factor that is of any use gains at
// least a factor of two a step, most gain ten digits.
const maxSteps = 10

// Refine improves a solution x of Ax = b in place by iterative refinement with
// the original values: x += A⁻¹(b − Ax), the residual being summed in twice the
// working precision, so that x becomes accurate to rounding unless A is singular
// to working accuracy. It stops when the correction falls below rounding or no
// longer halves. It returns the backward error that is achieved,
//
//	max|b − Ax| / (‖A‖ max|x| + max|b|),  ‖A‖ = max_i Σ_j |a_ij|
//
// [Skeel 1980, Math. Comp. 35, 817]. It panics like Solve.
func (f *Factor) Refine(x, b []float64) (residual float64) {
	f.check(x)
	f.check(b)
	f.r = grown(f.r, f.s.n)
	f.low = grown(f.low, f.s.n)
	r := f.r
	last := math.Inf(1)
	for range maxSteps {
		f.residual(r, x, b)
		f.Solve(r, r)
		step := largest(r)
		if !(step <= last/2) {
			break
		}
		for i, d := range r {
			x[i] += d
		}
		if step <= 0x1p-53*largest(x) {
			break
		}
		last = step
	}
	f.residual(r, x, b)
	scale := f.norm*largest(x) + largest(b)
	if scale == 0 {
		return 0
	}
	return largest(r) / scale
}

// residual sets r to b − Ax with the products and sums of every row exact to
// about 2⁻¹⁰⁶, rounded once [Ogita, Rump & Oishi 2005, SIAM J. Sci. Comput. 26, 1955].
func (f *Factor) residual(r, x, b []float64) {
	copy(r, b)
	low := f.low
	clear(low)
	s := f.s
	take := func(i int, v, x float64) {
		p := v * x
		t := r[i] - p
		z := t - r[i]
		low[i] += (r[i] - (t - z)) - (p + z) - math.FMA(v, x, -p)
		r[i] = t
	}
	for i := range s.n {
		for e := s.ptr[i]; e < s.ptr[i+1]; e++ {
			j, v := int(s.adj[e]), f.values[e]
			take(i, v, x[j])
			if i != j {
				take(j, v, x[i])
			}
		}
	}
	for i, v := range low {
		r[i] += v
	}
}

func largest(x []float64) float64 {
	top := 0.0
	for _, v := range x {
		top = max(top, math.Abs(v))
	}
	return top
}
