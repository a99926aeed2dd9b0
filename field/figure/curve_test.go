package figure

import (
	"bytes"
	"image/color"
	"image/png"
	"math"
	"strings"
	"testing"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/recorder"
)

func TestClip(t *testing.T) {
	type point = [2]float64
	for _, c := range []struct {
		a, b, from, to point
		in             bool
	}{
		{point{0.2, 0.2}, point{0.8, 0.3}, point{0.2, 0.2}, point{0.8, 0.3}, true},
		{point{-1, 0.5}, point{2, 0.5}, point{0, 0.5}, point{1, 0.5}, true},
		{point{0.5, 2}, point{0.5, 0.5}, point{0.5, 1}, point{0.5, 0.5}, true},
		{point{-0.5, 0}, point{1, 1.5}, point{0, 0.5}, point{0.5, 1}, true},
		{point{-1, 0.5}, point{0.5, 2.5}, point{}, point{}, false},
		{point{2, 2}, point{3, 3}, point{}, point{}, false},
		{point{-1, 3}, point{2, 3}, point{}, point{}, false},
		{point{-1e308, 0.25}, point{1e308, 0.25}, point{}, point{}, false}, // overflows: left out
	} {
		from, to, in := clip(c.a, c.b)
		if in != c.in || in && (from != c.from || to != c.to) {
			t.Errorf("from %v to %v: %v to %v, %v; want %v to %v, %v", c.a, c.b, from, to, in, c.from, c.to, c.in)
		}
	}
}

func TestPieces(t *testing.T) {
	nan := math.NaN()
	p := plot.New()
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = 0, 10, 0, 10
	c := draw.NewCanvas(&recorder.Canvas{}, 100, 100)
	for _, test := range []struct {
		name        string
		x, y        []float64
		lines, dots int
	}{
		{"whole", []float64{0, 5, 10}, []float64{1, 2, 3}, 1, 0},
		{"gap", []float64{0, 1, 2, 3, 4}, []float64{1, 2, nan, 3, 4}, 2, 0},
		{"lone point", []float64{0, 1, 2, 3, 4}, []float64{nan, 2, nan, 3, 4}, 1, 1},
		{"one point", []float64{5}, []float64{5}, 0, 1},
		{"one point outside", []float64{15}, []float64{5}, 0, 0},
		{"leaves and comes back", []float64{1, 2, 3}, []float64{5, 20, 5}, 2, 0},
		{"same point twice", []float64{5, 5}, []float64{5, 5}, 1, 0},
		{"outside", []float64{20, 30}, []float64{5, 5}, 0, 0},
	} {
		lines, dots := stroke{curve: Curve{X: test.x, Y: test.y}}.pieces(c, p)
		if len(lines) != test.lines || len(dots) != test.dots {
			t.Errorf("%s: %d lines and %d dots; want %d and %d", test.name, len(lines), len(dots), test.lines, test.dots)
		}
		for _, line := range lines {
			for _, at := range line {
				if at.X < 0 || at.X > 100 || at.Y < 0 || at.Y > 100 {
					t.Errorf("%s: point %v outside the frame", test.name, at)
				}
			}
		}
	}
	// A million points on a hundred points of print come down to what can be seen.
	long := Curve{X: make([]float64, 1e6), Y: make([]float64, 1e6)}
	for k := range long.X {
		long.X[k] = float64(k) / 1e5
	}
	lines, _ := stroke{curve: long}.pieces(c, p)
	if len(lines) != 1 || len(lines[0]) > 1000 {
		t.Errorf("%d lines, the first of %d points; want 1 of at most 1000", len(lines), len(lines[0]))
	}
}

func TestChartsDraw(t *testing.T) {
	h := ramp(5, 40)
	var profile, series bytes.Buffer
	if err := (Profile{History: h, Slices: []int{0, 4}}).Encode(&profile, "png"); err != nil {
		t.Fatal(err)
	}
	if err := (Series{History: h, Sites: []int{0, 39, 20}, Curves: []Curve{{X: []float64{0, 4}, Y: []float64{100, 100}, Label: "mean"}}}).Encode(&series, "png"); err != nil {
		t.Fatal(err)
	}
	for name, c := range map[string]struct {
		file   *bytes.Buffer
		curves int
	}{"profile": {&profile, 2}, "series": {&series, 4}} {
		img, err := png.Decode(c.file)
		if err != nil {
			t.Fatal(err)
		}
		count := map[color.RGBA]int{}
		for y := range img.Bounds().Dy() {
			for x := range img.Bounds().Dx() {
				count[color.RGBAModel.Convert(img.At(x, y)).(color.RGBA)]++
			}
		}
		for i, colour := range lineColours {
			// A line across the figure is hundreds of pixels; black is also text.
			if seen := count[colour] > 300; seen != (i < c.curves) && colour != (color.RGBA{A: 255}) {
				t.Errorf("%s: %d pixels in the colour of curve %d, of %d curves", name, count[colour], i, c.curves)
			}
		}
	}
}

