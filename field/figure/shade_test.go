package figure

import (
	"image/color"
	"math"
	"testing"
)

// The ends and the middle of the cool–warm map in Moreland (2009), table of
// section 5: (59, 76, 192), (221, 221, 221), (180, 4, 38).
func TestDivergingShade(t *testing.T) {
	s, err := newShade(-2, 6, true, smooth)
	if err != nil {
		t.Fatal(err)
	}
	for v, want := range map[float64]color.RGBA{
		-2: {59, 76, 192, 255}, 2: {221, 221, 221, 255}, 6: {180, 4, 38, 255},
		-9: {59, 76, 192, 255}, 1e300: {180, 4, 38, 255},
	} {
		if got := s.of(v); !near(got, want) {
			t.Errorf("colour of %v is %v; want %v", v, got, want)
		}
	}
}

// lightness is L* of CIE 1976 for an sRGB colour (IEC 61966-2-1).
func lightness(c color.RGBA) float64 {
	linear := func(v uint8) float64 {
		x := float64(v) / 255
		if x <= 0.04045 {
			return x / 12.92
		}
		return math.Pow((x+0.055)/1.055, 2.4)
	}
	y := 0.2126*linear(c.R) + 0.7152*linear(c.G) + 0.0722*linear(c.B)
	if y <= 216.0/24389 {
		return y * 24389 / 27
	}
	return 116*math.Cbrt(y) - 16
}

// The lightness of the colours is linear in the value: from black to white, or
// from both ends to the lightest colour at the centre, equally on both sides.
func TestLightness(t *testing.T) {
	s, err := newShade(0, 100, false, smooth)
	if err != nil {
		t.Fatal(err)
	}
	for v := 0.0; v <= 100; v += 2.5 {
		// Rounding to 8 bits and colours clamped to sRGB cost up to 2.
		if got := lightness(s.of(v)); math.Abs(got-v) > 2 {
			t.Errorf("lightness %.2f at %g%% of the range", got, v)
		}
	}
	d, err := newShade(-1, 1, true, smooth)
	if err != nil {
		t.Fatal(err)
	}
	for v := 0.1; v <= 1; v += 0.1 {
		if low, high := lightness(d.of(-v)), lightness(d.of(v)); math.Abs(low-high) > 4 || low >= lightness(d.of(0.05-v)) {
			t.Errorf("lightness %.2f and %.2f at ±%g; want nearly equal and falling", low, high, v)
		}
	}
}

// Green is kept for values that are not finite: no colour of a map comes near.
func TestNotFiniteStandsOut(t *testing.T) {
	for _, diverging := range []bool{false, true} {
		s, err := newShade(0, 1, diverging, smooth)
		if err != nil {
			t.Fatal(err)
		}
		for i, c := range s.table {
			dr, dg, db := int(c.R)-int(notFinite.R), int(c.G)-int(notFinite.G), int(c.B)-int(notFinite.B)
			if dr*dr+dg*dg+db*db < 80*80 {
				t.Errorf("diverging %v: colour %d, %v, is close to %v", diverging, i, c, notFinite)
			}
		}
	}
}
