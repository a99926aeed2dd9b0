package kernel

import (
	"math"
	"math/rand/v2"
	"testing"
)

// plainForce is F of a line in the order of its formula, with the sum of the
// sizes of its terms, by which rounding errors are measured.
func plainForce(l *Line, phi []float64, i int, slope float64) (f, size float64) {
	p := phi[i+l.Radius]
	f, size = l.Bias, math.Abs(l.Bias)
	for d := 1; d <= l.Radius; d++ {
		right, left := phi[i+l.Radius+d], phi[i+l.Radius-d]
		f += l.Link[d-1] * ((right - p) - (p - left))
		size += math.Abs(l.Link[d-1]) * (math.Abs(right) + 2*math.Abs(p) + math.Abs(left))
	}
	return f - l.Pull*slope, size + math.Abs(l.Pull*slope)
}

// roundings bounds the error of a value with terms of a size: each of up to a
// dozen operations rounds a partial sum, no larger than all terms together.
func roundings(size float64) float64 { return 12 * 0x1p-53 * size }

func checkLeapfrog(t *testing.T, l *Line, phi, before []float64) {
	t.Helper()
	n := len(before)
	slope, next := make([]float64, n), make([]float64, n)
	l.Potential.Slope(slope, phi[l.Radius:][:n])
	l.Leapfrog(next, phi, before)
	for i, got := range next {
		p := phi[i+l.Radius]
		f, size := plainForce(l, phi, i, slope[i])
		want := p + (l.Keep*(p-before[i]) + f)
		size += math.Abs(p) + math.Abs(l.Keep)*(math.Abs(p)+math.Abs(before[i]))
		if d := math.Abs(got - want); d > roundings(size) {
			t.Fatalf("%s, %d sites: site %d is %v, want %v ± %v", taken, n, i, got, want, roundings(size))
		}
	}
}

func TestLeapfrogAgainstFormula(t *testing.T) {
	r := rand.New(rand.NewPCG(21, 22))
	for _, p := range paths() {
		on(p, func() {
			for _, v := range potentials() {
				for _, l := range lines(v) {
					for _, n := range []int{1, 2, 7, 33, strip + 5} {
						checkLeapfrog(t, &l, random(r, n+2*l.Radius, 0, 2), random(r, n, 0, 2))
					}
				}
			}
		})
	}
}

func FuzzLeapfrog(f *testing.F) {
	f.Add(uint64(1), uint16(40), uint8(0), 1.0, 0.25, 0.0)
	f.Add(uint64(2), uint16(9), uint8(13), 0.9, -3.0, 0.5)
	f.Add(uint64(3), uint16(300), uint8(29), 1.0, 1e-3, -1e-2)
	f.Fuzz(func(t *testing.T, seed uint64, n uint16, which uint8, keep, link, bias float64) {
		for _, v := range []float64{keep, link, bias} {
			if !(math.Abs(v) < 1e6) {
				return // sizes at which a plain sum of squares would overflow
			}
		}
		vs := []Potential{{}, Quadratic(2), Phi4(), Phi6(), Sine(), DoubleSine(-0.4)}
		r := rand.New(rand.NewPCG(seed, 23))
		sites := int(n) % 600
		l := Line{
			Radius: 1 + int(which)%3, Link: [3]float64{link, -link / 7, link / 50},
			Keep: keep, Bias: bias, Pull: 0.01, Potential: vs[int(which)/3%len(vs)],
		}
		phi, before := random(r, sites+2*l.Radius, int(which)%8, 3), random(r, sites, int(seed%8), 3)
		for _, p := range paths() {
			on(p, func() { checkLeapfrog(t, &l, phi, before) })
		}
		sameBits(t, "fuzz", func() [][]float64 {
			next := make([]float64, sites)
			l.Leapfrog(next, phi, before)
			return [][]float64{next}
		})
	})
}

// TestDAlembert runs two waves through each other at Courant number 1, where
// the solution of the lattice is that of the equation, f(i − n) + g(i + n). The
// values are multiples of 2⁻³⁰, so nothing is rounded and every bit must fit.
func TestDAlembert(t *testing.T) {
	const n, steps = 300, 1000
	r := rand.New(rand.NewPCG(31, 32))
	f, g := make([]float64, n), make([]float64, n)
	for i := range f {
		f[i], g[i] = math.Round(0x1p30*r.Float64())*0x1p-30, math.Round(0x1p30*r.Float64())*0x1p-30
	}
	wave := func(step, i int) float64 { return f[((i-step)%n+n)%n] + g[(i+step)%n] }
	for _, p := range paths() {
		on(p, func() {
			c := newCloth(Line{Radius: 1, Link: [3]float64{1}, Keep: 1}, n, true)
			for k := range c.slices {
				for i := range c.slices[k] {
					c.slices[k][i] = wave((k+1)%2, i) // slice 1 in slices[0]
				}
			}
			for s := range steps {
				c.row(s, 0, n)
			}
			for i, got := range c.slices[steps%2] {
				if want := wave(steps+1, i); got != want {
					t.Fatalf("%v: site %d is %v, want %v", p, i, got, want)
				}
			}
		})
	}
}

