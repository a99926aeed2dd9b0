package field

import (
	"fmt"
	"math"
)

// DoubleSineGordonKink returns the kink of φ_tt − φ_xx + sin φ + ½η sin ½φ = 0,
// that is V = (1 − cos φ) + η(1 − cos ½φ) with η > 0,
//
//	φ = 2π + 4 atan[√(η/(4 + η)) sinh μγ(x − At − vt)],  μ = √(1 + η/4),
//
// which rises from 0 on the left to 4π on the right: two sine-Gordon kinks that
// hold each other at the distance 2R, sech²R = η/(4 + η), for small η. It is
// exact at every t. η or a speed out of range is an error. [Campbell, Peyrard &
// Sodano 1986, Physica D 19, 165, in other units]
func DoubleSineGordonKink(eta float64, m Moving) (Profile, error) {
	f, err := doubleKink(eta, m)
	if err != nil {
		return nil, err
	}
	return boost(m, f), nil
}

// DoubleSineGordonAntikink returns the mirror image of the kink, which falls from
// 4π on the left to 0 on the right. It is exact at every t. η or a speed out of
// range is an error.
func DoubleSineGordonAntikink(eta float64, m Moving) (Profile, error) {
	f, err := doubleKink(eta, m)
	if err != nil {
		return nil, err
	}
	return boost(m, mirrored(f)), nil
}

func doubleKink(eta float64, m Moving) (func(xi float64) (value, slope float64), error) {
	if !(eta > 0) || math.IsInf(eta, 0) {
		return nil, fmt.Errorf("field: double sine-Gordon kink with η = %v; want a finite η > 0, for which it joins 0 and 4π", eta)
	}
	if err := m.check("double sine-Gordon kink"); err != nil {
		return nil, err
	}
	mu, a := math.Sqrt(1+eta/4), math.Sqrt(eta/(4+eta))
	return func(xi float64) (value, slope float64) {
		// s = sech, t = tanh of μξ, so that nothing overflows.
		s, t := 1/math.Cosh(mu*xi), math.Tanh(mu*xi)
		return 2*math.Pi + 4*math.Atan2(a*t, s), 4 * a * mu * s / (s*s + a*a*t*t)
	}, nil
}
