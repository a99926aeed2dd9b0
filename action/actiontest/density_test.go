package actiontest

import (
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// broken is an action of which one method is wrong; a nil function is right.
type broken struct {
	*action.Discrete
	value     func(v float64, h *field.History) float64
	gradient  func(g, h *field.History)
	second    func(d, eta *field.History)
	matrix    func(m *action.Matrix)
	residual  func(r *field.History)
	jacobian  func(m *action.Matrix)
	energy    func(e *action.Energy)
	density   func(e []float64)
	flux      func(f []float64)
	power     func(p *action.Power)
	marching  marcher
	forceWith accelerator
}

func (b broken) Value(h *field.History) float64 {
	v := b.Discrete.Value(h)
	if b.value != nil {
		v = b.value(v, h)
	}
	return v
}

func (b broken) Gradient(dst, h *field.History) *field.History {
	dst = b.Discrete.Gradient(dst, h)
	if b.gradient != nil {
		b.gradient(dst, h)
	}
	return dst
}

func (b broken) SecondVariation(dst, h, eta *field.History) *field.History {
	dst = b.Discrete.SecondVariation(dst, h, eta)
	if b.second != nil {
		b.second(dst, eta)
	}
	return dst
}

func (b broken) SecondVariationMatrix(dst *action.Matrix, h *field.History) *action.Matrix {
	dst = b.Discrete.SecondVariationMatrix(dst, h)
	if b.matrix != nil {
		b.matrix(dst)
	}
	return dst
}

func (b broken) Residual(dst, h *field.History) *field.History {
	dst = b.Discrete.Residual(dst, h)
	if b.residual != nil {
		b.residual(dst)
	}
	return dst
}

func (b broken) ResidualJacobian(dst *action.Matrix, h *field.History) *action.Matrix {
	dst = b.Discrete.ResidualJacobian(dst, h)
	if b.jacobian != nil {
		b.jacobian(dst)
	}
	return dst
}

func (b broken) Energy(st field.State, t float64) action.Energy {
	e := b.Discrete.Energy(st, t)
	if b.energy != nil {
		b.energy(&e)
	}
	return e
}

func (b broken) EnergyDensity(dst []float64, st field.State, t float64) []float64 {
	dst = b.Discrete.EnergyDensity(dst, st, t)
	if b.density != nil {
		b.density(dst)
	}
	return dst
}

func (b broken) EnergyFlux(dst []float64, st field.State, t float64) []float64 {
	dst = b.Discrete.EnergyFlux(dst, st, t)
	if b.flux != nil {
		b.flux(dst)
	}
	return dst
}

func (b broken) Power(st field.State, t float64) action.Power {
	p := b.Discrete.Power(st, t)
	if b.power != nil {
		b.power(&p)
	}
	return p
}

// wrongMarch is a march of which one method is wrong.
type wrongMarch struct {
	*action.March
	step, tangent, start func(next field.Slice)
}

func (m wrongMarch) Step(next, now, before field.Slice, n int) {
	m.March.Step(next, now, before, n)
	if m.step != nil {
		m.step(next)
	}
}

func (m wrongMarch) Tangent(next, now, before, phi field.Slice, n int) {
	m.March.Tangent(next, now, before, phi, n)
	if m.tangent != nil {
		m.tangent(next)
	}
}

func (m wrongMarch) Start(next field.Slice, st field.State, n int) {
	m.March.Start(next, st, n)
	if m.start != nil {
		m.start(next)
	}
}

// wrongForce is φ_tt with 1e-3 too much at one site.
type wrongForce struct{ *action.Accelerator }

func (f wrongForce) At(dst field.Slice, st field.State, t float64) {
	f.Accelerator.At(dst, st, t)
	dst.Data[2] += 1e-3
}

// TestDensityFindsAndLocates breaks a right action in one way at a time, at
// site 2 of the line, x = 0.5; the error must name the quantity and the place.
func TestDensityFindsAndLocates(t *testing.T) {
	b := lattice.Block{
		Time:  lattice.Axis{Step: 0.125, Sites: 4},
		Space: lattice.Axis{Step: 0.25, Sites: 6, Right: lattice.Held},
	}
	a, err := action.New(b, action.Wave{Potential: action.SineGordon{}, Links: action.Fourth})
	if err != nil {
		t.Fatal(err)
	}
	force, err := a.Accelerator()
	if err != nil {
		t.Fatal(err)
	}
	bump := func(s field.Slice) { s.Data[2] += 1e-3 }
	move := func(s field.Slice) { s.Data[len(s.Data)-1] += 1e-3 } // the held end
	const row = 1*6 + 2                                           // slice 1, site 2
	double := func(m *action.Matrix) {
		_, v := m.Row(row)
		for k := range v {
			v[k] *= 2
		}
	}
	tilt := func(m *action.Matrix) {
		columns, v := m.Row(row)
		for k, c := range columns {
			if c == row+1 {
				v[k] *= 1.0001
			}
		}
	}
	place := "(x, t) = (0.5, 0.125)"
	for _, c := range []struct {
		name string
		v    broken
		says []string
	}{
		{"value", broken{value: func(v float64, h *field.History) float64 { return v + 1e-3*h.Data[row] }}, []string{"gradient, component 0 at " + place, "differences of Value"}},
		{"gradient", broken{gradient: func(g, h *field.History) { g.Data[row] += 1e-3 }}, []string{"gradient, component 0 at " + place}},
		{"second variation", broken{second: func(d, eta *field.History) { d.Data[row] += 1e-3 * eta.Data[row] }}, []string{"second variation, component 0 at " + place, "differences of Gradient"}},
		{"matrix", broken{matrix: double}, []string{"second variation matrix × direction, component 0 at " + place}},
		{"matrix not symmetric", broken{matrix: tilt}, []string{"couples", place, "symmetric"}},
		{"residual", broken{residual: func(r *field.History) { r.Data[row] += 1e-3 }}, []string{"residual, component 0 at " + place, "per hk"}},
		{"residual without an equation", broken{residual: func(r *field.History) { r.Data[2] = 1e-3 }}, []string{"residual, component 0 at (x, t) = (0.5, 0)", "want 0"}},
		{"Jacobian", broken{jacobian: double}, []string{"residual Jacobian × direction, component 0 at " + place}},
		{"march", broken{marching: wrongMarch{March: a.March(), step: bump}}, []string{"march, component 0 at " + place, "residual"}},
		{"march moves a held end", broken{marching: wrongMarch{March: a.March(), step: move}}, []string{"march changes component 0 of the held end at (x, t) = (1.25, 0.25)"}},
		{"tangent", broken{marching: wrongMarch{March: a.March(), tangent: bump}}, []string{"tangent, component 0 at (x, t) = (0.5, 0.25)", "of Step"}},
		{"start", broken{marching: wrongMarch{March: a.March(), start: bump}}, []string{"start, component 0 at (x, t) = (0.5, 0.25)"}},
		{"energy", broken{energy: func(e *action.Energy) { e.Elastic *= 1.01 }}, []string{"power", "Energy.Field", "energy density sums to"}},
		{"energy density", broken{density: func(e []float64) { e[2] *= 1.01 }}, []string{"energy that EnergyFlux brings to the site at " + place, "energy density sums to"}},
		{"energy flux", broken{flux: func(f []float64) { f[2] *= 1.01 }}, []string{"energy that EnergyFlux brings to the site at (x, t)"}},
		{"power", broken{power: func(p *action.Power) { p.Left += 1e-3 }}, []string{"power {Source:0 Loss:0 Left:0.001"}},
		{"accelerator", broken{forceWith: wrongForce{force}}, []string{"energy that EnergyFlux brings to the site at " + place}},
	} {
		t.Run(c.name, func(t *testing.T) {
			c.v.Discrete = a
			v := subject{discrete: c.v, march: a.March(), force: force}
			if c.v.marching != nil {
				v.march = c.v.marching
			}
			if c.v.forceWith != nil {
				v.force = c.v.forceWith
			}
			s, err := Settings{}.fill(1)
			if err != nil {
				t.Fatal(err)
			}
			err = checkDiscrete(v, s)
			if err == nil {
				t.Fatal("no error")
			}
			for _, want := range append(c.says, "block of 4 slices × 6 sites, free left and held right end") {
				if !strings.Contains(err.Error(), want) {
					t.Errorf("error does not say %q:\n%v", want, err)
				}
			}
		})
	}
	if err := checkDiscrete(subject{discrete: broken{Discrete: a}, march: a.March(), force: force}, must(Settings{}.fill(1))); err != nil {
		t.Errorf("the same action with nothing broken: %v", err)
	}
}

func must(s Settings, err error) Settings {
	if err != nil {
		panic(err)
	}
	return s
}

// TestDensityWithAWrongPotential shows where wrong derivatives of a potential
// come out.
func TestDensityWithAWrongPotential(t *testing.T) {
	err := Density(action.Wave{Potential: coupled{curvature: 1e-2}}, Settings{})
	if err == nil || !strings.Contains(err.Error(), "second variation, component 1 at") || !strings.Contains(err.Error(), "tangent, component 1 at") {
		t.Errorf("error %v; want the second variation and the tangent of component 1 named", err)
	}
	if err != nil && strings.Contains(err.Error(), "gradient, component") {
		t.Errorf("error names the gradient, which is right: %v", err)
	}
	err = Density(action.Wave{Potential: coupled{slope: 1e-2}}, Settings{})
	if err == nil || !strings.Contains(err.Error(), "gradient, component 1 at") {
		t.Errorf("error %v; want the gradient of component 1 named", err)
	}
}

// TestDensityRefused asks that a density nothing can be said about is an error.
func TestDensityRefused(t *testing.T) {
	if err := Density(action.Wave{Rho: action.Uniform(-1)}, Settings{}); err == nil || !strings.Contains(err.Error(), "ρ") {
		t.Errorf("ρ = −1 on every block: error %v; want it to name ρ", err)
	}
	ring := lattice.Block{Time: lattice.Axis{Step: 1, Sites: 3}, Space: lattice.Axis{Step: 1, Sites: 5, Periodic: true}}
	w := action.Wave{LeftFlux: action.Uniform(1)}
	if err := Density(w, Settings{}); err != nil {
		t.Errorf("flux on default blocks: %v", err)
	}
	if err := Density(w, Settings{Blocks: []lattice.Block{ring}}); err == nil || !strings.Contains(err.Error(), "ring") {
		t.Errorf("flux on a ring that was asked for: error %v; want it refused", err)
	}
	if err := Density(nil, Settings{}); err == nil || !strings.Contains(err.Error(), "nil") {
		t.Errorf("nil density: error %v", err)
	}
}