func TestChartErrors(t *testing.T) {
	h := ramp(3, 4)
	bad := ramp(3, 4)
	bad.Data = bad.Data[1:]
	nan := []float64{math.NaN(), math.Inf(1)}
	one := []Curve{{X: []float64{0, 1}, Y: []float64{0, 1}}}
	type encoder interface {
		draw(draw.Canvas, float64) error
	}
	for _, c := range []struct {
		figure  encoder
		message string
	}{
		{Profile{}, "profile without curves"},
		{Series{}, "series without curves"},
		{Profile{Slices: []int{1}}, "[1] asked for without a history"},
		{Profile{History: h, Slices: []int{0, 3}}, "slice 3 of a history of 3; want 0 to 2"},
		{Profile{History: h, Slices: []int{-1}}, "slice -1"},
		{Series{History: h, Sites: []int{4}}, "site 4 of a history of 4; want 0 to 3"},
		{Series{History: h, Sites: []int{0}, Component: 2}, "component 2 of a history of 1"},
		{Series{History: bad, Sites: []int{0}}, "history of 11 values"},
		{Series{Curves: []Curve{{X: nan, Y: nan, Label: "energy"}}}, `curve 0 ("energy") has no finite point among its 2`},
		{Series{Curves: append(one[:1:1], Curve{X: []float64{1}})}, `curve 1 ("") has 1 values of X and 0 of Y`},
		{Series{Curves: one, Low: 1, High: 0}, "vertical axis from 1 to 0"},
		{Series{Curves: one, Low: math.NaN()}, "vertical axis from NaN to 0"},
		{Series{Curves: one, Low: 1, High: 1 + 1e-15}, "well apart"},
		{Series{Curves: []Curve{{X: []float64{0, 1}, Y: []float64{-1e305, 1}}}}, "vertical: values from -1e+305 to 1"},
		{Series{Curves: []Curve{{X: []float64{0, 1}, Y: []float64{0, 1}, Label: "⁻"}}}, `label "⁻" has the character '⁻'`},
		{Series{Curves: []Curve{{X: []float64{0, 1}, Y: []float64{0, 1}, Label: strings.Repeat("wide", 60)}}}, "legend: "},
	} {
		err := encode(&bytes.Buffer{}, "svg", Page{}, c.figure)
		if err == nil || !strings.Contains(err.Error(), c.message) {
			t.Errorf("error %v; want one with %q", err, c.message)
		}
	}
}

func TestChartExtremes(t *testing.T) {
	values := []float64{0, 1, -1e-320, 1e-300, 1e299, -1e299, 1 + 1e-15, 1e16, math.NaN(), math.MaxFloat64}
	for _, a := range values {
		for _, b := range values {
			for _, c := range []Curve{{X: []float64{0, 1, 2}, Y: []float64{a, b, a}}, {X: []float64{a, b}, Y: []float64{b, a}}} {
				var out bytes.Buffer
				if err := (Series{Curves: []Curve{c}, Page: Page{Width: 90, Height: 60, DPI: 50}}).Encode(&out, "png"); err != nil {
					continue
				}
				if _, err := png.Decode(&out); err != nil {
					t.Errorf("values %v and %v: %v", a, b, err)
				}
			}
		}
	}
}

func TestLegendWraps(t *testing.T) {
	width := func(s string) vg.Length { return vg.Length(len(s)) }
	rows, err := wrap([]string{"aaaa", "bbb", "cc", "dddddddddd", "e"}, width, 1, 10)
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, row := range rows {
		got = append(got, strings.Join(row, " "))
	}
	if want := "aaaa bbb|cc|dddddddddd|e"; strings.Join(got, "|") != want {
		t.Errorf("rows %q; want %q", strings.Join(got, "|"), want)
	}
}
