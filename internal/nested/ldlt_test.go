package nested

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"
)

func TestLDLTAgainstDense(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for trial := range 250 {
		c := recipe{
			seed: uint64(trial), rows: uint8(r.Uint32()), cols: uint8(r.Uint32()),
			reachRow: uint8(r.IntN(4)), reachCol: uint8(r.IntN(7)), components: uint8(r.Uint32()),
			missing: uint8(r.IntN(200)), wrapRow: r.IntN(2) == 0, wrapCol: r.IntN(2) == 0,
			last: uint8(r.Uint32()), zeroCorner: r.IntN(2) == 0,
		}
		sys, values := c.build()
		if sys.N > 250 {
			continue
		}
		compareIndefinite(t, c, sys, values, 1+trial%3)
	}
}

// compareIndefinite checks a factor against all eigenvalues.
func compareIndefinite(t *testing.T, name any, sys *system, values []float64, workers int) {
	t.Helper()
	s, err := Analyse(sys.Pattern)
	if err != nil {
		t.Fatalf("%+v: %v", name, err)
	}
	f, err := s.LDLT(values, workers)
	if err != nil {
		t.Fatalf("%+v: %v", name, err)
	}
	var eig mat.EigenSym
	if !eig.Factorize(sys.dense(), false) {
		t.Fatalf("%+v: eigenvalues failed", name)
	}
	var norm, logDet float64
	for _, v := range eig.Values(nil) {
		norm = max(norm, math.Abs(v))
	}
	// Rounding leaves eigenvalues of about 1e-16‖A‖ where there should be zeros, and
	// pivots below 1e-13‖A‖ are taken for zeros. What lies between 1e-14‖A‖ and
	// 1e-11‖A‖ may therefore count either way; everything else is certain.
	var pos, neg, zero int
	least := math.Inf(1)
	for _, v := range eig.Values(nil) {
		switch {
		case math.Abs(v) <= 1e-14*f.norm:
			zero++
		case math.Abs(v) <= 1e-11*f.norm:
		case v > 0:
			pos++
		default:
			neg++
		}
		least = min(least, math.Abs(v))
		logDet += math.Log(math.Abs(v))
	}
	p, n, z, known := f.Inertia()
	if p < pos || n < neg || z < zero || p+n+z != sys.N || known != (z == 0) {
		t.Errorf("%+v: n = %d: inertia %d, %d, %d, %v, want %d, %d, %d", name, sys.N, p, n, z, known, pos, neg, zero)
	}
	if !known {
		return
	}
	x, b := make([]float64, sys.N), noise(rand.New(rand.NewPCG(8, 9)), sys.N)
	f.Solve(x, b)
	other, err := s.LDLT(values, workers+1)
	if err != nil {
		t.Fatalf("%+v: %v", name, err)
	}
	y := make([]float64, sys.N)
	if other.Solve(y, b); !slices.Equal(x, y) {
		t.Errorf("%+v: n = %d: %d and %d workers give different bits", name, sys.N, workers, workers+1)
	}
	if e := residual(s, values, x, b); e > 1e-12 { // growth ≤ 1 + 1/u at each of some tens of levels, seldom met
		t.Errorf("%+v: n = %d: backward error %.2g", name, sys.N, e)
	}
	got, sign := f.LogDet()
	want := 1 - 2*(n&1)
	// An eigenvalue λ is known to ε‖A‖, log|λ| to ε‖A‖/|λ|.
	if tol := 1e-13 * float64(sys.N) * (1 + norm/least); sign != want || math.Abs(got-logDet) > tol {
		t.Errorf("%+v: log det = %v, %d, want %v, %d", name, got, sign, logDet, want)
	}
}

