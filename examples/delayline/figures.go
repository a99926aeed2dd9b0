package main

import (
	"fmt"
	"math"
	"path/filepath"

	"github.com/tenter-go/tenter/field/figure"
	"github.com/tenter-go/tenter/lattice"
)

// draw writes the figures of a flight and of its window.
func draw(d delayLine, f *flight, w *window, out string) error {
	h := f.run.History
	launch := lattice.Event{T: h.Block.Time.From, X: launchAt * d.length}
	cone, err := lattice.NewConeVarying(h.Block.Space, launch, func(x float64) float64 { return math.Sqrt(d.kappa(x)) })
	if err != nil {
		return err
	}
	x, future, _ := cone.Front(h.Block.Space.Positions(nil))
	curves := []figure.Curve{{X: x, Y: future, Label: "light cone of the launch"}}
	if !d.uniform {
		a, b := oddFrom*d.length, oddTo*d.length
		from, to, gap := h.Block.Time.From, h.Block.Time.To(), math.NaN()
		curves = append(curves, figure.Curve{
			X: []float64{a, a, gap, b, b}, Y: []float64{from, to, gap, from, to}, Label: "ends of the odd stretch",
		})
	}
	note := fmt.Sprintf("invented delay line: loss %g, bias %g", d.loss, d.bias)
	n := h.Block.Slices() - 1
	for name, fig := range map[string]interface{ Save(string) error }{
		"map.png": figure.Map{
			History: h, Title: "Fluxon on an " + note,
			XLabel: "x (λ_J)", TLabel: "t (1/ω_p)", ValueLabel: "φ (rad)",
			Curves: curves,
		},
		"profiles.png": figure.Profile{
			History: h, Slices: []int{0, n / 3, 2 * n / 3, n}, Title: "Profiles on an " + note,
			XLabel: "x (λ_J)", ValueLabel: "φ (rad)",
		},
		"energy.png": figure.Series{
			Curves: energyCurves(f), Title: "Energy on an " + note,
			TLabel: "t (1/ω_p)", ValueLabel: "energy (fluxon at rest = 8)",
		},
		"window.png": figure.Map{
			History: w.found, Title: "The same history found all at once",
			XLabel: "x (λ_J)", TLabel: "t (1/ω_p)", ValueLabel: "φ (rad)",
			Pins: pinned(w), PinLabel: "the first two slices are pinned",
		},
	} {
		if err := fig.Save(filepath.Join(out, name)); err != nil {
			return fmt.Errorf("%s: %w", name, err)
		}
	}
	return nil
}

// pinned marks the pinned slices at a few sites of the first.
func pinned(w *window) []lattice.Event {
	var pins []lattice.Event
	for i := 0; i < w.found.Block.Sites(); i += 20 {
		pins = append(pins, w.found.Block.At(0, i))
	}
	return pins
}

func energyCurves(f *flight) []figure.Curve {
	var t, e, bias, loss []float64
	for _, entry := range f.ledger.Entries {
		t = append(t, entry.Time)
		e = append(e, entry.Energy.Field())
		bias = append(bias, entry.Source)
		loss = append(loss, -entry.Loss)
	}
	return []figure.Curve{
		{X: t, Y: bias, Label: "work of the bias"},
		{X: t, Y: loss, Label: "heat in the loss"},
		{X: t, Y: e, Label: "energy of the field"},
	}
}
