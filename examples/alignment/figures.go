package main

import (
	"fmt"
	"math"
	"path/filepath"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/figure"
)

// draw writes the figures of an alignment and of a sweep.
func draw(a *alignment, s *swept, out string) error {
	for name, fig := range map[string]interface{ Save(string) error }{
		"map.png":      a.picture(),
		"profiles.png": a.profiles(),
		"yield.png":    s.yield(),
		"felt.png":     s.felt(),
	} {
		if err := fig.Save(filepath.Join(out, name)); err != nil {
			return fmt.Errorf("%s: %w", name, err)
		}
	}
	return nil
}

var gap = math.NaN() // between the pieces of a curve

// picture is the angle as colours, with the director as short strokes.
func (a *alignment) picture() figure.Map {
	shown := field.NewHistory(a.angle.Block, 1)
	for k, v := range a.angle.Data {
		shown.Data[k] = degrees(v)
	}
	b := a.angle.Block
	width, height := b.Space.Length(), b.Time.Length()
	return figure.Map{
		History: shown, Region: a.region,
		Diverging: true, Centre: degrees(a.at(a.channel.junction())),
		Title:  "Director in an invented channel, colours about the angle at the junction",
		XLabel: "x (widths)", TLabel: "y (widths)", ValueLabel: "angle from the x axis (°)",
		Curves: []figure.Curve{a.strokes(a.outline())},
		// The data are 133 mm wide; the same scale upwards keeps angles true.
		Page: figure.Page{Width: 175, Height: 34 + 133*height/width},
	}
}

// outline runs around the channel.
func (a *alignment) outline() figure.Curve {
	c := a.channel
	s, l, r := c.stem.length, -0.5-c.left.length, 0.5+c.right.length
	return figure.Curve{
		X: []float64{-0.5, 0.5, 0.5, r, r, l, l, -0.5, -0.5, gap},
		Y: []float64{0, 0, s, s, s + 1, s + 1, s, s, 0, gap},
	}
}

// strokes adds pieces of the director, a fifth of the width long and four across
// the channel, to a curve.
func (a *alignment) strokes(k figure.Curve) figure.Curve {
	const spacing, half = 0.25, 0.1
	k.Label = "walls and director"
	b := a.angle.Block
	for y := spacing / 2; y < b.Time.To(); y += spacing {
		for x := b.Space.From + spacing/2; x < b.Space.To(); x += spacing {
			n, _ := b.Time.Nearest(y)
			i, _ := b.Space.Nearest(x)
			if a.region.Event(n, i) < 1 {
				continue
			}
			sin, cos := math.Sincos(a.angle.At(n, 0, i))
			k.X = append(k.X, x-half*cos, x+half*cos, gap)
			k.Y = append(k.Y, y-half*sin, y+half*sin, gap)
		}
	}
	return k
}

// profiles shows the angle on the middle lines, from the junction to the walls.
func (a *alignment) profiles() figure.Profile {
	p := figure.Profile{
		Title:  "From the junction to the walls of an invented channel, on the middle lines",
		XLabel: "distance from the middle of the junction (widths)", ValueLabel: "angle from the x axis (°)",
	}
	b := a.angle.Block
	asked := figure.Curve{Label: "asked for by the walls"}
	for _, part := range a.channel.parts() {
		line := figure.Curve{Label: part.String()}
		e := a.channel.junction()
		for k := 0; ; k++ {
			far := float64(k) * b.Space.Step
			if far > part.length+0.5+b.Space.Step/2 {
				break
			}
			at := e
			switch part.name {
			case "stem":
				at.T -= far
			case "left":
				at.X -= far
			case "right":
				at.X += far
			}
			line.X, line.Y = append(line.X, far), append(line.Y, degrees(a.at(at)))
		}
		p.Curves = append(p.Curves, line)
		end, easy := part.length+0.5, degrees(part.easy)
		asked.X = append(asked.X, end-0.2, end, gap)
		asked.Y = append(asked.Y, easy, easy, gap)
	}
	p.Curves = append(p.Curves, asked)
	return p
}

// yield shows the deviations over the varied strength.
func (s *swept) yield() figure.Profile {
	p := s.over("Which wall yields in an invented channel, as one anchoring varies", "θ − easy at the wall (°)")
	for _, part := range s.parts {
		p.Curves = append(p.Curves, s.curve("deviation_"+part.name, part.wall()))
	}
	return p
}

// felt shows how each wall is felt in the arms of the others.
func (s *swept) felt() figure.Profile {
	p := s.over("How a wall is felt in the arms of the others, as one anchoring varies", "change of θ by change of the easy angle")
	for _, wall := range s.parts {
		for _, part := range s.parts {
			if wall.name != part.name {
				p.Curves = append(p.Curves, s.curve("felt_"+wall.name+"_in_"+part.name, wall.wall()+" in "+part.String()))
			}
		}
	}
	return p
}

func (s *swept) over(title, value string) figure.Profile {
	return figure.Profile{
		Title: title, XLabel: "log10 of W of the " + s.wall.wall() + " (K/width)", ValueLabel: value,
		Page: figure.Page{Width: 170, Height: 115},
	}
}

func (s *swept) curve(column, label string) figure.Curve {
	strengths, _ := s.table.Column("W_" + s.wall.name)
	k := figure.Curve{Label: label}
	for _, w := range strengths {
		k.X = append(k.X, math.Log10(w))
	}
	k.Y, _ = s.table.Column(column)
	return k
}
