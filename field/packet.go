package field

import (
	"fmt"
	"math"
)

// A Wave is a travelling wave of φ_tt − c²φ_xx + m²φ = 0.
type Wave struct {
	Amplitude  float64
	Wavenumber float64 // k ≥ 0, radians per length
	Phase      float64 // δ, radians
	Mass       float64 // m ≥ 0
	Speed      float64 // c > 0, the limiting speed; 0 means 1
	Left       bool    // travels to the left instead of to the right
}

// Frequency returns ω = √(c²k² + m²).
func (w Wave) Frequency() float64 { return math.Hypot(w.speed()*w.Wavenumber, w.Mass) }

// GroupVelocity returns dω/dk = c²k/ω, negative if the wave travels to the
// left, and ±c where k = m = 0.
func (w Wave) GroupVelocity() float64 {
	c := w.speed()
	v := c
	if w.Mass > 0 {
		v = c * (c * w.Wavenumber / w.Frequency())
	}
	if w.Left {
		return -v
	}
	return v
}

func (w Wave) speed() float64 {
	if w.Speed == 0 {
		return 1
	}
	return w.Speed
}

func (w Wave) check(name string) error {
	bad := func(x float64) bool { return math.IsNaN(x - x) }
	switch {
	case bad(w.Amplitude):
		return fmt.Errorf("field: %s with the amplitude %v; want a finite number", name, w.Amplitude)
	case bad(w.Wavenumber) || w.Wavenumber < 0:
		return fmt.Errorf("field: %s with the wave number %v; want a finite number ≥ 0, and Left for a wave to the left", name, w.Wavenumber)
	case bad(w.Phase):
		return fmt.Errorf("field: %s with the phase %v; want a finite number", name, w.Phase)
	case bad(w.Mass) || w.Mass < 0:
		return fmt.Errorf("field: %s with the mass %v; want a finite number ≥ 0", name, w.Mass)
	case bad(w.Speed) || w.Speed < 0:
		return fmt.Errorf("field: %s with the limiting speed %v; want a finite number > 0, or 0 for 1", name, w.Speed)
	}
	return nil
}

// signedWavenumber returns k, or −k for a wave to the left.
func (w Wave) signedWavenumber() float64 {
	if w.Left {
		return -w.Wavenumber
	}
	return w.Wavenumber
}

// PlaneWave returns
//
//	φ = A cos(±kx − ωt + δ),  ω = √(c²k² + m²),
//
// with + for a wave to the right. It solves φ_tt − c²φ_xx + m²φ = 0 exactly at
// every t, and a nonlinear equation with that linear part up to terms of the
// order of its nonlinearity at amplitude A. Numbers out of range are errors.
func PlaneWave(w Wave) (Profile, error) {
	if err := w.check("plane wave"); err != nil {
		return nil, err
	}
	k, omega := w.signedWavenumber(), w.Frequency()
	return func(x, t float64) (value, rate float64) {
		sin, cos := math.Sincos(k*x - omega*t + w.Phase)
		return w.Amplitude * cos, w.Amplitude * omega * sin
	}, nil
}

// A Packet is a Wave under a Gaussian envelope. The wave's Phase is taken at
// the centre of the envelope.
type Packet struct {
	Wave
	At    float64 // position of the centre at t = 0
	Width float64 // σ > 0; the envelope falls to 1/√e at σ from the centre
}

// GaussianPacket returns
//
//	φ = A exp(−ζ²/2σ²) cos(±k(x − At) − ωt + δ),  ζ = x − At − v_g t,
//
// with + for a packet to the right, ω = √(c²k² + m²) and the group velocity
// v_g = ±c²k/ω.
//
// What is exact: the rate is the time derivative of the value, everywhere and
// at every t; and for m = 0 the packet is d'Alembert's f(x ∓ ct), an exact
// solution of φ_tt = c²φ_xx at every t.
//
// What is approximate: for m > 0 the envelope moves but does not spread. The
// packet misses φ_tt − c²φ_xx + m²φ = 0 by exactly
//
//	−(c² − v_g²) (ζ²/σ² − 1)/σ² · A exp(−ζ²/2σ²) cos(…),
//
// at most (c² − v_g²)A/σ², where c² − v_g² = c²m²/ω². Used as Cauchy data at
// t = 0 it therefore holds a part that travels the other way, about
// (c² − v_g²)/(2ωσ)² of it; as a history it holds while |t| ≪ σ²ω³/(c²m²), the
// time in which the true packet spreads. Numbers out of range are errors.
func GaussianPacket(p Packet) (Profile, error) {
	const name = "Gaussian packet"
	if err := p.Wave.check(name); err != nil {
		return nil, err
	}
	if math.IsNaN(p.At - p.At) {
		return nil, fmt.Errorf("field: %s at x = %v; want a finite position", name, p.At)
	}
	if !(p.Width > 0) || math.IsInf(p.Width, 0) {
		return nil, fmt.Errorf("field: %s of the width %v; want a finite number > 0", name, p.Width)
	}
	k, omega, vg := p.signedWavenumber(), p.Frequency(), p.GroupVelocity()
	return func(x, t float64) (value, rate float64) {
		sin, cos := math.Sincos(k*(x-p.At) - omega*t + p.Phase)
		z := (x - p.At - vg*t) / p.Width
		envelope := p.Amplitude * math.Exp(-z*z/2)
		return envelope * cos, envelope * (vg*z/p.Width*cos + omega*sin)
	}, nil
}
