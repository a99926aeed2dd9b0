package constraint

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/lattice"
)

// bounds holds the bounds at one place, −∞ and +∞ where there is none.
type bounds struct {
	low, high []float64
	named     []bool // by Bound or BoundSlice, not only by Bounds
}

// Bound keeps the field at the event at time t and position x between two
// numbers, low ≤ φ ≤ high; an infinite one does not bind. Several bounds of one
// event all hold. Bounds that cross are a *Crossing, and so is a value that pins
// or rates hold outside of them, which Free finds.
func (s *Set) Bound(t, x, low, high float64) {
	e := lattice.Event{T: t, X: x}
	spot, err := s.locate(e)
	if err != nil {
		s.fail(fmt.Errorf("constraint: bound: %w", err))
		return
	}
	c, ok := s.one(fmt.Sprintf("bound at %v", e))
	if !ok {
		return
	}
	shift := s.shift(spot, c)
	s.note(s.bound(spot.slice, c, spot.site, low-shift, high-shift, true))
}

// BoundSlice keeps the field on slice n between two functions of (x, t); a nil
// function, like an infinite value, does not bind.
func (s *Set) BoundSlice(n int, low, high func(x, t float64) float64) {
	if s.onBlock(n, "bounds of slice") {
		s.boundSlices(fmt.Sprintf("bounds of slice %d", n), n, n+1, low, high, true)
	}
}

// Bounds keeps the field on the whole block, or on its region, between two
// functions of (x, t), such as an obstacle from below and nil.
func (s *Set) Bounds(low, high func(x, t float64) float64) {
	s.boundSlices("bounds", 0, s.block.Slices(), low, high, false)
}

func (s *Set) boundSlices(name string, from, to int, low, high func(x, t float64) float64, named bool) {
	if low == nil && high == nil {
		s.fail(fmt.Errorf("constraint: %s without a function; want one from below or from above", name))
		return
	}
	c, ok := s.one(name)
	if !ok {
		return
	}
	var first error
	for n := from; n < to; n++ {
		for i := range s.block.Sites() {
			e, lo, hi := s.block.At(n, i), math.Inf(-1), math.Inf(1)
			if low != nil {
				lo = low(e.X, e.T)
			}
			if high != nil {
				hi = high(e.X, e.T)
			}
			if err := s.bound(n, c, i, lo, hi, named); first == nil {
				first = err
			}
		}
	}
	s.note(first)
}

// bound adds the bounds of one value.
func (s *Set) bound(n, c, i int, low, high float64, named bool) error {
	if math.IsNaN(low) || math.IsNaN(high) || math.IsInf(low, 1) || math.IsInf(high, -1) {
		return fmt.Errorf("constraint: component %d at %v is bounded by %v and %v; want numbers, −∞ from below or +∞ from above for none", c, s.block.At(n, i), low, high)
	}
	p := place{n, c}
	b := s.bounds[p]
	if b == nil {
		sites := s.block.Sites()
		b = &bounds{make([]float64, sites), make([]float64, sites), make([]bool, sites)}
		for j := range sites {
			b.low[j], b.high[j] = math.Inf(-1), math.Inf(1)
		}
		s.bounds[p] = b
	}
	low, high = max(low, b.low[i]), min(high, b.high[i])
	if low > high {
		return &Crossing{Event: s.block.At(n, i), Component: c, Low: low, High: high}
	}
	b.low[i], b.high[i] = low, high
	b.named[i] = b.named[i] || named
	return nil
}

// limits are the bounds of the unknowns of a resolved problem.
type limits struct {
	low, high     []float64 // one for each unknown
	lowAt, highAt []int     // the values of the history that they are of
}

// limit resolves the bounds of a set. f has the ties, nil without any.
func (u *Unknowns) limit(s *Set, f *forest) error {
	if len(s.bounds) == 0 {
		return nil
	}
	l := &limits{make([]float64, u.N), make([]float64, u.N), make([]int, u.N), make([]int, u.N)}
	for k := range u.N {
		l.low[k], l.high[k] = math.Inf(-1), math.Inf(1)
	}
	for n := range s.block.Slices() {
		for c := range u.components {
			b := s.bounds[place{n, c}]
			if b == nil {
				continue
			}
			for i, low := range b.low {
				if high := b.high[i]; !math.IsInf(low, -1) || !math.IsInf(high, 1) {
					if err := u.limitValue(l, f, u.index(place{n, c}, i), low, high, b.named[i]); err != nil {
						return err
					}
				}
			}
		}
	}
	u.limits = l
	return nil
}

func (u *Unknowns) limitValue(l *limits, f *forest, e int, low, high float64, named bool) error {
	k, offset := u.At(e)
	_, c, _, at := u.Event(e)
	var slack float64 // tied values are sums along rates
	if u.tied[e] {
		root, _ := f.root(e)
		slack = f.slack(root, offset)
	}
	switch {
	case u.by[e] == byRegion && named:
		return outside("bound", c, at)
	case u.by[e] == byRegion:
		return nil
	case k < 0:
		if offset >= low-slack && offset <= high+slack {
			return nil
		}
		return &Crossing{Event: at, Component: c, Low: low, High: high, By: u.by[e].String(), Value: offset}
	}
	if low-offset > l.low[k] {
		l.low[k], l.lowAt[k] = low-offset, e
	}
	if high-offset < l.high[k] {
		l.high[k], l.highAt[k] = high-offset, e
	}
	if gap := l.low[k] - l.high[k]; gap > 0 {
		if gap > slack {
			return &Crossing{Event: at, Component: c, Low: l.low[k] + offset, High: l.high[k] + offset}
		}
		l.low[k] = l.high[k]
	}
	return nil
}

// Bounds returns the bounds of every unknown, low[k] ≤ x[k] ≤ high[k], infinite
// where there is none; those of tied values are intersected. Both are nil if the
// set has no bounds. They belong to u.
func (u *Unknowns) Bounds() (low, high []float64) {
	if u.limits == nil {
		return nil, nil
	}
	return u.limits.low, u.limits.high
}

// Clamp moves every unknown into its bounds and returns how many it has moved.
// It panics unless the length fits.
func (u *Unknowns) Clamp(x []float64) int {
	if len(x) != u.N {
		panic(fmt.Sprintf("constraint: %d unknowns; want %d", len(x), u.N))
	}
	if u.limits == nil {
		return 0
	}
	moved := 0
	for k, v := range x {
		if x[k] = min(max(v, u.limits.low[k]), u.limits.high[k]); x[k] != v {
			moved++
		}
	}
	return moved
}
