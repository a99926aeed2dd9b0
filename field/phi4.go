package field

import "math"

// Phi4Kink returns the kink of φ_tt − φ_xx − φ + φ³ = 0, that is V = ¼(1 − φ²)²,
//
//	φ = tanh(γ(x − At − vt)/√2),  γ = 1/√(1 − v²),
//
// which rises from −1 on the left to 1 on the right. Its energy is γ·2√2/3. It
// is exact at every t. A speed out of range is an error.
// [Rajaraman 1982, Solitons and Instantons]
func Phi4Kink(m Moving) (Profile, error) {
	if err := m.check("φ⁴ kink"); err != nil {
		return nil, err
	}
	return boost(m, phi4Kink), nil
}

// Phi4Antikink returns the mirror image of the kink, which falls from 1 on the
// left to −1 on the right. It is exact at every t. A speed out of range is an
// error.
func Phi4Antikink(m Moving) (Profile, error) {
	if err := m.check("φ⁴ antikink"); err != nil {
		return nil, err
	}
	return boost(m, mirrored(phi4Kink)), nil
}

// phi4Kink returns tanh(ξ/√2) and its slope sech²(ξ/√2)/√2.
func phi4Kink(xi float64) (value, slope float64) {
	sech := 1 / math.Cosh(xi/math.Sqrt2)
	return math.Tanh(xi / math.Sqrt2), sech * sech / math.Sqrt2
}
