package figure

import (
	"bytes"
	"fmt"
	"image"
	"image/color"
	"math"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// ramps returns frames of the ramp on slices × sites, times 1, 2, 3, …
func ramps(frames, slices, sites int) []Frame {
	var fs []Frame
	for i := range frames {
		h := ramp(slices, sites)
		for k := range h.Data {
			h.Data[k] *= float64(i + 1)
		}
		fs = append(fs, Frame{h, fmt.Sprintf("τ = %.2f", 0.05*float64(i))})
	}
	return fs
}

func TestAnimationColours(t *testing.T) {
	frames := ramps(3, 4, 5) // values up to 19·3
	frames[1].History.Set(2, 0, 3, math.NaN())
	frames[2].History.Set(0, 0, 0, math.Inf(1))
	for _, a := range []struct {
		Animation
		low, high float64
	}{
		{Animation{}, 0, 57},
		{Animation{Diverging: true, Centre: 20}, -17, 57},
		{Animation{Low: 10, High: 40}, 10, 40},
	} {
		a.Frames = frames
		r, err := a.reel()
		if err != nil {
			t.Fatal(err)
		}
		s, err := newShade(a.low, a.high, a.Diverging, levels)
		if err != nil {
			t.Fatal(err)
		}
		f := play(t, r)
		for k, picture := range f.pictures {
			h := frames[k].History
			for n := range 4 {
				for i := range 5 {
					want := s.of(h.At(n, 0, i))
					x := f.area.Min.X + (2*i+1)*f.area.Dx()/10
					y := f.area.Max.Y - (2*n+1)*f.area.Dy()/8
					if got := picture.RGBAAt(x, y); got != want {
						t.Errorf("%g to %g: frame %d: event (%d, %d) of value %v has the colour %v; want %v", a.low, a.high, k, n, i, h.At(n, 0, i), got, want)
					}
					if r.palette[r.palette.Index(want)] != want {
						t.Errorf("the palette lacks %v", want)
					}
				}
			}
		}
	}
}

// Only the data, with the halves of their frame line outside, and the caption
// change: no axis, tick or bar flickers.
func TestAnimationStands(t *testing.T) {
	r, err := Animation{Frames: ramps(4, 8, 8), Title: "title", Pins: []lattice.Event{{X: 3, T: 4}}}.reel()
	if err != nil {
		t.Fatal(err)
	}
	f := play(t, r)
	may := f.area.Inset(-1)
	may.Min.Y -= int(captionGap.Dots(100)) + 20
	pin := image.Pt(f.area.Min.X+7*f.area.Dx()/16, f.area.Max.Y-9*f.area.Dy()/16)
	for k, picture := range f.pictures {
		if got := picture.RGBAAt(pin.X, pin.Y); got != (color.RGBA{255, 255, 255, 255}) {
			t.Errorf("frame %d: the middle of the pin is %v; want white", k, got)
		}
		if box := f.coded.Image[k].Rect; k > 0 && !box.In(may) {
			t.Errorf("frame %d changes %v; want nothing outside %v", k, box, may)
		}
	}
}

func TestAnimationErrors(t *testing.T) {
	frames := func(change func(f []Frame)) []Frame {
		f := ramps(3, 4, 5)
		change(f)
		return f
	}
	good := ramps(3, 4, 5)
	for _, c := range []struct {
		a       Animation
		message string
	}{
		{Animation{}, "no frames; want at least one"},
		{Animation{Frames: frames(func(f []Frame) { f[1].History = nil })}, "frame 1 without a history"},
		{Animation{Frames: frames(func(f []Frame) { f[2].History = &field.History{} })}, "frame 2: history of 0 values"},
		{Animation{Frames: frames(func(f []Frame) { f[2].History = ramp(4, 6) })}, "frame 2: space axis of 6 sites from 0 to 5; want that of frame 0, 5 sites from 0 to 4"},
		{Animation{Frames: frames(func(f []Frame) { f[1].History.Block.Time.From = 1 })}, "frame 1: time axis of 4 sites from 1 to 4"},
		{Animation{Frames: frames(func(f []Frame) {
			for i := range f {
				for k := range f[i].History.Data {
					f[i].History.Data[k] = math.NaN()
				}
			}
		})}, "component 0 has no finite value in any of 3 frames"},
		{Animation{Frames: frames(func(f []Frame) { f[1].Caption = "∂ₜ" })}, `caption of frame 1, "∂ₜ" has the character`},
		{Animation{Frames: frames(func(f []Frame) { f[1].Caption = strings.Repeat("long ", 50) })}, "want a shorter one or a wider page"},
		{Animation{Frames: good, Component: 1}, "frame 0: component 1 of a history of 1"},
		{Animation{Frames: good, Low: 2, High: 1}, "colours from 2 to 1"},
		{Animation{Frames: good, Pins: []lattice.Event{{X: 9}}}, "pin 0 at"},
		{Animation{Frames: good, Title: "a\nb"}, `title "a\nb"`},
		{Animation{Frames: good, Delay: time.Millisecond}, "delay of 1ms; want 20ms to 10m55.35s"},
		{Animation{Frames: good, Hold: time.Hour}, "hold of 1h0m0s"},
		{Animation{Frames: good, Page: Page{Width: 10}}, "page of 10"},
		{Animation{Frames: slices.Repeat(good[:1], 8000)}, "8000 frames of 630 × 433 pixels; want at most"},
	} {
		var b bytes.Buffer
		err := c.a.Encode(&b)
		if err == nil || !strings.HasPrefix(err.Error(), "figure: animation: ") || !strings.Contains(err.Error(), c.message) {
			t.Errorf("error %v; want one with %q", err, c.message)
		}
		if b.Len() > 0 {
			t.Errorf("%s: %d bytes were written all the same", c.message, b.Len())
		}
	}
}

func BenchmarkAnimation(b *testing.B) {
	frames := ramps(100, 64, 64)
	var file bytes.Buffer
	for b.Loop() {
		file.Reset()
		if err := (Animation{Frames: frames}).Encode(&file); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(file.Len()), "bytes/file")
}
