package nested

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// residual returns max|b − Ax| / (max row sum of |A| · max|x| + max|b|).
func residual(s *Symbolic, values, x, b []float64) float64 {
	r := make([]float64, s.n)
	sum := make([]float64, s.n)
	copy(r, b)
	for i := range s.n {
		for e := s.ptr[i]; e < s.ptr[i+1]; e++ {
			j, v := int(s.adj[e]), values[e]
			r[i] -= v * x[j]
			sum[i] += math.Abs(v)
			if i != j {
				r[j] -= v * x[i]
				sum[j] += math.Abs(v)
			}
		}
	}
	var top, norm, xs, bs float64
	for i := range r {
		top, norm = max(top, math.Abs(r[i])), max(norm, sum[i])
		xs, bs = max(xs, math.Abs(x[i])), max(bs, math.Abs(b[i]))
	}
	return top / (norm*xs + bs)
}

func TestCholeskyAgainstDense(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for trial := range 150 {
		c := recipe{
			seed: uint64(trial), rows: uint8(r.Uint32()), cols: uint8(r.Uint32()),
			reachRow: uint8(r.IntN(4)), reachCol: uint8(r.IntN(7)), components: uint8(r.Uint32()),
			missing: uint8(r.IntN(200)), wrapRow: r.IntN(2) == 0, wrapCol: r.IntN(2) == 0,
			last: uint8(r.Uint32()), definite: true,
		}
		sys, values := c.build()
		if sys.N > 400 {
			continue
		}
		s, err := Analyse(sys.Pattern)
		if err != nil {
			t.Fatalf("%+v: %v", c, err)
		}
		f, err := s.Cholesky(values, 1+trial%3)
		if err != nil {
			t.Fatalf("%+v: %v", c, err)
		}
		b := noise(r, sys.N)
		x := make([]float64, sys.N)
		f.Solve(x, b)
		if e := residual(s, values, x, b); e > 1e-14 {
			t.Errorf("%+v: n = %d: backward error %.2g", c, sys.N, e)
		}
		var dense mat.Cholesky
		if !dense.Factorize(sys.dense()) {
			t.Fatalf("%+v: test matrix is not positive definite", c)
		}
		got, sign := f.LogDet()
		if want := dense.LogDet(); sign != 1 || math.Abs(got-want) > 1e-11*(1+math.Abs(want)) {
			t.Errorf("%+v: log det = %v, %d, want %v, 1", c, got, sign, want)
		}
	}
}
