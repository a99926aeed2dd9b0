package field_test

import (
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// sampled returns the history whose component c is f(c, x, t).
func sampled(b lattice.Block, components int, f func(c int, x, t float64) float64) *field.History {
	h := field.NewHistory(b, components)
	for k := range h.Data {
		n, c, i := h.Place(k)
		e := b.At(n, i)
		h.Data[k] = f(c, e.X, e.T)
	}
	return h
}

// A polynomial of the interpolation's degree in x and in t comes back exactly,
// next to the ends too.
func TestResamplePolynomials(t *testing.T) {
	from := lattice.Block{Time: lattice.Axis{From: -1, Step: 0.25, Sites: 9}, Space: lattice.Axis{From: 0, Step: 0.5, Sites: 7}}
	onto := lattice.Block{Time: lattice.Axis{From: -0.97, Step: 0.11, Sites: 18}, Space: lattice.Axis{From: 0.01, Step: 0.13, Sites: 23}}
	for kind, f := range map[field.Interpolation]func(c int, x, t float64) float64{
		field.Linear: func(c int, x, t float64) float64 { return (1 + 2*x) * (3 - t) * float64(c+1) },
		field.Cubic:  func(c int, x, t float64) float64 { return (x*x*x - 2*x + 1) * (1 + t - t*t*t) * float64(c+1) },
	} {
		got, err := sampled(from, 2, f).Resample(onto, kind)
		if err != nil {
			t.Fatal(err)
		}
		// Values up to 50; weights add up to at most 1.6 in size on each axis.
		if d := got.MaxDifference(sampled(onto, 2, f)); !(d < 1e-13) {
			t.Errorf("%v: off by %.3g, want rounding", kind, d)
		}
		line, err := sampled(from, 2, f).Slice(3).Resample(from.Space, onto.Space, kind)
		if err != nil {
			t.Fatal(err)
		}
		onLine := sampled(lattice.Block{Time: lattice.Axis{From: from.Time.At(3), Step: 1, Sites: 2}, Space: onto.Space}, 2, f).Slice(0)
		if d := line.MaxDifference(onLine); !(d < 1e-13) {
			t.Errorf("slice, %v: off by %.3g, want rounding", kind, d)
		}
	}
}

// Orders 2 and 4, by the slope over three levels, each refinement by 2.
func TestResampleOrder(t *testing.T) {
	f := func(c int, x, t float64) float64 { return math.Sin(x-0.5*t) + 0.3*math.Cos(2*x+t) }
	onto := lattice.Block{Time: lattice.Axis{From: 0.003, Step: 0.0371, Sites: 50}, Space: lattice.Axis{From: -1.99, Step: 0.0171, Sites: 230}}
	want := sampled(onto, 1, f)
	for kind, order := range map[field.Interpolation]float64{field.Linear: 2, field.Cubic: 4} {
		coarse := lattice.Block{Time: lattice.Axis{Step: 0.1, Sites: 21}, Space: lattice.Axis{From: -2, Step: 0.1, Sites: 41}}
		var errors []float64
		for level := range 3 {
			got, err := sampled(coarse.Refine(1<<level), 1, f).Resample(onto, kind)
			if err != nil {
				t.Fatal(err)
			}
			errors = append(errors, got.MaxDifference(want))
		}
		for j := range 2 {
			// The fixed sample does not hit the worst place of every grid alike: 0.25.
			if p := math.Log2(errors[j] / errors[j+1]); math.Abs(p-order) > 0.25 {
				t.Errorf("%v: errors %.3g, order %.2f between levels %d and %d, want %g", kind, errors, p, j, j+1, order)
			}
		}
	}
}

// The bounds that the constants Linear and Cubic state, on the monomial whose
// derivative is constant, taken where the bound is sharp.
func TestResampleErrorConstants(t *testing.T) {
	line := lattice.Axis{Step: 1, Sites: 8}
	power := func(n float64) field.Slice {
		s := field.NewSlice(1, 8)
		for i := range s.Data {
			s.Data[i] = math.Pow(float64(i), n)
		}
		return s
	}
	outer := (3 - math.Sqrt(5)) / 2 // where p(p−1)(p−2)(p−3) is largest, at −1
	for _, tt := range []struct {
		name  string
		kind  field.Interpolation
		power float64
		x     float64
		want  float64
	}{
		{"linear, h²/8·2!", field.Linear, 2, 3.5, 1. / 4},
		{"cubic inside, 3h⁴/128·4!", field.Cubic, 4, 3.5, 9. / 16},
		{"cubic next to an end, h⁴/24·4!", field.Cubic, 4, outer, 1},
		{"cubic next to the other end", field.Cubic, 4, 7 - outer, 1},
	} {
		got, err := power(tt.power).Resample(line, lattice.Axis{From: tt.x, Step: 0.001, Sites: 2}, tt.kind)
		if err != nil {
			t.Fatal(err)
		}
		// Rounding of values up to 7⁴.
		if off := math.Abs(got.Data[0] - math.Pow(tt.x, tt.power)); math.Abs(off-tt.want) > 1e-11 {
			t.Errorf("%s: off by %.12g, want %.12g", tt.name, off, tt.want)
		}
	}
}

func TestResampleCopiesCoincidingSites(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{From: 0.3, Step: 0.1, Sites: 7}, Space: lattice.Axis{From: -0.7, Step: 0.1, Sites: 13}}
	h := sampled(b, 2, func(c int, x, t float64) float64 { return math.Exp(x*t) + float64(c)/3 })
	for _, kind := range []field.Interpolation{field.Linear, field.Cubic} {
		fine, err := h.Resample(b.Refine(3), kind)
		if err != nil {
			t.Fatal(err)
		}
		back, err := fine.Resample(b, kind)
		if err != nil {
			t.Fatal(err)
		}
		if diff := cmp.Diff(h.Data, back.Data); diff != "" {
			t.Errorf("%v: refined and taken back (-want +got):\n%s", kind, diff)
		}
	}
	// A NaN must not spread to sites that coincide with good ones.
	h.Set(3, 0, 6, math.NaN())
	same, err := h.Resample(b, field.Cubic)
	if err != nil {
		t.Fatal(err)
	}
	for k, x := range same.Data {
		if math.IsNaN(x) != (k == h.Index(3, 0, 6)) {
			t.Fatalf("value %v at %d after copying a history with one NaN", x, k)
		}
	}
}

