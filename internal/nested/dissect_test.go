package nested

import (
	"math"
	"slices"
	"testing"
)

// torus is the five-point stencil with both axes periodic.
func torus(rows, cols int) *system {
	s := newSystem(rows, cols)
	s.WrapRow, s.WrapCol = true, true
	for i := range rows * cols {
		s.unknown(i/cols, i%cols)
	}
	for i := range rows * cols {
		r, c := i/cols, i%cols
		s.add(i, i, 4)
		s.add(i, (r+1)%rows*cols+c, -1)
		s.add(i, r*cols+(c+1)%cols, -1)
	}
	return s
}

// George 1973: at most 31/4·n² log₂ n entries and 829/84·n³ multiplications, and
// as many additions, to leading order for n² unknowns and the nine-point stencil.
// A torus is first cut along two lines in either direction, four times the length
// in all. Separators of twice the thickness hold twice the unknowns: 4 times the
// entries, 8 times the operations.
func TestFillOrder(t *testing.T) {
	for _, c := range []struct {
		name           string
		pattern        func(n int) Pattern
		entries, flops float64 // bounds over n² log₂ n and n³
	}{
		{"square", func(n int) Pattern { p, _ := fivePoint(n, n); return p }, 31. / 4, 2 * 829. / 84},
		{"torus", func(n int) Pattern { s := torus(n, n); s.finish(); return s.Pattern }, 2 * 31. / 4, 4 * 2 * 829. / 84},
		{"one long coupling", func(n int) Pattern {
			p, _ := fivePoint(n, n)
			p.Adj = slices.Insert(p.Adj, p.Ptr[n*n-1], 0)
			p.Ptr[n*n]++
			return p
		}, 31. / 4, 2 * 829. / 84},
		{"diamond", func(n int) Pattern { p, _ := thirteenPoint(n, n); return p }, 4 * 31. / 4, 8 * 2 * 829. / 84},
	} {
		for _, n := range []int{64, 128, 256} {
			s, err := Analyse(c.pattern(n))
			if err != nil {
				t.Fatal(err)
			}
			x := float64(n)
			if e := float64(s.nnz) / (x * x * math.Log2(x)); e > c.entries {
				t.Errorf("%s, n = %d: %.2f n² log₂ n entries, want at most %.2f", c.name, n, e, c.entries)
			}
			if e := s.flops / (x * x * x); e > c.flops {
				t.Errorf("%s, n = %d: %.1f n³ operations, want at most %.1f", c.name, n, e, c.flops)
			}
		}
	}
}

func TestOrderIsPermutation(t *testing.T) {
	for seed := range uint64(200) {
		c := recipe{
			seed: seed, rows: uint8(seed * 5), cols: uint8(seed * 7), reachRow: uint8(seed % 3), reachCol: uint8(seed % 7),
			components: uint8(seed), missing: uint8(seed), wrapRow: seed&1 != 0, wrapCol: seed&2 != 0, last: uint8(seed),
		}
		sys, _ := c.build()
		s, err := Analyse(sys.Pattern)
		if err != nil {
			t.Fatal(err)
		}
		if n := len(sys.Last); !slices.Equal(s.order[sys.N-n:], sys.Last) {
			t.Errorf("%+v: Last is not last", c)
		}
		sorted := slices.Sorted(slices.Values(s.order))
		for i, j := range sorted {
			if i != int(j) {
				t.Fatalf("%+v: order is no permutation", c)
			}
		}
	}
}

// On a torus the constants are the null space of −Δ. Bordered by the condition
// that the sum vanish the matrix is regular, with one negative eigenvalue:
// n₋(bordered) = n₋(on the constrained space) + 1.
func TestBorderedTorus(t *testing.T) {
	const rows, cols = 40, 31
	sys := torus(rows, cols)
	plain := *sys
	values := plain.finish()
	s, err := Analyse(plain.Pattern)
	if err != nil {
		t.Fatal(err)
	}
	f, err := s.LDLT(values, 2)
	if err != nil {
		t.Fatal(err)
	}
	if pos, neg, zero, known := f.Inertia(); pos != rows*cols-1 || neg != 0 || zero != 1 || known {
		t.Errorf("torus: inertia %d, %d, %d, %v, want %d, 0, 1, false", pos, neg, zero, known, rows*cols-1)
	}

	border := sys.unknown(0, 0)
	for i := range border {
		sys.add(border, i, 1)
	}
	sys.Last = []int32{int32(border)}
	values = sys.finish()
	if s, err = Analyse(sys.Pattern); err != nil {
		t.Fatal(err)
	}
	if f, err = s.LDLT(values, 2); err != nil {
		t.Fatal(err)
	}
	if pos, neg, zero, known := f.Inertia(); pos != rows*cols || neg != 1 || zero != 0 || !known {
		t.Errorf("bordered: inertia %d, %d, %d, %v, want %d, 1, 0, true", pos, neg, zero, known, rows*cols)
	}
	// A plane wave is an eigenvector: 4 sin²(πk/rows) + 4 sin²(πq/cols).
	const k, q = 3, 2
	b, x := make([]float64, sys.N), make([]float64, sys.N)
	for i := range border {
		b[i] = math.Cos(2 * math.Pi * (k*float64(i/cols)/rows + q*float64(i%cols)/cols))
	}
	f.Solve(x, b)
	u, v := math.Sin(math.Pi*k/rows), math.Sin(math.Pi*q/cols)
	lambda := 4*u*u + 4*v*v
	for i := range x {
		// Condition of the bordered matrix about 1 500.
		if d := math.Abs(x[i]*lambda - b[i]); d > 1e-12 {
			t.Fatalf("unknown %d: error %.2g", i, d)
		}
	}
}
