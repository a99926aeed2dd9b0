package figure

import (
	"fmt"
	"image"
	"math"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A layer is what a map shows: one component of a history at the events of a
// region, all of them if it is nil.
type layer struct {
	history   *field.History
	component int
	region    *lattice.Region
}

// check returns an error unless the history has the component and the region is
// on its block.
func (l layer) check() error {
	if err := checkComponent(l.history, l.component); err != nil {
		return err
	}
	if l.region == nil {
		return nil
	}
	if err := checkSameBlock(l.region.Block(), l.history.Block, "the history"); err != nil {
		return fmt.Errorf("region: %w", err)
	}
	return nil
}

// has reports whether event (n, i) is shown.
func (l layer) has(n, i int) bool { return l.region == nil || l.region.Inside(n, i) }

// raster paints l on an image of at most about cols × rows pixels, the last slice
// on top. Pixels that cover several events show the mean of their values; events
// that are larger than a pixel are repeated a whole number of times.
func raster(l layer, cols, rows int, s *shade) *image.RGBA {
	b := l.history.Block
	cols, rows = fitting(b.Sites(), cols), fitting(b.Slices(), rows)
	img := image.NewRGBA(image.Rect(0, 0, cols, rows))
	paint(img, img.Rect, l, s)
	return img
}

// paint fills the rectangle r of img with l, whatever the number of its pixels:
// those of one event may be more by one than those of the next. Pixels that show
// no event of the region are blank.
func paint(img *image.RGBA, r image.Rectangle, l layer, s *shade) {
	sites, slices, cols, rows := l.history.Block.Sites(), l.history.Block.Slices(), r.Dx(), r.Dy()
	sums, counts := make([]float64, cols), make([]int, cols)
	edges := make([][2]int, cols)
	for p := range edges {
		edges[p][0], edges[p][1] = covered(p, cols, sites)
	}
	for q := range rows {
		clear(sums)
		clear(counts)
		n0, n1 := covered(q, rows, slices)
		for n := n0; n < n1; n++ {
			row := l.history.Slice(n).Component(l.component)
			for p, e := range edges {
				for i := e[0]; i < e[1]; i++ {
					if l.has(n, i) {
						sums[p] += row[i] // NaN and Inf stay
						counts[p]++
					}
				}
			}
		}
		y := r.Max.Y - 1 - q
		for p, sum := range sums {
			if counts[p] == 0 {
				img.SetRGBA(r.Min.X+p, y, blank)
				continue
			}
			img.SetRGBA(r.Min.X+p, y, s.of(sum/float64(counts[p])))
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

// extent returns the smallest and the largest finite value shown, and whether all
// values are finite. If none is, low > high.
func (l layer) extent() (low, high float64, whole bool) {
	low, high, whole = math.Inf(1), math.Inf(-1), true
	for n := range l.history.Block.Slices() {
		for i, v := range l.history.Slice(n).Component(l.component) {
			if !l.has(n, i) {
				continue
			}
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
