package nested

import (
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// indefinite is a wave operator that puts pivots off, definite a plate.
var samples = []struct {
	name   string
	build  func() (Pattern, []float64)
	factor func(*Symbolic, []float64, int) (*Factor, error)
}{
	{"definite", func() (Pattern, []float64) { return thirteenPoint(60, 70) }, (*Symbolic).Cholesky},
	{"indefinite", func() (Pattern, []float64) { return wave(64, 65, 1, 1, 0) }, (*Symbolic).LDLT},
	{"ring", func() (Pattern, []float64) {
		sys, values := recipe{seed: 3, rows: 23, cols: 22, reachRow: 2, reachCol: 6, wrapCol: true, missing: 40, last: 2}.build()
		return sys.Pattern, values
	}, (*Symbolic).LDLT},
}

func TestSameBitsForAnyWorkers(t *testing.T) {
	for _, c := range samples {
		p, values := c.build()
		s, err := Analyse(p)
		if err != nil {
			t.Fatal(err)
		}
		b := noise(rand.New(rand.NewPCG(1, 1)), p.N)
		var want []float64
		for _, workers := range []int{1, 2, 3, 8} {
			for range 3 {
				f, err := c.factor(s, values, workers)
				if err != nil {
					t.Fatal(err)
				}
				x := make([]float64, p.N)
				f.Solve(x, b)
				if want == nil {
					want = x
				}
				if !slices.Equal(x, want) {
					t.Errorf("%s: %d workers give other bits than 1", c.name, workers)
				}
			}
		}
	}
}

func TestRefactor(t *testing.T) {
	for _, c := range samples {
		p, values := c.build()
		s, err := Analyse(p)
		if err != nil {
			t.Fatal(err)
		}
		b := noise(rand.New(rand.NewPCG(1, 1)), p.N)
		solve := func(f *Factor, err error) []float64 {
			t.Helper()
			if err != nil {
				t.Fatal(err)
			}
			x := make([]float64, p.N)
			f.Solve(x, b)
			return x
		}
		other := slices.Clone(values)
		for i := range p.N { // another matrix with other delays
			if e := p.Ptr[i+1] - 1; int(p.Adj[e]) == i {
				other[e] += 1 + float64(i%7)
			}
		}
		first := solve(c.factor(s, values, 2))
		second := solve(c.factor(s, other, 2))
		f, err := c.factor(s, values, 2)
		solve(f, err)
		for range 2 {
			if !slices.Equal(solve(f, f.Refactor(other)), second) {
				t.Errorf("%s: refactored bits differ from a fresh factor's", c.name)
			}
			if !slices.Equal(solve(f, f.Refactor(values)), first) {
				t.Errorf("%s: refactored bits differ from the first factor's", c.name)
			}
		}
	}
}

// The five-point matrix has eigenvectors sin(πki/(n+1))·sin(πqj/(m+1)) with
// eigenvalues 4 sin²(πk/2(n+1)) + 4 sin²(πq/2(m+1)).
func TestPoissonModes(t *testing.T) {
	const n, m = 50, 37
	p, values := fivePoint(n, m)
	s, err := Analyse(p)
	if err != nil {
		t.Fatal(err)
	}
	for _, factor := range []func(*Symbolic, []float64, int) (*Factor, error){(*Symbolic).Cholesky, (*Symbolic).LDLT} {
		f, err := factor(s, values, 2)
		if err != nil {
			t.Fatal(err)
		}
		for _, mode := range [][2]int{{1, 1}, {2, 5}, {n, m}, {17, 1}} {
			k, q := float64(mode[0]), float64(mode[1])
			a, b := math.Sin(math.Pi*k/(2*(n+1))), math.Sin(math.Pi*q/(2*(m+1)))
			lambda := 4*a*a + 4*b*b
			rhs, x := make([]float64, n*m), make([]float64, n*m)
			for i := range n {
				for j := range m {
					rhs[i*m+j] = math.Sin(math.Pi*k*float64(i+1)/(n+1)) * math.Sin(math.Pi*q*float64(j+1)/(m+1))
				}
			}
			f.Solve(x, rhs)
			for i := range x {
				// The condition number is about 1 000, hence 1e-13 for 2e-16.
				if d := math.Abs(x[i]*lambda - rhs[i]); d > 1e-13*(8/lambda) {
					t.Errorf("mode %v, unknown %d: error %.2g", mode, i, d)
					break
				}
			}
		}
		logDet, sign := f.LogDet()
		want := 0.0
		for k := 1; k <= n; k++ {
			for q := 1; q <= m; q++ {
				a, b := math.Sin(math.Pi*float64(k)/(2*(n+1))), math.Sin(math.Pi*float64(q)/(2*(m+1)))
				want += math.Log(4*a*a + 4*b*b)
			}
		}
		if sign != 1 || math.Abs(logDet-want) > 1e-13*want {
			t.Errorf("log det = %v, %d, want %v, 1", logDet, sign, want)
		}
		sigma, v, at := f.Smallest(12)
		a, b := math.Sin(math.Pi/(2*(n+1))), math.Sin(math.Pi/(2*(m+1)))
		if want := 4*a*a + 4*b*b; math.Abs(sigma-want) > 1e-6*want {
			t.Errorf("smallest eigenvalue %v, want %v", sigma, want)
		}
		// The lowest mode is largest in the middle.
		if i, j := at/m, at%m; i < 24 || i > 25 || j < 17 || j > 19 || v[at] <= 0 {
			t.Errorf("lowest mode is largest at %d, %d with %v", i, j, v[at])
		}
	}
}

func TestNotPositive(t *testing.T) {
	p, values := fivePoint(40, 40)
	s, err := Analyse(p)
	if err != nil {
		t.Fatal(err)
	}
	// A diagonal entry of −3 cannot become positive by elimination. The second
	// one makes sure that the choice does not depend on who comes first.
	const bad, worse = 40*13 + 21, 40*31 + 9
	values[p.Ptr[bad+1]-1] = -3
	values[p.Ptr[worse+1]-1] = -5
	var want *NotPositive
	for _, workers := range []int{1, 2, 3, 8} {
		_, err = s.Cholesky(values, workers)
		var e *NotPositive
		if !errors.As(err, &e) {
			t.Fatalf("%d workers: error %v, want a *NotPositive", workers, err)
		}
		if want == nil {
			want = e
			if e.Unknown != bad && e.Unknown != worse || e.Pivot > -3 {
				t.Errorf("failed at unknown %d with %v, want %d or %d", e.Unknown, e.Pivot, bad, worse)
			}
		}
		if *e != *want {
			t.Errorf("%d workers: %v, want %v", workers, e, want)
		}
	}
	values[p.Ptr[bad+1]-1], values[p.Ptr[worse+1]-1] = 4, 4
	f, err := s.Cholesky(values, 2)
	if err != nil {
		t.Fatal(err)
	}
	good := slices.Clone(values)
	values[p.Ptr[bad+1]-1] = -3
	if err := f.Refactor(values); err == nil {
		t.Error("Refactor: no error")
	}
	if err := f.Refactor(good); err != nil {
		t.Errorf("Refactor after a failure: %v", err)
	}
	for _, v := range []float64{math.NaN(), math.Inf(-1)} {
		values[7] = v
		var e *NotFinite
		if _, err := s.LDLT(values, 2); !errors.As(err, &e) || e.Entry != 7 {
			t.Errorf("value %v: error %v, want a *NotFinite at 7", v, err)
		}
	}
}

func TestBadPattern(t *testing.T) {
	good := func() Pattern {
		return Pattern{N: 3, Rows: 1, Cols: 3, Row: []int32{0, 0, 0}, Col: []int32{0, 1, 2},
			Ptr: []int{0, 1, 3, 5}, Adj: []int32{0, 0, 1, 1, 2}}
	}
	if _, err := Analyse(good()); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		name string
		row  int
		spol func(p *Pattern)
	}{
		{"no unknowns", -1, func(p *Pattern) { p.N = 0 }},
		{"few coordinates", -1, func(p *Pattern) { p.Col = p.Col[:2] }},
		{"few offsets", -1, func(p *Pattern) { p.Ptr = p.Ptr[:3] }},
		{"offsets end early", -1, func(p *Pattern) { p.Ptr[3] = 4 }},
		{"offsets fall", 1, func(p *Pattern) { p.Ptr[2] = 0 }},
		{"offset too large", 0, func(p *Pattern) { p.Ptr[1] = 9 }},
		{"no grid", -1, func(p *Pattern) { p.Rows = 0 }},
		{"huge grid", -1, func(p *Pattern) { p.Cols = 1 << 30 }},
		{"outside", 2, func(p *Pattern) { p.Col[2] = 3 }},
		{"negative", 1, func(p *Pattern) { p.Row[1] = -1 }},
		{"above the diagonal", 0, func(p *Pattern) { p.Adj[0] = 1 }},
		{"repeated", 2, func(p *Pattern) { p.Adj[4] = 1 }},
		{"unsorted", 1, func(p *Pattern) { p.Adj[1], p.Adj[2] = 1, 0 }},
		{"last outside", -1, func(p *Pattern) { p.Last = []int32{3} }},
		{"last repeated", 1, func(p *Pattern) { p.Last = []int32{1, 1} }},
	} {
		p := good()
		c.spol(&p)
		_, err := Analyse(p)
		var e *BadPattern
		if !errors.As(err, &e) || e.Row != c.row {
			t.Errorf("%s: error %v, want a *BadPattern at row %d", c.name, err, c.row)
		}
	}
}

