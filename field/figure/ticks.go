package figure

import (
	"math"
	"strconv"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
)

// ticker marks about as many round values as its number says.
type ticker int

// Ticks returns labelled ticks at multiples of 1, 2 or 5 times a power of ten,
// and four or five unlabelled steps between them.
func (about ticker) Ticks(low, high float64) []plot.Tick {
	largest := max(math.Abs(low), math.Abs(high))
	if !(high-low >= tooClose*largest) || !(high-low < tooWide) || high-low < 1/tooWide {
		return nil // no steps to count
	}
	rough := (high - low) / float64(max(about, 1))
	power := int(math.Floor(math.Log10(rough)))
	mantissa, minor := 10.0, 5
	for _, try := range []struct {
		mantissa float64
		minor    int
	}{{1, 5}, {2, 4}, {5, 5}} {
		if try.mantissa*math.Pow10(power) >= rough*(1-1e-9) {
			mantissa, minor = try.mantissa, try.minor
			break
		}
	}
	if mantissa == 10 {
		mantissa, power = 1, power+1
	}
	step := mantissa * math.Pow10(power) / float64(minor)
	slack := 1e-9 * (high - low)
	var ticks []plot.Tick
	for i := math.Ceil((low - slack) / step); i*step <= high+slack; i++ {
		t := plot.Tick{Value: min(max(i*step, low), high)}
		if math.Mod(i, float64(minor)) == 0 {
			t.Label = numeral(i*step, power, largest)
		}
		ticks = append(ticks, t)
	}
	return ticks
}

// horizontal returns the ticker for a horizontal axis of the given length.
func horizontal(low, high float64, length vg.Length) ticker {
	st := style(tickSize, 0, 0)
	return legible(low, high, length, func(label string) vg.Length { return st.Width(label) + 2*tickSize })
}

// vertical returns the ticker for a vertical axis of the given height.
func vertical(low, high float64, height vg.Length) ticker {
	return legible(low, high, height, func(string) vg.Length { return 2.4 * tickSize })
}

// legible returns the ticker with the most labels, about nine or fewer, that have
// the room they need along an axis of the given length.
func legible(low, high float64, length vg.Length, need func(label string) vg.Length) ticker {
	for about := ticker(9); about > 1; about-- {
		var labels []plot.Tick
		var widest vg.Length
		for _, t := range about.Ticks(low, high) {
			if !t.IsMinor() {
				labels = append(labels, t)
				widest = max(widest, need(t.Label))
			}
		}
		if len(labels) < 2 {
			continue
		}
		if vg.Length((labels[1].Value-labels[0].Value)/(high-low))*length >= widest {
			return about
		}
	}
	return 1
}

// numeral writes v with its last digit at the given power of ten. On an axis whose
// largest number is beyond a hundred thousand or below a thousandth, numbers get
// an exponent.
func numeral(v float64, power int, largest float64) string {
	var s string
	switch {
	case math.Abs(v) < 0.5*math.Pow10(power):
		return "0"
	case largest < 1e5 && largest >= 1e-3:
		s = strconv.FormatFloat(v, 'f', max(0, -power), 64)
	default:
		digits := int(math.Floor(math.Log10(math.Abs(v))+1e-9)) - power
		s = strconv.FormatFloat(v, 'e', min(max(digits, 0), 16), 64)
		mantissa, exponent, _ := strings.Cut(s, "e")
		n, _ := strconv.Atoi(exponent) // FormatFloat writes nothing else there
		s = mantissa
		if n != 0 {
			s += "e" + strconv.Itoa(n)
		}
	}
	return strings.ReplaceAll(s, "-", "−")
}

// brief writes v with at most four digits, for legends.
func brief(v float64) string {
	return strings.ReplaceAll(strconv.FormatFloat(v, 'g', 4, 64), "-", "−")
}
