package actiontest

import (
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// keeps is an action whose Gradient adds to what dst holds.
type keeps struct{ *action.Discrete }

func (k keeps) Gradient(dst, h *field.History) *field.History {
	g := k.Discrete.Gradient(nil, h)
	if dst == nil {
		return g
	}
	for i, v := range g.Data {
		dst.Data[i] = v + 1e-9*dst.Data[i]
	}
	return dst
}

// fickle is an action whose matrix has a place more where the field is large.
type fickle struct{ *action.Discrete }

func (f fickle) SecondVariationMatrix(dst *action.Matrix, h *field.History) *action.Matrix {
	m := f.Discrete.SecondVariationMatrix(dst, h)
	if dst != nil && h.Data[0] != 0 {
		m.Column[m.Start[1]-1] = len(h.Data) - 1
	}
	return m
}

func TestFunctionalFindsAndLocates(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 0.125, Sites: 4}, Space: lattice.Axis{Step: 0.25, Sites: 6}}
	a, err := action.New(b, action.Wave{Potential: action.SineGordon{}})
	if err != nil {
		t.Fatal(err)
	}
	const row = 1*6 + 2 // slice 1, site 2
	place := "component 0 at (x, t) = (0.5, 0.125)"
	small := lattice.Block{Time: lattice.Axis{Step: 1, Sites: 3}, Space: b.Space}
	for _, c := range []struct {
		name string
		f    Action
		at   []*field.History
		says []string
	}{
		{"gradient", broken{Discrete: a, gradient: func(g, h *field.History) { g.Data[row] += 1e-3 }}, nil, []string{"gradient, " + place, "of Value"}},
		{"second variation", broken{Discrete: a, second: func(d, eta *field.History) { d.Data[row] += 1e-3 * eta.Data[row] }}, nil, []string{"second variation, " + place, "of Gradient"}},
		{"matrix", broken{Discrete: a, matrix: func(m *action.Matrix) { _, v := m.Row(row); v[0] *= 2 }}, nil, []string{"second variation matrix × direction, " + place}},
		{"memory", keeps{a}, nil, []string{"in used memory", "want dst overwritten"}},
		{"pattern", fickle{a}, nil, []string{"row of the second variation matrix, component 0 at (x, t) = (0, 0)", "used memory"}},
		{"history of another block", a, []*field.History{field.NewHistory(small, 1)}, []string{"history 0", "3 slices"}},
		{"no action", nil, nil, []string{"action is nil"}},
	} {
		err := Functional(c.f, Settings{}, c.at...)
		if err == nil {
			t.Errorf("%s: no error", c.name)
			continue
		}
		for _, want := range c.says {
			if !strings.Contains(err.Error(), want) {
				t.Errorf("%s: error does not say %q:\n%v", c.name, want, err)
			}
		}
	}
	if err := Functional(a, Settings{}); err != nil {
		t.Error(err)
	}
}

// slipped is L = ½φ_t² − ½φ_x² − x·t·φ²φ_t with a slip in one derivative.
type slipped struct{ slope, curvature, tilt float64 }

func (slipped) Components() int { return 1 }

func (slipped) Value(j action.Jet) float64 {
	p, r, s := j.Phi[0], j.Rate[0], j.Tilt[0]
	return 0.5*r*r - 0.5*s*s - j.At.X*j.At.T*p*p*r
}

func (l slipped) Slope(dst []float64, j action.Jet) {
	p, r, s, a := j.Phi[0], j.Rate[0], j.Tilt[0], j.At.X*j.At.T
	copy(dst, []float64{-2*a*p*r + l.slope, r - a*p*p, -s})
}

func (l slipped) Curvature(dst []float64, j action.Jet) {
	p, r, a := j.Phi[0], j.Rate[0], j.At.X*j.At.T
	copy(dst, []float64{-2 * a * r, -2 * a * p, 0, -2*a*p + l.tilt, 1, 0, 0, 0, -1 + l.curvature})
}

func TestLagrangianFindsAndLocates(t *testing.T) {
	if err := Lagrangian(slipped{}, Settings{}); err != nil {
		t.Error(err)
	}
	for _, c := range []struct {
		l    action.Lagrangian
		s    Settings
		says []string
	}{
		{slipped{slope: 1e-4}, Settings{}, []string{"slope ∂L/∂φ at the jet [", "(x, t) = (", "of Value"}},
		{slipped{curvature: 1e-4}, Settings{}, []string{"curvature ∂²L/∂φ_x∂φ_x", "of Slope"}},
		{slipped{tilt: 1e-4}, Settings{}, []string{"curvature by φ_t and φ", "symmetric"}},
		{nil, Settings{}, []string{"Lagrangian is nil"}},
		{action.AutoLagrangian{N: -1}, Settings{}, []string{"Components() is -1"}},
		{slipped{}, Settings{Step: -1}, []string{"step -1"}},
	} {
		err := Lagrangian(c.l, c.s)
		if err == nil {
			t.Errorf("%+v: no error", c.l)
			continue
		}
		for _, want := range c.says {
			if !strings.Contains(err.Error(), want) {
				t.Errorf("%+v: error does not say %q:\n%v", c.l, want, err)
			}
		}
	}
}
