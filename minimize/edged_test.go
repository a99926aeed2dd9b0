package minimize

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/tenter-go/tenter/internal/nested"
	"gonum.org/v1/gonum/mat"
)

// gridMatrix is a nearest-neighbour matrix on rows × cols sites, with the given
// diagonal and −1 beside it.
func gridMatrix(rows, cols int, diagonal func(u int) float64) (*nested.Pattern, []float64) {
	p := &nested.Pattern{N: rows * cols, Rows: rows, Cols: cols, Ptr: []int{0}}
	var values []float64
	for u := range p.N {
		n, i := u/cols, u%cols
		p.Row, p.Col = append(p.Row, int32(n)), append(p.Col, int32(i))
		if n > 0 {
			p.Adj, values = append(p.Adj, int32(u-cols)), append(values, -1)
		}
		if i > 0 {
			p.Adj, values = append(p.Adj, int32(u-1)), append(values, -1)
		}
		p.Adj, values = append(p.Adj, int32(u)), append(values, diagonal(u))
		p.Ptr = append(p.Ptr, len(p.Adj))
	}
	return p, values
}

// The bordered solve against gonum's dense LU, eigenvalues and determinant: for
// definite, indefinite and singular A, and where the Schur complement of the
// border that is factorised vanishes although K is regular.
func TestEdgedAgainstDense(t *testing.T) {
	const rows, cols = 4, 5
	const n = rows * cols
	random := rand.New(rand.NewPCG(3, 4))
	vector := func() []float64 {
		v := make([]float64, n)
		for u := range v {
			v[u] = random.NormFloat64()
		}
		return v
	}
	neighbours := func(u int) float64 { // the graph Laplacian: constants are its null space
		d := 4.0
		for _, edge := range []bool{u/cols == 0, u/cols == rows-1, u%cols == 0, u%cols == cols-1} {
			if edge {
				d--
			}
		}
		return d
	}
	for name, diagonal := range map[string]func(int) float64{
		"definite":   func(int) float64 { return 5 },
		"indefinite": func(u int) float64 { return float64(u%5) - 1.7 },
		"singular":   neighbours,
	} {
		pattern, values := gridMatrix(rows, cols, diagonal)
		for m := range 4 {
			if name == "singular" && m == 0 {
				continue
			}
			var columns, rowsOf, corner [][]float64
			for range m {
				columns, rowsOf = append(columns, vector()), append(rowsOf, vector())
				corner = append(corner, vector()[:m])
			}
			k := mat.NewDense(n+m, n+m, nil)
			a := mat.NewSymDense(n, nil)
			for u := range n {
				for e := pattern.Ptr[u]; e < pattern.Ptr[u+1]; e++ {
					v := int(pattern.Adj[e])
					a.SetSym(u, v, values[e])
					k.Set(u, v, values[e])
					k.Set(v, u, values[e])
				}
				for j := range m {
					k.Set(u, n+j, columns[j][u])
					k.Set(n+j, u, rowsOf[j][u])
				}
			}
			for i := range m {
				for j := range m {
					k.Set(n+i, n+j, corner[i][j])
				}
			}
			b, err := newEdged(pattern, m)
			if err != nil {
				t.Fatal(err)
			}
			if err := b.Factor(values, columns, rowsOf, corner); err != nil {
				t.Fatalf("%s, %d borders: %v", name, m, err)
			}
			f, g := vector(), vector()[:m]
			var want mat.VecDense
			if err := want.SolveVec(k, mat.NewVecDense(n+m, append(append([]float64(nil), f...), g...))); err != nil {
				t.Fatal(err)
			}
			b.Solve(f, g, f, g)
			for u, v := range append(append([]float64(nil), f...), g...) {
				// rounding times a condition below 1e4
				if d := math.Abs(v - want.AtVec(u)); d > 1e-11*(1+mat.Norm(&want, math.Inf(1))) {
					t.Fatalf("%s, %d borders: unknown %d off by %.3g", name, m, u, d)
				}
			}
			if sign := math.Copysign(1, mat.Det(k)); float64(b.Sign()) != sign {
				t.Errorf("%s, %d borders: sign of the determinant %d, want %g", name, m, b.Sign(), sign)
			}
			var eigen mat.EigenSym
			eigen.Factorize(a, false)
			negative := 0
			for _, v := range eigen.Values(nil) {
				if v < -1e-12 { // the null vector of the singular one is zero to rounding
					negative++
				}
			}
			if got, known := b.Negative(); known && got != negative || known != (name != "singular") {
				t.Errorf("%s, %d borders: %d negative eigenvalues, known %v; want %d", name, m, got, known, negative)
			}
		}
	}
}

func TestEdgedSpecialCases(t *testing.T) {
	// A = diag(1, −1, 2, 2), c = (1, 1, 0, 0): cᵀA⁻¹c = 0, so that [A c; cᵀ 0] is singular,
	// and [A c; cᵀ 1] has the determinant −4.
	pattern := &nested.Pattern{N: 4, Rows: 1, Cols: 4, Row: make([]int32, 4), Col: []int32{0, 1, 2, 3}, Ptr: []int{0, 1, 2, 3, 4}, Adj: []int32{0, 1, 2, 3}}
	values := []float64{1, -1, 2, 2}
	b, err := newEdged(pattern, 1)
	if err != nil {
		t.Fatal(err)
	}
	c := [][]float64{{1, 1, 0, 0}}
	if err := b.Factor(values, c, c, [][]float64{{1}}); err != nil {
		t.Fatal(err)
	}
	x, y := []float64{1, 0, 4, 0}, []float64{3}
	b.Solve(x, y, x, y)
	// x₀ + y = 1, −x₁ + y = 0, x₀ + x₁ + y = 3, by hand
	for u, v := range []float64{-1, 2, 2, 0} {
		if math.Abs(x[u]-v) > 1e-14 {
			t.Errorf("x = %v", x)
		}
	}
	if math.Abs(y[0]-2) > 1e-14 || b.Sign() != -1 {
		t.Errorf("y = %v, sign %d", y, b.Sign())
	}
	if n, known := b.Negative(); n != 1 || !known {
		t.Errorf("%d negative eigenvalues, known %v", n, known)
	}
	// A null vector of A that neither border sees leaves K singular.
	values[3] = 0
	var s *singularMatrix
	if err := b.Factor(values, c, c, [][]float64{{1}}); !errors.As(err, &s) || s.unknown != 3 || s.nullity != 1 || s.sigma > 1e-12 {
		t.Errorf("%v", err)
	}
}