// TestForceIsTheGradient compares AddForce with central differences of the
// energy Σ_d ½c_d Σ (φ(i+d) − φ(i))² + Σ V. The difference of step s is off by
// s²/6 times a third derivative, below 90 for these fields, and by rounding,
// 10⁻¹⁶·E/s.
func TestForceIsTheGradient(t *testing.T) {
	const n, s, tolerance = 90, 1e-4, 90.0/6*1e-8 + 1e-16*1e3/1e-4
	r := rand.New(rand.NewPCG(41, 42))
	for name, v := range potentials() {
		for _, l := range lines(v) {
			l.Pull, l.Bias = 1, 0
			phi := random(r, n, 0, 1)
			value := make([]float64, n)
			energy := func() float64 {
				v.Value(value, phi)
				e := Sum(value)
				for d := 1; d <= l.Radius; d++ {
					e += 0.5 * l.Link[d-1] * Distance(phi[:n-d], phi[d:])
				}
				return e
			}
			force := make([]float64, n-2*l.Radius)
			l.AddForce(force, phi)
			for _, i := range []int{l.Radius, n / 2, n - l.Radius - 1} {
				at := phi[i]
				phi[i] = at + s
				up := energy()
				phi[i] = at - s
				down := energy()
				phi[i] = at
				if got, want := force[i-l.Radius], -(up-down)/(2*s); math.Abs(got-want) > tolerance {
					t.Errorf("%s, radius %d: force at %d is %v, want %v", name, l.Radius, i, got, want)
				}
			}
		}
	}
}

// TestVaryingIsLine compares a varying line of equal coefficients with a Line.
func TestVaryingIsLine(t *testing.T) {
	const n = 70
	r := rand.New(rand.NewPCG(51, 52))
	same := func(v float64) []float64 {
		x := make([]float64, n+3)
		fill(x, v)
		return x
	}
	for name, p := range potentials() {
		for _, l := range lines(p) {
			const give = 0.8
			v := Varying{
				Radius: l.Radius, Link: l.Link, Potential: p, Keep: same(l.Keep), Give: same(give),
				Kappa: [3][]float64{same(1 / give), same(1 / give), same(1 / give)},
				Sigma: same(l.Pull / give), Source: same(l.Bias / give),
			}
			phi, other := random(r, n+2*l.Radius, 0, 2), random(r, n, 0, 2)
			got, want := make([]float64, n), make([]float64, n)
			check := func(what string) {
				for i := range got {
					// sizes of a dozen terms of order 2 to 10
					if math.Abs(got[i]-want[i]) > roundings(60) {
						t.Errorf("%s, radius %d: %s at %d is %v, want %v", name, l.Radius, what, i, got[i], want[i])
					}
				}
			}
			v.Leapfrog(got, phi, other, 0)
			l.Leapfrog(want, phi, other)
			check("leapfrog")
			v.Accelerate(got, phi, other, 0)
			l.Accelerate(want, phi, other)
			check("acceleration")
			v.Accelerate(got, phi, nil, 0)
			l.Accelerate(want, phi, nil)
			check("acceleration without a rate")
		}
	}
}

func TestNothingIsAllocated(t *testing.T) {
	const n = 700
	c := newCloth(lines(Phi4())[5], n, true)
	tiles := Tiles{Sites: n, Radius: 3, Periodic: true, Width: 100, Depth: 8}
	row := c.row
	phi, x := make([]float64, n+6), make([]float64, n)
	var xs [4][]float64
	for k := range xs {
		xs[k] = make([]float64, n)
	}
	v := Varying{Radius: 3, Kappa: [3][]float64{phi, phi, phi}, Keep: phi, Sigma: phi, Source: phi, Potential: Sine()}
	for _, p := range paths() {
		on(p, func() {
			for name, pot := range potentials() {
				l := Line{Radius: 3, Potential: pot}
				if a := testing.AllocsPerRun(5, func() {
					l.Leapfrog(x, phi, x)
					l.LeapfrogGiven(x, phi, x, xs[1])
					l.Accelerate(x, phi, nil)
					l.AddForce(x, phi)
					l.KickDrift(x, phi, xs[0], 0.1)
					l.Stage(x, xs[0], phi, xs[1], xs[2], xs[3], 0.1)
					l.Finish(x, xs[0], xs[1], xs[2], phi, xs[3], 0.1)
					v.Leapfrog(x, phi, x, 0)
					v.Accelerate(x, phi, nil, 0)
					pot.Value(x, xs[0])
					pot.Slope(x, xs[0])
					pot.Curvature(x, xs[0])
					Sin(x, x)
					Cos(x, x)
					AddScaled(x, x, 0.1, xs[0])
					_ = Sum(x) + SumSquares(x) + Dot(x, x) + WeightedDistance(x, x, x) + MaxAbs(x)
				}); a != 0 {
					t.Errorf("%v, %s: %v allocations a run", p, name, a)
				}
			}
			if a := testing.AllocsPerRun(5, func() { tiles.Advance(20, row) }); a != 0 {
				t.Errorf("%v: tiles made %v allocations a run", p, a)
			}
		})
	}
}
