package kernel

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// bigPi is π to 1400 bits by Machin's formula, 16 atan(1/5) − 4 atan(1/239).
var bigPi = func() *big.Float {
	const bits = 1400
	one := new(big.Int).Lsh(big.NewInt(1), bits+20)
	atanInverse := func(n int64) *big.Int {
		sum, power, square := new(big.Int), new(big.Int).Quo(one, big.NewInt(n)), big.NewInt(n*n)
		for k := int64(1); power.Sign() != 0; k += 2 {
			term := new(big.Int).Quo(power, big.NewInt(k))
			if k%4 == 1 {
				sum.Add(sum, term)
			} else {
				sum.Sub(sum, term)
			}
			power.Quo(power, square)
		}
		return sum
	}
	a, b := atanInverse(5), atanInverse(239)
	a.Sub(a.Mul(a, big.NewInt(16)), b.Mul(b, big.NewInt(4)))
	return new(big.Float).SetMantExp(new(big.Float).SetPrec(bits).SetInt(a), -(bits + 20))
}()

// exact returns sin(x + quarters·π/2) to some 150 bits: the argument is reduced
// in 1400 bits, and its Taylor series summed in 200.
func exact(x float64, quarters int64) *big.Float {
	const prec = 200
	full := func() *big.Float { return new(big.Float).SetPrec(1400) }
	y := full().SetFloat64(x)
	if quarters != 0 {
		y.Add(y, full().Quo(full().Mul(bigPi, full().SetInt64(quarters)), full().SetInt64(2)))
	}
	turns := full().Quo(y, bigPi)
	turns.Add(turns, full().SetFloat64(math.Copysign(0.5, x)))
	n, _ := turns.Int(nil)
	y.Sub(y, full().Mul(full().SetInt(n), bigPi))
	r := new(big.Float).SetPrec(prec).Set(y)
	square := new(big.Float).SetPrec(prec).Mul(r, r)
	term, sum := new(big.Float).SetPrec(prec).Set(r), new(big.Float).SetPrec(prec).Set(r)
	for k := int64(2); term.Sign() != 0 && term.MantExp(nil) > sum.MantExp(nil)-prec; k += 2 {
		term.Mul(term, square)
		term.Quo(term, new(big.Float).SetPrec(prec).SetInt64(-k*(k+1)))
		sum.Add(sum, term)
	}
	if n.Bit(0) == 1 {
		sum.Neg(sum)
	}
	return sum
}

// ulps returns how far got is from want in units in the last place of want.
func ulps(got float64, want *big.Float) float64 {
	w, _ := want.Float64()
	unit := math.Nextafter(math.Abs(w), math.Inf(1)) - math.Abs(w)
	d := new(big.Float).SetPrec(200).SetFloat64(got)
	e, _ := d.Sub(d, want).Quo(d, new(big.Float).SetFloat64(unit)).Float64()
	return math.Abs(e)
}

// arguments returns numbers up to size: uniform, log-uniform, and the float64s
// around the multiples of π/2, where r is small and the reduction is tried.
func arguments(r *rand.Rand, n int, size float64) []float64 {
	var xs []float64
	for range n {
		xs = append(xs, size*(2*r.Float64()-1), size*math.Exp(-20*r.Float64()))
		k := math.Floor(r.Float64() * size / (math.Pi / 2))
		x := k * (math.Pi / 2)
		xs = append(xs, x, math.Nextafter(x, 0), math.Nextafter(x, size))
	}
	return xs
}

// sineBound is the largest error that sin and cos may have, in units in the last
// place: ½ for the last rounding; for that of r ½ of its own unit, which where
// sin r < ½ < r is twice that of the result, times cos r ≤ 0.87 there; and 0.13
// for the roundings inside the polynomial term, which is at most 0.31 of the
// result.
const sineBound = 1.5

