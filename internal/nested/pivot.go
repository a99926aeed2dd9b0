package nested

import "math"

const (
	// threshold u bounds the growth of one elimination by 1 + 1/u. Smaller values
	// put fewer pivots off but lose accuracy.
	threshold = 0.05

	// vanishing, times the norm of the matrix, is the size below which a row is
	// taken for zero. Rounding leaves about 1e-16 times a growth that thresholds
	// keep small.
	vanishing = 1e-13

	// perturbation, times the norm, replaces a vanishing pivot: large enough
	// that rounding errors do not swamp a solve, small enough that the null
	// vector found by inverse iteration is good.
	perturbation = 4e-11

	// blockRows is the number of pivots after which the rows still to come are
	// brought up to date, by products that run at full speed.
	blockRows = 32
)

// elimination factorises the pivot rows of an indefinite front, which are held
// in full: row k has all pivot columns and the boundary's. Pivots are chosen as
// by Bunch and Kaufman, of order 1 or 2, with a bound on the growth in the whole
// column of the front, boundary included, so that a pivot accepted here is good
// for the whole matrix [Bunch & Kaufman 1977, Math. Comp. 31, 163; Ashcraft,
// Grimes & Lewis 1998, SIAM J. Matrix Anal. Appl. 20, 513].
//
// A pivot of order 1 in row k is accepted if u·max_{j≠k} |a_kj| ≤ |a_kk|, one of
// order 2 in rows k and r if u·|E⁻¹|·(γ_k, γ_r)ᵀ ≤ (1, 1)ᵀ with E the 2 × 2 block
// and γ the largest of the rest of either row [Duff & Reid 1983].
//
// After elimination row k holds U = D⁻¹W, where W, the row as it stood, is kept
// until the end of a block of pivots. Rows still to come take up the pivots of
// the block one row at a time when they are looked at, Σ_s U_si·W_s, and
// otherwise together at its end.
type elimination struct {
	g      *shape
	panel  []float64
	places []int32
	tiny   float64

	n     int       // pivots eliminated
	start int       // the first of the block
	w     []float64 // slivers of blockRows rows
	done  []int     // pivots of the block that a row has taken up
	d, e  []float64 // D: diagonal, and entry (k, k+1)
	pair  []bool    // k is the first of a block of order 2
}

func (l *elimination) begin(g *shape, panel []float64, places []int32, tiny float64) {
	l.g, l.panel, l.places, l.tiny, l.n = g, panel, places, tiny, 0
	q := g.pivots
	l.w = grown(l.w, blockRows*g.slots)
	l.done, l.pair = grown(l.done, q), grown(l.pair, q)
	l.d, l.e = grown(l.d, q), grown(l.e, q)
}

// eliminate returns the number of pivots eliminated, which have been moved to
// the front of the rows. It goes over the candidates until a whole pass brings
// no new pivot. If there is no boundary only rows that vanish are left: the row
// with the largest entry always offers a pivot for u ≤ 1/2.
func (l *elimination) eliminate() int {
	for {
		before, end := l.n, l.g.pivots // candidates from end on have failed in this pass
		for l.n < end {
			l.start = l.n
			clear(l.done[l.n:])
			for l.n < end && l.n-l.start <= blockRows-2 {
				order, r := l.choose()
				switch order {
				case 0:
					end--
					l.swap(l.n, end)
				case 1:
					l.swap(l.n, r)
					l.takeOne()
				case 2:
					if r >= end {
						l.swap(r, end)
						r = end
						end++
					}
					l.swap(l.n+1, r)
					l.takeTwo()
				}
				end = max(end, l.n)
			}
			l.catchUp()
		}
		if l.n == before || l.n == l.g.pivots {
			return l.n
		}
	}
}