func TestSolveMany(t *testing.T) {
	for _, c := range samples {
		p, values := c.build()
		s, err := Analyse(p)
		if err != nil {
			t.Fatal(err)
		}
		f, err := c.factor(s, values, 1)
		if err != nil {
			t.Fatal(err)
		}
		r := rand.New(rand.NewPCG(1, 1))
		var b, x, want [][]float64
		for range 5 {
			b = append(b, noise(r, p.N))
			x = append(x, make([]float64, p.N))
			want = append(want, make([]float64, p.N))
			f.Solve(want[len(want)-1], b[len(b)-1])
		}
		f.SolveMany(x, b)
		for i := range x {
			if !slices.Equal(x[i], want[i]) {
				t.Errorf("%s: SolveMany and Solve differ", c.name)
			}
		}
		if n := testing.AllocsPerRun(3, func() {
			f.Solve(x[0], b[0])
			f.SolveMany(x, b)
			f.Refine(x[0], b[0])
		}); n != 0 {
			t.Errorf("%s: solves allocate %v times", c.name, n)
		}
		f.SolveMany(nil, nil)
	}
}

// A matrix of condition 1e10 whose solution is known in whole numbers: solved
// plainly some digits are lost, refined none.
func TestRefine(t *testing.T) {
	const n, m = 40, 30
	p, values := fivePoint(n, m)
	u, v := math.Sin(math.Pi/(2*(n+1))), math.Sin(math.Pi/(2*(m+1)))
	for i := range p.N {
		values[p.Ptr[i+1]-1] -= 4*u*u + 4*v*v - 1e-9 // leaves the lowest eigenvalue at 1e-9
	}
	s, err := Analyse(p)
	if err != nil {
		t.Fatal(err)
	}
	f, err := s.LDLT(values, 2)
	if err != nil {
		t.Fatal(err)
	}
	want, b := make([]float64, p.N), make([]float64, p.N)
	for i := range want {
		want[i] = float64(i%19 - 9)
	}
	// b = A·want in twice the precision; rounding it moves the solution by
	// ε·|b|/1e-9, so b must be exact: the values are cut to multiples of 2⁻⁴⁰.
	for e := range values {
		values[e] = math.Round(values[e]*0x1p40) * 0x1p-40
	}
	if err := f.Refactor(values); err != nil {
		t.Fatal(err)
	}
	for i := range p.N {
		for e := p.Ptr[i]; e < p.Ptr[i+1]; e++ {
			j := int(p.Adj[e])
			b[i] += values[e] * want[j]
			if i != j {
				b[j] += values[e] * want[i]
			}
		}
	}
	if sigma, _, _ := f.Smallest(10); math.Abs(sigma-1e-9) > 1e-11 {
		t.Errorf("smallest eigenvalue %v, want 1e-9", sigma)
	}
	x := make([]float64, p.N)
	f.Solve(x, b)
	distance := func() float64 {
		d := 0.0
		for i := range x {
			d = max(d, math.Abs(x[i]-want[i]))
		}
		return d / 9
	}
	before := distance()
	residual := f.Refine(x, b)
	if after := distance(); before < 1e-12 || after > 1e-15 || residual > 1e-16 {
		t.Errorf("error %.2g before, %.2g after, backward error %.2g", before, after, residual)
	}
}

