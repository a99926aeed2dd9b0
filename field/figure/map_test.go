package figure

import (
	"bytes"
	"image"
	"image/color"
	"image/png"
	"math"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// ramp is a history of the values 0, 1, 2, … on slices × sites with steps of one.
func ramp(slices, sites int) *field.History {
	h := field.NewHistory(lattice.Block{
		Time:  lattice.Axis{Step: 1, Sites: slices},
		Space: lattice.Axis{Step: 1, Sites: sites},
	}, 1)
	for k := range h.Data {
		h.Data[k] = float64(k)
	}
	return h
}

// drawn is a map on an image, with the way from events to pixels.
type drawn struct {
	img  image.Image
	data draw.Canvas
	m    Map
}

func drawMap(t *testing.T, m Map) drawn {
	t.Helper()
	const dpi = 100
	width, height := 160*vg.Millimeter, 110*vg.Millimeter
	canvas := vgimg.NewWith(vgimg.UseWH(width, height), vgimg.UseDPI(dpi))
	data, err := m.drawOn(draw.Crop(draw.New(canvas), margin, -margin, margin, -margin), dpi)
	if err != nil {
		t.Fatal(err)
	}
	return drawn{canvas.Image(), data, m}
}

// pixel returns the pixel at an event, moved by (dx, dy) points of print.
func (d drawn) pixel(e lattice.Event, dx, dy vg.Length) color.RGBA {
	b := d.m.History.Block
	u := (e.X - b.Space.From + b.Space.Step/2) / (float64(b.Sites()) * b.Space.Step)
	v := (e.T - b.Time.From + b.Time.Step/2) / (float64(b.Slices()) * b.Time.Step)
	x := (d.data.X(u) + dx).Dots(100)
	y := float64(d.img.Bounds().Dy()) - (d.data.Y(v) + dy).Dots(100)
	return color.RGBAModel.Convert(d.img.At(int(x), int(y))).(color.RGBA)
}

// near reports whether two colours differ by at most one level in each channel,
// the rounding of the image scaler.
func near(a, b color.RGBA) bool {
	off := func(x, y uint8) bool { return max(x, y)-min(x, y) > 1 }
	return !off(a.R, b.R) && !off(a.G, b.G) && !off(a.B, b.B)
}

func TestMapColours(t *testing.T) {
	h := ramp(4, 5)
	h.Set(2, 0, 3, math.NaN())
	h.Set(1, 0, 1, math.Inf(-1))
	for _, diverging := range []bool{false, true} {
		d := drawMap(t, Map{History: h, Diverging: diverging, Centre: 9.5})
		s, err := newShade(0, 19, diverging, smooth)
		if err != nil {
			t.Fatal(err)
		}
		for n := range 4 {
			for i := range 5 {
				got, want := d.pixel(h.Block.At(n, i), 0, 0), s.of(h.At(n, 0, i))
				if !near(got, want) {
					t.Errorf("diverging %v: event (%d, %d) of value %v has the colour %v; want %v", diverging, n, i, h.At(n, 0, i), got, want)
				}
			}
		}
		for _, event := range [][2]int{{2, 3}, {1, 1}} {
			if got := d.pixel(h.Block.At(event[0], event[1]), 0, 0); !near(got, notFinite) {
				t.Errorf("event %v is not finite and has the colour %v; want %v", event, got, notFinite)
			}
		}
	}
}

func TestMapOverlays(t *testing.T) {
	h := ramp(8, 8)
	white := color.RGBA{255, 255, 255, 255}
	pin := lattice.Event{X: 2, T: 6}
	d := drawMap(t, Map{
		History: h, Diverging: true, Centre: 31.5,
		Pins:   []lattice.Event{pin},
		Curves: []Curve{{X: []float64{-100, 100}, Y: []float64{3, 3}, Label: "front"}},
	})
	if got := d.pixel(pin, 0, 0); !near(got, white) {
		t.Errorf("the middle of the pin is %v; want white", got)
	}
	if got := d.pixel(pin, 2.75, 0); got.R > 60 || got.G > 60 || got.B > 60 {
		t.Errorf("the rim of the pin is %v; want black", got)
	}
	for _, x := range []float64{-0.4, 1.5, 7.4} {
		// The line is 1.2 points wide, less than two pixels: look at its height.
		dark := 255
		for dy := vg.Length(-1); dy <= 1; dy += 0.25 {
			p := d.pixel(lattice.Event{X: x, T: 3}, 0, dy)
			dark = min(dark, max(int(p.R), int(p.G), int(p.B)))
		}
		if dark > 90 {
			t.Errorf("no dark line at x = %g; the darkest pixel has the level %d", x, dark)
		}
	}
	// The curve goes on to x = ±100, but nothing is drawn beyond the frame, which
	// has 14 points of white at its right.
	for dy := vg.Length(-2); dy <= 2; dy += 0.25 {
		if got := d.pixel(lattice.Event{X: 7.5, T: 3}, 7, dy); got != white {
			t.Errorf("%v points off the curve, beyond the frame, is %v; want white", dy, got)
		}
	}
}

func TestMapErrors(t *testing.T) {
	nan := ramp(2, 2)
	for k := range nan.Data {
		nan.Data[k] = math.NaN()
	}
	short := ramp(2, 2)
	short.Data = short.Data[:3]
	far := ramp(2, 2)
	far.Block.Space.From = 1e12
	huge := ramp(2, 2)
	huge.Data[0] = 1e305
	stepless := ramp(2, 2)
	stepless.Block.Time.Step = 0
	h := ramp(3, 3)
	for _, c := range []struct {
		m       Map
		message string
	}{
		{Map{}, "map without a history"},
		{Map{History: &field.History{}}, "history of 0 values"},
		{Map{History: short}, "history of 3 values for 2 slices × 1 components × 2 sites"},
		{Map{History: nan}, "no finite value among its 4"},
		{Map{History: huge}, "want values below 1e+300"},
		{Map{History: far}, "space axis: runs from 9.999999999995e+11"},
		{Map{History: stepless}, "time axis: lattice: axis has the step 0"},
		{Map{History: h, Component: 1}, "component 1 of a history of 1; want 0 to 0"},
		{Map{History: h, Component: -1}, "component -1"},
		{Map{History: h, Low: 2, High: 1}, "colours from 2 to 1; want finite numbers, the lower first"},
		{Map{History: h, Low: math.NaN(), High: 1}, "colours from NaN to 1"},
		{Map{History: h, Diverging: true, Centre: math.Inf(1)}, "centre +Inf"},
		{Map{History: h, Pins: []lattice.Event{{}, {X: 3, T: 1}}}, "pin 1 at (x, t) = (3, 1); want x from -0.5 to 2.5"},
		{Map{History: h, Pins: []lattice.Event{{X: math.NaN()}}}, "pin 0"},
		{Map{History: h, Curves: []Curve{{X: []float64{1}, Y: []float64{1, 2}, Label: "cone"}}}, `curve 0 ("cone") has 1 values of X and 2 of Y`},
		{Map{History: h, Curves: []Curve{{}}}, "is empty"},
		{Map{History: h, Title: "∂ₜφ"}, `title "∂ₜφ" has the character 'ₜ', which the font lacks`},
		{Map{History: h, ValueLabel: "a\nb"}, `value label "a\nb" has the character '\n'`},
		{Map{History: h, XLabel: strings.Repeat("long ", 50)}, "want a shorter label"},
		{Map{History: h, TLabel: strings.Repeat("long ", 50)}, "want a shorter label"},
		{Map{History: h, ValueLabel: strings.Repeat("long ", 50)}, "want a shorter label"},
		{Map{History: h, Title: strings.Repeat("long", 50)}, "want shorter text"},
		{Map{History: h, Title: strings.Repeat("long ", 1000)}, "want a larger page"},
		{Map{History: h, Page: Page{Width: 10}}, "page of 10 × 110 mm; want sides from 40"},
		{Map{History: h, Page: Page{Height: math.NaN()}}, "page of 160 × NaN mm"},
		{Map{History: h, Page: Page{DPI: 10000}}, "10000 dots per inch"},
		{Map{History: h, Page: Page{Width: 2000, Height: 2000, DPI: 1200}}, "pixels; want at most"},
	} {
		var b bytes.Buffer
		err := c.m.Encode(&b, "png")
		if err == nil || !strings.HasPrefix(err.Error(), "figure: ") || !strings.Contains(err.Error(), c.message) {
			t.Errorf("error %v; want one with %q", err, c.message)
		}
		if b.Len() > 0 {
			t.Errorf("%s: %d bytes were written all the same", c.message, b.Len())
		}
	}
}

// Whatever the numbers, a map is drawn or refused with an error, never a panic.
func TestMapExtremes(t *testing.T) {
	values := []float64{0, 1, -1e-320, 5e-324, 1e-300, 1e299, -1e299, math.MaxFloat64, 1 + 1e-15, 1e16, math.NaN(), math.Inf(1)}
	for _, a := range values {
		for _, b := range values {
			h := ramp(2, 3)
			for k := range h.Data {
				h.Data[k] = a
			}
			h.Data[4] = b
			m := Map{History: h, Diverging: b > a, Centre: a, Curves: []Curve{{X: []float64{a, b, 1}, Y: []float64{0, 1, b}}}, Page: Page{Width: 90, Height: 60, DPI: 50}}
			var out bytes.Buffer
			if err := m.Encode(&out, "png"); err != nil {
				continue
			}
			if _, err := png.Decode(&out); err != nil {
				t.Errorf("values %v and %v: %v", a, b, err)
			}
		}
	}
}

func BenchmarkMap10000x4000(b *testing.B) {
	h := ramp(10000, 4000)
	for b.Loop() {
		var out bytes.Buffer
		if err := (Map{History: h}).Encode(&out, "png"); err != nil {
			b.Fatal(err)
		}
	}
}
