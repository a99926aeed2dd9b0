package figure

import (
	"bytes"
	"fmt"
	"image"
	"image/color"
	"image/gif"
	"io"
	"math"
	"path/filepath"
	"strings"
	"time"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"

	"github.com/tenter-go/tenter/field/store"
)

// A reel is an animation ready to be drawn: a page, drawn once, and frames on it.
type reel struct {
	captions []string // one a frame
	palette  color.Palette

	// open draws the page on c, with the headroom above the data, and returns the
	// area of the data.
	open func(c draw.Canvas) (data draw.Canvas, err error)

	// frame draws the data of frame i, also as pixels, of which the data have the
	// given area.
	frame func(i int, data draw.Canvas, img *image.RGBA, area image.Rectangle)
}

// captionGap is the room between a caption and the data under it.
const captionGap = vg.Length(5)

// headroom returns the room that the captions need.
func (r *reel) headroom() vg.Length {
	for _, text := range r.captions {
		if text != "" {
			return captionGap + 1.2*labelSize
		}
	}
	return 0
}

// saveGIF writes to a file, which must be called a GIF, what encode writes.
func saveGIF(path string, encode func(io.Writer) error) error {
	if format := strings.TrimPrefix(filepath.Ext(path), "."); !strings.EqualFold(format, "gif") {
		return fmt.Errorf("figure: %s: format %q; want gif", path, format)
	}
	return store.Replace(path, encode)
}

// encode writes the reel to w.
func (r *reel) encode(w io.Writer, p Page, speed pace) error {
	if p.DPI == 0 {
		p.DPI = 100
	}
	p = p.withDefaults()
	if err := p.check(); err != nil {
		return err
	}
	delays, err := speed.delays(len(r.captions))
	if err != nil {
		return err
	}
	canvas := vgimg.NewWith(vgimg.UseWH(vg.Length(p.Width)*vg.Millimeter, vg.Length(p.Height)*vg.Millimeter), vgimg.UseDPI(p.DPI))
	img := canvas.Image().(*image.RGBA) // the only kind that the canvas makes itself
	size := img.Rect.Size()
	const limit = 1 << 28
	if pixels := float64(size.X) * float64(size.Y) * float64(len(delays)); pixels > limit || size.X >= 1<<16 || size.Y >= 1<<16 {
		return fmt.Errorf("%d frames of %d × %d pixels; want at most %.3g in all and %d a side: a smaller page or fewer frames", len(delays), size.X, size.Y, float64(limit), 1<<16-1)
	}
	data, err := r.open(draw.Crop(draw.New(canvas), margin, -margin, margin, -margin))
	if err != nil {
		return err
	}
	if err := r.checkCaptions(data.Size().X); err != nil {
		return err
	}
	area := pixels(data.Rectangle, float64(p.DPI), size.Y)
	blank := bytes.Clone(img.Pix)
	print := newPrinter(r.palette)
	g := gif.GIF{Delay: delays, Config: image.Config{ColorModel: r.palette, Width: size.X, Height: size.Y}}
	var last *image.Paletted
	for i, text := range r.captions {
		copy(img.Pix, blank)
		r.frame(i, data, img, area)
		frame(data)
		data.FillText(style(labelSize, draw.XLeft, draw.YBottom), vg.Point{X: data.Min.X, Y: data.Max.Y + captionGap}, text)
		next := print.print(img)
		if last == nil {
			g.Image = append(g.Image, next)
		} else {
			g.Image = append(g.Image, change(last, next))
		}
		last = next
	}
	return gif.EncodeAll(w, &g)
}

// checkCaptions returns an error unless all captions can be drawn in one line of
// the given length.
func (r *reel) checkCaptions(room vg.Length) error {
	st := style(labelSize, 0, 0)
	for i, text := range r.captions {
		if err := checkText(fmt.Sprintf("caption of frame %d,", i), text); err != nil {
			return err
		}
		if w := st.Width(text); w > room {
			return fmt.Errorf("caption of frame %d, %q, is %.0f points long over data of %.0f; want a shorter one or a wider page", i, text, w, room)
		}
	}
	return nil
}

// pixels returns the pixels of an area of a page that is height pixels high.
func pixels(area vg.Rectangle, dpi float64, height int) image.Rectangle {
	at := func(l vg.Length) int { return int(math.Round(l.Dots(dpi))) }
	return image.Rect(at(area.Min.X), height-at(area.Max.Y), at(area.Max.X), height-at(area.Min.Y))
}

// A pace is the time that a frame and the last frame are shown; zero is the
// default.
type pace struct{ delay, hold time.Duration }

// delays returns the delay of each of n frames in the unit of GIF files.
func (p pace) delays(n int) ([]int, error) {
	const unit = 10 * time.Millisecond
	// Many viewers slow down what is faster than two units; a file holds 16 bits.
	const least, most = 2 * unit, math.MaxUint16 * unit
	if p.delay == 0 {
		p.delay = 10 * unit
	}
	if p.hold == 0 {
		p.hold = max(p.delay, 100*unit)
	}
	for _, d := range []struct {
		name string
		time time.Duration
	}{{"delay", p.delay}, {"hold", p.hold}} {
		if d.time < least || d.time > most {
			return nil, fmt.Errorf("%s of %v; want %v to %v", d.name, d.time, least, most)
		}
	}
	delays := make([]int, n)
	for i := range delays {
		delays[i] = int(p.delay.Round(unit) / unit)
	}
	delays[n-1] = int(p.hold.Round(unit) / unit)
	return delays, nil
}
