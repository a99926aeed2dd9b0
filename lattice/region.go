package lattice

import "fmt"

// A Region says which cells of a block exist. Cell (n, i) lies between the
// slices n and n+1 and the sites i and i+1; on a periodic axis the last cell
// closes the ring. Events, links and sites of a region count with the share of
// the existing cells around them, so that a rim, of whatever shape, gets the
// natural condition.
type Region struct {
	block Block
	cells []bool // time links × space links
}

// NewRegion returns the cells of b whose centre is inside; a nil function takes
// them all. It is an error if there is none.
func NewRegion(b Block, inside func(centre Event) bool) (*Region, error) {
	if _, err := NewBlock(b.Time, b.Space); err != nil {
		return nil, err
	}
	r := &Region{block: b, cells: make([]bool, b.Time.Links()*b.Space.Links())}
	any := false
	for n := range b.Time.Links() {
		for i := range b.Space.Links() {
			in := inside == nil || inside(Event{T: b.Time.Between(n), X: b.Space.Between(i)})
			r.cells[n*b.Space.Links()+i] = in
			any = any || in
		}
	}
	if !any {
		return nil, fmt.Errorf("lattice: region without a cell on the block from %v to %v; want at least one centre inside", b.At(0, 0), b.At(b.Slices()-1, b.Sites()-1))
	}
	return r, nil
}

// Block returns the block of the region.
func (r *Region) Block() Block { return r.block }

// Cell reports whether cell (n, i) exists; cells beyond an end do not.
func (r *Region) Cell(n, i int) bool {
	n, ok := wrapLink(r.block.Time, n)
	if !ok {
		return false
	}
	i, ok = wrapLink(r.block.Space, i)
	return ok && r.cells[n*r.block.Space.Links()+i]
}

func wrapLink(a Axis, l int) (int, bool) {
	if a.Periodic {
		return (l + a.Sites) % a.Sites, true
	}
	return l, l >= 0 && l < a.Links()
}

// share returns part for each of the given cells that exists.
func (r *Region) share(part float64, cells ...[2]int) float64 {
	var sum float64
	for _, c := range cells {
		if r.Cell(c[0], c[1]) {
			sum += part
		}
	}
	return sum
}

// Event returns the weight of event (n, i): a quarter for each existing cell
// around it. An event of weight zero is not in the region.
func (r *Region) Event(n, i int) float64 {
	return r.share(0.25, [2]int{n - 1, i - 1}, [2]int{n - 1, i}, [2]int{n, i - 1}, [2]int{n, i})
}

// Inside reports whether event (n, i) is in the region: at a corner of a cell
// that exists.
func (r *Region) Inside(n, i int) bool { return r.Event(n, i) > 0 }

// TimeLink returns the weight of the link from event (n, i) to (n+1, i): half
// for each existing cell beside it.
func (r *Region) TimeLink(n, i int) float64 {
	return r.share(0.5, [2]int{n, i - 1}, [2]int{n, i})
}

// SpaceLink returns the weight of the link from event (n, i) to (n, i+1): half
// for each existing cell beside it.
func (r *Region) SpaceLink(n, i int) float64 {
	return r.share(0.5, [2]int{n - 1, i}, [2]int{n, i})
}
