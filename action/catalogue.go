package action

import (
	"math"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/internal/kernel"
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

// A catalogued potential of one component has loops in package kernel.
type catalogued interface {
	// inKernel returns the potential as the loops know it, or reports false if
	// they do not.
	inKernel() (kernel.Potential, bool)
}

func (m Mass) inKernel() (kernel.Potential, bool) {
	return kernel.Quadratic(float64(m * m)), true
}
func (c Polynomial) inKernel() (kernel.Potential, bool) { return kernel.Polynomial(c) }
func (Phi4) inKernel() (kernel.Potential, bool)         { return kernel.Phi4(), true }
func (Phi6) inKernel() (kernel.Potential, bool)         { return kernel.Phi6(), true }
func (SineGordon) inKernel() (kernel.Potential, bool)   { return kernel.Sine(), true }
func (d DoubleSineGordon) inKernel() (kernel.Potential, bool) {
	return kernel.DoubleSine(d.Eta), true
}
func (none) inKernel() (kernel.Potential, bool)   { return kernel.Potential{}, true }
func (e Each) inKernel() (kernel.Potential, bool) { return inKernel(e.Potential) }

// inKernel returns a potential that is the same function of each component and
// couples none, as the loops know it.
func inKernel(p Potential) (kernel.Potential, bool) {
	if c, ok := p.(catalogued); ok {
		return c.inKernel()
	}
	return kernel.Potential{}, false
}

// Value implements Potential.
func (m Mass) Value(dst []float64, phi field.Slice, _ Sites) {
	k, _ := m.inKernel()
	k.Value(dst, phi.Component(0))
}

// Slope implements Potential.
func (m Mass) Slope(dst, phi field.Slice, _ Sites) {
	k, _ := m.inKernel()
	k.Slope(dst.Component(0), phi.Component(0))
}

// Curvature implements Potential.
func (m Mass) Curvature(dst, phi field.Slice, _ Sites) {
	k, _ := m.inKernel()
	k.Curvature(dst.Component(0), phi.Component(0))
}

// Value implements Potential, by Horner's rule.
func (c Polynomial) Value(dst []float64, phi field.Slice, _ Sites) {
	if k, ok := c.inKernel(); ok {
		k.Value(dst, phi.Component(0))
		return
	}
	c.horner(dst, phi.Component(0), 0)
}

// Slope implements Potential.
func (c Polynomial) Slope(dst, phi field.Slice, _ Sites) {
	if k, ok := c.inKernel(); ok {
		k.Slope(dst.Component(0), phi.Component(0))
		return
	}
	c.horner(dst.Component(0), phi.Component(0), 1)
}

// Curvature implements Potential.
func (c Polynomial) Curvature(dst, phi field.Slice, _ Sites) {
	if k, ok := c.inKernel(); ok {
		k.Curvature(dst.Component(0), phi.Component(0))
		return
	}
	c.horner(dst.Component(0), phi.Component(0), 2)
}

// horner writes a derivative of a degree too high for the loops to dst.
func (c Polynomial) horner(dst, phi []float64, derivative int) {
	for i, p := range phi {
		var v float64
		for k := len(c) - 1; k >= derivative; k-- {
			w := c[k]
			for j := range derivative {
				w *= float64(k - j)
			}
			v = math.FMA(v, p, w)
		}
		dst[i] = v
	}
}

// Value implements Potential.
func (p Phi4) Value(dst []float64, phi field.Slice, _ Sites) {
	k, _ := p.inKernel()
	k.Value(dst, phi.Component(0))
}

// Slope implements Potential.
func (p Phi4) Slope(dst, phi field.Slice, _ Sites) {
	k, _ := p.inKernel()
	k.Slope(dst.Component(0), phi.Component(0))
}

// Curvature implements Potential.
func (p Phi4) Curvature(dst, phi field.Slice, _ Sites) {
	k, _ := p.inKernel()
	k.Curvature(dst.Component(0), phi.Component(0))
}

// Value implements Potential.
func (p Phi6) Value(dst []float64, phi field.Slice, _ Sites) {
	k, _ := p.inKernel()
	k.Value(dst, phi.Component(0))
}

// Slope implements Potential.
func (p Phi6) Slope(dst, phi field.Slice, _ Sites) {
	k, _ := p.inKernel()
	k.Slope(dst.Component(0), phi.Component(0))
}

// Curvature implements Potential.
func (p Phi6) Curvature(dst, phi field.Slice, _ Sites) {
	k, _ := p.inKernel()
	k.Curvature(dst.Component(0), phi.Component(0))
}

// Value implements Potential. It is found as 2 sin²½φ, which keeps its digits
// near the vacua.
func (p SineGordon) Value(dst []float64, phi field.Slice, _ Sites) {
	k, _ := p.inKernel()
	k.Value(dst, phi.Component(0))
}

// Slope implements Potential.
func (p SineGordon) Slope(dst, phi field.Slice, _ Sites) {
	k, _ := p.inKernel()
	k.Slope(dst.Component(0), phi.Component(0))
}

// Curvature implements Potential.
func (p SineGordon) Curvature(dst, phi field.Slice, _ Sites) {
	k, _ := p.inKernel()
	k.Curvature(dst.Component(0), phi.Component(0))
}

// Value implements Potential.
func (d DoubleSineGordon) Value(dst []float64, phi field.Slice, _ Sites) {
	k, _ := d.inKernel()
	k.Value(dst, phi.Component(0))
}

// Slope implements Potential.
func (d DoubleSineGordon) Slope(dst, phi field.Slice, _ Sites) {
	k, _ := d.inKernel()
	k.Slope(dst.Component(0), phi.Component(0))
}

// Curvature implements Potential.
func (d DoubleSineGordon) Curvature(dst, phi field.Slice, _ Sites) {
	k, _ := d.inKernel()
	k.Curvature(dst.Component(0), phi.Component(0))
}
