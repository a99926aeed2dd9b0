package figure

import (
	"math"
	"testing"
)

// Every event is shown by exactly one pixel, or every event by equally many.
func TestCovered(t *testing.T) {
	for _, c := range [][2]int{{2, 700}, {7, 20}, {700, 700}, {701, 700}, {4000, 655}, {3, 1}} {
		events, pixels := c[0], fitting(c[0], c[1])
		shown := make([]int, events)
		next := 0
		for p := range pixels {
			from, to := covered(p, pixels, events)
			if from > next || to <= from || to > events {
				t.Fatalf("%d events on %d pixels: pixel %d shows [%d, %d) after %d", events, pixels, p, from, to, next)
			}
			next = to
			for i := from; i < to; i++ {
				shown[i]++
			}
		}
		for i, n := range shown {
			if n != shown[0] || n == 0 {
				t.Errorf("%d events on %d pixels: event %d is shown %d times, event 0 %d times", events, pixels, i, n, shown[0])
				break
			}
		}
		if events < c[1] && pixels < c[1] {
			t.Errorf("%d events on %d pixels; want at least %d", events, pixels, c[1])
		}
	}
}

func TestRasterMean(t *testing.T) {
	h := ramp(4, 6) // value 6n + i
	s, err := newShade(0, 23, false, smooth)
	if err != nil {
		t.Fatal(err)
	}
	img := raster(layer{history: h}, 3, 2, s)
	if b := img.Bounds(); b.Dx() != 3 || b.Dy() != 2 {
		t.Fatalf("image of %v; want 3 × 2", b)
	}
	// Pixel (p, r) covers i = 2p, 2p+1 and n = 2r, 2r+1: the mean is 12r + 2p + 3.5.
	for r := range 2 {
		for p := range 3 {
			want := s.of(float64(12*r+2*p) + 3.5)
			if got := img.RGBAAt(p, 1-r); got != want {
				t.Errorf("pixel (%d, %d) is %v; want %v", p, r, got, want)
			}
		}
	}
	h.Set(3, 0, 5, math.NaN())
	h.Set(0, 0, 0, math.Inf(1))
	h.Set(0, 0, 1, math.Inf(-1))
	img = raster(layer{history: h}, 3, 2, s)
	if img.RGBAAt(2, 0) != notFinite || img.RGBAAt(0, 1) != notFinite {
		t.Error("a pixel with a value that is not finite is not marked")
	}
	if img.RGBAAt(1, 0) == notFinite {
		t.Error("a pixel without such a value is marked")
	}
}
