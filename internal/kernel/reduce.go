package kernel

import "math"

// The reductions.
const (
	opSum              = iota // Σ x
	opSquares                 // Σ x²
	opDot                     // Σ xy
	opWeightedSquares         // Σ wx²
	opDistance                // Σ (y − x)²
	opWeightedDistance        // Σ w(y − x)²
	opMaxAbs                  // the largest bit pattern of |x|
)

// Sum returns Σ x, in the order of all sums here: eight lanes, lane j over the
// elements i ≡ j mod 8 as they rise, added as ((0+4)+(2+6)) + ((1+5)+(3+7)).
func Sum(x []float64) float64 { return total(opSum, x, nil, nil) }

// SumSquares returns Σ x².
func SumSquares(x []float64) float64 { return total(opSquares, x, nil, nil) }

// Dot returns Σ xy. It panics if y is shorter than x.
func Dot(x, y []float64) float64 { return total(opDot, x, y[:len(x)], nil) }

// WeightedSquares returns Σ wx², twice an energy of weights w. It panics if w is
// shorter than x.
func WeightedSquares(w, x []float64) float64 { return total(opWeightedSquares, x, nil, w[:len(x)]) }

// Distance returns Σ (y − x)². With y = φ[d:] and x = φ[:n−d] it is the sum over
// the links of length d. It panics if y is shorter than x.
func Distance(x, y []float64) float64 { return total(opDistance, x, y[:len(x)], nil) }

// WeightedDistance returns Σ w(y − x)². It panics if y or w is shorter than x.
func WeightedDistance(w, x, y []float64) float64 {
	return total(opWeightedDistance, x, y[:len(x)], w[:len(x)])
}

// MaxAbs returns the largest |x|, 0 for none, and NaN if any x is NaN.
func MaxAbs(x []float64) float64 {
	if len(x) == 0 {
		return 0
	}
	var lanes [8]float64
	reduce(opMaxAbs, x, nil, nil, &lanes)
	m := lanes[0]
	for _, v := range lanes[1:] {
		m = larger(m, v)
	}
	return m
}

// Finite reports whether no x is infinite or NaN.
func Finite(x []float64) bool { return MaxAbs(x) <= math.MaxFloat64 }

func total(op int, x, y, w []float64) float64 {
	if len(x) == 0 {
		return 0
	}
	var s [8]float64
	reduce(op, x, y, w, &s)
	return ((s[0] + s[4]) + (s[2] + s[6])) + ((s[1] + s[5]) + (s[3] + s[7]))
}

// larger returns the one of two non-negative numbers with the larger bits, so
// that NaN is above +Inf.
func larger(a, b float64) float64 {
	if math.Float64bits(b) > math.Float64bits(a) {
		return b
	}
	return a
}

func reducePortable(op int, x, y, w []float64, lanes *[8]float64) {
	var s [8]float64
	switch op {
	case opSum:
		for i, v := range x {
			s[i&7] += v
		}
	case opSquares:
		for i, v := range x {
			s[i&7] = math.FMA(v, v, s[i&7])
		}
	case opDot:
		for i, v := range x {
			s[i&7] = math.FMA(v, y[i], s[i&7])
		}
	case opWeightedSquares:
		for i, v := range x {
			s[i&7] = math.FMA(float64(v*w[i]), v, s[i&7])
		}
	case opDistance:
		for i, v := range x {
			d := y[i] - v
			s[i&7] = math.FMA(d, d, s[i&7])
		}
	case opWeightedDistance:
		for i, v := range x {
			d := y[i] - v
			s[i&7] = math.FMA(float64(d*w[i]), d, s[i&7])
		}
	case opMaxAbs:
		for i, v := range x {
			s[i&7] = larger(s[i&7], math.Abs(v))
		}
	}
	*lanes = s
}
