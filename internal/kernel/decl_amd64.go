//go:build amd64 && !noasm

package kernel

// The functions of avx2_amd64.s and avx512_amd64.s. They read and write n > 0
// elements behind the pointers, φ with its ghost cells on both sides, and do
// what their portable twins do.

//go:noescape
func leapAVX2(op, n int, next, now, before, slope, c *float64) (done int)

//go:noescape
func leapAVX512(op, n int, next, now, before, slope, c *float64) (done int)

//go:noescape
func accelerateAVX2(op, n int, dst, phi, rate, slope, c *float64)

//go:noescape
func accelerateAVX512(op, n int, dst, phi, rate, slope, c *float64)

//go:noescape
func kickDriftAVX2(op, n int, next, phi, rate, slope, c *float64)

//go:noescape
func kickDriftAVX512(op, n int, next, phi, rate, slope, c *float64)

//go:noescape
func stageAVX2(op, n int, field, rate, phi, v, phi0, v0, slope, c *float64)

//go:noescape
func stageAVX512(op, n int, field, rate, phi, v, phi0, v0, slope, c *float64)

//go:noescape
func finishAVX2(op, n int, field, rate, v2, v3, phi4, v4, slope, c *float64)

//go:noescape
func finishAVX512(op, n int, field, rate, v2, v3, phi4, v4, slope, c *float64)

//go:noescape
func varyingAVX2(op, n int, dst, phi, other, kappa1, kappa2, kappa3, keep, give, load, c *float64)

//go:noescape
func varyingAVX512(op, n int, dst, phi, other, kappa1, kappa2, kappa3, keep, give, load, c *float64)

//go:noescape
func applyAVX2(op, n int, dst, x, c *float64) (done int)

//go:noescape
func applyAVX512(op, n int, dst, x, c *float64) (done int)

//go:noescape
func combineAVX2(op, n int, dst, x, y, z, a *float64)

//go:noescape
func combineAVX512(op, n int, dst, x, y, z, a *float64)

//go:noescape
func reduceAVX2(op, n int, x, y, w, lanes *float64)

//go:noescape
func reduceAVX512(op, n int, x, y, w, lanes *float64)
