package constraint

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Free resolves the conditions for a solve that starts from the given history
// and returns what stays free. The history says how many components there are
// and gives the values at ends of kind Held and Odd that the set does not pin;
// where such an end is tied by rates, the earliest slice of the chain gives
// the value. Nothing else of it is used.
//
// Errors are those of Err, a history that does not lie on the block or is not
// finite, a condition on a component that does not exist or on an event that is
// not in the region, a strength that makes no sense; a *Conflict between pins and
// rates, a *Crossing of bounds with them or among tied values, and a
// *Contradiction of a hard linear condition with fixed values or with others.
func (s *Set) Free(start *field.History) (*Unknowns, error) {
	if err := s.Err(); err != nil {
		return nil, err
	}
	if err := s.accepts(start); err != nil {
		return nil, err
	}
	u := newUnknowns(s.block, start.Components)
	u.Redundant = s.redundant
	for p, r := range s.rows {
		at := start.Index(p.slice, p.component, 0)
		for i, by := range r.by {
			if by != unpinned {
				u.by[at+i], u.offset[at+i] = by, r.value[i]
			}
		}
	}
	if err := s.leaveOut(u, start); err != nil {
		return nil, err
	}
	var f *forest
	if len(s.ties) > 0 {
		var err error
		if f, err = s.resolve(u, start); err != nil {
			return nil, err
		}
	}
	s.holdEnds(u, f, start)
	u.number(f)
	if err := u.limit(s, f); err != nil {
		return nil, err
	}
	if err := u.linear(s); err != nil {
		return nil, err
	}
	if err := u.charge(s); err != nil {
		return nil, err
	}
	return u, nil
}

func (s *Set) accepts(start *field.History) error {
	if err := start.Check(); err != nil {
		return err
	}
	b, g := s.block, start.Block
	if b.Slices() != g.Slices() || b.Sites() != g.Sites() {
		return fmt.Errorf("constraint: history of %d slices × %d sites; the conditions are on %d × %d", g.Slices(), g.Sites(), b.Slices(), b.Sites())
	}
	if s.components > 0 && start.Components != s.components || start.Components < s.needs {
		return fmt.Errorf("constraint: history of %d components; the conditions are on %d", start.Components, max(s.components, s.needs))
	}
	return nil
}

// resolve joins tied values and carries pins along the ties. The value of a tree
// that is fixed is kept at its root; see Unknowns.number.
func (s *Set) resolve(u *Unknowns, start *field.History) (*forest, error) {
	f := newForest(len(u.by))
	for _, t := range s.ties {
		a, b := start.Index(t.from, t.component, t.site), start.Index(t.to, t.component, t.site)
		implied, joined := f.tie(a, b, t.gain)
		if joined {
			continue
		}
		root, _ := f.root(a)
		if d := implied - t.gain; d > f.slack(root, 0) || -d > f.slack(root, 0) {
			above := s.block.At(t.from, t.site)
			return nil, &Conflict{Event: s.block.At(t.to, t.site), Component: t.component, First: implied, Second: t.gain, By: [2]string{"rate", "rate"}, Above: &above}
		}
		u.Redundant++
	}
	// The first pin of a tree fixes it. Indices rise with slices, so a conflict
	// names the later event.
	anchored := make(map[int]int)
	for e, by := range u.by {
		if by == unpinned {
			continue
		}
		root, above := f.root(e)
		if f.links[root] == 0 {
			continue
		}
		first, ok := anchored[root]
		if !ok {
			anchored[root] = e
			continue
		}
		_, base := f.root(first)
		want := u.offset[first] - base + above
		if d := u.offset[e] - want; d > f.slack(root, want) || -d > f.slack(root, want) {
			n, c, i := start.Place(e)
			return nil, &Conflict{Event: s.block.At(n, i), Component: c, First: u.offset[e], Second: want, By: [2]string{by.String(), byRate.String()}}
		}
		u.Redundant++
	}
	for e := range u.by {
		root, above := f.root(e)
		if f.links[root] == 0 {
			continue
		}
		u.tied[e] = true
		if first, ok := anchored[root]; ok && u.by[e] == unpinned {
			_, base := f.root(first)
			u.by[e], u.offset[e] = byRate, u.offset[first]-base+above
		}
	}
	return f, nil
}

// holdEnds fixes the ends without an equation that are still free.
func (s *Set) holdEnds(u *Unknowns, f *forest, start *field.History) {
	for _, i := range endsWithoutEquation(s.block.Space) {
		for c := range start.Components {
			fixed := make(map[int]float64) // value of the root of a tree
			for n := range s.block.Slices() {
				e := start.Index(n, c, i)
				if u.by[e] != unpinned {
					continue
				}
				v := start.Data[e]
				if u.tied[e] {
					root, above := f.root(e)
					base, ok := fixed[root]
					if !ok {
						base = v - above
						fixed[root] = base
					}
					v = base + above
				}
				u.by[e], u.offset[e] = byEnd, v
			}
		}
	}
}

// endsWithoutEquation returns the sites of the Held and Odd ends.
func endsWithoutEquation(line lattice.Axis) (sites []int) {
	if line.Periodic {
		return nil
	}
	if !line.Left.Unknown() {
		sites = append(sites, 0)
	}
	if !line.Right.Unknown() {
		sites = append(sites, line.Sites-1)
	}
	return sites
}
