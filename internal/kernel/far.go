package kernel

import (
	"math"
	"math/bits"
)

// perPiBits holds 1/π = Σ perPiBits[k]·2^(−64(k+1)).
var perPiBits = [...]uint64{
	0x517cc1b727220a94, 0xfe13abe8fa9a6ee0, 0x6db14acc9e21c820, 0xff28b1d5ef5de2b0,
	0xdb92371d2126e970, 0x0324977504e8c90e, 0x7f0ef58e5894d39f, 0x74411afa975da242,
	0x74ce38135a2fbf20, 0x9cc8eb1cc1a99cfa, 0x4e422fc5defc941d, 0x8ffc4bffef02cc07,
	0xf79788c5ad05368f, 0xb69b3f6793e584db, 0xa7a31fb34f2ff516, 0xba93dd63f5f2f8bd,
	0x9e839cfbc5294975, 0x35fdafd88fc6ae84, 0x2b0198237e3db5d5, 0xf867de104d7a1b0e,
}

// A turn is x/π modulo 2 for a large x, found in whole numbers from the part of
// 1/π that matters [Payne & Hanek 1983, SIGNUM Newsletter 18, 19]. The highest
// bit of the first word weighs 1, the next ½, and so on.
type turn [4]uint64

// turnOf returns |x|/π modulo 2 for 2 < |x| < ∞. About 200 bits are true: the
// nearest that a float64 comes to a multiple of π leaves more than 130.
func turnOf(x float64) turn {
	b := math.Float64bits(x)
	m, e := b&(1<<52-1)|1<<52, int(b>>52&0x7ff)-1075 // |x| = m·2ᵉ

	// Half of it, modulo 1, is m times the fraction w of 2ᵉ⁻¹/π, as what stands
	// before the point of that is whole.
	first := max(e-1, 0)
	word, up := first/64, uint(first%64)
	var p [5]uint64 // m·w = carry + p/2³²⁰
	var carry uint64
	for k := 4; k >= 0; k-- {
		w := perPiWord(word+k)<<up | perPiWord(word+k+1)>>(64-up)
		hi, lo := bits.Mul64(m, w)
		var c uint64
		p[k], c = bits.Add64(lo, carry, 0)
		carry = hi + c
	}
	down := uint(first - (e - 1)) // > 0 where w is 1/π itself
	t := turn{carry<<(64-down) | p[0]>>down}
	for k := 1; k < len(t); k++ {
		t[k] = p[k-1]<<(64-down) | p[k]>>down
	}
	return t
}

func perPiWord(k int) uint64 {
	if k < len(perPiBits) {
		return perPiBits[k]
	}
	return 0
}

// sine returns sin πt, with its sign changed if the sign bit of flip is set.
func (t turn) sine(flip uint64) float64 {
	flip ^= t[0]
	// What is left of the last half turn, f in [0, 1), and its distance from the
	// nearest quarter, n = 0, 1 or 2; 2 is 0 of the next half turn.
	f := turn{t[0]<<1 | t[1]>>63, t[1]<<1 | t[2]>>63, t[2]<<1 | t[3]>>63, t[3] << 1}
	n := (f[0] + 1<<62) >> 63
	if f[0] >= 3<<62 {
		flip ^= signBit
	}
	f[0] -= n << 63
	negative := f[0]&signBit != 0
	if negative {
		borrow := uint64(0)
		for k := len(f) - 1; k >= 0; k-- {
			f[k], borrow = bits.Sub64(0, f[k], borrow)
		}
	}
	scale := 2. // r = fπ = 2f·π/2
	for f[0] == 0 {
		f = turn{f[1], f[2], f[3]}
		scale *= 0x1p-64
	}
	up := uint(bits.LeadingZeros64(f[0]))
	high, low := f[0]<<up|f[1]>>(64-up), f[1]<<up|f[2]>>(64-up)
	// Both are exact or short of digits that do not count.
	a := float64(high &^ 0x7ff)
	b := float64(high&0x7ff) + float64(float64(low)*0x1p-64)
	r := math.FMA(a, piHigh, math.FMA(a, piMid, float64(b*piHigh)))
	r *= float64(scale * math.Float64frombits(uint64(1023-64-up)<<52)) // a power of 2
	if negative {
		r = -r
	}
	return circle(r, n, flip)
}

// sinFar returns sin x for |x| beyond the reach, ±Inf and NaN.
func sinFar(x float64) float64 {
	if math.IsNaN(x - x) {
		return math.NaN()
	}
	return turnOf(x).sine(math.Float64bits(x))
}

// cosFar returns cos x for |x| beyond the reach, ±Inf and NaN.
func cosFar(x float64) float64 {
	if math.IsNaN(x - x) {
		return math.NaN()
	}
	t := turnOf(x)
	t[0] += signBit >> 1 // cos x = sin(x + π/2)
	return t.sine(0)
}
