package constraint

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Observe says that the field at the event at time t and position x was found to
// be value, with the standard deviation sigma > 0 in units of the field. It
// costs (φ − value)²/2σ². Several observations of one event all count.
func (s *Set) Observe(t, x, value, sigma float64) *Cost {
	const name = "observation"
	k, e := newCost(name), lattice.Event{T: t, X: x}
	spot, err := s.locate(e)
	if err != nil {
		s.fail(fmt.Errorf("constraint: %s: %w", name, err))
		return k
	}
	if !finite(value) {
		s.fail(fmt.Errorf("constraint: %s of %v at %v; want a finite number", name, value, e))
		return k
	}
	if err := checkSigma(sigma); err != nil {
		s.fail(fmt.Errorf("constraint: %s at %v has the %w", name, e, err))
		return k
	}
	c, ok := s.one(fmt.Sprintf("%s at %v", name, e))
	if !ok {
		return k
	}
	k.parts = []part{{place: place{spot.slice, c}, site: spot.site, weight: 1, shift: s.shift(spot, c), penalty: Quadratic{value, sigma}}}
	return s.add(k)
}

// ObserveSlice says that slice n was found to be v, every value with the
// standard deviation sigma. It costs Σ (φ − v)²/2σ² over components and sites.
func (s *Set) ObserveSlice(n int, v field.Slice, sigma float64) *Cost {
	return s.observeRow(fmt.Sprintf("observation of slice %d", n), n, 0, s.block.Sites(), v, sigma)
}

// ObservePart does what ObserveSlice does on the sites from ≤ i < to of slice n,
// v being a slice of to − from sites.
func (s *Set) ObservePart(n, from, to int, v field.Slice, sigma float64) *Cost {
	return s.observeRow(fmt.Sprintf("observation of part [%d, %d) of slice %d", from, to, n), n, from, to, v, sigma)
}

func (s *Set) observeRow(name string, n, from, to int, v field.Slice, sigma float64) *Cost {
	k := newCost(name)
	if !s.onBlock(n, "observation of slice") || !s.isPart(name, from, to) || !s.fits(v, to-from, name) {
		return k
	}
	if err := checkSigma(sigma); err != nil {
		s.fail(fmt.Errorf("constraint: %s, from %v on, has the %w", name, s.block.At(n, from), err))
		return k
	}
	first, ok := s.from(v.Components, name)
	if !ok {
		return k
	}
	for c := range v.Components {
		for i, d := range v.Component(c) {
			k.parts = append(k.parts, part{place: place{n, first + c}, site: from + i, weight: 1, penalty: Quadratic{d, sigma}})
		}
	}
	return s.add(k)
}
