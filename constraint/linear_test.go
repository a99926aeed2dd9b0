package constraint

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// sampled is the history of a function.
func sampled(b lattice.Block, f func(x, t float64) float64) *field.History {
	h := field.NewHistory(b, 1)
	for e := range h.Data {
		n, _, i := h.Place(e)
		h.Data[e] = f(b.Space.At(i), b.Time.At(n))
	}
	return h
}

// got returns the number that a linear condition has in the history h.
func got(t *testing.T, hold func(*Set) *Linear, h *field.History) float64 {
	t.Helper()
	held := On(h.Block)
	hold(held).Soft(1)
	m := resolve(t, held, h).Misfits(h)
	if len(m) != 1 {
		t.Fatalf("%d misfits, want 1", len(m))
	}
	return m[0].Got
}

// What lies between sites is what resampling finds, on rings with jumps and next
// to ends.
func TestBetweenIsResampling(t *testing.T) {
	for _, b := range []lattice.Block{
		block(t, lattice.Axis{From: -1, Step: 0.25, Sites: 6}, lattice.Axis{From: 2, Step: 0.5, Sites: 5}),
		block(t, lattice.Axis{Step: 0.25, Sites: 5, Periodic: true, Jump: []float64{3}}, lattice.Axis{Step: 0.5, Sites: 5, Periodic: true, Jump: []float64{-7}}),
	} {
		h := sampled(b, func(x, t float64) float64 { return math.Sin(3*x) + math.Cos(5*t)*x })
		onto := lattice.Block{
			Time:  lattice.Axis{From: b.Time.From + 0.02, Step: 0.19, Sites: 7},
			Space: lattice.Axis{From: b.Space.From + 0.01, Step: 0.33, Sites: 7},
		}
		for _, kind := range []field.Interpolation{field.Linear, field.Cubic} {
			want, err := h.Resample(onto, kind)
			if err != nil {
				t.Fatal(err)
			}
			for e, v := range want.Data {
				n, _, i := want.Place(e)
				at := onto.At(n, i)
				// rounding of 16 products of weights up to 2 and values up to 20
				if g := got(t, func(s *Set) *Linear { return s.Between(at.T, at.X, 0, kind) }, h); math.Abs(g-v) > 1e-13 {
					t.Errorf("%v at %v is %v, resampled %v", kind, at, g, v)
				}
			}
		}
	}
	held := On(small(t))
	held.Between(1, 1, 5, field.Cubic) // on a site
	u := resolve(t, held, constant(held.Block(), 1, 0))
	if r := u.HardRows()[0]; len(r.Index) != 1 || r.Weight[0] != 1 || r.Value != 5 {
		t.Errorf("on a site the row is %+v, want one coefficient 1", r)
	}
}

func TestMeanAndEndToEnd(t *testing.T) {
	h := sampled(small(t), func(x, t float64) float64 { return 2*x + t })
	// the middle of x is ½; the slice has t = 1.5
	if g := got(t, func(s *Set) *Linear { return s.Mean(3, 0) }, h); g != 2.5 {
		t.Errorf("mean %v of a linear function, want 2.5", g)
	}
	if g := got(t, func(s *Set) *Linear { return s.EndToEnd(3, 0) }, h); g != 6 {
		t.Errorf("end-to-end difference %v, want 6", g)
	}
	ring := block(t, lattice.Axis{Step: 1, Sites: 2}, lattice.Axis{Step: 1, Sites: 4, Periodic: true})
	h = sampled(ring, func(x, t float64) float64 { return x })
	if g := got(t, func(s *Set) *Linear { return s.Mean(0, 0) }, h); g != 1.5 {
		t.Errorf("mean %v around a ring, want 1.5", g)
	}
}

// The one-sided rate is exact for parabolas and of second order otherwise; it is
// met after the step that a solver would take.
func TestRateAtTheEnds(t *testing.T) {
	parabola := func(x, t float64) float64 { return x + 3*t - t*t }
	b := small(t)
	held := On(b)
	held.Rate(0, field.SliceOf([]float64{3, 3, 3, 3}))
	held.Rate(4, field.SliceOf([]float64{-1, -1, -1, 0}))
	h := sampled(b, parabola)
	u := resolve(t, held, h)
	rows := u.HardRows()
	if len(rows) != 8 || u.N != 20 {
		t.Fatalf("%d rows, %d unknowns; want 8, 20", len(rows), u.N)
	}
	x := u.Gather(nil, h)
	for i, r := range rows {
		want := 0.0
		if i == 7 {
			want = -1 // asked to be at rest
		}
		if d := r.Miss(x); math.Abs(d-want) > 1e-14 { // rounding of numbers up to 20
			t.Errorf("%s at %v is missed by %v, want %v", r.Name, r.Event, d, want)
		}
	}
	var last [2]float64
	for level := range 4 {
		fine := b.Refine(1 << level)
		h := sampled(fine, func(x, t float64) float64 { return math.Sin(2*t + x) })
		for side, n := range []int{0, fine.Slices() - 1} {
			held := On(fine)
			held.Rate(n, field.NewSlice(1, fine.Sites()))
			r := resolve(t, held, h).HardRows()[0]
			off := math.Abs(r.Miss(h.Data) - 2*math.Cos(2*r.Event.T+r.Event.X))
			// The slope tends to 2; at these steps the next term bends it by 0.3.
			if p := math.Log2(last[side] / off); level > 1 && math.Abs(p-2) > 0.3 {
				t.Errorf("rate at slice %d: order %.2f, want 2", n, p)
			}
			last[side] = off
		}
	}
}

