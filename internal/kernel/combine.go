package kernel

import "math"

// The combinations of arrays.
const (
	opAddScaled = iota // dst = x + a·y
	opDeduct           // dst = x − y·z
)

// AddScaled writes x + a·y to dst, rounded once. dst may be x or y. It panics if
// a slice is shorter than dst.
func AddScaled(dst, x []float64, a float64, y []float64) {
	if len(dst) == 0 {
		return
	}
	combine(opAddScaled, dst, x[:len(dst)], y[:len(dst)], nil, a)
}

// Deduct writes x − y·z to dst, rounded once. dst may be any of them. It panics
// if a slice is shorter than dst.
func Deduct(dst, x, y, z []float64) {
	if len(dst) == 0 {
		return
	}
	combine(opDeduct, dst, x[:len(dst)], y[:len(dst)], z[:len(dst)], 0)
}

// Scale writes a·x[i] to dst[i]. dst may be x.
func Scale(dst []float64, a float64, x []float64) {
	c := [9]float64{0, a}
	apply(opHorner+1, dst, x, &c) // a·x + 0
}

func combinePortable(op int, dst, x, y, z []float64, a float64) {
	if op == opAddScaled {
		for i, v := range x {
			dst[i] = math.FMA(y[i], a, v)
		}
		return
	}
	for i, v := range x {
		dst[i] = math.FMA(-y[i], z[i], v)
	}
}
