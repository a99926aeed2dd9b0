package nested

import (
	"math/rand/v2"
	"slices"
	"testing"
)

func noise(r *rand.Rand, n int) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = r.NormFloat64()
	}
	return x
}

// The chosen kernels and the portable twins must agree in every bit.
func TestKernelTwins(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for _, k := range []int{0, 1, 2, 5, 16, 33, 200} {
		a, b := noise(r, 16*max(k, 1)), noise(r, 16*max(k, 1))
		const ldc = 19
		c := noise(r, 8*ldc)
		want := slices.Clone(c)
		tile8x16(k, a, b, c, ldc)
		portableTile8x16(k, a, b, want, ldc)
		if !slices.Equal(c, want) {
			t.Errorf("tile8x16, k = %d: assembly and twin differ", k)
		}
		tile1x16(k, a, b, c)
		portableTile1x16(k, a, b, want)
		if !slices.Equal(c, want) {
			t.Errorf("tile1x16, k = %d: assembly and twin differ", k)
		}
	}
	for n := 0; n <= 16; n++ {
		u, x := noise(r, 256), noise(r, 256)
		inv := [16]float64(noise(r, 16))
		want := slices.Clone(x)
		solve16(n, u, &inv, x)
		portableSolve16(n, u, &inv, want)
		if !slices.Equal(x, want) {
			t.Errorf("solve16, n = %d: assembly and twin differ", n)
		}
	}
}

func BenchmarkTile8x16(b *testing.B) {
	const k = 256
	r := rand.New(rand.NewPCG(1, 2))
	x, y, z := noise(r, 16*k), noise(r, 16*k), noise(r, 128)
	for b.Loop() {
		tile8x16(k, x, y, z, 16)
	}
	b.ReportMetric(2*k*128*float64(b.N)/b.Elapsed().Seconds()/1e9, "Gflop/s")
}

func BenchmarkPortableTile8x16(b *testing.B) {
	const k = 256
	r := rand.New(rand.NewPCG(1, 2))
	x, y, z := noise(r, 16*k), noise(r, 16*k), noise(r, 128)
	for b.Loop() {
		portableTile8x16(k, x, y, z, 16)
	}
	b.ReportMetric(2*k*128*float64(b.N)/b.Elapsed().Seconds()/1e9, "Gflop/s")
}

func BenchmarkSolve16(b *testing.B) {
	r := rand.New(rand.NewPCG(1, 2))
	u, x := noise(r, 256), noise(r, 256)
	inv := [16]float64(noise(r, 16))
	for i := range u {
		u[i] *= 0.01
	}
	for i := range inv {
		inv[i] = 1
	}
	for b.Loop() {
		solve16(16, u, &inv, x)
	}
}
