package field

// Superpose returns base + Σ parts, value and rate. With no parts it is the
// constant base at rest.
//
// For a nonlinear equation a sum of solutions is no solution, but for kinks at
// a distance d it fails only by terms of order e^(−μd), μ being the mass of
// small waves in the vacuum between them. The base is what the vacua
// in between would otherwise count twice:
//
//	−1 + φ⁴ kink at −a + φ⁴ antikink at a     from −1 over 1 to −1
//	−2π + sine-Gordon kink + antikink         from 0 over 2π to 0
//	−1 + φ⁶ (0, 1) at −a + φ⁶ (1, 0) at a     from 0 over 1 to 0
//	arcsin b + sine-Gordon kink               a fluxon on a bias b < 1, roughly
//
// It panics if a part is nil.
func Superpose(base float64, parts ...Profile) Profile {
	for _, p := range parts {
		if p == nil {
			panic("field: nil profile to superpose")
		}
	}
	parts = append([]Profile(nil), parts...)
	return func(x, t float64) (value, rate float64) {
		value = base
		for _, p := range parts {
			v, r := p(x, t)
			value += v
			rate += r
		}
		return value, rate
	}
}
