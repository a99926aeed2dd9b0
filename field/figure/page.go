package figure

import (
	"bytes"
	"fmt"
	"image/color"
	"image/png"
	"io"
	"path/filepath"
	"strings"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgpdf"
	"gonum.org/v1/plot/vg/vgsvg"

	"github.com/tenter-go/tenter/field/store"
)

// A Page is the size of a figure. Zero fields take their defaults.
type Page struct {
	Width, Height float64 // in millimetres; default 160 × 110
	DPI           int     // of PNG files and of the raster of maps; default 150, of animations 100
}

func (p Page) withDefaults() Page {
	if p.Width == 0 {
		p.Width = 160
	}
	if p.Height == 0 {
		p.Height = 110
	}
	if p.DPI == 0 {
		p.DPI = 150
	}
	return p
}

func (p Page) check() error {
	for _, side := range []float64{p.Width, p.Height} {
		if !(side >= 40 && side <= 2000) {
			return fmt.Errorf("page of %g × %g mm; want sides from 40 to 2000 mm", p.Width, p.Height)
		}
	}
	if p.DPI < 50 || p.DPI > 1200 {
		return fmt.Errorf("page with %d dots per inch; want 50 to 1200", p.DPI)
	}
	const limit = 1 << 26
	dots := float64(p.DPI) / 25.4
	if pixels := p.Width * dots * p.Height * dots; pixels > limit {
		return fmt.Errorf("page of %g × %g mm with %d dots per inch has %.3g pixels; want at most %.3g", p.Width, p.Height, p.DPI, pixels, float64(limit))
	}
	return nil
}

// A drawing draws itself on a canvas of a given resolution, or says why not.
type drawing interface {
	draw(c draw.Canvas, dpi float64) error
}

// save writes d to a file in the format of its extension.
func save(path string, p Page, d drawing) error {
	format := strings.ToLower(strings.TrimPrefix(filepath.Ext(path), "."))
	if err := checkFormat(format); err != nil {
		return fmt.Errorf("figure: %s: %w", path, err)
	}
	return store.Replace(path, func(w io.Writer) error { return encode(w, format, p, d) })
}

func checkFormat(format string) error {
	switch format {
	case "png", "pdf", "svg":
		return nil
	}
	return fmt.Errorf("format %q; want png, pdf or svg", format)
}

func encode(w io.Writer, format string, p Page, d drawing) error {
	if err := checkFormat(format); err != nil {
		return fmt.Errorf("figure: %w", err)
	}
	p = p.withDefaults()
	if err := p.check(); err != nil {
		return fmt.Errorf("figure: %w", err)
	}
	width, height := vg.Length(p.Width)*vg.Millimeter, vg.Length(p.Height)*vg.Millimeter
	var canvas vg.CanvasSizer
	var write func() error
	switch format {
	case "png":
		c := vgimg.NewWith(vgimg.UseWH(width, height), vgimg.UseDPI(p.DPI))
		canvas, write = c, func() error { return png.Encode(w, c.Image()) }
	case "pdf":
		c := vgpdf.New(width, height)
		canvas, write = outlined{upright{c}}, func() error { _, err := c.WriteTo(w); return err }
	case "svg":
		c := vgsvg.New(width, height)
		canvas, write = outlined{c}, func() error { return writeSVG(w, c) }
	}
	c := draw.New(canvas)
	c.SetColor(color.White)
	c.Fill(c.Rectangle.Path())
	if err := d.draw(draw.Crop(c, margin, -margin, margin, -margin), float64(p.DPI)); err != nil {
		return fmt.Errorf("figure: %w", err)
	}
	return write()
}

// writeSVG writes c with two corrections to its images, which are PNG. The canvas
// of the plotting library (v0.17) calls them image/jpg, and some viewers then draw
// nothing; and it lets viewers keep the aspect ratio of the pixels.
func writeSVG(w io.Writer, c *vgsvg.Canvas) error {
	var b bytes.Buffer
	if _, err := c.WriteTo(&b); err != nil {
		return err
	}
	_, err := strings.NewReplacer(
		"<image ", `<image preserveAspectRatio="none" `,
		"data:image/jpg;base64,", "data:image/png;base64,",
	).WriteString(w, b.String())
	return err
}
