package main

import (
	"fmt"
	"math"
	"path/filepath"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/figure"
)

// draw writes the figures: whole is the bounce on the whole plane, finest that on
// the finest quarter.
func draw(w *well, lump field.Lump, whole *field.History, finest *bounce, out string) error {
	plane := whole.Clone()
	for e, f := range plane.Data {
		plane.Data[e] = w.field(f)
	}
	for name, fig := range map[string]interface{ Save(string) error }{
		"map.png": figure.Map{
			History: plane, Title: "Bounce of an invented field, mirrored from a quarter",
			XLabel: "x (1/m)", TLabel: "Euclidean time τ (1/m)", ValueLabel: "φ",
			Curves: []figure.Curve{turningCircle(w, finest)},
			Page:   figure.Page{Width: 160, Height: 142},
		},
		"profile.png": figure.Profile{
			Curves: radial(w, lump, finest), Title: "Radial profile of the bounce",
			XLabel: "distance from the centre r (1/m)", ValueLabel: "φ",
		},
		"potential.png": figure.Profile{
			Curves: landscape(w, w.field(finest.history.At(0, 0, 0))), Title: "Invented potential and its false vacuum",
			XLabel: "φ", ValueLabel: "V(φ) − V(false vacuum)",
		},
	} {
		if err := fig.Save(filepath.Join(out, name)); err != nil {
			return fmt.Errorf("%s: %w", name, err)
		}
	}
	return nil
}

// turningCircle is the circle through the place on the axis where the field has its
// turning value.
func turningCircle(w *well, n *bounce) figure.Curve {
	space, f := n.history.Block.Space, n.history.Slice(0).Component(0)
	i := 1
	for f[i] > 1 {
		i++
	}
	r := space.At(i) - space.Step*(1-f[i])/(f[i-1]-f[i])
	c := figure.Curve{Label: fmt.Sprintf("circle through φ = %.4g on the axis", w.field(1))}
	for degree := range 361 {
		y, x := math.Sincos(float64(degree) * math.Pi / 180)
		c.X, c.Y = append(c.X, r*x), append(c.Y, r*y)
	}
	return c
}

// radial are the field along the axis and the diagonal, and the start.
func radial(w *well, lump field.Lump, n *bounce) []figure.Curve {
	phi := func(f []float64) (phi []float64) {
		for _, v := range f {
			phi = append(phi, w.field(v))
		}
		return phi
	}
	space := n.history.Block.Space
	curves := []figure.Curve{{X: space.Positions(nil), Y: phi(n.history.Slice(0).Component(0)), Label: "along x"}}
	r, f := n.diagonal()
	curves = append(curves, figure.Curve{X: r, Y: phi(f), Label: "along the diagonal"})
	if start, err := field.NewLump(lump); err == nil {
		curves = append(curves, figure.Curve{X: curves[0].X, Y: phi(start.On(space, 0).Field.Component(0)), Label: "lump it started from"})
	}
	return curves
}

// landscape is V, with lines at its vacua, at the turning point and at the field in
// the middle of the bounce. A vacuum so far beyond that the barrier would be lost in the
// figure is left out.
func landscape(w *well, core float64) []figure.Curve {
	end := 1.25 * (core - w.vacuum) / w.reach
	shown := w.truth < 1.1*end // false for NaN
	if shown {
		end = 1.2 * w.truth
	}
	v := figure.Curve{Label: "V"}
	base := w.potential.at(w.vacuum)
	low, high := 0.0, 0.0
	for k := range 601 {
		phi := w.field(-0.35 + (end+0.35)*float64(k)/600)
		v.X, v.Y = append(v.X, phi), append(v.Y, w.potential.at(phi)-base)
		low, high = min(low, v.Y[k]), max(high, v.Y[k])
	}
	curves := []figure.Curve{v}
	mark := func(phi float64, name string) {
		curves = append(curves, figure.Curve{X: []float64{phi, phi}, Y: []float64{low, high}, Label: fmt.Sprintf("%s, φ = %.4g", name, phi)})
	}
	mark(w.vacuum, "false vacuum")
	mark(w.field(1), "turning point")
	mark(core, "centre of the bounce")
	if shown {
		mark(w.field(w.truth), "vacuum beyond")
	}
	return curves
}