// The wave operator on nx × nt equal intervals has eigenvalues
// 4 sin²(kπ/2nx) − 4 sin²(qπ/2nt), of which gcd(nx, nt) − 1 vanish [Bourgin &
// Duffin 1939, Bull. Amer. Math. Soc. 45, 851; John 1941, Amer. J. Math. 63, 141].
func TestWaveNullity(t *testing.T) {
	for _, c := range []struct{ nx, nt int }{
		{8, 12}, {7, 12}, {9, 12}, {10, 15}, {12, 12}, {13, 8},
		{64, 65}, {64, 64}, {65, 64}, {63, 65}, {60, 90}, {96, 96}, {100, 75}, {128, 127},
		{2, 2}, {2, 3}, {200, 201}, {150, 100}, {128, 128},
	} {
		p, values := wave(c.nx, c.nt, 1, 1, 0)
		s, err := Analyse(p)
		if err != nil {
			t.Fatal(err)
		}
		f, err := s.LDLT(values, 2)
		if err != nil {
			t.Fatal(err)
		}
		var pos, neg, zero int
		for k := 1; k < c.nx; k++ {
			for q := 1; q < c.nt; q++ {
				switch x, y := k*c.nt, q*c.nx; {
				case x > y:
					pos++
				case x < y:
					neg++
				default:
					zero++
				}
			}
		}
		gp, gn, gz, known := f.Inertia()
		if f.Nullity() != zero || known != (zero == 0) || zero == 0 && (gp != pos || gn != neg) {
			t.Errorf("%d × %d: inertia %d, %d, %d, known %v; want %d, %d, %d", c.nx, c.nt, gp, gn, gz, known, pos, neg, zero)
		}
	}
}

// The Hessian of Σ(u_t² − u_x² − m²u²)/2 on a block held on all sides has
// eigenvalues 4 sin²(qπ/2Nt)/dt² − 4 sin²(kπ/2Nx)/dx² − m².
func TestLatticeBlockIndex(t *testing.T) {
	for _, c := range []struct {
		length, duration, m float64
		nx, nt              int
		want                int
	}{
		{1, 0.7, 1, 20, 28, 103},
		{math.Pi, 2, 1, 16, 20, 57},
		{10, 6, 1, 40, 40, 393},
		{40, 30, 1.3, 160, 144, 0}, // 0: only against the formula
	} {
		dx, dt := c.length/float64(c.nx), c.duration/float64(c.nt)
		p, values := wave(c.nx, c.nt, dx, dt, c.m)
		for i := range values {
			values[i] = -values[i] // −∂_t² + ∂_x² − m² as u_t² comes with a plus
		}
		s, err := Analyse(p)
		if err != nil {
			t.Fatal(err)
		}
		f, err := s.LDLT(values, 1)
		if err != nil {
			t.Fatal(err)
		}
		sin2 := func(k, n int) float64 { x := math.Sin(float64(k) * math.Pi / float64(2*n)); return x * x }
		count := 0
		for k := 1; k < c.nx; k++ {
			for q := 1; q < c.nt; q++ {
				if sin2(q, c.nt)/(dt*dt) < sin2(k, c.nx)/(dx*dx)+c.m*c.m/4 {
					count++
				}
			}
		}
		_, neg, _, known := f.Inertia()
		if neg != count || c.want != 0 && c.want != count || !known {
			t.Errorf("%+v: %d negative (known %v), formula says %d", c, neg, known, count)
		}
	}
}

func BenchmarkLDLT(b *testing.B) { benchmarkFactor(b, (*Symbolic).LDLT) }

func TestZeroMatrix(t *testing.T) {
	p, values := fivePoint(9, 8)
	clear(values)
	s, err := Analyse(p)
	if err != nil {
		t.Fatal(err)
	}
	f, err := s.LDLT(values, 2)
	if err != nil {
		t.Fatal(err)
	}
	if d, sign := f.LogDet(); f.Nullity() != p.N || !math.IsInf(d, -1) || sign != 0 {
		t.Errorf("nullity %d, log det %v, %d, want %d, -Inf, 0", f.Nullity(), d, sign, p.N)
	}
	x := make([]float64, p.N)
	f.Solve(x, x)
	if sigma, _, _ := f.Smallest(3); sigma != 0 || largest(x) != 0 {
		t.Errorf("smallest singular value %v, solution %v, want 0 and 0", sigma, x)
	}
}

// BenchmarkWave times the massless wave operator, whose fronts put many pivots
// off, with sides that make it regular.
func BenchmarkWave(b *testing.B) {
	for _, n := range []int{256, 512} {
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			p, values := wave(n, n+1, 1, 1, 0)
			s, err := Analyse(p)
			if err != nil {
				b.Fatal(err)
			}
			for b.Loop() {
				f, err := s.LDLT(values, 2)
				if err != nil {
					b.Fatal(err)
				}
				if f.Nullity() != 0 {
					b.Fatal("singular")
				}
			}
		})
	}
}
