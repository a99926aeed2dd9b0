package main

import (
	"fmt"
	"math"
	"path/filepath"

	"github.com/tenter-go/tenter/field/figure"
	"github.com/tenter-go/tenter/lattice"
)

// draw writes the figures of an account.
func draw(w watch, a *account, out string) error {
	h := a.found.History
	cone, err := lattice.NewCone(h.Block.Space, w.readings()[suspect].Event, 1)
	if err != nil {
		return err
	}
	x, future, past := cone.Front(h.Block.Space.Positions(nil))
	gap := math.NaN()
	cones := []figure.Curve{{
		X: append(append(x, gap), x...), Y: append(append(future, gap), past...), Label: "light cone of the wrong reading",
	}}
	path := figure.Curve{X: []float64{launchAt, launchAt + speed*until}, Y: []float64{0, until}, Label: "free flight"}
	const xLabel, tLabel, seen = "x (λ_J)", "t (1/ω_p)", "readings"
	for name, fig := range map[string]interface{ Save(string) error }{
		"history.png": figure.Map{
			History: h, Title: "A fluxon through four readings, one wrong (invented record)",
			XLabel: xLabel, TLabel: tLabel, ValueLabel: "φ (rad)",
			Pins: w.events(), PinLabel: seen, Curves: []figure.Curve{path},
		},
		"residual.png": figure.Map{
			History: a.residual, Title: "Where the field equation gives way",
			XLabel: xLabel, TLabel: tLabel, ValueLabel: "residual (ω_p²)", Diverging: true,
			Pins: w.events(), PinLabel: seen, Curves: cones,
		},
		"influence.png": figure.Map{
			History: a.influence.History, Title: "What the value of the wrong reading bears on",
			XLabel: xLabel, TLabel: tLabel, ValueLabel: "δφ per unit of the pinned value", Diverging: true,
			Pins: w.events(), PinLabel: seen, Curves: cones,
		},
	} {
		if err := fig.Save(filepath.Join(out, name)); err != nil {
			return fmt.Errorf("%s: %w", name, err)
		}
	}
	return nil
}
