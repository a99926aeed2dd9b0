package figure

import (
	"fmt"
	"image/color"
	"math"
	"strings"

	"golang.org/x/image/font/sfnt"
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/font/liberation"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// Measures of print, in points.
const (
	margin     = vg.Length(8)
	titleSize  = 13
	labelSize  = 12
	tickSize   = 11
	tickLength = vg.Length(4)
	frameWidth = vg.Length(0.8)
	smallest   = vg.Length(50) // side of a data area that is worth drawing

	// Alignments that put the middle of a figure's height, not of a line's, at the
	// point. The axes of the plotting library add the descent of the font.
	middle       = draw.YAlignment(-0.38)
	middleOfAxis = draw.YAlignment(-0.58)
)

// plain draws text as it is. The default handler of package plot can be exchanged
// by anyone, also for one that panics.
var plain = text.Plain{Fonts: font.DefaultCache}

// style returns black text of a size in points.
func style(size float64, x draw.XAlignment, y draw.YAlignment) text.Style {
	return text.Style{
		Color:   color.Black,
		Font:    font.From(font.Font{Typeface: "Liberation", Variant: "Sans"}, vg.Length(size)),
		XAlign:  x,
		YAlign:  y,
		Handler: plain,
	}
}

// sansSerif is the face that style uses, asked which characters it has.
var sansSerif = func() *sfnt.Font {
	for _, f := range liberation.Collection() {
		if f.Font.Variant == "Sans" && f.Font.Style == 0 && f.Font.Weight == 0 {
			return f.Face
		}
	}
	return nil
}()

// checkText returns an error that names a character which cannot be drawn.
func checkText(what, s string) error {
	if sansSerif == nil {
		return nil
	}
	var buf sfnt.Buffer
	for _, r := range s {
		if g, err := sansSerif.GlyphIndex(&buf, r); err != nil || g == 0 {
			return fmt.Errorf("%s %q has the character %q, which the font lacks; write it another way", what, s, r)
		}
	}
	return nil
}

// A sheet is what all figures share: a title, a legend above the data, two axes
// and a frame.
type sheet struct {
	title          string
	xLabel, yLabel string
	x, y           [2]float64 // the ranges of the axes
	entries        []entry
	plotters       []plot.Plotter

	right vg.Length // room to leave on the right
	above vg.Length // room to leave between the legend and the data
}

// An entry is a line of the legend.
type entry struct {
	label  string
	wide   vg.Length           // of the sample
	sample func(c draw.Canvas) // draws in the rectangle of c
}

func lineEntry(label string, s draw.LineStyle) entry {
	return entry{label, 28, func(c draw.Canvas) {
		y := c.Center().Y
		c.StrokeLine2(s, c.Min.X, y, c.Max.X, y)
	}}
}

// draw draws the sheet on c and returns the area of the data.
func (s *sheet) draw(c draw.Canvas) (data draw.Canvas, err error) {
	for _, l := range [][2]string{{"title", s.title}, {"x label", s.xLabel}, {"y label", s.yLabel}} {
		if err := checkText(l[0], l[1]); err != nil {
			return data, err
		}
	}
	if c, err = s.drawTitle(c); err != nil {
		return data, err
	}
	if c, err = s.drawLegend(c); err != nil {
		return data, err
	}
	c.Max.X -= s.right
	c.Max.Y -= s.above
	if err := checkRoom(c.Size()); err != nil {
		return data, err
	}
	if err := s.checkLabels(c.Size()); err != nil {
		return data, err
	}
	p := plot.New()
	p.BackgroundColor = nil
	for _, a := range []struct {
		axis  *plot.Axis
		label string
		span  [2]float64
		ticks ticker
	}{
		// The other axis with its numbers takes about a sixth of the length.
		{&p.X, s.xLabel, s.x, horizontal(s.x[0], s.x[1], c.Size().X*5/6)},
		{&p.Y, s.yLabel, s.y, vertical(s.y[0], s.y[1], c.Size().Y*5/6)},
	} {
		a.axis.Min, a.axis.Max = a.span[0], a.span[1]
		a.axis.Padding = 0
		a.axis.LineStyle.Width = 0 // the frame is drawn once, below
		a.axis.Label.Text = a.label
		a.axis.Label.Padding = vg.Points(3)
		a.axis.Label.TextStyle.Font = style(labelSize, 0, 0).Font
		a.axis.Label.TextStyle.Handler = plain
		a.axis.Tick.Label.Font = style(tickSize, 0, 0).Font
		a.axis.Tick.Label.Handler = plain
		a.axis.Tick.Length = tickLength
		a.axis.Tick.LineStyle.Width = frameWidth
		a.axis.Tick.Marker = a.ticks
	}
	p.Y.Tick.Label.YAlign = middleOfAxis
	p.Add(s.plotters...)

	data = p.DataCanvas(c)
	if err := checkRoom(data.Size()); err != nil {
		return data, err
	}
	if err := s.checkLabels(data.Size()); err != nil {
		return data, err
	}
	p.Draw(c)
	frame(data)
	return data, nil
}

// axes returns a plot with the ranges of the axes, for what is drawn on the data
// later.
func (s *sheet) axes() *plot.Plot {
	p := plot.New()
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = s.x[0], s.x[1], s.y[0], s.y[1]
	return p
}

// checkRoom returns an error if there is too little room for the data.
func checkRoom(room vg.Point) error {
	if room.X < smallest || room.Y < smallest {
		return fmt.Errorf("page leaves %.0f × %.0f points for the data; want a larger page, shorter labels or fewer entries in the legend", max(room.X, 0), max(room.Y, 0))
	}
	return nil
}

// checkLabels returns an error if a label is longer than its axis.
func (s *sheet) checkLabels(room vg.Point) error {
	for _, l := range []struct {
		what, text string
		room       vg.Length
	}{{"x label", s.xLabel, room.X}, {"y label", s.yLabel, room.Y}} {
		if w := style(labelSize, 0, 0).Width(l.text); w > l.room {
			return fmt.Errorf("%s %q is %.0f points long on an axis of %.0f; want a shorter label or a larger page", l.what, l.text, w, l.room)
		}
	}
	return nil
}

// frame draws a rectangle around c.
func frame(c draw.Canvas) {
	line := draw.LineStyle{Color: color.Black, Width: frameWidth}
	c.StrokeLines(line, []vg.Point{c.Min, {X: c.Max.X, Y: c.Min.Y}, c.Max, {X: c.Min.X, Y: c.Max.Y}, c.Min, {X: c.Min.X + frameWidth, Y: c.Min.Y}})
}

// drawTitle draws the title on top of c and returns what is left.
func (s *sheet) drawTitle(c draw.Canvas) (draw.Canvas, error) {
	if strings.TrimSpace(s.title) == "" {
		return c, nil
	}
	st := style(titleSize, draw.XCenter, draw.YTop)
	lines, err := wrap(strings.Fields(s.title), st.Width, st.Width(" "), c.Size().X)
	if err != nil {
		return c, fmt.Errorf("title: %w", err)
	}
	for _, words := range lines {
		c.FillText(st, vg.Point{X: c.Center().X, Y: c.Max.Y}, strings.Join(words, " "))
		c.Max.Y -= 1.25 * titleSize
	}
	c.Max.Y -= 4
	return c, nil
}

// drawLegend draws the legend on top of c, in as many rows as it needs, and
// returns what is left.
func (s *sheet) drawLegend(c draw.Canvas) (draw.Canvas, error) {
	if len(s.entries) == 0 {
		return c, nil
	}
	const gap, between, high = vg.Length(5), vg.Length(18), vg.Length(1.35 * tickSize)
	st := style(tickSize, draw.XLeft, middle)
	width := func(e entry) vg.Length { return e.wide + gap + st.Width(e.label) }
	for _, e := range s.entries {
		if err := checkText("label", e.label); err != nil {
			return c, err
		}
	}
	rows, err := wrap(s.entries, width, between, c.Size().X)
	if err != nil {
		return c, fmt.Errorf("legend: %w", err)
	}
	for _, row := range rows {
		total := between * vg.Length(len(row)-1)
		for _, e := range row {
			total += width(e)
		}
		x, y := c.Center().X-total/2, c.Max.Y-high/2
		for _, e := range row {
			box := draw.Canvas{Canvas: c.Canvas, Rectangle: vg.Rectangle{
				Min: vg.Point{X: x, Y: y - 4}, Max: vg.Point{X: x + e.wide, Y: y + 4},
			}}
			e.sample(box)
			c.FillText(st, vg.Point{X: x + e.wide + gap, Y: y}, e.label)
			x += width(e) + between
		}
		c.Max.Y -= high
	}
	c.Max.Y -= 5
	return c, nil
}

// wrap breaks items into rows no wider than room.
func wrap[T any](items []T, width func(T) vg.Length, between, room vg.Length) ([][]T, error) {
	var rows [][]T
	left := vg.Length(math.Inf(-1))
	for _, it := range items {
		w := width(it)
		if w > room {
			return nil, fmt.Errorf("%v is %.0f points wide on a page of %.0f; want shorter text or a wider page", it, w, room)
		}
		if w+between > left {
			rows = append(rows, nil)
			left = room + between
		}
		rows[len(rows)-1] = append(rows[len(rows)-1], it)
		left -= w + between
	}
	return rows, nil
}

// String returns the label, for messages.
func (e entry) String() string { return fmt.Sprintf("%q", e.label) }
