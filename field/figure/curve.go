package figure

import (
	"fmt"
	"image/color"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// A Curve is a line through the points (X[i], Y[i]), in the units of the axes: on
// a map and on a time series Y or X is the time. A point that is not finite is a
// gap. A curve with a label has an entry in the legend.
type Curve struct {
	X, Y  []float64
	Label string
}

// check returns an error unless there is a point to draw.
func (c Curve) check(i int) error {
	if len(c.X) != len(c.Y) {
		return fmt.Errorf("curve %d (%q) has %d values of X and %d of Y; want equally many", i, c.Label, len(c.X), len(c.Y))
	}
	if len(c.X) == 0 {
		return fmt.Errorf("curve %d (%q) is empty; want at least one point", i, c.Label)
	}
	for k := range c.X {
		if finite(c.X[k]) && finite(c.Y[k]) {
			return nil
		}
	}
	return fmt.Errorf("curve %d (%q) has no finite point among its %d", i, c.Label, len(c.X))
}

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

// The colours of Okabe and Ito (2002) in an order that keeps neighbours apart in
// lightness; their yellow is too light for a line on white.
var lineColours = [...]color.RGBA{
	{0x00, 0x72, 0xB2, 0xFF}, // blue
	{0xD5, 0x5E, 0x00, 0xFF}, // vermilion
	{0x00, 0x00, 0x00, 0xFF}, // black
	{0x00, 0x9E, 0x73, 0xFF}, // bluish green
	{0xCC, 0x79, 0xA7, 0xFF}, // reddish purple
	{0x56, 0xB4, 0xE9, 0xFF}, // sky blue
	{0xE6, 0x9F, 0x00, 0xFF}, // orange
}

var dashes = [...][]vg.Length{
	nil,
	{7, 3},
	{2, 2},
	{8, 3, 2, 3},
	{12, 4},
	{8, 2, 2, 2, 2, 2},
}

// onWhite is the style of curve i of a profile or a series.
func onWhite(i int) draw.LineStyle {
	return draw.LineStyle{Color: lineColours[i%len(lineColours)], Width: vg.Points(1.5), Dashes: dashes[i%len(dashes)]}
}

// onMap is the style of curve i of a map: black, on the white casing that a stroke
// can have, so that it is seen on any colour.
func onMap(i int) draw.LineStyle {
	return draw.LineStyle{Color: color.Black, Width: vg.Points(1.2), Dashes: dashes[i%len(dashes)]}
}

// casing is the style of what lies under a line of the given style.
func casing(over draw.LineStyle) draw.LineStyle {
	return draw.LineStyle{Color: color.White, Width: over.Width + vg.Points(1.8)}
}

// A stroke plots a curve, cut at the frame.
type stroke struct {
	curve Curve
	style draw.LineStyle
	cased bool
}

// Plot draws the curve on the data area c of p.
func (s stroke) Plot(c draw.Canvas, p *plot.Plot) {
	lines, dots := s.pieces(c, p)
	if s.cased {
		c.StrokeLines(casing(s.style), lines...)
	}
	c.StrokeLines(s.style, lines...)
	for _, at := range dots {
		dot := draw.GlyphStyle{Color: s.style.Color, Radius: s.style.Width, Shape: draw.CircleGlyph{}}
		c.DrawGlyphNoClip(dot, at)
	}
}

// pieces cuts the curve at gaps and at the frame. A point between two gaps becomes
// a dot.
func (s stroke) pieces(c draw.Canvas, p *plot.Plot) (lines [][]vg.Point, dots []vg.Point) {
	const near = 0.15 // points of print; what is closer cannot be seen
	var line []vg.Point
	end := func() {
		if len(line) > 1 {
			lines = append(lines, line)
		}
		line = nil
	}
	add := func(u [2]float64) {
		at := vg.Point{X: c.X(u[0]), Y: c.Y(u[1])}
		if n := len(line); n > 0 && math.Hypot(float64(at.X-line[n-1].X), float64(at.Y-line[n-1].Y)) < near {
			if n > 1 {
				return
			}
			at.X += near / 100 // a line of no length would vanish
		}
		line = append(line, at)
	}
	ok := func(k int) bool {
		return k >= 0 && k < len(s.curve.X) && finite(s.curve.X[k]) && finite(s.curve.Y[k])
	}
	norm := func(k int) [2]float64 { return [2]float64{p.X.Norm(s.curve.X[k]), p.Y.Norm(s.curve.Y[k])} }
	for k := range s.curve.X {
		if !ok(k) {
			end()
			continue
		}
		if !ok(k + 1) {
			if u := norm(k); !ok(k-1) && inside(u) {
				dots = append(dots, vg.Point{X: c.X(u[0]), Y: c.Y(u[1])})
			}
			end()
			continue
		}
		a, b, in := clip(norm(k), norm(k+1))
		if !in {
			end()
			continue
		}
		if a != norm(k) {
			end()
		}
		if len(line) == 0 {
			add(a)
		}
		add(b)
	}
	return lines, dots
}

func inside(u [2]float64) bool { return u[0] >= 0 && u[0] <= 1 && u[1] >= 0 && u[1] <= 1 }

// clip returns the part of the segment from a to b that lies in the unit square
// [Liang & Barsky 1984, ACM Trans. Graph. 3, 1], and whether there is one.
func clip(a, b [2]float64) (from, to [2]float64, in bool) {
	if inside(a) && inside(b) {
		return a, b, true
	}
	t0, t1 := 0.0, 1.0
	for k := range 2 {
		d := b[k] - a[k]
		if d == 0 {
			if a[k] < 0 || a[k] > 1 {
				return a, b, false
			}
			continue
		}
		enter, leave := (0-a[k])/d, (1-a[k])/d
		if d < 0 {
			enter, leave = leave, enter
		}
		t0, t1 = max(t0, enter), min(t1, leave)
	}
	if !(t0 <= t1) {
		return a, b, false
	}
	at := func(t float64) [2]float64 {
		var u [2]float64
		for k := range u {
			u[k] = min(max(a[k]+t*(b[k]-a[k]), 0), 1)
		}
		return u
	}
	from, to = a, b
	if t0 > 0 {
		from = at(t0)
	}
	if t1 < 1 {
		to = at(t1)
	}
	return from, to, finite(from[0]) && finite(from[1]) && finite(to[0]) && finite(to[1])
}