// On a ring with a jump, one fluxon's worth of slope plus a periodic part goes
// on smoothly past the seam and around it, on both axes.
func TestResampleAroundTheRing(t *testing.T) {
	const length, period = 4.0, 3.0
	f := func(c int, x, t float64) float64 {
		return 2*math.Pi*x/length + math.Sin(2*math.Pi*x/length) - t/period + math.Cos(2*math.Pi*t/period)
	}
	ring := func(sites int) lattice.Block {
		return lattice.Block{
			Time:  lattice.Axis{Step: period / float64(sites), Sites: sites, Periodic: true, Jump: []float64{-1}},
			Space: lattice.Axis{From: -1, Step: length / float64(sites), Sites: sites, Periodic: true, Jump: []float64{2 * math.Pi}},
		}
	}
	onto := lattice.Block{Time: lattice.Axis{From: -4.01, Step: 0.17, Sites: 60}, Space: lattice.Axis{From: -9.3, Step: 0.37, Sites: 50}}
	want := sampled(onto, 1, f)
	for kind, order := range map[field.Interpolation]float64{field.Linear: 2, field.Cubic: 4} {
		var errors []float64
		for _, sites := range []int{40, 80, 160} {
			got, err := sampled(ring(sites), 1, f).Resample(onto, kind)
			if err != nil {
				t.Fatal(err)
			}
			errors = append(errors, got.MaxDifference(want))
		}
		for j := range 2 {
			// The seam is no worse than the rest, or the order would be 0; the sample
			// does not hit the worst place of every grid alike.
			if p := math.Log2(errors[j] / errors[j+1]); math.Abs(p-order) > 0.3 {
				t.Errorf("%v: errors %.3g, order %.2f, want %g", kind, errors, p, order)
			}
		}
	}
}

func TestResampleState(t *testing.T) {
	line := lattice.Axis{Step: 0.5, Sites: 8, Periodic: true, Jump: []float64{4}}
	s := field.NewState(1, 8)
	for i := range 8 {
		s.Field.Data[i] = float64(i) / 2 // φ = x, which gains 4 around the ring of length 4
		s.Rate.Data[i] = 3
	}
	got, err := s.Resample(line, lattice.Axis{From: 3.7, Step: 0.3, Sites: 3}, field.Linear)
	if err != nil {
		t.Fatal(err)
	}
	for i, want := range []float64{3.7, 4, 4.3} {
		if math.Abs(got.Field.Data[i]-want) > 1e-14 || got.Rate.Data[i] != 3 { // rounding at 4
			t.Errorf("site %d: value %v, rate %v; want %v and 3: a rate has no jump", i, got.Field.Data[i], got.Rate.Data[i], want)
		}
	}
}

func TestResampleErrors(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 0.5, Sites: 5}, Space: lattice.Axis{From: -1, Step: 0.5, Sites: 5}}
	h := field.NewHistory(b, 1)
	few := lattice.Block{Time: lattice.Axis{Step: 1, Sites: 3}, Space: b.Space}
	for _, tt := range []struct {
		name string
		err  func() error
		want string
	}{
		{"late", func() error {
			_, err := h.Resample(lattice.Block{Time: lattice.Axis{From: 1, Step: 0.6, Sites: 3}, Space: b.Space}, field.Linear)
			return err
		}, "(x, t) = (-1, 2.2)"},
		{"left", func() error {
			_, err := h.Resample(lattice.Block{Time: b.Time, Space: lattice.Axis{From: -1.25, Step: 0.5, Sites: 3}}, field.Linear)
			return err
		}, "(x, t) = (-1.25, 0)"},
		{"slice", func() error {
			_, err := h.Slice(0).Resample(b.Space, lattice.Axis{From: 0, Step: 0.75, Sites: 3}, field.Linear)
			return err
		}, "x = 1.5"},
		{"state", func() error {
			_, err := field.NewState(1, 5).Resample(b.Space, lattice.Axis{From: -2, Step: 0.75, Sites: 3}, field.Cubic)
			return err
		}, "x = -2"},
		{"too few slices", func() error { _, err := field.NewHistory(few, 1).Resample(few, field.Cubic); return err }, "time axis: field: cubic resampling from an axis of 3 sites"},
		{"unknown kind", func() error { _, err := h.Resample(b, 7); return err }, "interpolation(7)"},
		{"senseless block", func() error { _, err := h.Resample(lattice.Block{}, field.Linear); return err }, "time axis"},
		{"senseless axis", func() error {
			_, err := h.Slice(0).Resample(b.Space, lattice.Axis{Step: -1, Sites: 3}, field.Linear)
			return err
		}, "step -1"},
	} {
		if err := tt.err(); err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: error %v does not say %q", tt.name, err, tt.want)
		}
	}
}
