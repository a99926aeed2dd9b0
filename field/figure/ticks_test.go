package figure

import (
	"slices"
	"testing"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
)

func TestTicks(t *testing.T) {
	for _, c := range []struct {
		low, high float64
		about     ticker
		want      []string
	}{
		{-30, 30, 6, []string{"−30", "−20", "−10", "0", "10", "20", "30"}},
		{0, 1, 5, []string{"0", "0.2", "0.4", "0.6", "0.8", "1.0"}},
		{-0.5, 3.5, 4, []string{"0", "1", "2", "3"}},
		{0.1, 0.3, 2, []string{"0.1", "0.2", "0.3"}},
		{0, 2.3e-6, 5, []string{"0", "5e−7", "1.0e−6", "1.5e−6", "2.0e−6"}},
		{0, 1e7, 5, []string{"0", "2e6", "4e6", "6e6", "8e6", "1.0e7"}},
		{18.4752078, 18.4752096, 4, []string{"18.4752080", "18.4752085", "18.4752090", "18.4752095"}},
		{1e5, 1.0003e5, 3, []string{"1.0000e5", "1.0001e5", "1.0002e5", "1.0003e5"}},
		{-1e299, 1e299, 2, []string{"−1e299", "0", "1e299"}},
		{1, 1 + 1e-15, 5, nil},
		{0, 5e-324, 5, nil},
	} {
		var got []string
		for _, tick := range c.about.Ticks(c.low, c.high) {
			if tick.Value < c.low || tick.Value > c.high {
				t.Errorf("%g to %g: tick at %g", c.low, c.high, tick.Value)
			}
			if !tick.IsMinor() {
				got = append(got, tick.Label)
			}
		}
		if !slices.Equal(got, c.want) {
			t.Errorf("%g to %g: %q; want %q", c.low, c.high, got, c.want)
		}
	}
}

// Labels on a horizontal axis do not touch, however long they are.
func TestHorizontalTicks(t *testing.T) {
	for _, span := range [][2]float64{{0, 1}, {-30000, 30000}, {18.4752078, 18.4752096}, {-1e-200, 3e-200}} {
		about := horizontal(span[0], span[1], 400)
		ticks := slices.DeleteFunc(about.Ticks(span[0], span[1]), func(p plot.Tick) bool { return p.IsMinor() })
		if len(ticks) < 2 {
			t.Errorf("%v: %d labels; want at least 2", span, len(ticks))
			continue
		}
		st := style(tickSize, 0, 0)
		for i := range ticks[1:] {
			apart := (ticks[i+1].Value - ticks[i].Value) / (span[1] - span[0]) * 400
			if need := float64(st.Width(ticks[i].Label)+st.Width(ticks[i+1].Label)) / 2; apart <= need {
				t.Errorf("%v: %q and %q are %.1f points apart and need %.1f", span, ticks[i].Label, ticks[i+1].Label, apart, need)
			}
		}
	}
}

// An axis just a little longer than its round numbers keeps several labels.
func TestVerticalTicks(t *testing.T) {
	for _, span := range [][2]float64{{-30.05, 30.05}, {0, 1}, {-6.9, 6.9}, {17.99, 18.01}} {
		for _, height := range []vg.Length{100, 200, 400} {
			var values []float64
			for _, tick := range vertical(span[0], span[1], height).Ticks(span[0], span[1]) {
				if !tick.IsMinor() {
					values = append(values, tick.Value)
				}
			}
			if len(values) < 2 {
				t.Errorf("%v on %v points: %d labels; want at least 2", span, height, len(values))
				continue
			}
			if apart := (values[1] - values[0]) / (span[1] - span[0]) * float64(height); apart < 2*tickSize {
				t.Errorf("%v on %v points: labels %.1f points apart; want at least two line heights", span, height, apart)
			}
		}
	}
}