// Held ends are given by the start, so no rate is asked of them.
func TestOneSidedRateLeavesHeldEnds(t *testing.T) {
	b := block(t, lattice.Axis{Step: 0.5, Sites: 4}, lattice.Axis{Step: 1, Sites: 4, Left: lattice.Held, Right: lattice.Odd})
	held := On(b)
	held.Rate(0, field.SliceOf([]float64{9, 1, 1, 9}))
	u := resolve(t, held, constant(b, 1, 0))
	if rows := u.HardRows(); len(rows) != 2 || rows[0].Event.X != 1 || rows[1].Event.X != 2 {
		t.Errorf("rows %+v; want those of the two sites inside", rows)
	}
}

// On a line of free ends the zero mode fixes where a kink is: the coordinate of
// a shifted kink is (shift)·∫(∂φ/∂x)² up to the third order in the shift, and the
// integral of 4 sech² x is 8.
func TestCollectiveCoordinateOfAKink(t *testing.T) {
	b := block(t, lattice.Axis{Step: 1, Sites: 3}, lattice.Axis{From: -20, Step: 0.125, Sites: 321})
	kink := func(at float64) func(x, t float64) float64 {
		return func(x, t float64) float64 { return 4 * math.Atan(math.Exp(x-at)) }
	}
	about := sampled(b, kink(0))
	mode := sampled(b, func(x, t float64) float64 { return -2 / math.Cosh(x) })
	const shift = 0.01
	moved := sampled(b, kink(shift))
	for name, tc := range map[string]struct {
		hold func(*Set) *Linear
		want float64
	}{
		"slice": {func(s *Set) *Linear { return s.Collective(1, mode.Slice(1), about.Slice(1)) }, 8 * shift},
		"block": {func(s *Set) *Linear { return s.CollectiveBlock(mode, about) }, 2 * 8 * shift}, // over 2 time units
	} {
		held := On(b)
		tc.hold(held).Soft(1)
		m := resolve(t, held, moved).Misfits(moved)[0]
		if d := m.Got - m.Asked; math.Abs(d-tc.want) > tc.want*shift*shift {
			t.Errorf("%s: coordinate %v, want %v", name, d, tc.want)
		}
		if d := resolve(t, held, about).Misfits(about)[0].Sigmas; math.Abs(d) > 1e-12 { // sums of numbers up to 12
			t.Errorf("%s: coordinate %v of the kink itself, want 0", name, d)
		}
	}
	bare := got(t, func(s *Set) *Linear { return s.Collective(0, mode.Slice(0), field.Slice{}) }, about)
	if math.Abs(bare+2*math.Pi*math.Pi) > 1e-6 { // −∫ φ′φ dx = −½(2π)², cut off at e⁻²⁰
		t.Errorf("coordinate about zero is %v, want −2π²", bare)
	}
}

// A history slid along its period by τ has the phase τ∫φ̇², and the history
// itself none.
func TestPhase(t *testing.T) {
	const w = 2 * math.Pi / 4
	b := block(t, lattice.Axis{Step: 4. / 64, Sites: 64, Periodic: true, Jump: []float64{8}}, lattice.Axis{Step: 0.5, Sites: 3})
	swing := func(late float64) *field.History {
		return sampled(b, func(x, t float64) float64 { return 2*(t-late) + math.Cos(w*(t-late)) })
	}
	held := On(b)
	held.Phase(swing(0)).Soft(1)
	const late = 1e-3
	h := swing(late)
	m := resolve(t, held, h).Misfits(h)[0]
	// −∫∫ φ̇² = −(4·2² + 4·½w²)·1 a unit; centred differences are off by (wk)²/6.
	if want := -late * (16 + 2*w*w); math.Abs(m.Sigmas-want) > 2e-3*math.Abs(want) {
		t.Errorf("phase %v, want %v", m.Sigmas, want)
	}
	if off := resolve(t, held, swing(0)).Misfits(swing(0))[0].Sigmas; math.Abs(off) > 1e-12 { // sums of numbers up to 100
		t.Errorf("phase %v of the reference, want 0", off)
	}
}
