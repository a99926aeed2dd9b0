package nested

import (
	"fmt"
	"math"
)

// NotPositive is the error of a Cholesky factorisation that met a pivot which is
// not positive: the matrix is not positive definite.
type NotPositive struct {
	Unknown int     // the first unknown, in the order of elimination, that fails
	Pivot   float64 // what is left of its diagonal entry
}

func (e *NotPositive) Error() string {
	return fmt.Sprintf("nested: pivot %.3g of unknown %d is not positive: the matrix is not positive definite, use LDLT", e.Pivot, e.Unknown)
}

// Cholesky factorises the matrix with the given values, which stand in the order
// of the pattern's Adj, as PAPᵀ = LDLᵀ with positive D. It uses up to the given
// number of goroutines (at least one); the result has the same bits for any
// number. It returns a *NotPositive if a pivot fails, and panics if the length
// of values is not that of Adj.
func (s *Symbolic) Cholesky(values []float64, workers int) (*Factor, error) {
	f := newFactor(s, workers, false)
	if err := f.Refactor(values); err != nil {
		return nil, err
	}
	return f, nil
}

// cholesky eliminates front id.
func (w *worker) cholesky(f *Factor, id int) error {
	g, out := w.assemble(f, id, false)
	fr := &f.s.fronts[id]
	if k, d := g.cholesky(w.panel); k >= 0 {
		return &NotPositive{int(f.s.order[int(fr.lo)+k]), d}
	}
	boundary := w.panel[g.rows*g.pivotSlots:]
	g.subtractProduct(boundary, boundary, out, g.pivots)
	g.storePanel(f.store[fr.panel:], w.panel)
	return nil
}

// cholesky overwrites the pivot rows A of the panel by U with A = U₁ᵀU, where U₁ is
// the triangle of the pivots' columns; what stands below that triangle is
// undefined. It returns the first pivot that is not positive, or −1.
//
// Rows are finished 16 at a time: they take up the rows above them, then are
// solved among themselves. When a block of rows is finished all rows below take
// it up at once, so that no sum reaches back further than the caches hold.
func (g *shape) cholesky(panel []float64) (int, float64) {
	for block := 0; block < g.pivots; block += depth {
		next := min(block+depth, g.pivots)
		for k := block; k < next; k += 16 {
			own := g.sliver(panel, k>>4, block)
			for t := k >> 4; t < g.slots>>4; t++ {
				b := g.sliver(panel, t, block)
				for i := k - block; i < min(k+16, next)-block; i += 8 {
					tile8x16(k-block, own[i&8:], b, b[16*i:], 16)
				}
			}
			if r, d := g.finish(panel, k, min(16, next-k)); r >= 0 {
				return k + r, d
			}
		}
		for t := next >> 4; t < g.slots>>4; t++ {
			b := g.sliver(panel, t, block)
			for i := next; i < min(16*(t+1), g.pivots); i += 8 {
				tile8x16(next-block, g.sliver(panel, i>>4, block)[i&8:], b, b[16*(i-block):], 16)
			}
		}
	}
	return -1, 0
}

// finish turns the n rows from k on, which have taken up all rows above, into
// rows of U. It returns the first whose pivot is not positive, or −1.
func (g *shape) finish(panel []float64, k, n int) (int, float64) {
	var inv [16]float64
	square := g.sliver(panel, k>>4, k)
	for r := range n {
		row := square[16*r : 16*r+16]
		tile1x16(r, square[r:], square, row)
		d := row[r]
		if !(d > 0) || math.IsInf(d, 1) {
			return r, d
		}
		inv[r] = 1 / math.Sqrt(d)
		for c := r; c < 16; c++ {
			row[c] *= inv[r]
		}
	}
	for t := k>>4 + 1; t < g.slots>>4; t++ {
		solve16(n, square, &inv, g.sliver(panel, t, k))
	}
	return -1, 0
}

const (
	depth   = 192 // pivots whose product is subtracted at once: 16 columns of them fit the first cache
	breadth = 256 // columns that meet all others in turn: depth × breadth fits the second
)

// subtractProduct subtracts from the boundary's matrix the product AᵀB, where A and
// B hold n rows of the boundary's columns in slivers; only tiles that meet the
// upper triangle are formed.
func (g *shape) subtractProduct(a, b, out []float64, n int) {
	for k := 0; k < n; k += depth {
		m := min(depth, n-k)
		for first := 0; first < g.border; first += breadth {
			last := min(first+breadth, g.border)
			for t := first >> 4; t < g.stride>>4; t++ {
				right := g.sliver(b, t, k)
				for i := first; i < min(16*(t+1), last); i += 8 {
					left := g.sliver(a, i>>4, k)
					tile8x16(m, left[i&8:], right, out[i*g.stride+16*t:], g.stride)
				}
			}
		}
	}
}

// storePanel writes the rows of the unit triangle L'ᵀ and D: row k begins with
// its pivot, then come the columns to its right, nothing between rows.
func (g *shape) storePanel(dst, panel []float64) {
	for k := range g.pivots {
		u := panel[g.base(k)+16*k]
		dst[0] = u * u
		inv := 1 / u
		dst = dst[1:]
		for c := k + 1; c < g.pivots; {
			from := panel[g.base(c)+16*k:]
			n := min(16-c&15, g.pivots-c)
			for j, v := range from[:n] {
				dst[j] = v * inv
			}
			dst, c = dst[n:], c+n
		}
		for c := 0; c < g.border; c += 16 {
			from := panel[16*(g.rows*((g.pivotSlots+c)>>4)+k):]
			n := min(16, g.border-c)
			for j, v := range from[:n] {
				dst[j] = v * inv
			}
			dst = dst[n:]
		}
	}
}
