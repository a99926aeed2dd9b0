package constraint

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Slice pins all of slice n to the values of v, which are copied.
func (s *Set) Slice(n int, v field.Slice) {
	if s.onBlock(n, "slice") && s.fits(v, s.block.Sites(), fmt.Sprintf("slice %d", n)) {
		s.pinSlice(n, 0, v, bySlice)
	}
}

// Part pins the sites from ≤ i < to of slice n to the values of v, a slice of
// to − from sites, which are copied.
func (s *Set) Part(n, from, to int, v field.Slice) {
	if !s.onBlock(n, "part of slice") {
		return
	}
	name := fmt.Sprintf("part [%d, %d) of slice %d", from, to, n)
	if s.isPart(name, from, to) && s.fits(v, to-from, name) {
		s.pinSlice(n, from, v, byPart)
	}
}

// Event pins the event at time t and position x to the given values, one for
// each component of the field.
func (s *Set) Event(t, x float64, values ...float64) {
	e := lattice.Event{T: t, X: x}
	spot, err := s.locate(e)
	if err != nil {
		s.fail(fmt.Errorf("constraint: %w", err))
		return
	}
	first, ok := s.from(len(values), fmt.Sprintf("event %v", e))
	if !ok {
		return
	}
	for k, v := range values {
		c := first + k
		if !finite(v) {
			s.fail(fmt.Errorf("constraint: component %d is pinned to %v at %v; want a finite number", c, v, e))
			continue
		}
		s.note(s.pin(spot.slice, c, spot.site, v-s.shift(spot, c), byEvent))
	}
}

// Left pins the first site of every slice to functions of time, one for each
// component; a nil function leaves its component free. A periodic axis has no
// ends.
func (s *Set) Left(values ...func(t float64) float64) { s.end(0, byLeft, values) }

// Right pins the last site of every slice, as Left does the first.
func (s *Set) Right(values ...func(t float64) float64) {
	s.end(s.block.Sites()-1, byRight, values)
}

func (s *Set) end(i int, by kind, values []func(t float64) float64) {
	if s.block.Space.Periodic {
		s.fail(fmt.Errorf("constraint: %v of a periodic axis; pin events or parts of slices instead", by))
		return
	}
	first, ok := s.from(len(values), by.String())
	if !ok {
		return
	}
	var clash error
	for n := range s.block.Slices() {
		t := s.block.Time.At(n)
		for k, f := range values {
			if f == nil {
				continue
			}
			c, v := first+k, f(t)
			if !finite(v) {
				s.fail(fmt.Errorf("constraint: component %d is pinned to %v at %v by the %v; want a finite number", c, v, s.block.At(n, i), by))
				return
			}
			if err := s.pin(n, c, i, v, by); clash == nil {
				clash = err
			}
		}
	}
	s.note(clash)
}

// onBlock reports whether slice n exists.
func (s *Set) onBlock(n int, what string) bool {
	if n < 0 || n >= s.block.Slices() {
		s.fail(fmt.Errorf("constraint: %s %d; the block has the slices 0 to %d", what, n, s.block.Slices()-1))
		return false
	}
	return true
}

// isPart reports whether from ≤ i < to are sites.
func (s *Set) isPart(name string, from, to int) bool {
	if from < 0 || to > s.block.Sites() || from >= to {
		s.fail(fmt.Errorf("constraint: %s; want sites 0 ≤ from < to ≤ %d", name, s.block.Sites()))
		return false
	}
	return true
}

// fits reports whether v is a finite slice of so many sites.
func (s *Set) fits(v field.Slice, sites int, what string) bool {
	if err := v.Check(); err != nil {
		s.fail(fmt.Errorf("constraint: %s: %w", what, err))
		return false
	}
	if v.Sites != sites {
		s.fail(fmt.Errorf("constraint: %s is given %d sites; want %d", what, v.Sites, sites))
		return false
	}
	return true
}

func (s *Set) pinSlice(n, from int, v field.Slice, by kind) {
	first, ok := s.from(v.Components, fmt.Sprintf("%v %d", by, n))
	if !ok {
		return
	}
	var clash error
	for c := range v.Components {
		for i, x := range v.Component(c) {
			if err := s.pin(n, first+c, from+i, x, by); clash == nil {
				clash = err
			}
		}
	}
	s.note(clash)
}

// pin holds one value and returns a *Conflict if it is held at another already.
func (s *Set) pin(n, c, i int, v float64, by kind) error {
	p := place{n, c}
	r := s.rows[p]
	if r == nil {
		sites := s.block.Sites()
		r = &row{value: make([]float64, sites), by: make([]kind, sites)}
		s.rows[p] = r
	}
	if r.by[i] == unpinned {
		r.value[i], r.by[i] = v, by
		return nil
	}
	if r.value[i] != v {
		return &Conflict{Event: s.block.At(n, i), Component: c, First: r.value[i], Second: v, By: [2]string{r.by[i].String(), by.String()}}
	}
	s.redundant++
	return nil
}

// note keeps an error unless it is nil.
func (s *Set) note(err error) {
	if err != nil {
		s.fail(err)
	}
}

func finite(v float64) bool { return !math.IsNaN(v - v) }