// choose looks for a pivot in the next row, k. It returns its order, 0 if there
// is none, and the row that it needs at place k (order 1) or k + 1 (order 2).
func (l *elimination) choose() (order, r int) {
	k := l.n
	l.update(k)
	inside, r, outside := l.largest(k, k)
	top := max(inside, outside)
	a := l.at(k, k)
	if max(math.Abs(a), top) <= l.tiny {
		return 0, 0
	}
	if math.Abs(a) >= threshold*top && math.Abs(a) > l.tiny {
		return 1, k
	}
	if r < 0 || inside <= l.tiny {
		return 0, 0
	}
	l.update(r)
	b, c := l.at(k, r), l.at(r, r)
	insideR, _, outsideR := l.largest(r, k)
	insideK, _, _ := l.largest(k, r)
	topK, topR := max(insideK, outside), max(insideR, outsideR)
	// A determinant that does not cancel: |ac| far from b² or of the other sign.
	if det := a*c - b*b; math.Abs(det) >= 0.5*b*b {
		bound := math.Abs(det) / threshold
		if math.Abs(c)*topK+math.Abs(b)*topR <= bound && math.Abs(b)*topK+math.Abs(a)*topR <= bound {
			return 2, r
		}
	}
	if math.Abs(c) >= threshold*max(topR, math.Abs(b)) && math.Abs(c) > l.tiny {
		return 1, r
	}
	return 0, 0
}

func (l *elimination) at(i, j int) float64 { return l.panel[l.g.base(j)+16*i] }

// largest finds the largest entry of row i among the remaining pivot columns
// other than i and j, with its column, and the largest in the boundary's.
func (l *elimination) largest(i, j int) (inside float64, column int, outside float64) {
	column = -1
	g := l.g
	for t := l.n >> 4; t < g.pivotSlots>>4; t++ {
		row := l.panel[16*(g.rows*t+i):][:16]
		for c, v := range row {
			if v = math.Abs(v); v > inside {
				if c += 16 * t; c >= l.n && c != i && c != j && c < g.pivots {
					inside, column = v, c
				}
			}
		}
	}
	var a, b float64
	for t := g.pivotSlots >> 4; t < g.slots>>4; t++ {
		row := (*[16]float64)(l.panel[16*(g.rows*t+i):])
		for c := 0; c < 16; c += 2 {
			if v := math.Abs(row[c]); v > a {
				a = v
			}
			if v := math.Abs(row[c+1]); v > b {
				b = v
			}
		}
	}
	return inside, column, max(a, b)
}

// update makes row i take up what it lacks of the pivots of the block.
func (l *elimination) update(i int) {
	from, n := l.done[i], l.n-l.start-l.done[i]
	if n == 0 {
		return
	}
	g := l.g
	u := g.sliver(l.panel, i>>4, l.start+from)[i&15:]
	for t := l.n >> 4; t < g.slots>>4; t++ {
		tile1x16(n, u, l.w[16*(blockRows*t+from):], g.sliver(l.panel, t, i))
	}
	l.done[i] = l.n - l.start
}

// catchUp ends the block: all remaining rows take it up.
func (l *elimination) catchUp() {
	g, m := l.g, l.n-l.start
	if m == 0 {
		return
	}
	for i := l.n &^ 7; i < g.pivots; i += 8 {
		whole := i >= l.n
		for j := max(i, l.n); j < min(i+8, g.pivots); j++ {
			whole = whole && l.done[j] == 0
		}
		if !whole {
			for j := max(i, l.n); j < min(i+8, g.pivots); j++ {
				l.update(j)
			}
			continue
		}
		u := g.sliver(l.panel, i>>4, l.start)[i&15:]
		for t := l.n >> 4; t < g.slots>>4; t++ {
			tile8x16(m, u, l.w[16*blockRows*t:], g.sliver(l.panel, t, i), 16)
		}
	}
}

// swap exchanges candidates i and j: rows, columns and names.
func (l *elimination) swap(i, j int) {
	if i == j {
		return
	}
	g := l.g
	for t := range g.slots >> 4 {
		x, y := l.panel[16*(g.rows*t+i):][:16], l.panel[16*(g.rows*t+j):][:16]
		for c, v := range x {
			x[c], y[c] = y[c], v
		}
	}
	x, y := g.sliver(l.panel, i>>4, 0)[i&15:], g.sliver(l.panel, j>>4, 0)[j&15:]
	for s := 0; s < 16*g.pivots; s += 16 {
		x[s], y[s] = y[s], x[s]
	}
	x, y = l.w[16*blockRows*(i>>4)+i&15:], l.w[16*blockRows*(j>>4)+j&15:]
	for s := 0; s < 16*(l.n-l.start); s += 16 {
		x[s], y[s] = y[s], x[s]
	}
	l.places[i], l.places[j] = l.places[j], l.places[i]
	l.done[i], l.done[j] = l.done[j], l.done[i]
}

