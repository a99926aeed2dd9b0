package nested

import "unsafe"

// Stats describes the size of a factorisation.
type Stats struct {
	Fronts       int     // dense matrices in the tree
	LargestFront int     // order of the largest
	NonZeros     int     // entries of L and D
	Flops        float64 // additions and multiplications of the elimination
	Delayed      int     // times that a pivot was put off to a parent front
	Bytes        int     // held by the factor, working storage included
}

// Stats predicts the size of a factor in which no pivot is delayed; Bytes counts
// L and D and the analysis only.
func (s *Symbolic) Stats() Stats {
	st := Stats{Fronts: len(s.fronts), NonZeros: s.nnz, Flops: s.flops}
	for id := range s.fronts {
		f := &s.fronts[id]
		st.LargestFront = max(st.LargestFront, f.pivots()+f.border())
	}
	st.Bytes = 8*s.nnz + s.bytes()
	return st
}

func (s *Symbolic) bytes() int {
	return int(unsafe.Sizeof(front{}))*len(s.fronts) + 4*(cap(s.bound)+cap(s.target)+len(s.start)+len(s.order)) +
		8*len(s.entries) + 8*len(s.ptr) + 4*len(s.adj)
}

// Stats returns what the last factorisation took.
func (f *Factor) Stats() Stats {
	st := f.s.Stats()
	st.Bytes += 8*len(f.values) + 4*len(f.places) + len(f.outlives) +
		int(unsafe.Sizeof(schur{}))*len(f.schurs) + int(unsafe.Sizeof(part{}))*len(f.parts) +
		8*(cap(f.x)+cap(f.y)+cap(f.r)+cap(f.low)+f.pool.all)
	for _, w := range f.workers {
		st.Bytes += 8 * (w.stacks[0].size() + w.stacks[1].size() + cap(w.panel) + cap(w.scaled) + cap(w.elimination.w))
	}
	if !f.indefinite {
		return st
	}
	st.NonZeros, st.Flops = 0, 0
	for id := range f.parts {
		fr, pt := &f.s.fronts[id], &f.parts[id]
		m := len(pt.places) + fr.border()
		st.LargestFront = max(st.LargestFront, m)
		st.Delayed += len(pt.places) - pt.n
		for k := range pt.n {
			st.NonZeros += m - k
			st.Flops += float64(m-k) * float64(m-k)
		}
		st.Bytes += len(pt.pair)
		if len(pt.places) > fr.pivots() {
			st.Bytes += 4*cap(pt.places) + 8*cap(pt.rows)
		}
	}
	return st
}