// TestSineAccuracy measures the largest error on [−10⁴, 10⁴].
func TestSineAccuracy(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	worst := worstSine(arguments(r, 4000, reach))
	t.Logf("sin: %.4f units in the last place at %v; cos: %.4f at %v", worst[0].err, worst[0].x, worst[1].err, worst[1].x)
	for k, w := range worst {
		if w.err > sineBound {
			t.Errorf("%s %v is off by %.4f units in the last place, want %v at most", [2]string{"sin", "cos"}[k], w.x, w.err, sineBound)
		}
	}
}

type worstCase struct{ x, err float64 }

func worstSine(xs []float64) (worst [2]worstCase) {
	s, c := make([]float64, len(xs)), make([]float64, len(xs))
	Sin(s, xs)
	Cos(c, xs)
	for i, x := range xs {
		for k, got := range [2]float64{s[i], c[i]} {
			if got == 0 && x == 0 {
				continue
			}
			if e := ulps(got, exact(x, int64(k))); e > worst[k].err {
				worst[k] = worstCase{x, e}
			}
		}
	}
	return worst
}

func TestSineFar(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 14))
	xs := arguments(r, 200, 1e6)
	for _, size := range []float64{1e8, 1e15, 1e22, 1e100, math.MaxFloat64} {
		xs = append(xs, arguments(r, 100, size)...)
	}
	// The float64 nearest to a multiple of π/2 in relation to its size [Muller
	// 2016, Elementary Functions, §11.3.2].
	xs = append(xs, 6381956970095103*0x1p797, -6381956970095103*0x1p797, 10000.000000000002)
	for k, w := range worstSine(xs) {
		if w.err > sineBound { // as within the reach: the same polynomials, r as good
			t.Errorf("%s %v is off by %.4f units in the last place, want %v at most", [2]string{"sin", "cos"}[k], w.x, w.err, sineBound)
		}
	}
}

func TestSineOfSpecialNumbers(t *testing.T) {
	for _, p := range paths() {
		on(p, func() {
			x := []float64{0, math.Copysign(0, -1), math.Inf(1), math.Inf(-1), math.NaN(), math.SmallestNonzeroFloat64}
			s, c := make([]float64, len(x)), make([]float64, len(x))
			Sin(s, x)
			Cos(c, x)
			if math.Float64bits(s[0]) != 0 || math.Float64bits(s[1]) != signBit || c[0] != 1 || c[1] != 1 {
				t.Errorf("%v: sin ±0 = %v, %v, cos ±0 = %v, %v; want ±0 and 1", p, s[0], s[1], c[0], c[1])
			}
			for i := 2; i < 5; i++ {
				if !math.IsNaN(s[i]) || !math.IsNaN(c[i]) {
					t.Errorf("%v: sin %v = %v, cos = %v, want NaN", p, x[i], s[i], c[i])
				}
			}
			if s[5] != x[5] {
				t.Errorf("%v: sin %v = %v, want the same", p, x[5], s[5])
			}
		})
	}
}

// TestPerPiBits finds the table from π itself.
func TestPerPiBits(t *testing.T) {
	f := new(big.Float).SetPrec(1400)
	f.Quo(f.SetInt64(1), bigPi)
	f.SetMantExp(f, 64*len(perPiBits))
	n, _ := f.Int(nil)
	mask := new(big.Int).SetUint64(math.MaxUint64)
	for k, got := range perPiBits {
		w := new(big.Int).Rsh(n, uint(64*(len(perPiBits)-1-k)))
		if want := w.And(w, mask).Uint64(); got != want {
			t.Errorf("word %d is %#x, want %#x", k, got, want)
		}
	}
}

// TestSineAgainstMath compares with the standard library, which is good to about
// one unit: more than two apart, one of the two is wrong.
func TestSineAgainstMath(t *testing.T) {
	r := rand.New(rand.NewPCG(15, 16))
	for range 200000 {
		x := reach * (2*r.Float64() - 1)
		if got, want := sin(x), math.Sin(x); math.Abs(got-want) > 2.5*0x1p-53 {
			t.Fatalf("sin %v = %v, package math has %v", x, got, want)
		}
		if got, want := cos(x), math.Cos(x); math.Abs(got-want) > 2.5*0x1p-53 {
			t.Fatalf("cos %v = %v, package math has %v", x, got, want)
		}
	}
}
