package constraint

import (
	"fmt"
	"math"
	"slices"

	"github.com/tenter-go/tenter/lattice"
)

// Blend returns the set whose numbers are (1 − s)·a + s·b, for two sets of the
// same shape on one block: pins of the same values, and rates, bounds, costs and
// linear conditions on the same values in the same order. As s goes from 0 to 1,
// or a little beyond, the conditions move from those of a to those of b.
//
// Pinned values, rates, bounds, coefficients and right-hand sides, standard
// deviations, weights, strengths and the numbers of the penalties of this package
// are all blended; two penalties of another type, or of different ones, are mixed
// as (1 − s)·P_a + s·P_b. Names are those of a. The result has costs and
// conditions of its own: later changes of a and b do not reach it.
//
// The error is that of a or b if one has any, or names the first difference, or
// a standard deviation, weight or strength that s makes negative.
func Blend(a, b *Set, s float64) (*Set, error) {
	if a == nil || b == nil {
		return nil, fmt.Errorf("constraint: blend of no set; want two sets")
	}
	for _, set := range []*Set{a, b} {
		if err := set.Err(); err != nil {
			return nil, fmt.Errorf("constraint: blend of a set in error: %w", err)
		}
	}
	if !finite(s) {
		return nil, fmt.Errorf("constraint: blend with the share %v; want a finite number", s)
	}
	if !sameBlock(a.block, b.block) {
		return nil, fmt.Errorf("constraint: blend of conditions on two blocks; want the same block")
	}
	if max(a.components, a.needs) != max(b.components, b.needs) {
		return nil, fmt.Errorf("constraint: blend of conditions on %d and on %d components; want equally many", max(a.components, a.needs), max(b.components, b.needs))
	}
	if !sameRegion(a.region, b.region) {
		return nil, fmt.Errorf("constraint: blend of conditions in two regions; want the same region")
	}
	m := &blending{s: s, a: a.held, b: b.held, to: On(a.block)}
	m.to.components, m.to.needs, m.to.region, m.to.redundant = a.components, a.needs, a.region, a.redundant
	for _, step := range []func() error{m.pins, m.ties, m.bounds, m.costs, m.linears} {
		if err := step(); err != nil {
			return nil, err
		}
	}
	return m.to, nil
}

// blending is a blend being made.
type blending struct {
	s    float64
	a, b *held
	to   *Set
}

// mix returns (1 − s)·x + s·y, and x if both are the same.
func (m *blending) mix(x, y float64) float64 {
	if x == y {
		return x
	}
	return (1-m.s)*x + m.s*y
}

func sameRegion(a, b *lattice.Region) bool {
	if a == b {
		return true
	}
	if a == nil || b == nil {
		return false
	}
	for n := range a.Block().Time.Links() {
		for i := range a.Block().Space.Links() {
			if a.Cell(n, i) != b.Cell(n, i) {
				return false
			}
		}
	}
	return true
}

// only is the error of a condition that one set has alone.
func (m *blending) only(what string, p place, site int, inA bool) error {
	have, lack := "second", "first"
	if inA {
		have, lack = lack, have
	}
	return fmt.Errorf("constraint: %s of component %d at %v is in the %s set of a blend and not in the %s; want the same conditions in both",
		what, p.component, m.a.block.At(p.slice, site), have, lack)
}

// places calls do for every place of a set, in order.
func (m *blending) places(do func(place) error) error {
	for n := range m.a.block.Slices() {
		for c := range max(m.a.components, m.a.needs) {
			if err := do(place{n, c}); err != nil {
				return err
			}
		}
	}
	return nil
}

func (m *blending) pins() error {
	sites := m.a.block.Sites()
	none := &row{make([]float64, sites), make([]kind, sites)}
	return m.places(func(p place) error {
		ra, rb := m.a.rows[p], m.b.rows[p]
		if ra == nil && rb == nil {
			return nil
		}
		if ra == nil {
			ra = none
		}
		if rb == nil {
			rb = none
		}
		r := &row{make([]float64, sites), slices.Clone(ra.by)}
		for i := range sites {
			if inA := ra.by[i] != unpinned; inA != (rb.by[i] != unpinned) {
				return m.only("the pin", p, i, inA)
			}
			r.value[i] = m.mix(ra.value[i], rb.value[i])
		}
		m.to.rows[p] = r
		return nil
	})
}

func (m *blending) ties() error {
	a, b := m.a.ties, m.b.ties
	if j := differ(len(a), len(b), func(j int) bool {
		t := b[j]
		t.gain = a[j].gain
		return t == a[j]
	}); j >= 0 {
		t, inA := pick(a, b, j)
		return m.only("a rate that ties the value", place{t.to, t.component}, t.site, inA)
	}
	for j, t := range a {
		t.gain = m.mix(t.gain, b[j].gain)
		m.to.ties = append(m.to.ties, t)
	}
	return nil
}

// differ returns where two lists of na and nb elements first differ, −1 if they
// are the same.
func differ(na, nb int, same func(j int) bool) int {
	for j := range min(na, nb) {
		if !same(j) {
			return j
		}
	}
	if na == nb {
		return -1
	}
	return min(na, nb)
}

// pick returns element j of a, or of b if a is too short.
func pick[T any](a, b []T, j int) (t T, inA bool) {
	if j < len(a) {
		return a[j], true
	}
	return b[j], false
}

func (m *blending) bounds() error {
	sites := m.a.block.Sites()
	infinite := func(sign int) []float64 {
		v := make([]float64, sites)
		for i := range v {
			v[i] = math.Inf(sign)
		}
		return v
	}
	none := &bounds{infinite(-1), infinite(1), make([]bool, sites)}
	return m.places(func(p place) error {
		ba, bb := m.a.bounds[p], m.b.bounds[p]
		if ba == nil && bb == nil {
			return nil
		}
		if ba == nil {
			ba = none
		}
		if bb == nil {
			bb = none
		}
		r := &bounds{make([]float64, sites), make([]float64, sites), make([]bool, sites)}
		for i := range sites {
			if finite(ba.low[i]) != finite(bb.low[i]) {
				return m.only("the lower bound", p, i, finite(ba.low[i]))
			}
			if finite(ba.high[i]) != finite(bb.high[i]) {
				return m.only("the upper bound", p, i, finite(ba.high[i]))
			}
			r.low[i], r.high[i] = m.mix(ba.low[i], bb.low[i]), m.mix(ba.high[i], bb.high[i])
			r.named[i] = ba.named[i] || bb.named[i]
			if r.low[i] > r.high[i] {
				return &Crossing{Event: m.a.block.At(p.slice, i), Component: p.component, Low: r.low[i], High: r.high[i]}
			}
		}
		m.to.bounds[p] = r
		return nil
	})
}
