package crosscheck

import (
	"context"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/minimize"
)

// A history evolved by leapfrog is the one that least residual finds from its
// first two slices, whatever the density, links, losses and ends. The solver
// starts from the first slice repeated.
func TestEvolvedIsFoundAllAtOnce(t *testing.T) {
	moving := field.Moving{At: -1.5, Speed: 0.6}
	sine, err := field.SineGordonKink(moving)
	if err != nil {
		t.Fatal(err)
	}
	phi4, err := field.Phi4Kink(moving)
	if err != nil {
		t.Fatal(err)
	}
	half, err := field.SineGordonKinkAntikink(field.Collision{Speed: 0.5, Time: 2})
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		name        string
		wave        action.Wave
		start       field.Profile
		left, right lattice.End
	}{
		{"sine-Gordon, free", action.Wave{Potential: action.SineGordon{}}, sine, lattice.Free, lattice.Free},
		{"phi4, held, fourth order", action.Wave{Potential: action.Phi4{}, Links: action.Fourth}, phi4, lattice.Held, lattice.Held},
		{"lossy and biased", action.Wave{
			Potential: action.SineGordon{}, Alpha: action.Uniform(0.1), Beta: action.Uniform(0.02), Source: action.Uniform(-0.3),
			Kappa: action.Along(func(x float64) float64 { return 1 - 0.2/(1+x*x) }),
		}, sine, lattice.Free, lattice.Free},
		{"open ends, σ in space and time", action.Wave{
			Potential: action.SineGordon{}, Sigma: action.Over(func(x, t float64) float64 { return 1 + 0.1*x*t/8 }),
		}, sine, lattice.Open, lattice.Open},
		{"collision on a half line", action.Wave{Potential: action.SineGordon{}, Links: action.Sixth}, half, lattice.Even, lattice.Free},
	} {
		line := lattice.Axis{From: -8, Step: 0.2, Sites: 81, Left: c.left, Right: c.right}
		if c.left == lattice.Even {
			line.From = 0
		}
		b, err := lattice.NewBlock(lattice.Axis{Step: 0.1, Sites: 50}, line)
		if err != nil {
			t.Fatal(err)
		}
		s, err := action.New(b, c.wave)
		if err != nil {
			t.Fatal(err)
		}
		run, err := integrate.Evolve(context.Background(), s, c.start.On(line, 0), integrate.Settings{})
		if err != nil {
			t.Fatalf("%s: %v", c.name, err)
		}
		held := constraint.On(b)
		held.Slice(0, run.History.Slice(0))
		held.Slice(1, run.History.Slice(1))
		found, err := minimize.LeastResidual(context.Background(), s, held, field.Repeat(b, run.History.Slice(0)), &minimize.Settings{Strategy: minimize.BlockWide})
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		// 1e-8 is the bar: the residual is at rounding, which the inverse of the
		// wave operator magnifies by at most T²/k² = 2500 and the normal
		// equations may square.
		d := found.History.MaxDifference(run.History)
		if !(d <= 1e-8) || found.Report.Accepted < 3 {
			t.Errorf("%s: %g away from the evolved history after %d accepted steps; want at most 1e-8 and at least 3", c.name, d, found.Report.Accepted)
		}
		t.Logf("%-26s difference %.1e, %d accepted steps", c.name, d, found.Report.Accepted)
	}
}
