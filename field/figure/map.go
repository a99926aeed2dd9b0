package figure

import (
	"fmt"
	"image/color"
	"io"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A Map is a space-time map: one component of a history as colours, x to the
// right, t upwards, with a colour bar. The colour of an event fills its cell, half
// a step to each side.
type Map struct {
	History   *field.History
	Component int
	Region    *lattice.Region // its other events are left blank; nil shows them all

	Title                      string
	XLabel, TLabel, ValueLabel string // default "x", "t", "φ"; write the unit in them

	// Diverging says that Centre is a meaningful middle: the range is made
	// symmetric about it and the colours diverge from it.
	Diverging bool
	Centre    float64

	// Low and High are the values at the ends of the colour bar; values beyond
	// take the colours of the ends. Both zero: the range of the data.
	Low, High float64

	// Pins are drawn as white dots with a black rim. A pin off the block is an
	// error.
	Pins     []lattice.Event
	PinLabel string // default "pins"

	// Curves, X the position and Y the time, are drawn in black with a white
	// casing, each with its own dashes, and cut at the edge of the block.
	Curves []Curve

	Page Page
}

// Save writes the map to a file, as PNG, PDF or SVG by its extension. The file is
// replaced as a whole or not at all.
func (m Map) Save(path string) error { return save(path, m.Page, m) }

// Encode writes the map to w in the format "png", "pdf" or "svg".
func (m Map) Encode(w io.Writer, format string) error { return encode(w, format, m.Page, m) }

func (m Map) draw(c draw.Canvas, dpi float64) error {
	if m.History == nil {
		return fmt.Errorf("map without a history")
	}
	if _, err := m.drawOn(c, dpi); err != nil {
		return fmt.Errorf("map: %w", err)
	}
	return nil
}

// drawOn draws the map on c and returns the area of the data.
func (m Map) drawOn(c draw.Canvas, dpi float64) (data draw.Canvas, err error) {
	l := layer{m.History, m.Component, m.Region}
	if err := l.check(); err != nil {
		return data, err
	}
	low, high, whole := l.extent()
	if low > high {
		return data, fmt.Errorf("component %d has no finite value among its %d", m.Component, m.History.Block.Slices()*m.History.Block.Sites())
	}
	s, err := m.shade(low, high, smooth)
	if err != nil {
		return data, err
	}
	sh, b, err := m.layout(c.Size().Y, s, whole)
	if err != nil {
		return data, err
	}
	sh.plotters = append([]plot.Plotter{picture{l, s, dpi}}, m.strokes()...)
	if data, err = sh.draw(c); err != nil {
		return data, err
	}
	m.drawPins(data, sh.x, sh.y)
	return data, b.draw(data)
}

// layout returns what stands around the data, on a page of the given height; whole
// says that all values are finite.
func (m Map) layout(height vg.Length, s *shade, whole bool) (sh sheet, b bar, err error) {
	x, err := cells(m.History.Block.Space)
	if err != nil {
		return sh, b, fmt.Errorf("space axis: %w", err)
	}
	t, err := cells(m.History.Block.Time)
	if err != nil {
		return sh, b, fmt.Errorf("time axis: %w", err)
	}
	label := or(m.ValueLabel, "φ")
	if err := checkText("value label", label); err != nil {
		return sh, b, err
	}
	b = newBar(s, label)
	sh = sheet{title: m.Title, xLabel: or(m.XLabel, "x"), yLabel: or(m.TLabel, "t"), x: x, y: t, right: b.width(height)}
	for i, curve := range m.Curves {
		if err := curve.check(i); err != nil {
			return sh, b, err
		}
		if curve.Label != "" {
			sh.entries = append(sh.entries, lineEntry(curve.Label, onMap(i)))
		}
	}
	for i, pin := range m.Pins {
		if !(pin.X >= x[0] && pin.X <= x[1] && pin.T >= t[0] && pin.T <= t[1]) {
			return sh, b, fmt.Errorf("pin %d at %v; want x from %g to %g and t from %g to %g", i, pin, x[0], x[1], t[0], t[1])
		}
	}
	if len(m.Pins) > 0 {
		sh.entries = append(sh.entries, entry{or(m.PinLabel, "pins"), 8, func(c draw.Canvas) { drawPins(c, []vg.Point{c.Center()}) }})
	}
	if !whole {
		sh.entries = append(sh.entries, entry{"not finite", 14, func(c draw.Canvas) {
			c.FillPolygon(notFinite, []vg.Point{c.Min, {X: c.Max.X, Y: c.Min.Y}, c.Max, {X: c.Min.X, Y: c.Max.Y}})
		}})
	}
	return sh, b, nil
}

// shade returns the colours, in a number of levels, of a map whose data run from
// low to high.
func (m Map) shade(low, high float64, levels int) (*shade, error) {
	if m.Low != 0 || m.High != 0 {
		if !(m.Low < m.High) || !finite(m.Low) || !finite(m.High) {
			return nil, fmt.Errorf("colours from %v to %v; want finite numbers, the lower first", m.Low, m.High)
		}
		low, high = m.Low, m.High
	}
	if m.Diverging {
		if !finite(m.Centre) {
			return nil, fmt.Errorf("centre %v; want a finite number", m.Centre)
		}
		reach := max(math.Abs(low-m.Centre), math.Abs(high-m.Centre))
		low, high = m.Centre-reach, m.Centre+reach
	}
	low, high, err := spread(low, high)
	if err != nil {
		return nil, err
	}
	return newShade(low, high, m.Diverging, levels)
}

// strokes returns the curves of the map.
func (m Map) strokes() []plot.Plotter {
	var strokes []plot.Plotter
	for i, curve := range m.Curves {
		strokes = append(strokes, stroke{curve, onMap(i), true})
	}
	return strokes
}

// drawPins draws the pins on the data area, whose axes run over x and t.
func (m Map) drawPins(data draw.Canvas, x, t [2]float64) {
	places := make([]vg.Point, len(m.Pins))
	for i, pin := range m.Pins {
		places[i] = vg.Point{X: data.X((pin.X - x[0]) / (x[1] - x[0])), Y: data.Y((pin.T - t[0]) / (t[1] - t[0]))}
	}
	drawPins(data, places)
}

// cells returns the range that the cells of an axis cover.
func cells(a lattice.Axis) ([2]float64, error) {
	if err := a.Check(); err != nil {
		return [2]float64{}, err
	}
	r := [2]float64{a.From - a.Step/2, a.To() + a.Step/2}
	if span := r[1] - r[0]; !(span < tooWide) || span < tooClose*max(math.Abs(r[0]), math.Abs(r[1])) {
		return r, fmt.Errorf("runs from %g to %g, which cannot be labelled; want a longer axis or one nearer to zero", r[0], r[1])
	}
	return r, nil
}

// A picture plots a history as an image.
type picture struct {
	layer layer
	shade *shade
	dpi   float64
}

// Plot draws the image on the data area c of p.
func (q picture) Plot(c draw.Canvas, p *plot.Plot) {
	size := c.Size()
	img := raster(q.layer, int(size.X.Dots(q.dpi)+0.5), int(size.Y.Dots(q.dpi)+0.5), q.shade)
	plotter.NewImage(img, p.X.Min, p.Y.Min, p.X.Max, p.Y.Max).Plot(c, p)
}

// drawPins draws all casings, then all rims, then all middles, so that pins in a row
// become a white band with a rim.
func drawPins(c draw.Canvas, places []vg.Point) {
	for _, disc := range []struct {
		radius vg.Length
		colour color.Color
	}{{4, color.White}, {3.4, color.Black}, {2.1, color.White}} {
		for _, at := range places {
			c.DrawGlyphNoClip(draw.GlyphStyle{Color: disc.colour, Radius: disc.radius, Shape: draw.CircleGlyph{}}, at)
		}
	}
}

func or(s, otherwise string) string {
	if s == "" {
		return otherwise
	}
	return s
}
