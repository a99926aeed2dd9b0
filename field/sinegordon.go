package field

import (
	"fmt"
	"math"
)

// SineGordonKink returns the kink of φ_tt − φ_xx + sin φ = 0,
//
//	φ = 4 atan exp γ(x − At − vt),  γ = 1/√(1 − v²),
//
// which rises from 0 on the left to 2π on the right: one fluxon. Its energy is
// 8γ and its momentum 8γv. It is exact at every t. A speed out of range is an
// error. [Perring & Skyrme 1962, Nucl. Phys. 31, 550]
func SineGordonKink(m Moving) (Profile, error) {
	if err := m.check("sine-Gordon kink"); err != nil {
		return nil, err
	}
	return boost(m, sineGordonKink), nil
}

// SineGordonAntikink returns the mirror image of the kink,
//
//	φ = 4 atan exp(−γ(x − At − vt)),
//
// which falls from 2π on the left to 0 on the right: one antifluxon. It is exact
// at every t. A speed out of range is an error.
func SineGordonAntikink(m Moving) (Profile, error) {
	if err := m.check("sine-Gordon antikink"); err != nil {
		return nil, err
	}
	return boost(m, mirrored(sineGordonKink)), nil
}

// sineGordonKink returns 4 atan eˣ and its slope 2 sech x.
func sineGordonKink(xi float64) (value, slope float64) {
	value = 4 * math.Atan(math.Exp(-math.Abs(xi)))
	if xi > 0 {
		value = 2*math.Pi - value
	}
	return value, 2 / math.Cosh(xi)
}

// mirrored returns f(−ξ) and its slope.
func mirrored(f func(float64) (value, slope float64)) func(float64) (value, slope float64) {
	return func(xi float64) (value, slope float64) {
		value, slope = f(-xi)
		return value, -slope
	}
}

// A Breather is a sine-Gordon breather in its own rest frame: it swings with
// the frequency ω = Frequency, 0 < ω < 1, and starts at Phase (radians, zero at
// its largest).
type Breather struct {
	Moving
	Frequency float64
	Phase     float64
}

// SineGordonBreather returns the breather of φ_tt − φ_xx + sin φ = 0,
//
//	φ = 4 atan[ε cos θ / (ω cosh εγ(x − At − vt))],
//	θ = ωγ(t − v(x − At)) + Phase,  ε = √(1 − ω²),  γ = 1/√(1 − v²).
//
// Its energy is 16γε; seen from the lattice it swings with the period 2πγ/ω at
// its centre and is shorter by γ. It is exact at every t. A frequency or speed
// out of range, or a phase that is not finite, is an error. The limit ω → 1 is
// a small wave, ω → 0 a kink and an antikink that hardly hold each other.
func SineGordonBreather(b Breather) (Profile, error) {
	const name = "sine-Gordon breather"
	if err := b.Moving.check(name); err != nil {
		return nil, err
	}
	if !(b.Frequency > 0 && b.Frequency < 1) {
		return nil, fmt.Errorf("field: %s with the frequency %v; want a frequency above 0 and below 1", name, b.Frequency)
	}
	if math.IsNaN(b.Phase - b.Phase) {
		return nil, fmt.Errorf("field: %s with the phase %v; want a finite number", name, b.Phase)
	}
	w, v, g := b.Frequency, b.Speed, gamma(b.Speed)
	e := math.Sqrt((1 - w) * (1 + w))
	return func(x, t float64) (value, rate float64) {
		sin, cos := math.Sincos(w*g*(t-v*(x-b.At)) + b.Phase)
		eta := e * g * (x - b.At - v*t)
		sech := 1 / math.Cosh(eta)
		// φ = 4 atan(p/ω), and h keeps the quotient finite as ω → 0.
		p := e * cos * sech
		pt := e * sech * g * (e*v*cos*math.Tanh(eta) - w*sin)
		h := math.Hypot(w, p)
		return 4 * math.Atan2(p, w), 4 * (w / h) * (pt / h)
	}, nil
}

// A Collision says where and when two sine-Gordon solitons of opposite speeds
// meet, in the frame of their centre of mass.
type Collision struct {
	Speed float64 // speed v of either, 0 < v < 1
	At    float64 // position of the centre of mass
	Time  float64 // time at which they meet
}

func (c Collision) check(name string) error {
	if !(c.Speed > 0 && c.Speed < 1) {
		return fmt.Errorf("field: %s with the speed %v; want a speed above 0 and below 1, in units of the wave speed", name, c.Speed)
	}
	if math.IsNaN(c.At-c.At) || math.IsNaN(c.Time-c.Time) {
		return fmt.Errorf("field: %s meeting at x = %v, t = %v; want finite numbers", name, c.At, c.Time)
	}
	return nil
}

// SineGordonKinkAntikink returns the whole collision of a kink that comes from
// the left with an antikink that comes from the right,
//
//	φ = −4 atan[sinh γv(t − Time) / (v cosh γ(x − At))].
//
// The field is 0 at both ends; between the two it is 2π before they meet and
// −2π after they have passed through each other. The energy is 16γ, and each
// ends 2√(1 − v²) ln(1/v) ahead of free flight. It is exact at every t. A speed
// out of range is an error. [Perring & Skyrme 1962, Nucl. Phys. 31, 550]
func SineGordonKinkAntikink(c Collision) (Profile, error) {
	if err := c.check("sine-Gordon kink and antikink"); err != nil {
		return nil, err
	}
	v, g := c.Speed, gamma(c.Speed)
	return func(x, t float64) (value, rate float64) {
		a, b := g*v*(t-c.Time), g*(x-c.At)
		m := max(math.Abs(a), math.Abs(b))
		sa, ca := scaledSinhCosh(a, m)
		_, cb := scaledSinhCosh(b, m)
		cb *= v
		h := math.Hypot(sa, cb)
		return -4 * math.Atan2(sa, cb), -4 * g * v * (ca / h) * (cb / h)
	}, nil
}

// SineGordonKinkKink returns the whole collision of two kinks,
//
//	φ = 4 atan[v sinh γ(x − At) / cosh γv(t − Time)],
//
// which rises from −2π on the left over 0 to 2π on the right. The kinks turn
// each other back, or exchange their places: each outgoing kink is
// 2√(1 − v²) ln(1/v) ahead of the free flight of the incoming kink of the same
// speed. The energy is 16γ. It is exact at every t. A speed out of range is an
// error. [Perring & Skyrme 1962, Nucl. Phys. 31, 550]
func SineGordonKinkKink(c Collision) (Profile, error) {
	if err := c.check("two sine-Gordon kinks"); err != nil {
		return nil, err
	}
	v, g := c.Speed, gamma(c.Speed)
	return func(x, t float64) (value, rate float64) {
		a, b := g*v*(t-c.Time), g*(x-c.At)
		m := max(math.Abs(a), math.Abs(b))
		sa, ca := scaledSinhCosh(a, m)
		sb, _ := scaledSinhCosh(b, m)
		sb *= v
		h := math.Hypot(ca, sb)
		return 4 * math.Atan2(sb, ca), -4 * g * v * (sb / h) * (sa / h)
	}, nil
}

// scaledSinhCosh returns sinh(x)·e⁻ᵐ and cosh(x)·e⁻ᵐ for m ≥ |x|, which never
// overflow.
func scaledSinhCosh(x, m float64) (sinh, cosh float64) {
	up, down := math.Exp(math.Abs(x)-m), math.Exp(-math.Abs(x)-m)
	return math.Copysign(-math.Expm1(-2*math.Abs(x))*up/2, x), (up + down) / 2
}
