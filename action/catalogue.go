package action

import (
	"math"

	"github.com/tenter-go/tenter/field"
)

// Mass is the quadratic potential V = ½m²φ² of the Klein–Gordon equation.
type Mass float64

// Polynomial is V = Σ c[k]φᵏ.
type Polynomial []float64

// Phi4 is V = ¼(1 − φ²)², with vacua at ±1 and small oscillations of mass √2.
type Phi4 struct{}

// Phi6 is V = ½φ²(1 − φ²)², with vacua at −1, 0 and 1.
type Phi6 struct{}

// SineGordon is V = 1 − cos φ, with vacua at the multiples of 2π.
type SineGordon struct{}

// DoubleSineGordon is V = (1 − cos φ) + η(1 − cos ½φ).
type DoubleSineGordon struct{ Eta float64 }

// Components returns 1.
func (Mass) Components() int { return 1 }

// Components returns 1.
func (Polynomial) Components() int { return 1 }

// Components returns 1.
func (Phi4) Components() int { return 1 }

// Components returns 1.
func (Phi6) Components() int { return 1 }

// Components returns 1.
func (SineGordon) Components() int { return 1 }

// Components returns 1.
func (DoubleSineGordon) Components() int { return 1 }

// VacuumSpacing returns 2, the unit of the topological charge.
func (Phi4) VacuumSpacing() float64 { return 2 }

// VacuumSpacing returns 1, the unit of the topological charge.
func (Phi6) VacuumSpacing() float64 { return 1 }

// VacuumSpacing returns 2π, the unit of the topological charge.
func (SineGordon) VacuumSpacing() float64 { return 2 * math.Pi }

// VacuumSpacing returns 4π for η ≠ 0, and 2π for η = 0.
func (d DoubleSineGordon) VacuumSpacing() float64 {
	if d.Eta == 0 {
		return 2 * math.Pi
	}
	return 4 * math.Pi
}

// Value implements Potential.
func (m Mass) Value(dst []float64, phi field.Slice, _ Sites) {
	c := 0.5 * float64(m) * float64(m)
	for i, p := range phi.Component(0) {
		dst[i] = c * p * p
	}
}

// Slope implements Potential.
func (m Mass) Slope(dst, phi field.Slice, _ Sites) {
	c, d := float64(m)*float64(m), dst.Component(0)
	for i, p := range phi.Component(0) {
		d[i] = c * p
	}
}

// Curvature implements Potential.
func (m Mass) Curvature(dst, phi field.Slice, _ Sites) {
	Uniform(m*m).sample(dst.Component(0), 0, nil, 0, 0)
}

// Value implements Potential, by Horner's rule.
func (c Polynomial) Value(dst []float64, phi field.Slice, _ Sites) {
	for i, p := range phi.Component(0) {
		var v float64
		for k := len(c) - 1; k >= 0; k-- {
			v = v*p + c[k]
		}
		dst[i] = v
	}
}

// Slope implements Potential.
func (c Polynomial) Slope(dst, phi field.Slice, _ Sites) {
	d := dst.Component(0)
	for i, p := range phi.Component(0) {
		var v float64
		for k := len(c) - 1; k >= 1; k-- {
			v = v*p + float64(k)*c[k]
		}
		d[i] = v
	}
}

// Curvature implements Potential.
func (c Polynomial) Curvature(dst, phi field.Slice, _ Sites) {
	d := dst.Component(0)
	for i, p := range phi.Component(0) {
		var v float64
		for k := len(c) - 1; k >= 2; k-- {
			v = v*p + float64(k*(k-1))*c[k]
		}
		d[i] = v
	}
}

// Value implements Potential.
func (Phi4) Value(dst []float64, phi field.Slice, _ Sites) {
	for i, p := range phi.Component(0) {
		w := 1 - p*p
		dst[i] = 0.25 * w * w
	}
}

// Slope implements Potential.
func (Phi4) Slope(dst, phi field.Slice, _ Sites) {
	d := dst.Component(0)
	for i, p := range phi.Component(0) {
		d[i] = p * (p*p - 1)
	}
}

// Curvature implements Potential.
func (Phi4) Curvature(dst, phi field.Slice, _ Sites) {
	d := dst.Component(0)
	for i, p := range phi.Component(0) {
		d[i] = 3*p*p - 1
	}
}

// Value implements Potential.
func (Phi6) Value(dst []float64, phi field.Slice, _ Sites) {
	for i, p := range phi.Component(0) {
		w := p * (1 - p*p)
		dst[i] = 0.5 * w * w
	}
}

// Slope implements Potential.
func (Phi6) Slope(dst, phi field.Slice, _ Sites) {
	d := dst.Component(0)
	for i, p := range phi.Component(0) {
		q := p * p
		d[i] = p * (1 - q) * (1 - 3*q)
	}
}

// Curvature implements Potential.
func (Phi6) Curvature(dst, phi field.Slice, _ Sites) {
	d := dst.Component(0)
	for i, p := range phi.Component(0) {
		q := p * p
		d[i] = 1 - 12*q + 15*q*q
	}
}

// Value implements Potential. It is written 2 sin²½φ, which keeps its digits
// near the vacua.
func (SineGordon) Value(dst []float64, phi field.Slice, _ Sites) {
	for i, p := range phi.Component(0) {
		s := math.Sin(0.5 * p)
		dst[i] = 2 * s * s
	}
}

// Slope implements Potential.
func (SineGordon) Slope(dst, phi field.Slice, _ Sites) {
	d := dst.Component(0)
	for i, p := range phi.Component(0) {
		d[i] = math.Sin(p)
	}
}

// Curvature implements Potential.
func (SineGordon) Curvature(dst, phi field.Slice, _ Sites) {
	d := dst.Component(0)
	for i, p := range phi.Component(0) {
		d[i] = math.Cos(p)
	}
}

// Value implements Potential.
func (d DoubleSineGordon) Value(dst []float64, phi field.Slice, _ Sites) {
	for i, p := range phi.Component(0) {
		s, q := math.Sin(0.5*p), math.Sin(0.25*p)
		dst[i] = 2*s*s + d.Eta*2*q*q
	}
}

// Slope implements Potential.
func (d DoubleSineGordon) Slope(dst, phi field.Slice, _ Sites) {
	v := dst.Component(0)
	for i, p := range phi.Component(0) {
		v[i] = math.Sin(p) + 0.5*d.Eta*math.Sin(0.5*p)
	}
}

// Curvature implements Potential.
func (d DoubleSineGordon) Curvature(dst, phi field.Slice, _ Sites) {
	v := dst.Component(0)
	for i, p := range phi.Component(0) {
		v[i] = math.Cos(p) + 0.25*d.Eta*math.Cos(0.5*p)
	}
}
