package figure

import (
	"fmt"
	"image/color"

	"gonum.org/v1/plot/palette"
	"gonum.org/v1/plot/palette/moreland"
)

// notFinite marks NaN and infinite values: the bluish green of Okabe and Ito,
// which neither colour map contains.
var notFinite = color.RGBA{0x00, 0x9E, 0x73, 0xFF}

// blank is what is not in the region of a map: the paper.
var blank = color.RGBA{0xFF, 0xFF, 0xFF, 0xFF}

// A shade turns values into colours: low into the first of the table, high into
// the last, values beyond them likewise.
type shade struct {
	low, high float64
	table     []color.RGBA
}

// smooth is a number of levels that no eye tells apart.
const smooth = 1024

// newShade returns the colours from low to high in a number of levels, at least
// two.
func newShade(low, high float64, diverging bool, levels int) (*shade, error) {
	var m palette.ColorMap = moreland.ExtendedBlackBody()
	if diverging {
		m = moreland.SmoothBlueRed()
	}
	s := &shade{low, high, make([]color.RGBA, levels)}
	m.SetMin(0)
	m.SetMax(float64(len(s.table) - 1))
	for i := range s.table {
		c, err := m.At(float64(i))
		if err != nil {
			return nil, fmt.Errorf("colour %d of %d: %w", i, len(s.table), err)
		}
		s.table[i] = color.RGBAModel.Convert(c).(color.RGBA)
	}
	return s, nil
}

// of returns the colour of v.
func (s *shade) of(v float64) color.RGBA {
	if !finite(v) {
		return notFinite
	}
	top := float64(len(s.table) - 1)
	return s.table[int(min(max((v-s.low)/(s.high-s.low), 0), 1)*top+0.5)]
}
