package kernel

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// paths returns the paths that this processor can take.
func paths() []path {
	var ps []path
	for p := portable; p <= fastest(); p++ {
		ps = append(ps, p)
	}
	return ps
}

// on runs f on one path.
func on(p path, f func()) {
	before := taken
	taken = p
	defer func() { taken = before }()
	f()
}

// sameBits runs f on every path and demands equal bits of what it returns. NaN
// equals NaN: which operand's payload survives is the processor's affair.
func sameBits(t *testing.T, name string, f func() [][]float64) {
	t.Helper()
	var want [][]float64
	for _, p := range paths() {
		var got [][]float64
		on(p, func() { got = f() })
		if want == nil {
			want = got
			continue
		}
		for k := range got {
			for i, v := range got[k] {
				if w := want[k][i]; math.Float64bits(v) != math.Float64bits(w) && !(v != v && w != w) {
					t.Errorf("%s: %v differs from portable in array %d at %d: %x, want %x", name, p, k, i, v, w)
					return
				}
			}
		}
	}
}

// random returns n + shift numbers of a size without the first shift of them,
// so that they start at odd places of a cache line.
func random(r *rand.Rand, n, shift int, size float64) []float64 {
	x := make([]float64, n+shift)
	for i := range x {
		x[i] = size * (2*r.Float64() - 1)
	}
	return x[shift:]
}

func clone(x []float64, shift int) []float64 {
	return append(make([]float64, shift, shift+len(x)), x...)[shift:]
}

// sizes are 0 … 70 sites, with a few beyond a strip.
func sizes() []int {
	var ns []int
	for n := range 71 {
		ns = append(ns, n)
	}
	return append(ns, strip-1, strip, strip+1, 3*strip+13)
}

func potentials() map[string]Potential {
	ps := map[string]Potential{
		"none": {}, "quadratic": Quadratic(1.3), "phi4": Phi4(), "phi6": Phi6(),
		"sine": Sine(), "double sine": DoubleSine(0.7),
	}
	for degree := range MaxDegree + 1 {
		c := make([]float64, degree+1)
		for k := range c {
			c[k] = 1 / float64(k+2)
		}
		ps[fmt.Sprint("polynomial ", degree)], _ = Polynomial(c)
	}
	return ps
}

func lines(p Potential) []Line {
	var ls []Line
	for radius, b := range [][3]float64{{1, 0, 0}, {4. / 3, -1. / 12, 0}, {3. / 2, -3. / 20, 1. / 90}} {
		for k := range b {
			b[k] *= 0.7
		}
		ls = append(ls,
			Line{Radius: radius + 1, Link: b, Keep: 1, Pull: 0.02, Potential: p},
			Line{Radius: radius + 1, Link: b, Keep: 0.97, Bias: 0.003, Pull: 0.02, Potential: p})
	}
	return ls
}

func TestLineOnAllPaths(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for name, p := range potentials() {
		for k, l := range lines(p) {
			for _, n := range sizes() {
				shift := r.IntN(8)
				in := func(extra int) []float64 { return random(r, n+extra, r.IntN(8), 2.5) }
				if len(name) > 10 && n > 20 && n != strip+1 { // the polynomials are all alike
					continue
				}
				phi, a, b, c, d, e, f := in(2*l.Radius), in(0), in(0), in(0), in(0), in(0), in(0)
				if n%5 == 4 {
					phi[r.IntN(len(phi))] = wild[r.IntN(len(wild))]
				}
				sameBits(t, fmt.Sprintf("%s, line %d, %d sites", name, k, n), func() [][]float64 {
					out := func() []float64 { return clone(make([]float64, n), shift) }
					next, inPlace, given := out(), clone(a, shift), out()
					l.Leapfrog(next, phi, a)
					l.Leapfrog(inPlace, phi, inPlace)
					l.LeapfrogGiven(given, phi, a, b)
					acc, plain, force := out(), out(), clone(b, shift)
					l.Accelerate(acc, phi, a)
					l.Accelerate(plain, phi, nil)
					l.AddForce(force, phi)
					drifted, rate := out(), clone(b, shift)
					l.KickDrift(drifted, phi, rate, 0.3)
					field, speed := out(), out()
					l.Stage(field, speed, phi, a, b, c, 0.1)
					whole, whole2 := clone(b, shift), clone(c, shift)
					l.Finish(whole, whole2, d, e, phi, f, 0.05)
					return [][]float64{next, inPlace, given, acc, plain, force, drifted, rate, field, speed, whole, whole2}
				})
			}
		}
	}
}

func TestVaryingOnAllPaths(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for name, p := range potentials() {
		for _, l := range lines(p) {
			for _, n := range sizes() {
				const at = 3
				whole := func(size float64) []float64 { return random(r, n+2*at, r.IntN(8), size) }
				v := Varying{
					Radius: l.Radius, Link: l.Link, Potential: p,
					Kappa: [3][]float64{whole(1), whole(1), whole(1)},
					Keep:  whole(1), Give: whole(0.1), Sigma: whole(1), Source: whole(1),
				}
				bare := Varying{Radius: l.Radius, Link: l.Link, Potential: p, Kappa: v.Kappa, Keep: v.Keep}
				if len(name) > 10 && n > 20 && n != strip+1 { // the polynomials are all alike
					continue
				}
				phi, before := random(r, n+2*l.Radius, r.IntN(8), 2), random(r, n, r.IntN(8), 2)
				sameBits(t, fmt.Sprintf("%s, radius %d, %d sites", name, l.Radius, n), func() [][]float64 {
					var out [][]float64
					for _, v := range []Varying{v, bare} {
						next, acc, alone := make([]float64, n), make([]float64, n), make([]float64, n)
						v.Leapfrog(next, phi, before, at)
						v.Accelerate(acc, phi, before, at)
						v.Accelerate(alone, phi, nil, at)
						out = append(out, next, acc, alone)
					}
					return out
				})
			}
		}
	}
}

// wild are numbers at which a loop may go wrong.
var wild = []float64{
	0, math.Copysign(0, -1), math.NaN(), math.Inf(1), math.Inf(-1), 1e4, -1e4, math.Nextafter(1e4, 2e4),
	-1e5, 1e22, 1e300, math.MaxFloat64, math.SmallestNonzeroFloat64, 1e-310, math.Pi, -math.Pi / 2,
}

func TestFunctionsOnAllPaths(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for _, n := range sizes() {
		for _, size := range []float64{0.1, 3, 1e4, 1e6} {
			x := random(r, n, r.IntN(8), size)
			if n > 0 && size == 3 {
				for range 1 + n/5 {
					x[r.IntN(n)] = wild[r.IntN(len(wild))]
				}
			}
			y, w := random(r, n, r.IntN(8), size), random(r, n, r.IntN(8), 1)
			sameBits(t, fmt.Sprintf("%d numbers up to %g", n, size), func() [][]float64 {
				var out [][]float64
				to := func() []float64 {
					out = append(out, make([]float64, n))
					return out[len(out)-1]
				}
				Sin(to(), x)
				Cos(to(), x)
				AddScaled(to(), x, 0.3, y)
				for _, name := range []string{"phi4", "phi6", "sine", "double sine", "polynomial 0", "polynomial 3", "polynomial 8"} {
					p := potentials()[name]
					p.Value(to(), x)
					p.Slope(to(), x)
					p.Curvature(to(), x)
				}
				return append(out, []float64{
					Sum(x), SumSquares(x), Dot(x, y), WeightedSquares(w, x),
					Distance(x, y), WeightedDistance(w, x, y), MaxAbs(x),
				})
			})
		}
	}
}
