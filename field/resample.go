package field

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/lattice"
)

// Interpolation says how values between sites are found.
type Interpolation uint8

// The ways to interpolate. Both reproduce the given values at the sites.
const (
	// Linear joins the two sites around a point; its error is at most
	// h²/8·max|φ″|.
	Linear Interpolation = iota

	// Cubic is the Lagrange polynomial through the four sites around a point,
	// the last four of the axis next to an end. Its error is at most
	// 3h⁴/128·max|φ⁗| inside and h⁴/24·max|φ⁗| next to an end. It needs an axis
	// of at least four sites, or a periodic one.
	Cubic
)

// String returns the name of the interpolation in lower case.
func (k Interpolation) String() string {
	switch k {
	case Linear:
		return "linear"
	case Cubic:
		return "cubic"
	}
	return fmt.Sprintf("interpolation(%d)", uint8(k))
}

// Resample returns the values of s, which lies on the axis from, at the sites
// of the axis onto. A site of onto that coincides with one of from, within
// lattice.OnSite, gets its value unchanged. A periodic axis continues with its
// jump, φ(x + Length) = φ(x) + Jump; mirror ends are treated as plain ones.
//
// It is an error, which names the position, if onto leaves from; also if onto
// makes no sense or from has too few sites. It panics unless s lies on from.
func (s Slice) Resample(from, onto lattice.Axis, kind Interpolation) (Slice, error) {
	s.mustLieOn(from)
	stencils, bad, err := stencilsFor(from, onto, kind)
	if err != nil {
		return Slice{}, err
	}
	if bad >= 0 {
		return Slice{}, fmt.Errorf("field: resampling to x = %g, outside of the slice, which runs from %g to %g", onto.At(bad), from.At(0), from.To())
	}
	out := NewSlice(s.Components, onto.Sites)
	for c := range s.Components {
		apply(stencils, out.Component(c), s.Component(c), from.JumpOf(c))
	}
	return out, nil
}

// Resample returns the field and the rate of s on the sites of another axis, as
// Slice.Resample does. The rate has no jump.
func (s State) Resample(from, onto lattice.Axis, kind Interpolation) (State, error) {
	value, err := s.Field.Resample(from, onto, kind)
	if err != nil {
		return State{}, err
	}
	from.Jump = nil
	rate, err := s.Rate.Resample(from, onto, kind)
	if err != nil {
		return State{}, fmt.Errorf("rate: %w", err)
	}
	return State{Field: value, Rate: rate}, nil
}

// Resample returns h on the events of the block onto, interpolated along space
// and then along time, with the rules of Slice.Resample on both axes. It is an
// error, which names the event, if onto leaves the block of h. It panics if the
// data of h does not fit its block.
func (h *History) Resample(onto lattice.Block, kind Interpolation) (*History, error) {
	old := h.Block
	if len(h.Data) != old.Slices()*h.Components*old.Sites() {
		panic(fmt.Sprintf("field: history of %d values for %d slices × %d components × %d sites", len(h.Data), old.Slices(), h.Components, old.Sites()))
	}
	if _, err := lattice.NewBlock(onto.Time, onto.Space); err != nil {
		return nil, err
	}
	times, badTime, err := stencilsFor(old.Time, onto.Time, kind)
	if err != nil {
		return nil, fmt.Errorf("time axis: %w", err)
	}
	sites, badSite, err := stencilsFor(old.Space, onto.Space, kind)
	if err != nil {
		return nil, fmt.Errorf("space axis: %w", err)
	}
	if badTime >= 0 || badSite >= 0 {
		return nil, fmt.Errorf("field: resampling to the event %v, outside of the block, which runs from %v to %v",
			onto.At(max(badTime, 0), max(badSite, 0)), old.At(0, 0), old.At(old.Slices()-1, old.Sites()-1))
	}

	// The old slices on the new sites, each made when a new slice first needs it.
	rows := make([]Slice, old.Slices())
	row := func(n int) Slice {
		if rows[n].Empty() {
			rows[n] = NewSlice(h.Components, onto.Sites())
			for c := range h.Components {
				apply(sites, rows[n].Component(c), h.Slice(n).Component(c), old.Space.JumpOf(c))
			}
		}
		return rows[n]
	}
	out := NewHistory(onto, h.Components)
	oldest := 0
	for n, st := range times {
		s := out.Slice(n)
		for j := range st.points {
			turns, m := turn(st.first+j, old.Slices())
			for c := range h.Components {
				add(s.Component(c), st.weight[j], row(m).Component(c), turns*old.Time.JumpOf(c))
			}
		}
		if !old.Time.Periodic {
			for ; oldest < st.first; oldest++ {
				rows[oldest] = Slice{} // later slices never look back
			}
		}
	}
	return out, nil
}

