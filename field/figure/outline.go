package figure

import (
	"golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
	plotfont "gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
)

// outlined is a canvas that draws text as filled outlines. The PDF canvas knows
// only a code page of 256 characters, in which there is no φ; an SVG viewer sets
// text in a font of its own choice, wider or narrower than the room left for it.
type outlined struct{ vg.CanvasSizer }

// FillString draws text with the left end of its baseline at pt.
func (c outlined) FillString(face plotfont.Face, pt vg.Point, text string) {
	var buf sfnt.Buffer
	em := face.Face.UnitsPerEm()
	ppem := fixed.I(int(em)) // so that coordinates come in font units
	unit := face.Font.Size / vg.Length(em)
	place := func(p fixed.Point26_6) vg.Point {
		return vg.Point{X: pt.X + unit*vg.Length(p.X)/64, Y: pt.Y - unit*vg.Length(p.Y)/64}
	}
	var path vg.Path
	var last sfnt.GlyphIndex
	for i, r := range text {
		g, err := face.Face.GlyphIndex(&buf, r)
		if err != nil {
			continue
		}
		if i > 0 {
			if kern, err := face.Face.Kern(&buf, last, g, ppem, font.HintingNone); err == nil {
				pt.X += unit * vg.Length(kern) / 64
			}
		}
		last = g
		if segments, err := face.Face.LoadGlyph(&buf, g, ppem, nil); err == nil {
			for k, s := range segments {
				switch s.Op {
				case sfnt.SegmentOpMoveTo:
					if k > 0 {
						path.Close()
					}
					path.Move(place(s.Args[0]))
				case sfnt.SegmentOpLineTo:
					path.Line(place(s.Args[0]))
				case sfnt.SegmentOpQuadTo:
					path.QuadTo(place(s.Args[0]), place(s.Args[1]))
				case sfnt.SegmentOpCubeTo:
					path.CubeTo(place(s.Args[0]), place(s.Args[1]), place(s.Args[2]))
				}
			}
			if len(segments) > 0 {
				path.Close()
			}
		}
		if step, err := face.Face.GlyphAdvance(&buf, g, ppem, font.HintingNone); err == nil {
			pt.X += unit * vg.Length(step) / 64
		}
	}
	if len(path) > 0 {
		c.Fill(path)
	}
}
