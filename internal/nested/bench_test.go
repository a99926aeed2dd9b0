package nested

import (
	"fmt"
	"testing"
)

var grids = []struct {
	name  string
	build func(rows, cols int) (Pattern, []float64)
	sizes []int
}{
	{"5pt", fivePoint, []int{256, 512, 1024}},
	{"13pt", thirteenPoint, []int{256, 512, 1024}},
}

func BenchmarkAnalyse(b *testing.B) {
	for _, g := range grids {
		for _, n := range g.sizes {
			b.Run(fmt.Sprintf("%s/%d", g.name, n), func(b *testing.B) {
				p, _ := g.build(n, n)
				for b.Loop() {
					if _, err := Analyse(p); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}

// BenchmarkCholesky times a first factorisation, storage included.
func BenchmarkCholesky(b *testing.B) {
	benchmarkFactor(b, (*Symbolic).Cholesky)
}

func benchmarkFactor(b *testing.B, factor func(*Symbolic, []float64, int) (*Factor, error)) {
	for _, g := range grids {
		for _, n := range g.sizes {
			for _, workers := range []int{1, 2} {
				b.Run(fmt.Sprintf("%s/%d/workers%d", g.name, n, workers), func(b *testing.B) {
					p, values := g.build(n, n)
					s, err := Analyse(p)
					if err != nil {
						b.Fatal(err)
					}
					var f *Factor
					for b.Loop() {
						if f, err = factor(s, values, workers); err != nil {
							b.Fatal(err)
						}
					}
					st := f.Stats()
					b.ReportMetric(st.Flops/1e9, "Gflop")
					b.ReportMetric(float64(st.NonZeros)/1e6, "Mnnz")
					b.ReportMetric(float64(st.Bytes)/(1<<20), "MiB")
					b.ReportMetric(float64(st.Delayed), "delayed")
				})
			}
		}
	}
}

func BenchmarkRefactor(b *testing.B) {
	for _, g := range grids {
		for _, n := range g.sizes {
			b.Run(fmt.Sprintf("%s/%d", g.name, n), func(b *testing.B) {
				p, values := g.build(n, n)
				s, _ := Analyse(p)
				f, err := s.Cholesky(values, 2)
				if err != nil {
					b.Fatal(err)
				}
				for b.Loop() {
					if err := f.Refactor(values); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}

func BenchmarkSolve(b *testing.B) {
	for _, g := range grids {
		for _, n := range g.sizes {
			b.Run(fmt.Sprintf("%s/%d", g.name, n), func(b *testing.B) {
				p, values := g.build(n, n)
				s, _ := Analyse(p)
				f, err := s.Cholesky(values, 2)
				if err != nil {
					b.Fatal(err)
				}
				x := make([]float64, p.N)
				for i := range x {
					x[i] = float64(i % 17)
				}
				for b.Loop() {
					f.Solve(x, x)
				}
			})
		}
	}
}

// BenchmarkAll times analysis, factorisation and one solve.
func BenchmarkAll(b *testing.B) {
	for _, g := range grids {
		for _, n := range g.sizes {
			b.Run(fmt.Sprintf("%s/%d", g.name, n), func(b *testing.B) {
				p, values := g.build(n, n)
				x := make([]float64, p.N)
				for b.Loop() {
					s, err := Analyse(p)
					if err != nil {
						b.Fatal(err)
					}
					f, err := s.Cholesky(values, 2)
					if err != nil {
						b.Fatal(err)
					}
					for i := range x {
						x[i] = float64(i % 17)
					}
					f.Solve(x, x)
				}
			})
		}
	}
}
