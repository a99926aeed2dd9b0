package figure

import (
	"image"
	"image/color"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/vgpdf"
)

// upright is a PDF canvas that draws images with their first row on top. The
// canvas of the plotting library (v0.17) draws them upside down.
type upright struct{ *vgpdf.Canvas }

// DrawImage draws img in rect.
func (c upright) DrawImage(rect vg.Rectangle, img image.Image) {
	c.Canvas.DrawImage(rect, flipped{img})
}

// flipped is an image upside down.
type flipped struct{ image.Image }

// At returns the colour at the mirror image of (x, y).
func (f flipped) At(x, y int) color.Color {
	b := f.Bounds()
	return f.Image.At(x, b.Min.Y+b.Max.Y-1-y)
}
