package figure

import (
	"fmt"
	"io"

	"gonum.org/v1/plot/vg/draw"

	"github.com/tenter-go/tenter/field"
)

// A Profile shows the field over x: slices of a history, any curves, or both.
type Profile struct {
	// Slices are the numbers of the slices of History to show. Their labels in
	// the legend are their times.
	History   *field.History
	Component int
	Slices    []int

	Curves []Curve // drawn after the slices; X is the position

	Title              string
	XLabel, ValueLabel string // default "x", "φ"; write the unit in them

	// Low and High are the ends of the vertical axis. Both zero: the range of the
	// curves and a little more.
	Low, High float64

	Page Page
}

// Save writes the profile to a file, as PNG, PDF or SVG by its extension. The file
// is replaced as a whole or not at all.
func (p Profile) Save(path string) error { return save(path, p.Page, p) }

// Encode writes the profile to w in the format "png", "pdf" or "svg".
func (p Profile) Encode(w io.Writer, format string) error { return encode(w, format, p.Page, p) }

func (p Profile) draw(c draw.Canvas, _ float64) error {
	ch := chart{
		what: "profile", title: p.Title,
		xLabel: or(p.XLabel, "x"), yLabel: or(p.ValueLabel, "φ"),
		low: p.Low, high: p.High,
	}
	if err := checkPick(p.History, p.Component, p.Slices); err != nil {
		return fmt.Errorf("profile: %w", err)
	}
	for _, n := range p.Slices {
		b := p.History.Block
		if n < 0 || n >= b.Slices() {
			return fmt.Errorf("profile: slice %d of a history of %d; want 0 to %d", n, b.Slices(), b.Slices()-1)
		}
		ch.curves = append(ch.curves, Curve{
			X:     b.Space.Positions(nil),
			Y:     p.History.Slice(n).Component(p.Component),
			Label: "t = " + brief(b.Time.At(n)),
		})
	}
	ch.curves = append(ch.curves, p.Curves...)
	return ch.draw(c)
}

// checkPick returns an error unless parts of the component can be picked out of h.
func checkPick(h *field.History, component int, parts []int) error {
	if len(parts) == 0 {
		return nil
	}
	if h == nil {
		return fmt.Errorf("%v asked for without a history", parts)
	}
	return checkComponent(h, component)
}

// checkComponent returns an error unless h has all its values and the component.
func checkComponent(h *field.History, component int) error {
	if want := h.Block.Slices() * h.Components * h.Block.Sites(); want == 0 || len(h.Data) != want {
		return fmt.Errorf("history of %d values for %d slices × %d components × %d sites", len(h.Data), h.Block.Slices(), h.Components, h.Block.Sites())
	}
	if component < 0 || component >= h.Components {
		return fmt.Errorf("component %d of a history of %d; want 0 to %d", component, h.Components, h.Components-1)
	}
	return nil
}
