package constraint

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Unknowns is a resolved problem. It is the map from the values of a history to the numbers that a solver
// may still choose. Value e of the history, e as in field.History.Data, is
//
//	x[u] + offset   if it follows unknown u,
//	offset          if it is fixed.
//
// Unknowns are numbered in the order of the first value that follows each, so by
// slice, component and site.
type Unknowns struct {
	N         int      // number of unknowns
	Redundant int      // conditions that said what others had said
	Repeats   []string // of them, the linear ones, and what they repeat

	block      lattice.Block
	components int
	follows    []int32 // unknown, −1 if fixed
	offset     []float64
	by         []kind // what fixes a value; unpinned if nothing
	tied       []bool // joined to another value by a rate
	lead       []int  // the value that stands for each unknown
	terms      []Term
	hard, soft []Row
	limits     *limits // nil without bounds
}

func newUnknowns(b lattice.Block, components int) *Unknowns {
	n := b.Slices() * components * b.Sites()
	return &Unknowns{
		block: b, components: components,
		follows: make([]int32, n), offset: make([]float64, n), by: make([]kind, n), tied: make([]bool, n),
	}
}

// number gives every free value its unknown.
func (u *Unknowns) number(f *forest) {
	var first map[int]int32 // unknown of the root of a tree
	if f != nil {
		first = make(map[int]int32)
	}
	for e, by := range u.by {
		if by != unpinned {
			u.follows[e] = -1
			continue
		}
		if u.tied[e] {
			root, above := f.root(e)
			if k, ok := first[root]; ok {
				_, base := f.root(u.lead[k])
				u.follows[e], u.offset[e] = k, above-base
				continue
			}
			first[root] = int32(len(u.lead))
		}
		u.follows[e] = int32(len(u.lead))
		u.lead = append(u.lead, e)
	}
	u.N = len(u.lead)
}

// Values returns the number of values of the history.
func (u *Unknowns) Values() int { return len(u.follows) }

// Fixed returns the number of values that are fixed.
func (u *Unknowns) Fixed() int {
	n := 0
	for _, k := range u.follows {
		if k < 0 {
			n++
		}
	}
	return n
}

// At returns the unknown that value e of the history follows and its constant
// difference to it. For a fixed value it returns −1 and the value.
func (u *Unknowns) At(e int) (unknown int, offset float64) {
	return int(u.follows[e]), u.offset[e]
}

// Lead returns the value of the history that unknown k is: the one without an
// offset.
func (u *Unknowns) Lead(k int) (e int) { return u.lead[k] }

// Event returns slice, component and site of value e and the event it stands at.
func (u *Unknowns) Event(e int) (n, c, i int, at lattice.Event) {
	sites := u.block.Sites()
	row := e / sites
	n, c, i = row/u.components, row%u.components, e%sites
	return n, c, i, u.block.At(n, i)
}

// Gather writes the unknowns as they stand in the history to x and returns it;
// a nil x is allocated. A history that does not satisfy the ties gives the
// values at the leads. It panics unless the lengths fit.
func (u *Unknowns) Gather(x []float64, h *field.History) []float64 {
	if x == nil {
		x = make([]float64, u.N)
	}
	u.mustFit(x, h)
	for k, e := range u.lead {
		x[k] = h.Data[e]
	}
	return x
}

// Scatter writes the history that the unknowns x stand for to h: every value,
// fixed ones included. It panics unless the lengths fit.
func (u *Unknowns) Scatter(h *field.History, x []float64) {
	u.mustFit(x, h)
	for e, k := range u.follows {
		if k < 0 {
			h.Data[e] = u.offset[e]
		} else {
			h.Data[e] = x[k] + u.offset[e]
		}
	}
}

// Reduce writes the derivative by the unknowns to g, given the derivative by
// every value of the history: the sum over the values that follow each. It
// returns g; a nil g is allocated. It panics unless the lengths fit.
func (u *Unknowns) Reduce(g []float64, by *field.History) []float64 {
	if g == nil {
		g = make([]float64, u.N)
	}
	u.mustFit(g, by)
	clear(g)
	for e, k := range u.follows {
		if k >= 0 {
			g[k] += by.Data[e]
		}
	}
	return g
}

// Expand writes the change of the history to h that a change dx of the unknowns
// makes; it is zero at fixed values. It panics unless the lengths fit.
func (u *Unknowns) Expand(h *field.History, dx []float64) {
	u.mustFit(dx, h)
	for e, k := range u.follows {
		h.Data[e] = 0
		if k >= 0 {
			h.Data[e] = dx[k]
		}
	}
}

func (u *Unknowns) mustFit(x []float64, h *field.History) {
	if len(x) != u.N || len(h.Data) != len(u.follows) {
		panic(fmt.Sprintf("constraint: %d unknowns and %d values; want %d and %d", len(x), len(h.Data), u.N, len(u.follows)))
	}
}

// SliceFixed reports whether every value of slice n is fixed.
func (u *Unknowns) SliceFixed(n int) bool {
	size := u.components * u.block.Sites()
	for _, k := range u.follows[n*size : (n+1)*size] {
		if k >= 0 {
			return false
		}
	}
	return true
}

// CauchyPair returns the first n for which the slices n and n+1 are fixed
// altogether, if there is one. With such a pair the field equation determines
// every other slice by marching from it.
func (u *Unknowns) CauchyPair() (n int, ok bool) {
	before := u.SliceFixed(0)
	for n := 1; n < u.block.Slices(); n++ {
		now := u.SliceFixed(n)
		if before && now {
			return n - 1, true
		}
		before = now
	}
	return 0, false
}
