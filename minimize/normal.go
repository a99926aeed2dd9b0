package minimize

import (
	"slices"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/internal/nested"
)

// normal assembles the normal matrix JᵀJ of the residual by the unknowns.
//
// What does not change with the history is worked out once. For each row of the
// Jacobian that counts, the entries are sorted into slots, one for each unknown
// that the row reaches (two tied values share one), and for each pair of slots
// the place of their product among the values is stored. Assembling is then a
// walk over the rows without searching.
type normal struct {
	rows  []int32 // rows of the Jacobian that count
	slot  []int32 // of each entry of those rows, in order; −1 at fixed values
	first []int32 // of each row: where its unknowns start in reach; one more at the end
	reach []int32 // unknowns of the rows, those of a row ascending
	place []int32 // for each row, the products of slots (a, b), b ≤ a

	pattern  *nested.Pattern
	values   []float64
	diagonal []int // places of the diagonal
	buffer   []float64
}

// newNormal analyses the Jacobian j, whose pattern does not change, for the
// given rows. grid has the unknowns and their coordinates and gets its entries.
func newNormal(j *action.Matrix, rows []int32, free *constraint.Unknowns, grid *nested.Pattern) *normal {
	m := &normal{rows: rows, first: make([]int32, 1, len(rows)+1), pattern: grid}
	for _, r := range rows {
		columns, _ := j.Row(int(r))
		from := len(m.reach)
		for _, f := range columns {
			if k, _ := free.At(f); k >= 0 {
				m.reach = append(m.reach, int32(k))
			}
		}
		slices.Sort(m.reach[from:])
		m.reach = m.reach[:from+len(slices.Compact(m.reach[from:]))]
		own := m.reach[from:]
		for _, f := range columns {
			s := -1
			if k, _ := free.At(f); k >= 0 {
				s, _ = slices.BinarySearch(own, int32(k))
			}
			m.slot = append(m.slot, int32(s))
		}
		m.first = append(m.first, int32(len(m.reach)))
		if len(own) > len(m.buffer) {
			m.buffer = make([]float64, len(own))
		}
	}
	m.couple(grid.N)
	m.values = make([]float64, len(grid.Adj))
	for i := range rows {
		own := m.own(i)
		for a, u := range own {
			for _, v := range own[:a+1] {
				m.place = append(m.place, int32(grid.Place(int(u), int(v))))
			}
		}
	}
	return m
}

// own returns the unknowns of the i-th row that counts.
func (m *normal) own(i int) []int32 { return m.reach[m.first[i]:m.first[i+1]] }

// couple lists, for every unknown, the unknowns up to it with which it shares a
// row.
func (m *normal) couple(n int) {
	// rows by unknown
	start := make([]int32, n+1)
	for _, u := range m.reach {
		start[u+1]++
	}
	for u := range n {
		start[u+1] += start[u]
	}
	in := make([]int32, len(m.reach))
	next := slices.Clone(start)
	for i := range m.rows {
		for _, u := range m.own(i) {
			in[next[u]] = int32(i)
			next[u]++
		}
	}
	p := m.pattern
	p.Ptr = make([]int, 1, n+1)
	m.diagonal = make([]int, n)
	seen := make([]int32, n) // 1 + the last unknown whose list has it
	for u := range n {
		from := len(p.Adj)
		p.Adj = append(p.Adj, int32(u)) // even if no row reaches it
		for _, i := range in[start[u]:start[u+1]] {
			for _, v := range m.own(int(i)) {
				if int(v) >= u {
					break
				}
				if seen[v] != int32(u+1) {
					seen[v] = int32(u + 1)
					p.Adj = append(p.Adj, v)
				}
			}
		}
		slices.Sort(p.Adj[from:])
		m.diagonal[u] = len(p.Adj) - 1
		p.Ptr = append(p.Ptr, len(p.Adj))
	}
}

// assemble writes JᵀJ to the values.
func (m *normal) assemble(j *action.Matrix) {
	clear(m.values)
	entry, pair := 0, 0
	for i, r := range m.rows {
		row := m.buffer[:m.first[i+1]-m.first[i]]
		clear(row)
		entries := j.Value[j.Start[r]:j.Start[r+1]]
		slots := m.slot[entry:][:len(entries)]
		entry += len(entries)
		for k, v := range entries {
			if s := slots[k]; s >= 0 {
				row[s] += v
			}
		}
		for a, x := range row {
			for b, at := range m.place[pair:][:a+1] {
				m.values[at] += x * row[b]
			}
			pair += a + 1
		}
	}
}

// gradient writes Jᵀr to g, and the sums of |entry·r| that it cancels from to
// size.
func (m *normal) gradient(g, size []float64, j *action.Matrix, r []float64) {
	clear(g)
	clear(size)
	entry := 0
	for i, e := range m.rows {
		own := m.own(i)
		v := r[e]
		entries := j.Value[j.Start[e]:j.Start[e+1]]
		slots := m.slot[entry:][:len(entries)]
		entry += len(entries)
		for k, x := range entries {
			if s := slots[k]; s >= 0 {
				u := own[s]
				g[u] += x * v
				size[u] += max(x*v, -x*v)
			}
		}
	}
}

// largest returns the largest diagonal entry.
func (m *normal) largest() float64 {
	var d float64
	for _, at := range m.diagonal {
		d = max(d, m.values[at])
	}
	return d
}
