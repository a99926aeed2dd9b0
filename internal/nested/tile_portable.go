//go:build !amd64 || noasm

package nested

func tile8x16(k int, a, b, c []float64, ldc int) { portableTile8x16(k, a, b, c, ldc) }

func tile1x16(k int, a, b, c []float64) { portableTile1x16(k, a, b, c) }

func solve16(n int, u []float64, inv *[16]float64, x []float64) { portableSolve16(n, u, inv, x) }
