package actiontest

import "math"

// levels is the number of steps h, h/2, … of a difference quotient.
const levels = 4

// A quotient is a derivative measured by differences, entry by entry.
type quotient struct {
	value    []float64
	spread   []float64 // what the last extrapolation changed
	rounding float64   // what rounding of the function may do
}

// slopeOf measures df/dε at ε = 0 of a function of n values by central
// differences with the steps step, step/2, ….
func slopeOf(n int, step float64, f func(dst []float64, eps float64)) quotient {
	up, down := make([]float64, n), make([]float64, n)
	return extrapolate(n, step, 1, func(dst []float64, eps float64) (largest float64) {
		f(up, eps)
		f(down, -eps)
		for i := range dst {
			dst[i] = (up[i] - down[i]) / (2 * eps)
			largest = max(largest, math.Abs(up[i]), math.Abs(down[i]))
		}
		return largest
	})
}

// crossOf measures ∂²f/∂a∂b at a = b = 0 of a function of n values. With the
// same number moved by a + b it is the second derivative.
func crossOf(n int, step float64, f func(dst []float64, a, b float64)) quotient {
	part := make([]float64, n)
	return extrapolate(n, step, 2, func(dst []float64, eps float64) (largest float64) {
		clear(dst)
		for _, corner := range [4][3]float64{{1, 1, 1}, {1, -1, -1}, {-1, 1, -1}, {-1, -1, 1}} {
			f(part, corner[0]*eps, corner[1]*eps)
			for i, v := range part {
				dst[i] += corner[2] * v
				largest = max(largest, math.Abs(v))
			}
		}
		for i := range dst {
			dst[i] /= 4 * eps * eps
		}
		return largest
	})
}

// extrapolate removes the errors of order ε², ε⁴, … of a quotient of the given
// order. at writes the quotient at ε and returns the largest |f| it has seen.
func extrapolate(n int, step float64, order int, at func(dst []float64, eps float64) float64) quotient {
	var rows [levels][]float64
	var largest float64
	eps := step
	for l := range rows {
		if l > 0 {
			eps /= 2
		}
		rows[l] = make([]float64, n)
		largest = max(largest, at(rows[l], eps))
	}
	q := quotient{spread: make([]float64, n)}
	const ulp = 0x1p-52
	q.rounding = 64 * ulp * largest / math.Pow(eps, float64(order))
	factor := 1.0
	for m := 1; m < levels; m++ {
		factor *= 4
		for l := levels - 1; l >= m; l-- {
			for i := range rows[l] {
				change := (rows[l][i] - rows[l-1][i]) / (factor - 1)
				rows[l][i] += change
				q.spread[i] = math.Abs(change)
			}
		}
	}
	// The last change is that of the last row at the last m.
	q.value = rows[levels-1]
	return q
}