// takeOne eliminates row n.
func (l *elimination) takeOne() {
	g, k, s := l.g, l.n, l.n-l.start
	d := l.at(k, k)
	inv := 1 / d
	for t := k >> 4; t < g.slots>>4; t++ {
		u, w := l.panel[16*(g.rows*t+k):][:16], l.w[16*(blockRows*t+s):][:16]
		for c, v := range u {
			w[c] = v
			u[c] = v * inv
		}
	}
	l.d[k], l.e[k], l.pair[k] = d, 0, false
	l.n++
}

// takeTwo eliminates rows n and n + 1. With the block (a, b; b, c) of D
//
//	U_n = t/b·(c/b·W_n − W_n+1),  U_n+1 = t/b·(a/b·W_n+1 − W_n),  t = 1/(ac/b² − 1)
func (l *elimination) takeTwo() {
	g, k, s := l.g, l.n, l.n-l.start
	a, b, c := l.at(k, k), l.at(k, k+1), l.at(k+1, k+1)
	ab, cb := a/b, c/b
	f := 1 / (ab*cb - 1) / b
	for t := k >> 4; t < g.slots>>4; t++ {
		u, w := l.panel[16*(g.rows*t+k):][:32], l.w[16*(blockRows*t+s):][:32]
		for i := range 16 {
			x, y := u[i], u[16+i]
			w[i], w[16+i] = x, y
			u[i] = f * (cb*x - y)
			u[16+i] = f * (ab*y - x)
		}
	}
	l.d[k], l.d[k+1] = a, c
	l.e[k], l.e[k+1] = b, 0
	l.pair[k], l.pair[k+1] = true, false
	l.n += 2
}

// perturb replaces rows from n on, which vanish and have no boundary, by pivots d.
func (l *elimination) perturb(n int, d float64) {
	for k := n; k < l.g.pivots; k++ {
		for t := range l.g.slots >> 4 {
			clear(l.panel[16*(l.g.rows*t+k):][:16])
		}
		l.d[k], l.e[k], l.pair[k] = d, 0, false
	}
}

// scale sets dst to W = DU for the first n rows of U; both hold the boundary's
// columns in slivers.
func (l *elimination) scale(dst, u []float64, n int) {
	g := l.g
	for t := range g.stride >> 4 {
		x, y := g.sliver(u, t, 0), g.sliver(dst, t, 0)
		for k := 0; k < n; k++ {
			if l.pair[k] {
				a, b, c := l.d[k], l.e[k], l.d[k+1]
				u, w := x[16*k:16*k+32], y[16*k:16*k+32]
				for i := range 16 {
					w[i] = a*u[i] + b*u[16+i]
					w[16+i] = b*u[i] + c*u[16+i]
				}
				k++
				continue
			}
			d := l.d[k]
			u, w := x[16*k:16*k+16], y[16*k:16*k+16]
			for i, v := range u {
				w[i] = d * v
			}
		}
	}
}

// store writes the first n rows of U and D, see part.
func (l *elimination) store(dst []float64, n int) {
	for k := range n {
		l.row(dst, k, k)
		dst[0] = l.d[k]
		if l.pair[k] {
			dst[1] = l.e[k]
		}
		dst = dst[l.g.pivots-k+l.g.border:]
	}
}

// row copies row k of the panel, pivot columns from first on and the boundary's.
func (l *elimination) row(dst []float64, k, first int) {
	g := l.g
	for c := first; c < g.pivots; {
		n := copy(dst, l.panel[g.base(c)+16*k:][:min(16-c&15, g.pivots-c)])
		dst, c = dst[n:], c+n
	}
	for c := 0; c < g.border; c += 16 {
		n := copy(dst, l.panel[16*(g.rows*((g.pivotSlots+c)>>4)+k):][:min(16, g.border-c)])
		dst = dst[n:]
	}
}
