package figure

import (
	"image"
	"math"

	"github.com/tenter-go/tenter/field"
)

// raster paints component c of h on an image of at most about cols × rows pixels,
// the last slice on top. Pixels that cover several events show the mean of their
// values; events that are larger than a pixel are repeated a whole number of
// times.
func raster(h *field.History, c, cols, rows int, s *shade) *image.RGBA {
	sites, slices := h.Block.Sites(), h.Block.Slices()
	cols, rows = fitting(sites, cols), fitting(slices, rows)
	img := image.NewRGBA(image.Rect(0, 0, cols, rows))
	paint(img, img.Rect, h, c, s)
	return img
}

// paint fills the rectangle r of img with component c of h, whatever the number of
// its pixels: those of one event may be more by one than those of the next.
func paint(img *image.RGBA, r image.Rectangle, h *field.History, c int, s *shade) {
	sites, slices, cols, rows := h.Block.Sites(), h.Block.Slices(), r.Dx(), r.Dy()
	sums := make([]float64, cols)
	edges := make([][2]int, cols)
	for p := range edges {
		edges[p][0], edges[p][1] = covered(p, cols, sites)
	}
	for q := range rows {
		clear(sums)
		n0, n1 := covered(q, rows, slices)
		for n := n0; n < n1; n++ {
			row := h.Slice(n).Component(c)
			for p, e := range edges {
				sum := sums[p]
				for _, v := range row[e[0]:e[1]] {
					sum += v // NaN and Inf stay
				}
				sums[p] = sum
			}
		}
		y := r.Max.Y - 1 - q
		for p, sum := range sums {
			e := edges[p]
			img.SetRGBA(r.Min.X+p, y, s.of(sum/float64((n1-n0)*(e[1]-e[0]))))
		}
	}
}

// fitting returns how many pixels to use for a number of events: the given number
// if the events are more, else a multiple of the events that is no smaller.
func fitting(events, pixels int) int {
	if events >= pixels {
		return max(pixels, 1)
	}
	return events * ((pixels + events - 1) / events)
}

// covered returns the events from ≤ i < to that pixel p of a row shows.
func covered(p, pixels, events int) (from, to int) {
	from = p * events / pixels
	return from, max((p+1)*events/pixels, from+1)
}

// extent returns the smallest and the largest finite value of component c, and
// whether all values are finite. If none is, low > high.
func extent(h *field.History, c int) (low, high float64, whole bool) {
	low, high, whole = math.Inf(1), math.Inf(-1), true
	for n := range h.Block.Slices() {
		for _, v := range h.Slice(n).Component(c) {
			if math.IsNaN(v - v) { // NaN or infinite
				whole = false
				continue
			}
			if v < low {
				low = v
			}
			if v > high {
				high = v
			}
		}
	}
	return low, high, whole
}