// add adds w(v + shift) to dst. A lone weight of 1 leaves the values as they are.
func add(dst []float64, w float64, v []float64, shift float64) {
	for i, x := range v {
		dst[i] += float64(w * (x + shift))
	}
}

// A stencil is the sites and weights that interpolate at one position. On a
// periodic axis first may lie below zero and sites run on past the last.
type stencil struct {
	first  int
	points int
	weight [4]float64
}

// stencilsFor returns a stencil for every site of onto, and the first site that
// lies outside of from, −1 if none does.
func stencilsFor(from, onto lattice.Axis, kind Interpolation) (stencils []stencil, outside int, err error) {
	if err := onto.Check(); err != nil {
		return nil, -1, err
	}
	switch {
	case kind > Cubic:
		return nil, -1, fmt.Errorf("field: resampling by %v; want Linear or Cubic", kind)
	case kind == Cubic && from.Sites < 4 && !from.Periodic:
		return nil, -1, fmt.Errorf("field: cubic resampling from an axis of %d sites; want at least 4", from.Sites)
	}
	stencils = make([]stencil, onto.Sites)
	for i := range stencils {
		x := onto.At(i)
		site := int(math.Round((x - from.From) / from.Step))
		inside := from.Periodic || site >= 0 && site < from.Sites
		switch {
		case inside && math.Abs(x-from.At(site)) <= lattice.OnSite*from.Step:
			stencils[i] = stencil{first: site, points: 1, weight: [4]float64{1}}
		case inside && (from.Periodic || x > from.From && x < from.To()):
			stencils[i] = between(from, x, kind)
		default:
			return nil, i, nil
		}
	}
	return stencils, -1, nil
}

// between returns the stencil at a position that is not on a site.
func between(from lattice.Axis, x float64, kind Interpolation) stencil {
	s := (x - from.From) / from.Step
	left := int(math.Floor(s))
	if kind == Linear {
		if !from.Periodic {
			left = min(max(left, 0), from.Sites-2)
		}
		p := s - float64(left)
		return stencil{first: left, points: 2, weight: [4]float64{1 - p, p}}
	}
	left--
	if !from.Periodic {
		left = min(max(left, 0), from.Sites-4)
	}
	p := s - float64(left) // the sites lie at p = 0, 1, 2, 3
	return stencil{first: left, points: 4, weight: [4]float64{
		(p - 1) * (p - 2) * (p - 3) / -6,
		p * (p - 2) * (p - 3) / 2,
		p * (p - 1) * (p - 3) / -2,
		p * (p - 1) * (p - 2) / 6,
	}}
}

// apply sets dst to the values of the stencils on src.
func apply(stencils []stencil, dst, src []float64, jump float64) {
	for i, st := range stencils {
		var sum float64
		for j := range st.points {
			turns, k := turn(st.first+j, len(src))
			sum += float64(st.weight[j] * (src[k] + turns*jump))
		}
		dst[i] = sum
	}
}

// turn writes site as turns·n + k with 0 ≤ k < n.
func turn(site, n int) (turns float64, k int) {
	k = site % n
	if k < 0 {
		k += n
	}
	return float64((site - k) / n), k
}

func (s Slice) mustLieOn(line lattice.Axis) {
	if s.Sites != line.Sites {
		panic(fmt.Sprintf("field: slice of %d sites on an axis of %d", s.Sites, line.Sites))
	}
}
