package constraint

import (
	"fmt"
	"slices"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Within says that only the events in the region r exist, those with a weight
// above zero. The others are not unknowns: they keep the values of the history
// that a solver starts from and carry no reaction. A condition on one of them is
// an error, which Free returns and which names the event, except that Bounds of
// the whole block leave them out. It is an error if r is nil, is not on the block
// of the set, or if the set has another region already.
func (s *Set) Within(r *lattice.Region) {
	switch {
	case r == nil:
		s.fail(fmt.Errorf("constraint: no region; want one from lattice.NewRegion"))
	case !sameBlock(r.Block(), s.block):
		s.fail(fmt.Errorf("constraint: region on the block from %v to %v; the conditions are on another", r.Block().At(0, 0), r.Block().At(r.Block().Slices()-1, r.Block().Sites()-1)))
	case s.region != nil && s.region != r:
		s.fail(fmt.Errorf("constraint: a second region; want one region, the intersection if both are meant"))
	default:
		s.region = r
	}
}

func sameBlock(a, b lattice.Block) bool {
	same := func(a, b lattice.Axis) bool {
		return a.From == b.From && a.Step == b.Step && a.Sites == b.Sites && a.Left == b.Left && a.Right == b.Right &&
			a.Periodic == b.Periodic && slices.Equal(a.Jump, b.Jump)
	}
	return same(a.Time, b.Time) && same(a.Space, b.Space)
}

// leaveOut fixes the events that are not in the region.
func (s *Set) leaveOut(u *Unknowns, start *field.History) error {
	if s.region == nil {
		return nil
	}
	for n := range s.block.Slices() {
		for i := range s.block.Sites() {
			if s.region.Inside(n, i) {
				continue
			}
			for c := range u.components {
				e := start.Index(n, c, i)
				if u.by[e] != unpinned {
					return outside("pin of a "+u.by[e].String(), c, s.block.At(n, i))
				}
				u.by[e], u.offset[e] = byRegion, start.Data[e]
			}
		}
	}
	for _, t := range s.ties {
		for _, n := range [...]int{t.from, t.to} {
			if !s.region.Inside(n, t.site) {
				return outside("rate", t.component, s.block.At(n, t.site))
			}
		}
	}
	return nil
}

// outside is the error of a condition on an event that is not in the region.
func outside(name string, c int, at lattice.Event) error {
	return fmt.Errorf("constraint: %s on component %d at %v, which is not in the region; want an event of the region", name, c, at)
}
