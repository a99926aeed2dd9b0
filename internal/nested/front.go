package nested

// A front at work is split in two. The pivot rows (across all columns) are held
// in slivers, see tile.go: sliver t holds 16 columns of all the rows. Pivot
// columns fill the first slivers, boundary columns begin a sliver of their own,
// and the last sliver of each kind is padded with zeros:
//
//	pivot row k, column c:  panel[base(c) + 16k],  base(c) = 16·rows·⌊slot/16⌋ + slot mod 16
//	slot = c for a pivot, pivotSlots + (c − pivots) for the boundary
//
// The boundary's own matrix, to which the elimination adds the Schur complement,
// is an ordinary row-major array of which the upper triangle is used; it stays
// with the front until the parent has taken it over.
type shape struct {
	pivots, border int
	rows           int // pivot rows with padding, a multiple of 8
	pivotSlots     int // pivot columns with padding, a multiple of 16
	slots          int // all columns with padding
	stride         int // of the boundary's matrix, border with padding
}

func shapeOf(pivots, border int) shape {
	p, b := (pivots+15)&^15, (border+15)&^15
	return shape{pivots, border, (pivots + 7) &^ 7, p, p + b, b}
}

// sliver returns sliver t of the panel from row k on.
func (g *shape) sliver(panel []float64, t, k int) []float64 {
	return panel[16*(g.rows*t+k) : 16*g.rows*(t+1)]
}

func (g *shape) base(c int) int {
	if c >= g.pivots {
		c += g.pivotSlots - g.pivots
	}
	return 16*g.rows*(c>>4) + c&15
}

// schur is what a front leaves to its parent: the matrix of its boundary, and
// the rows of pivots that were put off. Row i of those holds the columns of all
// that were put off, then the boundary's.
type schur struct {
	matrix []float64 // rows × stride, upper triangle
	stride int
	put    []int32   // places of the pivots that were put off
	off    []float64 // len(put) × (len(put) + border)
	lent   bool      // the storage belongs to the pool, not to a stack
	below  height    // of the stack before matrix was taken
}

// worker holds what one goroutine needs to eliminate one front after another.
type worker struct {
	stacks [2]stack
	panel  []float64
	scaled []float64 // D·U of an indefinite front
	base   []int     // base of every column of the front
	into   []int     // column of the front that takes a column of the child
	runs   []run
	places []int32 // of the pivots of an indefinite front

	elimination elimination
}

// run is a stretch of a child's boundary that stays together in the parent's.
type run struct{ from, to, n int }

// grown returns x with length n, its contents undefined.
func grown[T any](x []T, n int) []T {
	if cap(x) < n {
		return make([]T, n+n/4)[:n]
	}
	return x[:n]
}

// assemble fills the panel and the boundary's matrix of front id with the
// entries of the matrix and with what the children have left. The pivots that
// the children put off follow the front's own, those of the left child first.
// For an indefinite front both triangles of the pivots' square are filled.
func (w *worker) assemble(f *Factor, id int, whole bool) (shape, []float64) {
	s := f.s
	fr := &s.fronts[id]
	own := fr.pivots()
	late := 0
	for _, child := range [2]int32{fr.left, fr.right} {
		if child >= 0 {
			late += len(f.schurs[child].put)
		}
	}
	g := shapeOf(own+late, fr.border())
	n := g.rows * g.slots
	if cap(w.panel) < n {
		w.panel = reserve(max(n+n/4, s.panel))
	}
	w.panel = w.panel[:n]
	panel := w.panel
	if whole {
		clear(panel)
	} else { // nothing looks below the diagonal squares
		for t := range g.pivotSlots >> 4 {
			clear(panel[16*g.rows*t:][:16*min(g.rows, 16*(t+1))])
		}
		clear(panel[g.rows*g.pivotSlots:])
	}
	w.base = grown(w.base, g.pivots+g.border)
	for c := range w.base {
		w.base[c] = g.base(c)
	}
	for k := range own {
		for _, e := range s.entries[s.start[int(fr.lo)+k]:s.start[int(fr.lo)+k+1]] {
			c, v := int(e.row), f.values[e.value]
			if c >= own {
				panel[w.base[c+late]+16*k] = v
				continue
			}
			panel[w.base[c]+16*k] = v
			if whole {
				panel[w.base[k]+16*c] = v
			}
		}
	}

	out := w.borrow(f, id, (g.border+7)&^7*g.stride)
	for i := range (g.border + 7) &^ 7 {
		clear(out[i*g.stride+i&^15 : (i+1)*g.stride])
	}
	w.places = w.places[:0]
	if whole {
		for k := fr.lo; k < fr.hi; k++ {
			w.places = append(w.places, k)
		}
	}
	before := own // columns taken by own pivots and by those put off by earlier children
	for _, child := range [2]int32{fr.left, fr.right} {
		if child < 0 {
			continue
		}
		c := &f.schurs[child]
		w.into = grown(w.into, s.fronts[child].border())
		for i, t := range s.target[s.fronts[child].low:s.fronts[child].high] {
			w.into[i] = int(t)
			if int(t) >= own {
				w.into[i] += late
			}
		}
		w.addMatrix(&g, out, c, whole)
		w.addPutOff(&g, c, before)
		w.places = append(w.places, c.put...)
		before += len(c.put)
	}
	w.release(f, fr)
	return g, out
}

