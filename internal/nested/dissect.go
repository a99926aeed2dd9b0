package nested

import "math"

// leafSize is the number of unknowns below which a region is no longer cut but
// eliminated as one front. Larger leaves waste arithmetic on zeros, smaller ones
// time on bookkeeping; measured to be flat between 12 and 32.
const leafSize = 20

// site is an unknown on its way through the dissection.
type site struct{ row, col, id int32 }

// node is a part of the dissection tree: the unknowns order[lo:hi] separate the
// two regions of its children, or are all of a leaf's region.
type node struct {
	lo, hi      int32
	left, right int32 // −1: none
}

// box is the part of the grid that a region may occupy: from row0 up to but not
// including row1, and the same for columns. A wrapped axis is still a ring.
type box struct {
	row0, row1, col0, col1 int32
	wrapRow, wrapCol       bool
}

func (b *box) holds(r, c int32) bool {
	return b.row0 <= r && r < b.row1 && b.col0 <= c && c < b.col1
}

// dissection cuts the grid recursively [George 1973, SIAM J. Numer. Anal. 10, 345].
// The coordinates say where to cut, the entries of the matrix say which unknowns
// beside the cut must join the separator.
type dissection struct {
	p        *Pattern
	row, col reach
	sites    []site
	spare    []site
	taken    []bool // unknowns in a separator or in Last
	mark     []uint8
	count    []int32 // unknowns in each row or column of the region
	nodes    []node  // children before parents
}

// reach says how far couplings go along an axis, the short way round if it is
// periodic. Only the longest may be relied on, but the usual length tells how
// thick a separator will be.
type reach struct {
	longest int32
	usual   int32 // exceeded by fewer than √N couplings
}

const (
	low  = 1 // has a neighbour above the cut
	high = 2 // has a neighbour below the cut
)

// dissect returns the tree, children before parents, and the order of elimination.
func dissect(p *Pattern) (nodes []node, order []int32) {
	d := &dissection{
		p:     p,
		taken: make([]bool, p.N),
		mark:  make([]uint8, p.N),
		count: make([]int32, max(p.Rows, p.Cols)+1),
		sites: make([]site, 0, p.N),
		spare: make([]site, p.N),
		nodes: make([]node, 0, p.N/leafSize*4+1),
	}
	for _, i := range p.Last {
		d.taken[i] = true
	}
	for i := range p.N {
		if !d.taken[i] {
			d.sites = append(d.sites, site{p.Row[i], p.Col[i], int32(i)})
		}
	}
	d.measureReach()
	root := d.cut(0, int32(len(d.sites)), box{0, int32(p.Rows), 0, int32(p.Cols), p.WrapRow, p.WrapCol})

	order = make([]int32, 0, p.N)
	for _, s := range d.sites {
		order = append(order, s.id)
	}
	order = append(order, p.Last...)
	d.nodes[root].hi = int32(p.N)
	return d.nodes, order
}

func (d *dissection) measureReach() {
	p := d.p
	rows, cols := make([]int32, p.Rows), make([]int32, p.Cols)
	for i := range p.N {
		if d.taken[i] {
			continue
		}
		for _, j := range p.Adj[p.Ptr[i]:p.Ptr[i+1]] {
			if d.taken[j] {
				continue
			}
			r, c := p.Row[i]-p.Row[j], p.Col[i]-p.Col[j]
			r, c = max(r, -r), max(c, -c)
			if p.WrapRow {
				r = min(r, int32(p.Rows)-r)
			}
			if p.WrapCol {
				c = min(c, int32(p.Cols)-c)
			}
			rows[r]++
			cols[c]++
		}
	}
	d.row, d.col = reachOf(rows, p.N), reachOf(cols, p.N)
}

// reachOf takes the number of couplings of each length.
func reachOf(couplings []int32, n int) (r reach) {
	longer, few := 0, int(math.Sqrt(float64(n)))
	for k := len(couplings) - 1; k >= 0; k-- {
		if r.longest == 0 && couplings[k] > 0 {
			r.longest = int32(k)
		}
		if longer += int(couplings[k]); longer >= few {
			r.usual = int32(k)
			break
		}
	}
	return r
}

// cut dissects sites[lo:hi], which lie in b, and returns the index of its node.
func (d *dissection) cut(lo, hi int32, b box) int32 {
	if hi-lo > leafSize {
		b = d.shrink(lo, hi, b)
		// The separator of a cut across an axis holds about its reach times the
		// extent of the other axis.
		height, width := int64(b.row1-b.row0), int64(b.col1-b.col0)
		byRow := int64(max(d.row.usual, 1))*width <= int64(max(d.col.usual, 1))*height
		for range 2 {
			if at, ok := d.place(lo, hi, &b, byRow); ok {
				return d.split(lo, hi, b, byRow, at)
			}
			byRow = !byRow
		}
	}
	d.nodes = append(d.nodes, node{lo, hi, -1, -1})
	return int32(len(d.nodes) - 1)
}

