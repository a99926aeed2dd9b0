package minimize

import (
	"context"
	"runtime"
	"sync"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// shots sees a least-residual problem through its march. Its unknowns are
// the free values of pairs of adjacent slices, the nodes; from each the march
// gives the slices up to the next node and its arrival there, so that the field
// equation holds between nodes whatever the unknowns are. What is left to solve
// are the misfits: the pinned values that the march passes, and the arrivals,
// which must agree with the nodes. With one node it is shooting, with several
// multiple shooting [Bock & Plitt 1984, IFAC Proc. 17(2), 1603].
type shots struct {
	*problem
	st      *stepper
	nodes   []node
	size    int // values of a slice
	misfits int
}

// A node is a pair of adjacent slices with the segment that starts there.
type node struct {
	slice  int   // the first of the pair
	after  int   // slice of the next node; the number of slices if there is none
	free   []int // unknown values of the pair, counted from its first value
	rows   []misfit
	arrive [2]field.Slice // where the march meets the next node

	jac []float64 // ∂(marched value of row r)/∂(unknown u) at u·len(rows) + r
	res []float64 // the misfits
}

// A misfit is a marched value less what it should be.
type misfit struct {
	at   int // of the segment's slices, counted from the first value of the node
	next int // the unknown of the next node it should equal, −1 if a pin
	want float64
}

// newShots returns the problem with nodes at the given slices, the first of
// which is 0.
func newShots(p *problem, s *action.Discrete, lifted map[int]bool, slices []int) *shots {
	b := s.Block()
	sh := &shots{problem: p, st: newStepper(s, p.free, lifted), size: p.h.Components * b.Sites()}
	known := func(e int) (float64, bool) { k, v := p.free.At(e); return v, k < 0 }
	unequal := func(e int) bool { // the march does not set it
		n, _, i := p.h.Place(e)
		if i == 0 && s.HeldLeft() || i == b.Sites()-1 && s.HeldRight() {
			return true
		}
		for _, d := range sh.st.ahead[n] {
			if d == e%sh.size {
				return true
			}
		}
		return false
	}
	for j, n := range slices {
		nd := node{slice: n, after: b.Slices()}
		if j+1 < len(slices) {
			nd.after = slices[j+1]
		}
		for k := range 2 * sh.size {
			if _, fixed := known(n*sh.size + k); !fixed {
				nd.free = append(nd.free, k)
			}
		}
		sh.nodes = append(sh.nodes, nd)
	}
	for j := range sh.nodes {
		nd := &sh.nodes[j]
		end := nd.after
		if j+1 < len(sh.nodes) {
			end += 2
			for k := range nd.arrive {
				nd.arrive[k] = p.h.Slice(nd.after + k).Clone()
			}
		}
		matched := 0
		for e := (nd.slice + 2) * sh.size; e < end*sh.size; e++ {
			v, fixed := known(e)
			m := misfit{at: e - nd.slice*sh.size, next: -1, want: v}
			if e >= nd.after*sh.size && !fixed {
				m.next = matched
				matched++
			} else if !fixed || unequal(e) {
				continue
			}
			nd.rows = append(nd.rows, m)
		}
		sh.misfits += len(nd.rows)
	}
	return sh
}

// fill allocates the misfits and their Jacobians.
func (sh *shots) fill() {
	for j := range sh.nodes {
		nd := &sh.nodes[j]
		nd.res = make([]float64, len(nd.rows))
		nd.jac = make([]float64, len(nd.rows)*len(nd.free))
	}
}

// slice returns slice n of the segment of a node in the history h.
func (nd *node) at(h *field.History, n int) field.Slice {
	if n >= nd.after {
		return nd.arrive[n-nd.after]
	}
	return h.Slice(n)
}

// last returns the last slice of the segment.
func (nd *node) last() int {
	if nd.arrive[0].Empty() {
		return nd.after - 1
	}
	return nd.after + 1
}

// shoot marches all segments of h and returns the sum of the squared misfits.
func (sh *shots) shoot(h *field.History) (sum float64) {
	for j := range sh.nodes {
		nd := &sh.nodes[j]
		for n := nd.slice + 1; n < nd.last(); n++ {
			sh.st.step(nd.at(h, n+1), nd.at(h, n), nd.at(h, n-1), n)
		}
		for r, m := range nd.rows {
			want := m.want
			if m.next >= 0 {
				to := &sh.nodes[j+1]
				want = h.Data[to.slice*sh.size+to.free[m.next]]
			}
			n, i := nd.slice+m.at/sh.size, m.at%sh.size
			v := nd.at(h, n).Data[i] - want
			nd.res[r] = v
			sum += v * v
		}
	}
	return sum
}

// linearise fills the Jacobians by tangent marches, around the history that was
// shot last.
func (sh *shots) linearise(ctx context.Context, h *field.History) {
	type job struct {
		nd *node
		u  int
	}
	jobs := make(chan job)
	var wg sync.WaitGroup
	for range runtime.GOMAXPROCS(0) {
		wg.Add(1)
		go func() {
			defer wg.Done()
			st := sh.st.clone()
			var eta [3]field.Slice
			for k := range eta {
				eta[k] = field.NewSlice(h.Components, h.Block.Sites())
			}
			for w := range jobs {
				sh.column(st, h, w.nd, w.u, &eta)
			}
		}()
	}
	for j := range sh.nodes {
		for u := range sh.nodes[j].free {
			if ctx.Err() == nil {
				jobs <- job{&sh.nodes[j], u}
			}
		}
	}
	close(jobs)
	wg.Wait()
}

// column writes the derivative by unknown u of the node.
func (sh *shots) column(st *stepper, h *field.History, nd *node, u int, eta *[3]field.Slice) {
	for _, e := range eta {
		e.Zero()
	}
	k := nd.free[u]
	eta[k/sh.size].Data[k%sh.size] = 1
	column := nd.jac[u*len(nd.rows):][:len(nd.rows)]
	before, now, next := eta[0], eta[1], eta[2]
	r := 0
	for n := nd.slice + 1; n < nd.last(); n++ {
		st.tangent(next, now, before, nd.at(h, n), n)
		for ; r < len(nd.rows) && nd.rows[r].at/sh.size == n+1-nd.slice; r++ {
			column[r] = next.Data[nd.rows[r].at%sh.size]
		}
		before, now, next = now, next, before
	}
}