// addMatrix adds a child's boundary matrix.
func (w *worker) addMatrix(g *shape, out []float64, c *schur, whole bool) {
	panel, into := w.panel, w.into
	inPanel := 0 // boundary rows of the child that are pivots here
	for inPanel < len(into) && into[inPanel] < g.pivots {
		inPanel++
	}
	for i, t := range into[:inPanel] {
		from := c.matrix[i*c.stride : i*c.stride+len(into)]
		for j := i; j < len(into); j++ {
			panel[w.base[into[j]]+16*t] += from[j]
		}
		if whole {
			for j := i + 1; j < inPanel; j++ {
				panel[w.base[t]+16*into[j]] += from[j]
			}
		}
	}
	w.runs = w.runs[:0]
	for j := inPanel; j < len(into); {
		r := run{j, into[j] - g.pivots, 1}
		for j++; j < len(into) && into[j]-g.pivots == r.to+r.n; j++ {
			r.n++
		}
		w.runs = append(w.runs, r)
	}
	runs := w.runs
	for i := inPanel; i < len(into); i++ {
		from := c.matrix[i*c.stride : i*c.stride+len(into)]
		to := out[(into[i]-g.pivots)*g.stride:][:g.stride]
		if i >= runs[0].from+runs[0].n {
			runs = runs[1:]
		}
		skip := i - runs[0].from
		for _, r := range runs {
			x := from[r.from+skip : r.from+r.n]
			y := to[r.to+skip:][:len(x)]
			for j, v := range x {
				y[j] += v
			}
			skip = 0
		}
	}
}

// addPutOff adds the rows of pivots that a child put off; they become the pivots
// from number first on.
func (w *worker) addPutOff(g *shape, c *schur, first int) {
	d := len(c.put)
	for i := range d {
		from := c.off[i*(d+len(w.into)):][:d+len(w.into)]
		k := first + i
		for j, v := range from[:d] {
			w.panel[w.base[first+j]+16*k] += v
		}
		for j, v := range from[d:] {
			t := w.into[j]
			w.panel[w.base[t]+16*k] += v
			if t < g.pivots {
				w.panel[w.base[k]+16*t] += v
			}
		}
	}
}

// borrow takes storage for what front id leaves to its parent.
func (w *worker) borrow(f *Factor, id, n int) []float64 {
	c := &f.schurs[id]
	stride := (f.s.fronts[id].border() + 15) &^ 15
	*c = schur{stride: stride, put: c.put[:0], lent: f.outlives[id]}
	if c.lent {
		c.matrix = f.pool.take(n)
	} else {
		st := &w.stacks[f.s.fronts[id].depth&1]
		c.below = st.top
		c.matrix = st.take(n)
	}
	return c.matrix
}

// release gives back what the children of a front have left.
func (w *worker) release(f *Factor, fr *front) {
	for _, child := range [2]int32{fr.right, fr.left} {
		if child < 0 {
			continue
		}
		c := &f.schurs[child]
		if c.lent {
			f.pool.give(c.matrix)
			f.pool.give(c.off)
		} else {
			w.stacks[f.s.fronts[child].depth&1].top = c.below
		}
		c.matrix, c.off, c.put = nil, nil, c.put[:0]
	}
}