// shrink fits the open axes of the box to the unknowns in it.
func (d *dissection) shrink(lo, hi int32, b box) box {
	row0, col0 := int32(math.MaxInt32), int32(math.MaxInt32)
	row1, col1 := int32(-1), int32(-1)
	for _, s := range d.sites[lo:hi] {
		row0, row1 = min(row0, s.row), max(row1, s.row)
		col0, col1 = min(col0, s.col), max(col1, s.col)
	}
	if !b.wrapRow {
		b.row0, b.row1 = row0, row1+1
	}
	if !b.wrapCol {
		b.col0, b.col1 = col0, col1+1
	}
	return b
}

// place chooses the first coordinate of the upper part. A ring is cut in two
// equal arcs, which makes the direct distance within an arc the shortest one and
// so keeps every coupling within reach of a later cut.
func (d *dissection) place(lo, hi int32, b *box, byRow bool) (at int32, ok bool) {
	from, to, reach, ring := b.col0, b.col1, d.col.usual, b.wrapCol
	if byRow {
		from, to, reach, ring = b.row0, b.row1, d.row.usual, b.wrapRow
	}
	if to-from < 2 {
		return 0, false
	}
	if ring {
		return from + (to-from)/2, true
	}
	h := d.count[:to-from]
	clear(h)
	for _, s := range d.sites[lo:hi] {
		if byRow {
			h[s.row-from]++
		} else {
			h[s.col-from]++
		}
	}
	// A separator of s unknowns with the remaining parts out of balance by a
	// fraction f costs like s·(1 + 4f²): a lopsided cut leaves a longer one to do.
	// Neither side may have less than a quarter, lest stencils as wide as the
	// region lead to slices; if no cut is that fair, the fairest is taken.
	total := float64(hi - lo)
	best, below := math.Inf(1), int32(0)
	fair, isFair := math.Inf(1), false
	var under, over int32 // unknowns within reach on either side
	for c := int32(0); c < min(reach, to-from); c++ {
		over += h[c]
	}
	for c := int32(1); c < to-from; c++ {
		below += h[c-1]
		under += h[c-1]
		over -= h[c-1]
		if c-1-reach >= 0 {
			under -= h[c-1-reach]
		}
		if c-1+reach < to-from {
			over += h[c-1+reach]
		}
		s, excess := under, 2*below-under // parts below and above without the separator
		if over < under {
			s, excess = over, 2*below+over
		}
		f := (float64(excess) - total) / total
		cost := (float64(s) + 0.5) * (1 + 4*f*f)
		uneven := math.Abs(float64(2*below) - total)
		switch {
		case uneven <= total/2 && (!isFair || cost < best):
			best, at, isFair = cost, from+c, true
		case !isFair && uneven < fair:
			fair, at = uneven, from+c
		}
	}
	return at, true
}

// split puts the unknowns below the cut first, those above next and the
// separator last, and dissects the two parts.
func (d *dissection) split(lo, hi int32, b box, byRow bool, at int32) int32 {
	p := d.p
	coordinate, reach, ring, from, to := p.Col, d.col.longest, b.wrapCol, b.col0, b.col1
	below, above := b, b
	if byRow {
		coordinate, reach, ring, from, to = p.Row, d.row.longest, b.wrapRow, b.row0, b.row1
		below.row1, above.row0 = at, at
		below.wrapRow, above.wrapRow = false, false
	} else {
		below.col1, above.col0 = at, at
		below.wrapCol, above.wrapCol = false, false
	}

	near := func(x int32) bool {
		return at-reach <= x && x < at+reach || ring && (x < from+reach || x >= to-reach)
	}

	// Mark both ends of every coupling that crosses, and keep the smaller set.
	sites := d.sites[lo:hi]
	var lows, highs int
	for _, s := range sites {
		x := s.col
		if byRow {
			x = s.row
		}
		if !near(x) {
			continue
		}
		for _, j := range p.Adj[p.Ptr[s.id]:p.Ptr[s.id+1]] {
			y := coordinate[j]
			if (x < at) == (y < at) || d.taken[j] || !b.holds(p.Row[j], p.Col[j]) {
				continue
			}
			u, v := s.id, j
			if x >= at {
				u, v = v, u
			}
			if d.mark[u] == 0 {
				d.mark[u] = low
				lows++
			}
			if d.mark[v] == 0 {
				d.mark[v] = high
				highs++
			}
		}
	}
	keep := uint8(low)
	if highs < lows {
		keep = high
	}
	n, up, end := 0, d.spare[:0], len(d.spare)
	for _, s := range sites {
		x := s.col
		if byRow {
			x = s.row
		}
		if near(x) {
			m := d.mark[s.id]
			d.mark[s.id] = 0
			if m == keep {
				d.taken[s.id] = true
				end--
				d.spare[end] = s
				continue
			}
		}
		switch {
		case x < at:
			sites[n] = s
			n++
		default:
			up = append(up, s)
		}
	}
	sep := d.spare[end:]
	mid := lo + int32(n)
	n += copy(sites[n:], up)
	first := lo + int32(n)
	for i := range sep {
		sites[n+i] = sep[len(sep)-1-i]
	}

	left, right := int32(-1), int32(-1)
	if mid > lo {
		left = d.cut(lo, mid, below)
	}
	if first > mid {
		right = d.cut(mid, first, above)
	}
	d.nodes = append(d.nodes, node{first, hi, left, right})
	return int32(len(d.nodes) - 1)
}
