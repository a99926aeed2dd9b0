package figure

import (
	"errors"
	"fmt"
	"image"
	"io"
	"math"
	"strconv"
	"strings"
	"time"

	"gonum.org/v1/plot/vg/draw"

	"github.com/tenter-go/tenter/field"
)

// A Motion shows the field over x as it moves: a history slice by slice, with its
// time above the data. The axes are the same in all frames.
type Motion struct {
	History   *field.History
	Component int

	// Every says to show slices 0, Every, 2·Every and so on. Default: the least
	// that makes at most 100 frames.
	Every int

	// Curves stand still under the moving one, in the styles of a Profile from the
	// second on; X is the position.
	Curves []Curve

	Title              string
	XLabel, ValueLabel string // default "x", "φ"; write the unit in them
	TimeUnit           string // such as "ns"; stands behind the time

	// Low and High are the ends of the vertical axis. Both zero: the range of the
	// slices shown and of the curves, and a little more.
	Low, High float64

	// Delay is the time of a frame, in steps of 10 ms; default 100 ms. Hold is
	// that of the last frame, after which the motion begins again; default 1 s.
	Delay, Hold time.Duration

	Page Page
}

// Save writes the motion to a file, which must have the extension .gif. The file is
// replaced as a whole or not at all.
func (m Motion) Save(path string) error { return saveGIF(path, m.Encode) }

// Encode writes the motion to w as an animated GIF that repeats for ever.
func (m Motion) Encode(w io.Writer) error {
	r, err := m.reel()
	if err == nil {
		err = r.encode(w, m.Page, pace{m.Delay, m.Hold})
	}
	if err != nil {
		return fmt.Errorf("figure: motion: %w", err)
	}
	return nil
}

// reel returns the frames, ready to be drawn.
func (m Motion) reel() (*reel, error) {
	slices, times, err := m.slices()
	if err != nil {
		return nil, err
	}
	ch := chart{
		title: m.Title, xLabel: or(m.XLabel, "x"), yLabel: or(m.ValueLabel, "φ"),
		low: m.Low, high: m.High, curves: m.Curves, first: 1,
	}
	sh, err := ch.layout(slices)
	if err != nil {
		return nil, err
	}
	r := &reel{palette: tinted(lineColours[:])}
	for _, time := range stamps(times) {
		r.captions = append(r.captions, strings.TrimSpace("t = "+time+" "+m.TimeUnit))
	}
	sh.above = r.headroom()
	r.open = sh.draw
	r.frame = func(i int, data draw.Canvas, _ *image.RGBA, _ image.Rectangle) {
		stroke{curve: slices[i], style: onWhite(0)}.Plot(data, sh.axes())
	}
	return r, nil
}

// slices returns the slices to show and their times.
func (m Motion) slices() (curves []Curve, times []float64, err error) {
	h := m.History
	if h == nil {
		return nil, nil, errors.New("no history")
	}
	if err := checkComponent(h, m.Component); err != nil {
		return nil, nil, err
	}
	if err := h.Block.Space.Check(); err != nil {
		return nil, nil, fmt.Errorf("space axis: %w", err)
	}
	if err := h.Block.Time.Check(); err != nil {
		return nil, nil, fmt.Errorf("time axis: %w", err)
	}
	every := m.Every
	if every < 0 {
		return nil, nil, fmt.Errorf("every %d slices; want 1 or more", every)
	}
	if every == 0 {
		every = (h.Block.Slices() + 99) / 100
	}
	seen := false
	x := h.Block.Space.Positions(nil)
	for n := 0; n < h.Block.Slices(); n += every {
		curve := Curve{X: x, Y: h.Slice(n).Component(m.Component)}
		seen = seen || curve.check(0) == nil
		curves = append(curves, curve)
		times = append(times, h.Block.Time.At(n))
	}
	if !seen {
		return nil, nil, fmt.Errorf("component %d has no finite value in any of %d slices", m.Component, len(curves))
	}
	return curves, times, nil
}

// stamps writes equally spaced times with equally many decimals, so that they do
// not jump about: as many as show them exactly, or else as tell them apart.
func stamps(times []float64) []string {
	if len(times) == 1 {
		return []string{brief(times[0])}
	}
	step := (times[len(times)-1] - times[0]) / float64(len(times)-1)
	exact := func(decimals int) bool {
		unit := math.Pow10(-decimals)
		for _, t := range times {
			if math.Abs(t-unit*math.Round(t/unit)) > 1e-6*step {
				return false
			}
		}
		return true
	}
	decimals := max(0, 1-int(math.Floor(math.Log10(step))))
	for d := range 7 {
		if exact(d) {
			decimals = d
			break
		}
	}
	s := make([]string, len(times))
	for i, t := range times {
		if decimals > 9 || math.Abs(t) >= 1e7 {
			s[i] = brief(t)
			continue
		}
		if math.Abs(t) < 1e-6*step {
			t = 0 // without a sign
		}
		s[i] = strings.ReplaceAll(strconv.FormatFloat(t, 'f', decimals, 64), "-", "−")
	}
	return s
}
