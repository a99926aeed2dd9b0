package minimize

import (
	"math"
	"slices"

	"github.com/tenter-go/tenter/field"
)

// A load is what a unit change of something does to the equations.
type load struct {
	moved  []entry // fixed values that move
	rows   []entry // added to the residual r
	force  []entry // added to the gradient
	border []entry // added to the right-hand sides b, by the number of the border
}

// An entry is the value at one index of a list that is zero elsewhere.
type entry struct {
	index int
	value float64
}

// A yield is the solution for one load.
type yield struct {
	moved *field.History // of every value, free or fixed
	mu    []float64      // of the borders
}

const batch = 16 // loads solved at once

// solve returns the solutions for the loads, in their order.
func (k *curvature) solve(loads []load) []yield {
	var found []yield
	for some := range slices.Chunk(loads, batch) {
		found = append(found, k.solveBatch(some)...)
	}
	return found
}

func (k *curvature) solveBatch(loads []load) []yield {
	const most = 30 // corrections, each of which halves the one before
	n := k.free.N
	found := make([]yield, len(loads))
	x, rest := make([][]float64, len(loads)), make([][]float64, len(loads))
	last := make([]float64, len(loads)) // size of the last correction
	busy := make([]int, len(loads))
	block := k.shape.Block
	block.Time.Jump, block.Space.Jump = nil, nil // differences of fields do not jump
	for i := range loads {
		found[i] = yield{field.NewHistory(block, k.shape.Components), make([]float64, len(k.borders))}
		x[i], rest[i] = make([]float64, n), make([]float64, n+len(k.borders))
		last[i], busy[i] = math.Inf(1), i
		k.spread(found[i].moved, x[i], loads[i])
	}
	for range most {
		var rhs [][]float64
		for _, i := range busy {
			k.remainder(rest[i], loads[i], found[i])
			rhs = append(rhs, rest[i])
		}
		k.factor.SolveMany(rhs, rhs)
		var next []int
		for _, i := range busy {
			var step, size float64
			for u := range n {
				step, size = max(step, math.Abs(rest[i][u])), max(size, math.Abs(x[i][u]))
			}
			if !(step < 0.5*last[i]) {
				continue
			}
			for u := range n {
				x[i][u] += rest[i][u]
			}
			for r, s := range k.scale {
				found[i].mu[r] += s * rest[i][n+r]
			}
			k.spread(found[i].moved, x[i], loads[i])
			if last[i] = step; step > 0x1p-53*size {
				next = append(next, i)
			}
		}
		if busy = next; len(busy) == 0 {
			break
		}
	}
	return found
}

// spread writes the move of every value: that of the unknowns, and of the fixed
// values that the load moves.
func (k *curvature) spread(h *field.History, x []float64, l load) {
	k.free.Expand(h, x)
	for _, m := range l.moved {
		h.Data[m.index] = m.value
	}
}

// gradient returns the change of the gradient by every value, less what the
// linear conditions take up: zero at the free values of a solution, and the
// change of what holds the fixed ones. The slice is overwritten by the next call.
func (k *curvature) gradient(l load, y yield) []float64 {
	v, out := y.moved, k.out
	if k.jac != nil {
		clear(k.row)
		for _, e := range k.rows {
			columns, values := k.jac.Row(int(e))
			for j, f := range columns {
				k.row[e] += values[j] * v.Data[f]
			}
		}
		for _, m := range l.rows {
			k.row[m.index] += m.value
		}
		for _, e := range k.rows {
			k.row[e] *= k.weight
		}
		k.jac.MulTransVec(out, k.row)
		k.bend(out, v)
	} else {
		k.second.MulVec(out, v.Data)
	}
	if k.terms != nil {
		for e, t := range k.terms.Data {
			out[e] += t * v.Data[e]
		}
	}
	for _, m := range l.force {
		out[m.index] += m.value
	}
	for r, mu := range y.mu {
		b := &k.borders[r]
		for j, e := range b.Index {
			out[e] += mu * b.Coefficient[j]
		}
	}
	return out
}

// remainder writes what is left of the bordered equations to rest.
func (k *curvature) remainder(rest []float64, l load, y yield) {
	clear(rest)
	for e, g := range k.gradient(l, y) {
		if u, _ := k.free.At(e); u >= 0 {
			rest[u] -= g
		}
	}
	if k.still != nil {
		for u, still := range k.still.active {
			if still {
				rest[u] = 0
			}
		}
	}
	own := rest[k.free.N:]
	for _, m := range l.border {
		own[m.index] = m.value
	}
	for r, scale := range k.scale {
		b := &k.borders[r]
		for j, e := range b.Index {
			own[r] -= b.Coefficient[j] * y.moved.Data[e]
		}
		if b.Precision > 0 {
			own[r] += y.mu[r] / b.Precision
		}
		own[r] *= scale
	}
}
