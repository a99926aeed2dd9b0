package figure

import (
	"image/color"
	"io"
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/lattice"
)

// What is not in the region is left blank, whatever its values: they change
// neither the colours nor the legend, and are no part of the mean of a pixel.
func TestMapOfARegion(t *testing.T) {
	h := ramp(8, 8) // value 8n + i
	l, err := lattice.NewRegion(h.Block, func(e lattice.Event) bool { return e.T < 3 || e.X < 3 })
	if err != nil {
		t.Fatal(err)
	}
	for n := range 8 {
		for i := range 8 {
			if !l.Inside(n, i) {
				h.Set(n, 0, i, math.NaN())
			}
		}
	}
	white := color.RGBA{255, 255, 255, 255}
	s, err := newShade(0, 59, false, smooth) // the largest in the region is 8·7 + 3
	if err != nil {
		t.Fatal(err)
	}
	d := drawMap(t, Map{History: h, Region: l})
	for n := range 8 {
		for i := range 8 {
			want := white
			if n <= 3 || i <= 3 {
				want = s.of(h.At(n, 0, i))
			}
			if got := d.pixel(h.Block.At(n, i), 0, 0); !near(got, want) {
				t.Errorf("event (%d, %d) has the colour %v; want %v", n, i, got, want)
			}
		}
	}
	// Of the slices 4 and 5 the region has the sites 0 to 3.
	img := raster(layer{history: h, region: l}, 2, 4, s)
	if got, want := img.RGBAAt(0, 1), s.of((32+33+34+35+40+41+42+43)/8.); got != want {
		t.Errorf("the pixel of slices 4 and 5 has the colour %v; want the mean of what is in the region, %v", got, want)
	}
	if got := img.RGBAAt(1, 1); got != white {
		t.Errorf("the pixel beside it has the colour %v; want white", got)
	}
	img = raster(layer{history: h, region: l}, 1, 4, s)
	if got, want := img.RGBAAt(0, 1), s.of((32+33+34+35+40+41+42+43)/8.); got != want {
		t.Errorf("a pixel over the rim has the colour %v; want the mean of what is in the region, %v", got, want)
	}
	other, err := lattice.NewRegion(ramp(8, 9).Block, nil)
	if err != nil {
		t.Fatal(err)
	}
	err = Map{History: h, Region: other}.Encode(io.Discard, "png")
	if err == nil || !strings.Contains(err.Error(), "region: space axis of 9 sites") {
		t.Errorf("region on another block: %v; want an error that says so", err)
	}
}
