package kernel

import "math"

// Sine and cosine by Cody and Waite's reduction and one polynomial for each.
// With n the whole number nearest to |x|/(π/2),
//
//	r = ((|x| − n·p₁) − n·p₂) − n·p₃,
//
// p₁ + p₂ + p₃ being π/2 in 159 bits and each bracket one fused operation. The
// first is exact: for |x| ≤ 10⁴ both sides are multiples of 2⁻⁵² and the
// difference is below 1. Then sin|x| is, up to its sign, sin r for even n and
// cos r for odd n, either of the form
//
//	b + (b·r²)·P(r²),  b = r or 1,
//
// so that all lanes do the same but for the choice of b and of the coefficients;
// cos|x| is the same with n + 1 [Cody & Waite 1980, Software Manual for the
// Elementary Functions, ch. 8].
//
// The coefficients are those that fpminimax of Sollya returns for the relative
// error of sin and cos on [2⁻³⁰, π/4] with the monomials 1, 3, …, 15 and
// 0, 2, …, 14 in doubles, of which the first came out as 1; the errors are
// 1.2·10⁻¹⁹ and 6·10⁻²⁰ [Brisebarre & Chevillard 2007, ARITH 18, 169].
const (
	reach    = 1e4                   // beyond it, and for NaN, sinFar and cosFar
	shifter  = 0x1.8p52              // adding it rounds to a whole number
	perRight = 0x1.45f306dc9c883p-1  // 2/π
	piHigh   = 0x1.921fb54442d18p+0  // p₁
	piMid    = 0x1.1a62633145c07p-54 // p₂
	piLow    = -0x1.f1976b7ed8fbcp-110

	signBit = 1 << 63
)

// circular holds the coefficients of P for sine and cosine.
var circular = [2][7]float64{
	{
		-0x1.5555555555555p-3, 0x1.111111111108ap-7, -0x1.a01a01a0069e2p-13, 0x1.71de3a3fc9b45p-19,
		-0x1.ae643cdcf9723p-26, 0x1.6114666ffd175p-33, -0x1.a53e76a29d14ap-41,
	},
	{
		-0x1p-1, 0x1.555555555554ap-5, -0x1.6c16c16c14e49p-10, 0x1.a01a019c687a6p-16,
		-0x1.27e4f7d8e48b5p-22, 0x1.1ee9ccb790299p-29, -0x1.8f9f6356befd8p-37,
	},
}

// Sin writes sin x[i] to dst[i]. The largest error found for sin and cos, in
// 5·10⁵ arguments over [−10⁴, 10⁴] and around the multiples of π/2 there, is 1.44
// units in the last place; it cannot be 1.5, there or beyond. dst may be x.
func Sin(dst, x []float64) { apply(opSin, dst, x, nil) }

// Cos writes cos x[i] to dst[i], as accurate as Sin. dst may be x.
func Cos(dst, x []float64) { apply(opCos, dst, x, nil) }

// sin returns the sine of one number, with the bits of Sin.
func sin(x float64) float64 {
	a := math.Abs(x)
	if !(a <= reach) {
		return sinFar(x)
	}
	t := math.FMA(a, perRight, shifter)
	n := math.Float64bits(t)
	return circle(fold(a, t-shifter), n, n<<62^math.Float64bits(x))
}

// cos returns the cosine of one number, with the bits of Cos.
func cos(x float64) float64 {
	a := math.Abs(x)
	if !(a <= reach) {
		return cosFar(x)
	}
	t := math.FMA(a, perRight, shifter)
	n := math.Float64bits(t) + 1
	return circle(fold(a, t-shifter), n, n<<62)
}

// fold returns a − nπ/2.
func fold(a, n float64) float64 {
	r := math.FMA(-n, piHigh, a)
	r = math.FMA(-n, piMid, r)
	return math.FMA(-n, piLow, r)
}

// circle returns sin r for even n and cos r for odd n, with its sign changed if
// the sign bit of flip is set.
func circle(r float64, n, flip uint64) float64 {
	c := &circular[n&1]
	b := r
	if n&1 != 0 {
		b = 1
	}
	u := float64(r * r)
	// Even and odd powers apart, which halves the chain of operations that wait
	// for each other.
	w := float64(u * u)
	q := math.FMA(math.FMA(math.FMA(c[6], w, c[4]), w, c[2]), w, c[0])
	odd := math.FMA(math.FMA(c[5], w, c[3]), w, c[1])
	q = math.FMA(odd, u, q)
	return math.Float64frombits(math.Float64bits(math.FMA(float64(b*u), q, b)) ^ flip&signBit)
}
