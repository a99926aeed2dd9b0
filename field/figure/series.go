package figure

import (
	"fmt"
	"io"

	"gonum.org/v1/plot/vg/draw"

	"github.com/tenter-go/tenter/field"
)

// A Series shows values over t: sites of a history, any curves (an energy, a
// position), or both.
type Series struct {
	// Sites are the numbers of the sites of History to show. Their labels in the
	// legend are their positions.
	History   *field.History
	Component int
	Sites     []int

	Curves []Curve // drawn after the sites; X is the time

	Title              string
	TLabel, ValueLabel string // default "t", "φ"; write the unit in them

	// Low and High are the ends of the vertical axis. Both zero: the range of the
	// curves and a little more.
	Low, High float64

	Page Page
}

// Save writes the series to a file, as PNG, PDF or SVG by its extension. The file
// is replaced as a whole or not at all.
func (s Series) Save(path string) error { return save(path, s.Page, s) }

// Encode writes the series to w in the format "png", "pdf" or "svg".
func (s Series) Encode(w io.Writer, format string) error { return encode(w, format, s.Page, s) }

func (s Series) draw(c draw.Canvas, _ float64) error {
	ch := chart{
		what: "series", title: s.Title,
		xLabel: or(s.TLabel, "t"), yLabel: or(s.ValueLabel, "φ"),
		low: s.Low, high: s.High,
	}
	if err := checkPick(s.History, s.Component, s.Sites); err != nil {
		return fmt.Errorf("series: %w", err)
	}
	for _, i := range s.Sites {
		b := s.History.Block
		if i < 0 || i >= b.Sites() {
			return fmt.Errorf("series: site %d of a history of %d; want 0 to %d", i, b.Sites(), b.Sites()-1)
		}
		ch.curves = append(ch.curves, Curve{
			X:     b.Time.Positions(nil),
			Y:     s.History.TimeSeries(nil, s.Component, i),
			Label: "x = " + brief(b.Space.At(i)),
		})
	}
	ch.curves = append(ch.curves, s.Curves...)
	return ch.draw(c)
}
