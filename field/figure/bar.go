package figure

import (
	"fmt"
	"image"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// A bar is the scale of colours at the right of a map.
type bar struct {
	shade *shade
	label string
}

const (
	barGap   = vg.Length(14) // between data and bar
	barWidth = vg.Length(14)
	barSpace = vg.Length(3) // between ticks, numbers and label
)

func newBar(s *shade, label string) bar { return bar{s, label} }

// ticks returns the ticks of a bar of the given height.
func (b bar) ticks(height vg.Length) []plot.Tick {
	return vertical(b.shade.low, b.shade.high, height).Ticks(b.shade.low, b.shade.high)
}

func (b bar) numbersWidth(height vg.Length) (w vg.Length) {
	st := style(tickSize, draw.XLeft, middle)
	for _, t := range b.ticks(height) {
		w = max(w, st.Width(t.Label))
	}
	return w
}

// width returns the room that a bar of at most the given height needs.
func (b bar) width(height vg.Length) vg.Length {
	return barGap + barWidth + tickLength + barSpace + b.numbersWidth(height) + 1.1*labelSize
}

// draw draws the bar at the right of the data area.
func (b bar) draw(data draw.Canvas) error {
	height := data.Size().Y
	st := style(labelSize, draw.XCenter, draw.YTop)
	st.Rotation = math.Pi / 2
	if w := style(labelSize, 0, 0).Width(b.label); w > height {
		return fmt.Errorf("value label %q is %.0f points long on a bar of %.0f; want a shorter label or a larger page", b.label, w, height)
	}
	c := data
	c.Min.X = data.Max.X + barGap
	c.Max.X = c.Min.X + barWidth

	n := len(b.shade.table)
	img := image.NewRGBA(image.Rect(0, 0, 1, n))
	for i, colour := range b.shade.table {
		img.SetRGBA(0, n-1-i, colour)
	}
	p := plot.New()
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = 0, 1, 0, 1
	plotter.NewImage(img, 0, 0, 1, 1).Plot(c, p)
	frame(c)

	line := p.Y.Tick.LineStyle
	line.Width = frameWidth
	numbers := style(tickSize, draw.XLeft, middle)
	for _, t := range b.ticks(height) {
		y := c.Y((t.Value - b.shade.low) / (b.shade.high - b.shade.low))
		length := tickLength
		if t.IsMinor() {
			length /= 2
		}
		c.StrokeLine2(line, c.Max.X, y, c.Max.X+length, y)
		c.FillText(numbers, vg.Point{X: c.Max.X + tickLength + barSpace, Y: y}, t.Label)
	}
	x := c.Max.X + tickLength + barSpace + b.numbersWidth(height)
	c.FillText(st, vg.Point{X: x, Y: c.Center().Y}, b.label)
	return nil
}
