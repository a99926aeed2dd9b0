package figure

import (
	"errors"
	"fmt"
	"image"
	"io"
	"math"
	"time"

	"gonum.org/v1/plot/vg/draw"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A Frame is one picture of an Animation.
type Frame struct {
	History *field.History
	Caption string // such as "τ = 0.35"; stands above the data
}

// An Animation shows histories on one block as maps, one after the other: the
// steps of a relaxation, or the values of a parameter. Axes, colours and colour bar
// are the same in all frames.
type Animation struct {
	Frames    []Frame
	Component int
	Region    *lattice.Region // its other events are left blank; nil shows them all

	Title                      string
	XLabel, TLabel, ValueLabel string // default "x", "t", "φ"; write the unit in them

	// Diverging says that Centre is a meaningful middle: the range is made
	// symmetric about it and the colours diverge from it.
	Diverging bool
	Centre    float64

	// Low and High are the values at the ends of the colour bar; values beyond
	// take the colours of the ends. Both zero: the range of all frames together.
	Low, High float64

	// Pins and Curves are drawn over every frame as over a Map.
	Pins     []lattice.Event
	PinLabel string // default "pins"
	Curves   []Curve

	// Delay is the time of a frame, in steps of 10 ms; default 100 ms. Hold is
	// that of the last frame, after which the animation begins again; default 1 s.
	Delay, Hold time.Duration

	Page Page
}

// Save writes the animation to a file, which must have the extension .gif. The file
// is replaced as a whole or not at all.
func (a Animation) Save(path string) error { return saveGIF(path, a.Encode) }

// Encode writes the animation to w as an animated GIF that repeats for ever.
func (a Animation) Encode(w io.Writer) error {
	r, err := a.reel()
	if err == nil {
		err = r.encode(w, a.Page, pace{a.Delay, a.Hold})
	}
	if err != nil {
		return fmt.Errorf("figure: animation: %w", err)
	}
	return nil
}

// reel returns the frames, ready to be drawn.
func (a Animation) reel() (*reel, error) {
	low, high, whole, err := a.extent()
	if err != nil {
		return nil, err
	}
	m := Map{
		History: a.Frames[0].History, Component: a.Component,
		Title: a.Title, XLabel: a.XLabel, TLabel: a.TLabel, ValueLabel: a.ValueLabel,
		Diverging: a.Diverging, Centre: a.Centre, Low: a.Low, High: a.High,
		Pins: a.Pins, PinLabel: a.PinLabel, Curves: a.Curves,
	}
	s, err := m.shade(low, high, levels)
	if err != nil {
		return nil, err
	}
	r := &reel{palette: shaded(s)}
	for _, f := range a.Frames {
		r.captions = append(r.captions, f.Caption)
	}
	var sh sheet
	r.open = func(c draw.Canvas) (data draw.Canvas, err error) {
		var b bar
		if sh, b, err = m.layout(c.Size().Y, s, whole); err != nil {
			return data, err
		}
		sh.above = r.headroom()
		if data, err = sh.draw(c); err != nil {
			return data, err
		}
		return data, b.draw(data)
	}
	r.frame = func(i int, data draw.Canvas, img *image.RGBA, area image.Rectangle) {
		paint(img, area, a.layer(i), s)
		p := sh.axes()
		for _, curve := range m.strokes() {
			curve.Plot(data, p)
		}
		m.drawPins(data, sh.x, sh.y)
	}
	return r, nil
}

// extent returns the smallest and the largest finite value of all frames, and
// whether all values are finite, or says which frame cannot be shown.
func (a Animation) extent() (low, high float64, whole bool, err error) {
	if len(a.Frames) == 0 {
		return 0, 0, false, errors.New("no frames; want at least one")
	}
	low, high, whole = math.Inf(1), math.Inf(-1), true
	for i, f := range a.Frames {
		if f.History == nil {
			return 0, 0, false, fmt.Errorf("frame %d without a history", i)
		}
		if err := a.layer(i).check(); err != nil {
			return 0, 0, false, fmt.Errorf("frame %d: %w", i, err)
		}
		if err := checkSameBlock(f.History.Block, a.Frames[0].History.Block, "frame 0"); err != nil {
			return 0, 0, false, fmt.Errorf("frame %d: %w", i, err)
		}
		l, h, w := a.layer(i).extent()
		low, high, whole = min(low, l), max(high, h), whole && w
	}
	if low > high {
		return 0, 0, false, fmt.Errorf("component %d has no finite value in any of %d frames", a.Component, len(a.Frames))
	}
	return low, high, whole, nil
}

// layer returns what frame i shows.
func (a Animation) layer(i int) layer { return layer{a.Frames[i].History, a.Component, a.Region} }

// checkSameBlock returns an error that names the axis on which the events of b lie
// elsewhere than those of the block of so and so.
func checkSameBlock(b, first lattice.Block, of string) error {
	for _, axis := range []struct {
		name      string
		got, want lattice.Axis
	}{{"time", b.Time, first.Time}, {"space", b.Space, first.Space}} {
		if g, w := axis.got, axis.want; g.Sites != w.Sites || g.From != w.From || g.Step != w.Step {
			return fmt.Errorf("%s axis of %d sites from %g to %g; want that of %s, %d sites from %g to %g", axis.name, g.Sites, g.From, g.To(), of, w.Sites, w.From, w.To())
		}
	}
	return nil
}
