package field

import (
	"fmt"
	"math"
)

// Phi6Kink returns the kink of φ_tt − φ_xx + φ(1 − φ²)(1 − 3φ²) = 0, that is
// V = ½φ²(1 − φ²)², in the sector (left, right): it goes from the vacuum left
// at x → −∞ to the vacuum right at x → ∞. The four sectors are
//
//	(0, 1)    φ =  √[(1 + tanh ξ)/2]   kink
//	(1, 0)    φ =  √[(1 − tanh ξ)/2]   antikink
//	(−1, 0)   φ = −√[(1 − tanh ξ)/2]   kink
//	(0, −1)   φ = −√[(1 + tanh ξ)/2]   antikink
//
// with ξ = γ(x − At − vt) and γ = 1/√(1 − v²). Each has the energy γ/4. They are
// exact at every t. Another sector, or a speed out of range, is an error.
// [Lohe 1979, Phys. Rev. D 20, 3120]
func Phi6Kink(left, right int, m Moving) (Profile, error) {
	sign := float64(left + right)
	if left*right != 0 || math.Abs(sign) != 1 {
		return nil, fmt.Errorf("field: φ⁶ kink in the sector (%d, %d); want (0, 1), (1, 0), (-1, 0) or (0, -1)", left, right)
	}
	if err := m.check("φ⁶ kink"); err != nil {
		return nil, err
	}
	f := phi6Kink
	if right == 0 {
		f = mirrored(phi6Kink)
	}
	return boost(m, func(xi float64) (value, slope float64) {
		value, slope = f(xi)
		return sign * value, sign * slope
	}), nil
}

// phi6Kink returns √[(1 + tanh ξ)/2] = 1/√(1 + e^(−2ξ)) and its slope φ(1 − φ²).
func phi6Kink(xi float64) (value, slope float64) {
	d := math.Exp(-math.Abs(xi))
	small, large := d*d/(1+d*d), 1/(1+d*d) // of φ² and 1 − φ²
	if xi > 0 {
		value = math.Sqrt(large)
		return value, value * small
	}
	value = d * math.Sqrt(large)
	return value, value * large
}
