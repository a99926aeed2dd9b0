package figure

import (
	"image"
	"image/color"
)

// The colours of an animation, at most 256: greys for text and lines, the green of
// what is not finite, and the data. More levels than 127 of a map would be hardly
// seen and swell the file; their number is odd, so that the centre of a diverging
// map is one of them.
const (
	greys  = 32
	levels = 127
)

// shaded returns the palette of maps in the colours of s.
func shaded(s *shade) color.Palette {
	p := color.Palette{notFinite}
	for _, c := range s.table {
		p = append(p, c)
	}
	return append(p, tints(color.RGBA{A: 255}, greys)...)
}

// tinted returns the palette of lines in the given colours on white.
func tinted(lines []color.RGBA) color.Palette {
	p := tints(color.RGBA{A: 255}, greys)
	for _, c := range lines {
		p = append(p, tints(c, (256-greys)/len(lines))...)
	}
	return p
}

// tints returns n colours from c to white, as smoothed edges have them.
func tints(c color.RGBA, n int) color.Palette {
	var p color.Palette
	for i := range n {
		mix := func(v uint8) uint8 { return v + uint8((int(255-v)*i+(n-1)/2)/(n-1)) }
		p = append(p, color.RGBA{mix(c.R), mix(c.G), mix(c.B), 255})
	}
	return p
}

// A printer turns images into ones with a palette. Every colour becomes the nearest
// of the palette, without dithering, which would flicker and swell the file.
type printer struct {
	palette color.Palette
	known   map[color.RGBA]uint8
}

func newPrinter(p color.Palette) *printer { return &printer{p, make(map[color.RGBA]uint8)} }

func (p *printer) print(img *image.RGBA) *image.Paletted {
	out := image.NewPaletted(img.Rect, p.palette)
	var last color.RGBA
	index := p.index(last)
	for y := range img.Rect.Dy() {
		row, to := img.Pix[y*img.Stride:], out.Pix[y*out.Stride:]
		for x := range img.Rect.Dx() {
			if c := (color.RGBA{row[4*x], row[4*x+1], row[4*x+2], row[4*x+3]}); c != last {
				last, index = c, p.index(c)
			}
			to[x] = index
		}
	}
	return out
}

// index returns the place of the nearest colour.
func (p *printer) index(c color.RGBA) uint8 {
	i, ok := p.known[c]
	if !ok {
		i = uint8(p.palette.Index(c))
		p.known[c] = i
	}
	return i
}

// change returns the part of next that covers all pixels in which it differs from
// last, and one pixel if there is none.
func change(last, next *image.Paletted) *image.Paletted {
	var box image.Rectangle
	for y := range next.Rect.Dy() {
		a, b := last.Pix[y*last.Stride:][:next.Rect.Dx()], next.Pix[y*next.Stride:][:next.Rect.Dx()]
		from, to := 0, len(a)
		for from < to && a[from] == b[from] {
			from++
		}
		for to > from && a[to-1] == b[to-1] {
			to--
		}
		box = box.Union(image.Rect(from, y, to, y+1)) // which ignores an empty row
	}
	if box.Empty() {
		box = image.Rect(0, 0, 1, 1)
	}
	return next.SubImage(box).(*image.Paletted)
}
