package action_test

import (
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/action/actiontest"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// lagrangianOf has a number of components and nothing else.
type lagrangianOf int

func (n lagrangianOf) Components() int                   { return int(n) }
func (lagrangianOf) Value(action.Jet) float64            { return 0 }
func (lagrangianOf) Slope(dst []float64, _ action.Jet)   { clear(dst) }
func (lagrangianOf) Curvature(d []float64, _ action.Jet) { clear(d) }

// TestRegionsAndFlowsNameTheCulprit hands NewCells, NewShaped and NewNoisyFlow
// what does not make sense.
func TestRegionsAndFlowsNameTheCulprit(t *testing.T) {
	line := block(5, 0.1, 9, 0.5)
	open := line
	open.Space.Right = lattice.Open
	jumps := ring(5, 0.1, 9, 4.5)
	jumps.Space.Jump = []float64{1, 2}
	broken := line
	broken.Time.Step = math.Inf(1)
	u := func(v float64) action.Coefficient { return action.Uniform(v) }
	region := func(b lattice.Block) *lattice.Region { return mustRegion(t, b, nil) }
	cells := func(r *lattice.Region, l action.Lagrangian) error { _, err := action.NewCells(r, l); return err }
	shaped := func(r *lattice.Region, w action.Wave) error { _, err := action.NewShaped(r, w); return err }
	flow := func(b lattice.Block, f action.GradientFlow) error { _, err := action.NewNoisyFlow(b, f); return err }
	of := func(w action.Wave) action.GradientFlow { return action.GradientFlow{Energy: w} }
	for _, c := range []struct {
		name string
		err  error
		says []string
	}{
		{"cells of no region", cells(nil, bornInfeld), []string{"region is nil"}},
		{"cells of no Lagrangian", cells(region(line), nil), []string{"Lagrangian is nil"}},
		{"nil L", cells(region(line), action.AutoLagrangian{}), []string{"AutoLagrangian", "nil function"}},
		{"negative components", cells(region(line), lagrangianOf(-1)), []string{"-1 components", "at least 1"}},
		{"cells with an open end", cells(region(open), bornInfeld), []string{"open right end"}},
		{"cells with jumps", cells(region(jumps), bornInfeld), []string{"jump for 2 components", "has 1"}},
		{"shape of no region", shaped(nil, action.Wave{}), []string{"region is nil"}},
		{"loss on a region", shaped(region(line), action.Wave{Alpha: u(1)}), []string{"loss α", "region"}},
		{"open end of a region", shaped(region(open), action.Wave{}), []string{"open right end", "region"}},
		{"flux on a region", shaped(region(line), action.Wave{LeftFlux: u(1)}), []string{"left flux", "region"}},
		{"wide links on a region", shaped(region(line), action.Wave{Links: action.Fourth}), []string{"links of order 4", "Nearest"}},
		{"ρ = 0 on a region", shaped(region(line), action.Wave{Rho: u(0)}), []string{"ρ", "> 0"}},
		{"flow on a bad block", flow(broken, of(action.Wave{})), []string{"time axis", "+Inf"}},
		{"flow with inertia", flow(line, of(action.Wave{Rho: u(1)})), []string{"ρ", "no inertia"}},
		{"flow with a loss", flow(line, of(action.Wave{Alpha: u(1)})), []string{"α", "M = 1/α"}},
		{"flow with β", flow(line, of(action.Wave{Beta: u(1)})), []string{"β", "friction"}},
		{"flow with an open end", flow(open, of(action.Wave{})), []string{"open right end"}},
		{"flow with a table", flow(line, of(action.Wave{Sigma: make(action.Table, 45)})), []string{"σ", "between slices"}},
		{"many nodes", flow(line, action.GradientFlow{Nodes: 5}), []string{"5 nodes", "1 to 4"}},
		{"no mobility", flow(line, action.GradientFlow{Mobility: u(0)}), []string{"mobility", "is 0", "(x, t) = (0, 0.05)", "> 0"}},
		{"short mobility", flow(line, action.GradientFlow{Mobility: make(action.Table, 7)}), []string{"mobility", "7 values"}},
	} {
		if c.err == nil {
			t.Errorf("%s: no error", c.name)
			continue
		}
		for _, want := range c.says {
			if !strings.Contains(c.err.Error(), want) {
				t.Errorf("%s: error %q does not say %q", c.name, c.err, want)
			}
		}
	}
}

// TestRegionsAndFlowsCheckHistories hands each action histories of the wrong
// shape: Fits names what is wrong, the other methods panic.
func TestRegionsAndFlowsCheckHistories(t *testing.T) {
	b := block(5, 0.1, 9, 0.5)
	r := mustRegion(t, b, nil)
	good, wide, hole := field.NewHistory(b, 1), field.NewHistory(b, 2), field.NewHistory(b, 1)
	hole.Set(2, 0, 4, math.NaN())
	for name, s := range map[string]actiontest.Action{
		"cells": mustCells(t, r, bornInfeld), "shaped": mustShaped(t, r, action.Wave{}), "flow": mustFlow(t, b, action.GradientFlow{}),
	} {
		if err := s.Fits(good); err != nil {
			t.Errorf("%s: %v", name, err)
		}
		if err := s.Conservative(); err != nil {
			t.Errorf("%s: %v", name, err)
		}
		for says, h := range map[string]*field.History{"5 slices × 2 components": wide, "NaN at (x, t) = (2, 0.2)": hole, "no history": nil} {
			if err := s.Fits(h); err == nil || !strings.Contains(err.Error(), says) {
				t.Errorf("%s: error %v does not say %q", name, err, says)
			}
		}
		for method, f := range map[string]func(){
			"Value":                 func() { s.Value(wide) },
			"Gradient":              func() { s.Gradient(nil, wide) },
			"Gradient dst":          func() { s.Gradient(wide, good) },
			"direction":             func() { s.SecondVariation(nil, good, wide) },
			"SecondVariationMatrix": func() { s.SecondVariationMatrix(nil, wide) },
		} {
			func() {
				defer func() {
					if text, ok := recover().(string); !ok || !strings.Contains(text, "action: history of 5 slices × 2 components") {
						t.Errorf("%s.%s: recovered %q; want a panic that names the shape", name, method, text)
					}
				}()
				f()
			}()
		}
	}
}
