package nested

import "slices"

// Symbolic is the part of a factorisation that depends on the pattern only: the
// dissection tree, the order of elimination and the shape of every front. It is
// not changed by use and may serve any number of factors at once.
type Symbolic struct {
	n       int
	ptr     []int // the pattern, kept for residuals
	adj     []int32
	order   []int32 // order[k] is the unknown eliminated in place k
	fronts  []front // children before parents, the root last
	bound   []int32 // places of all fronts' boundary rows, increasing within a front
	target  []int32 // bound[i] is row target[i] of the parent front
	entries []entry // the matrix by columns of the new order
	start   []int32 // column k has entries[start[k]:start[k+1]]
	nnz     int     // of L with its diagonal
	flops   float64
	panel   int // entries of the largest panel of a front
}

// front is a dense symmetric matrix in which the unknowns in places lo … hi−1
// are eliminated. Its rows are these pivots, then its boundary: the later
// unknowns that have an entry in the pivots' columns of L.
type front struct {
	lo, hi      int32
	left, right int32 // children, −1: none
	parent      int32 // −1: root
	depth       int32
	low, high   int // boundary rows are bound[low:high]
	panel       int // offset of the pivot rows of U = Lᵀ in the factor's store
	flops       float64
}

func (f *front) pivots() int { return int(f.hi - f.lo) }
func (f *front) border() int { return f.high - f.low }

// entry is a value of the matrix: its row within the front of its column, and
// its index in the caller's values.
type entry struct{ row, value int32 }

// Analyse chooses the order of elimination and finds the fronts. The error is a
// *BadPattern that names the offending row. The pattern's Ptr and Adj are kept,
// not copied.
func Analyse(p Pattern) (*Symbolic, error) {
	if err := p.check(); err != nil {
		return nil, err
	}
	nodes, order := dissect(&p)
	s := &Symbolic{n: p.N, ptr: p.Ptr, adj: p.Adj, order: order}
	s.sortEntries(&p)
	s.buildFronts(nodes)
	return s, nil
}

// sortEntries distributes the entries over the columns of the new order; their
// row is for the time being a place in that order.
func (s *Symbolic) sortEntries(p *Pattern) {
	place := make([]int32, p.N)
	for k, i := range s.order {
		place[i] = int32(k)
	}
	next := make([]int32, p.N+2)
	for i := range p.N {
		a := place[i]
		for _, j := range p.Adj[p.Ptr[i]:p.Ptr[i+1]] {
			next[min(a, place[j])+2]++
		}
	}
	for k := 2; k < len(next); k++ {
		next[k] += next[k-1]
	}
	s.entries = make([]entry, len(p.Adj))
	for i := range p.N {
		a := place[i]
		for e := p.Ptr[i]; e < p.Ptr[i+1]; e++ {
			b := place[p.Adj[e]]
			k := min(a, b) + 1
			s.entries[next[k]] = entry{max(a, b), int32(e)}
			next[k]++
		}
	}
	s.start = next[:p.N+1]
}

func (s *Symbolic) buildFronts(nodes []node) {
	s.fronts = make([]front, len(nodes))
	s.bound = make([]int32, 0, 5*s.n) // enough for stencils of radius 1 and 2
	s.target = make([]int32, 0, 5*s.n)
	local := make([]int32, s.n) // row of a place in the current front
	seen := make([]int32, s.n)  // last front that has the place as a row, plus one
	var fresh []int32           // rows that come from entries only
	for id, nd := range nodes {
		f := &s.fronts[id]
		*f = front{lo: nd.lo, hi: nd.hi, left: nd.left, right: nd.right, parent: -1, low: len(s.bound)}
		stamp := int32(id + 1)
		for k := f.lo; k < f.hi; k++ {
			local[k], seen[k] = k-f.lo, stamp
		}
		var inherited [2][]int32
		for c, child := range [2]int32{f.left, f.right} {
			if child < 0 {
				continue
			}
			s.fronts[child].parent = int32(id)
			rows := s.bound[s.fronts[child].low:s.fronts[child].high]
			for len(rows) > 0 && rows[0] < f.hi {
				rows = rows[1:]
			}
			for _, r := range rows {
				seen[r] = stamp
			}
			inherited[c] = rows
		}
		fresh = fresh[:0]
		for _, e := range s.entries[s.start[f.lo]:s.start[f.hi]] {
			if seen[e.row] != stamp {
				seen[e.row] = stamp
				fresh = append(fresh, e.row)
			}
		}
		slices.Sort(fresh)
		s.bound = merge(s.bound, inherited[0], inherited[1], fresh)
		f.high = len(s.bound)
		s.target = slices.Grow(s.target, f.border())[:f.high]

		p, b := f.pivots(), f.border()
		for i, r := range s.bound[f.low:f.high] {
			local[r] = int32(p + i)
		}
		for _, child := range [2]int32{f.left, f.right} {
			if child < 0 {
				continue
			}
			c := &s.fronts[child]
			for i := c.low; i < c.high; i++ {
				s.target[i] = local[s.bound[i]]
			}
		}
		for e := s.start[f.lo]; e < s.start[f.hi]; e++ {
			s.entries[e].row = local[s.entries[e].row]
		}

		g := shapeOf(p, b)
		s.panel = max(s.panel, g.rows*g.slots)
		f.panel = s.nnz
		s.nnz += p*(p+1)/2 + p*b
		for k := range p {
			m := float64(p + b - k)
			f.flops += m * m
		}
		s.flops += f.flops
	}
	for id := len(s.fronts) - 1; id >= 0; id-- {
		if f := &s.fronts[id]; f.parent >= 0 {
			f.depth = s.fronts[f.parent].depth + 1
		}
	}
}

// merge appends the union of three increasing lists, of which c has nothing in
// common with the others.
func merge(dst, a, b, c []int32) []int32 {
	for len(a) > 0 || len(b) > 0 || len(c) > 0 {
		least := int32(1<<31 - 1)
		if len(a) > 0 {
			least = a[0]
		}
		if len(b) > 0 {
			least = min(least, b[0])
		}
		if len(c) > 0 {
			least = min(least, c[0])
		}
		dst = append(dst, least)
		if len(a) > 0 && a[0] == least {
			a = a[1:]
		}
		if len(b) > 0 && b[0] == least {
			b = b[1:]
		}
		if len(c) > 0 && c[0] == least {
			c = c[1:]
		}
	}
	return dst
}
