package figure

import (
	"bytes"
	"image/color"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// levelled is a history whose slice n has the value n everywhere.
func levelled(slices int) *field.History {
	h := ramp(slices, 5)
	for n := range slices {
		for i := range 5 {
			h.Set(n, 0, i, float64(n))
		}
	}
	return h
}

// The line is where its value lies on an axis that is the same in all frames.
func TestMotionLine(t *testing.T) {
	for _, c := range []struct {
		m         Motion
		shown     []int
		low, high float64
	}{
		{Motion{}, []int{0, 1, 2, 3, 4, 5}, -0.25, 5.25}, // 5 % more at each end
		{Motion{Every: 2}, []int{0, 2, 4}, -0.2, 4.2},
		{Motion{Every: 3, Low: -5, High: 5}, []int{0, 3}, -5, 5},
		{Motion{Every: 3, Curves: []Curve{{X: []float64{0, 4}, Y: []float64{-10, 10}}}}, []int{0, 3}, -11, 11},
	} {
		c.m.History = levelled(6)
		r, err := c.m.reel()
		if err != nil {
			t.Fatal(err)
		}
		f := play(t, r)
		if len(f.pictures) != len(c.shown) {
			t.Fatalf("%d frames; want %d", len(f.pictures), len(c.shown))
		}
		x := f.area.Min.X + f.area.Dx()/8
		for k, n := range c.shown {
			want := f.area.Max.Y - int((float64(n)-c.low)/(c.high-c.low)*float64(f.area.Dy()))
			found := false
			for y := f.area.Min.Y + 2; y < f.area.Max.Y-2; y++ {
				if f.pictures[k].RGBAAt(x, y) == lineColours[0] {
					found = true
					// The line is two pixels wide, its ends are rounded to pixels.
					if math.Abs(float64(y-want)) > 2 {
						t.Errorf("frame %d: the line is at row %d; want %d", k, y, want)
					}
				}
			}
			if !found {
				t.Errorf("frame %d has no line", k)
			}
		}
		if got := f.pictures[0].RGBAAt(1, 1); got != (color.RGBA{255, 255, 255, 255}) {
			t.Errorf("the corner of the page is %v; want white", got)
		}
	}
}

func TestMotionDefaultEvery(t *testing.T) {
	for slices, frames := range map[int]int{2: 2, 100: 100, 101: 51, 1001: 91} {
		m := Motion{History: levelled(slices)}
		if curves, _, err := m.slices(); err != nil || len(curves) != frames {
			t.Errorf("%d slices make %d frames, %v; want %d", slices, len(curves), err, frames)
		}
	}
}

func TestStamps(t *testing.T) {
	for _, c := range []struct {
		axis lattice.Axis
		want []string
	}{
		{lattice.Axis{From: 0, Step: 1, Sites: 2}, []string{"0", "1"}},
		{lattice.Axis{From: -0.1, Step: 0.05, Sites: 4}, []string{"−0.10", "−0.05", "0.00", "0.05"}},
		{lattice.Axis{From: 0.7, Step: 0.1, Sites: 3}, []string{"0.7", "0.8", "0.9"}}, // 0.7 + 0.1 is 0.7999999999999999
		{lattice.Axis{From: 0, Step: 1.0 / 3, Sites: 3}, []string{"0.00", "0.33", "0.67"}},
		{lattice.Axis{From: 1.0 / 3, Step: 1, Sites: 1}, []string{"0.3333"}},
		{lattice.Axis{From: 0, Step: 1e-12, Sites: 2}, []string{"0", "1e−12"}},
		{lattice.Axis{From: 1e9, Step: 1e9, Sites: 2}, []string{"1e+09", "2e+09"}},
	} {
		if got := stamps(c.axis.Positions(nil)); !slices.Equal(got, c.want) {
			t.Errorf("%+v: %q; want %q", c.axis, got, c.want)
		}
	}
}

func TestMotionErrors(t *testing.T) {
	nan := ramp(2, 3)
	for k := range nan.Data {
		nan.Data[k] = math.NaN()
	}
	stepless := ramp(2, 3)
	stepless.Block.Time.Step = 0
	h := ramp(3, 3)
	for _, c := range []struct {
		m       Motion
		message string
	}{
		{Motion{}, "no history"},
		{Motion{History: &field.History{}}, "history of 0 values"},
		{Motion{History: nan}, "component 0 has no finite value in any of 2 slices"},
		{Motion{History: stepless}, "time axis: lattice: axis has the step 0"},
		{Motion{History: h, Component: 2}, "component 2 of a history of 1"},
		{Motion{History: h, Every: -1}, "every -1 slices; want 1 or more"},
		{Motion{History: h, Low: 1, High: -1}, "vertical axis from 1 to -1"},
		{Motion{History: h, Curves: []Curve{{}}}, `curve 0 ("") is empty`},
		{Motion{History: h, TimeUnit: "ₜ"}, "caption of frame 0"},
		{Motion{History: h, Delay: -1}, "delay of -1ns"},
	} {
		var b bytes.Buffer
		err := c.m.Encode(&b)
		if err == nil || !strings.HasPrefix(err.Error(), "figure: motion: ") || !strings.Contains(err.Error(), c.message) {
			t.Errorf("error %v; want one with %q", err, c.message)
		}
		if b.Len() > 0 {
			t.Errorf("%s: %d bytes were written all the same", c.message, b.Len())
		}
	}
}