// On 48 × 50 intervals the wave operator has one null vector,
// sin(πk i/48)·sin(πq j/50) with k/48 = q/50 = 1/2.
func TestSingular(t *testing.T) {
	const nx, nt = 48, 50
	p, values := wave(nx, nt, 1, 1, 0)
	s, err := Analyse(p)
	if err != nil {
		t.Fatal(err)
	}
	f, err := s.LDLT(values, 2)
	if err != nil {
		t.Fatal(err)
	}
	sigma, v, at := f.Smallest(5)
	if sigma > 1e-10 || f.Nullity() != 1 {
		t.Errorf("smallest singular value %.2g, nullity %d, want 0 and 1", sigma, f.Nullity())
	}
	exact := func(i int) float64 {
		return math.Sin(math.Pi*float64(p.Col[i]+1)/2) * math.Sin(math.Pi*float64(p.Row[i]+1)/2) / math.Sqrt(24*25)
	}
	sign := math.Copysign(1, exact(at))
	for i := range v {
		// A pivot of 4e-11·‖A‖ in place of zero turns the null vector by that
		// over the distance to the next eigenvalue, 3e-3.
		if d := math.Abs(v[i] - sign*exact(i)); d > 1e-7 {
			t.Fatalf("null vector at unknown %d: %v, want %v", i, v[i], sign*exact(i))
		}
	}
	// A consistent right-hand side is solved although the matrix is singular.
	want := noise(rand.New(rand.NewPCG(1, 1)), p.N)
	b, x := make([]float64, p.N), make([]float64, p.N)
	f.low = make([]float64, p.N)
	f.residual(b, want, b)
	for i := range b {
		b[i] = -b[i]
	}
	f.Solve(x, b)
	if e := f.Refine(x, b); e > 1e-15 {
		t.Errorf("backward error %.2g of a consistent system", e)
	}
}

func TestStats(t *testing.T) {
	p, values := wave(64, 65, 1, 1, 0)
	s, err := Analyse(p)
	if err != nil {
		t.Fatal(err)
	}
	f, err := s.LDLT(values, 2)
	if err != nil {
		t.Fatal(err)
	}
	a, b := s.Stats(), f.Stats()
	if a.Delayed != 0 || b.Delayed == 0 || b.NonZeros <= a.NonZeros || b.Bytes <= a.Bytes ||
		a.Fronts != b.Fronts || b.LargestFront < a.LargestFront || b.Flops <= a.Flops {
		t.Errorf("predicted %+v, took %+v", a, b)
	}
}
