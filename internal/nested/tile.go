package nested

import "math"

// The dense work of a front is done by three kernels on slivers. A sliver is 16
// neighbouring columns of a front's pivot rows, stored row after row, so that
// entry (k, j) of the sliver stands at 16k + j and every kernel walks through
// memory in order.
//
//	tile8x16(k, a, b, c, ldc)   c[i·ldc + j] −= Σ_s a[16s + i]·b[16s + j],  i < 8,  j < 16
//	tile1x16(k, a, b, c)        c[j]         −= Σ_s a[16s]·b[16s + j],              j < 16
//	solve16(n, u, inv, x)       row r of x   := (row r − Σ_{s<r} u[16s + r]·row s)·inv[r],  r < n
//
// with s running over 0 … k−1. The sum is formed first, from zero, in the order
// of s, one fused multiply-add a term, and subtracted once: the assembly and the
// twins below therefore give the same bits whatever the width of the registers.
// tile_amd64.go chooses among the versions; the build tag noasm leaves the
// assembly out.

// portableTile8x16 works on 2 × 4 entries at a time to keep the sums in registers.
func portableTile8x16(k int, a, b, c []float64, ldc int) {
	for i := 0; i < 8; i += 2 {
		for j := 0; j < 16; j += 4 {
			var s00, s01, s02, s03, s10, s11, s12, s13 float64
			for s := 0; s < k; s++ {
				x := a[16*s+i : 16*s+i+2]
				y := b[16*s+j : 16*s+j+4]
				s00 = math.FMA(x[0], y[0], s00)
				s01 = math.FMA(x[0], y[1], s01)
				s02 = math.FMA(x[0], y[2], s02)
				s03 = math.FMA(x[0], y[3], s03)
				s10 = math.FMA(x[1], y[0], s10)
				s11 = math.FMA(x[1], y[1], s11)
				s12 = math.FMA(x[1], y[2], s12)
				s13 = math.FMA(x[1], y[3], s13)
			}
			z := c[i*ldc+j : i*ldc+j+4]
			z[0] -= s00
			z[1] -= s01
			z[2] -= s02
			z[3] -= s03
			z = c[(i+1)*ldc+j : (i+1)*ldc+j+4]
			z[0] -= s10
			z[1] -= s11
			z[2] -= s12
			z[3] -= s13
		}
	}
}

func portableTile1x16(k int, a, b, c []float64) {
	var sum [16]float64
	for s := 0; s < k; s++ {
		x := a[16*s]
		for j, y := range b[16*s : 16*s+16] {
			sum[j] = math.FMA(x, y, sum[j])
		}
	}
	for j := range sum {
		c[j] -= sum[j]
	}
}

func portableSolve16(n int, u []float64, inv *[16]float64, x []float64) {
	for r := 0; r < n; r++ {
		row := x[16*r : 16*r+16]
		portableTile1x16(r, u[r:], x, row)
		for j := range row {
			row[j] *= inv[r]
		}
	}
}
