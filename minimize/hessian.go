package minimize

import (
	"slices"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/internal/nested"
)

// hessian assembles the second variation by the unknowns, from that by all
// values of the history: entries of fixed values are dropped, those of tied ones
// added up. The places of the entries are worked out once.
type hessian struct {
	entry    []int32 // entries of the full matrix that count
	place    []int32 // where each goes among the values
	pattern  *nested.Pattern
	values   []float64
	diagonal []int
}

// newHessian analyses the second variation m, whose pattern does not change.
// grid has the unknowns and their coordinates and gets its entries.
func newHessian(m *action.Matrix, free *constraint.Unknowns, grid *nested.Pattern) *hessian {
	h := &hessian{pattern: grid}
	below := make([][]int32, grid.N)
	each := func(do func(entry int, u, v int32)) {
		for e := range m.Rows() {
			u, _ := free.At(e)
			if u < 0 {
				continue
			}
			for k := m.Start[e]; k < m.Start[e+1]; k++ {
				if v, _ := free.At(m.Column[k]); v >= 0 && v <= u {
					do(k, int32(u), int32(v))
				}
			}
		}
	}
	each(func(_ int, u, v int32) { below[u] = append(below[u], v) })
	grid.Ptr = make([]int, 1, grid.N+1)
	h.diagonal = make([]int, grid.N)
	for u, list := range below {
		list = append(list, int32(u))
		slices.Sort(list)
		grid.Adj = append(grid.Adj, slices.Compact(list)...)
		grid.Ptr = append(grid.Ptr, len(grid.Adj))
		h.diagonal[u] = len(grid.Adj) - 1
	}
	each(func(k int, u, v int32) {
		h.entry = append(h.entry, int32(k))
		h.place = append(h.place, int32(grid.Place(int(u), int(v))))
	})
	h.values = make([]float64, len(grid.Adj))
	return h
}

// assemble writes the matrix to the values.
func (h *hessian) assemble(m *action.Matrix) {
	clear(h.values)
	for k, e := range h.entry {
		h.values[h.place[k]] += m.Value[e]
	}
}

// largest returns the largest diagonal entry.
func (h *hessian) largest() float64 {
	var d float64
	for _, at := range h.diagonal {
		d = max(d, h.values[at])
	}
	return d
}

// quadratic returns δᵀHδ.
func (h *hessian) quadratic(delta []float64) float64 {
	var sum float64
	p := h.pattern
	for i := range p.N {
		row := 0.0
		for k := p.Ptr[i]; k < p.Ptr[i+1]; k++ {
			if j := int(p.Adj[k]); j != i {
				row += 2 * h.values[k] * delta[j]
			} else {
				row += h.values[k] * delta[j]
			}
		}
		sum += row * delta[i]
	}
	return sum
}
