package nested

import (
	"fmt"
	"math"
	"slices"
)

// Factor is a factorisation PAPᵀ = LDLᵀ, with L unit lower triangular and D
// diagonal (Cholesky) or made of blocks of order 1 and 2 (LDLT). Its methods use
// working storage of its own: they must not be called at the same time.
type Factor struct {
	s          *Symbolic
	indefinite bool
	values     []float64 // of the matrix, for refinement
	norm       float64   // of the matrix, max Σ|aᵢⱼ|
	store      []float64 // rows of Lᵀ and D, see storePanel
	tasks      []task
	outlives   []bool // fronts whose result is passed on to another task
	schurs     []schur
	workers    []*worker
	pool       pool
	places     []int32 // 0, 1 …; permuted within the fronts of an indefinite matrix
	ready      bool

	// Of an indefinite matrix.
	parts []part
	tiny  float64 // pivots of this size count as zero

	one  [2][]float64 // the arguments of Solve
	x, y []float64    // workspace of solves, in the order of elimination and of one front
	r    []float64    // residual
	low  []float64    // and what its sums have lost to rounding
}

func newFactor(s *Symbolic, workers int, indefinite bool) *Factor {
	f := &Factor{
		s:          s,
		indefinite: indefinite,
		values:     reserve(len(s.adj)),
		store:      reserve(s.nnz),
		tasks:      plan(s, max(workers, 1)),
		outlives:   make([]bool, len(s.fronts)),
		schurs:     make([]schur, len(s.fronts)),
	}
	f.places = make([]int32, s.n)
	for k := range f.places {
		f.places[k] = int32(k)
	}
	for i := range f.tasks {
		f.outlives[f.tasks[i].last] = true
	}
	for range min(max(workers, 1), len(f.tasks)) {
		f.workers = append(f.workers, new(worker))
	}
	return f
}

// Refactor factorises another matrix of the same pattern in place of the old
// one. It reuses all storage and gives the same bits as a fresh factorisation.
// After an error the factor must not be used until a later call succeeds.
func (f *Factor) Refactor(values []float64) error {
	if len(values) != len(f.values) {
		panic("nested: number of values differs from the pattern's entries")
	}
	f.ready = false
	copy(f.values, values)
	if err := f.measure(); err != nil {
		return err
	}
	for _, w := range f.workers {
		w.stacks[0].top, w.stacks[1].top = height{}, height{}
	}
	for id := range f.schurs { // a failed factorisation leaves some behind
		if c := &f.schurs[id]; c.lent {
			f.pool.give(c.matrix)
			f.pool.give(c.off)
		}
		f.schurs[id] = schur{put: f.schurs[id].put[:0]}
	}
	eliminate := (*worker).cholesky
	if f.indefinite {
		eliminate = (*worker).ldlt
	}
	err := f.run(eliminate)
	f.ready = err == nil
	return err
}

// NotFinite is the error of a factorisation whose values hold an infinity or NaN.
type NotFinite struct {
	Entry int // index of the value
	Value float64
}

func (e *NotFinite) Error() string {
	return fmt.Sprintf("nested: value %d of the matrix is %v, want finite numbers", e.Entry, e.Value)
}

// measure checks the values and finds the norm of the matrix, max Σ|aᵢⱼ|.
func (f *Factor) measure() error {
	f.x = grown(f.x, f.s.n)
	sum := f.x
	clear(sum)
	s := f.s
	for i := range s.n {
		for e := s.ptr[i]; e < s.ptr[i+1]; e++ {
			v := math.Abs(f.values[e])
			if !(v <= math.MaxFloat64) {
				return &NotFinite{e, f.values[e]}
			}
			sum[i] += v
			if j := int(s.adj[e]); j != i {
				sum[j] += v
			}
		}
	}
	f.norm = slices.Max(sum)
	f.tiny = vanishing * f.norm
	return nil
}

// LogDet returns log|det A| and the sign of det A: −Inf and 0 if vanishing pivots
// had to be replaced.
func (f *Factor) LogDet() (logAbs float64, sign int) {
	if f.Nullity() > 0 {
		return math.Inf(-1), 0
	}
	sign = 1
	for id := range f.s.fronts {
		pt := f.part(id)
		rows, pair := pt.rows, pt.pair
		m := len(pt.places) + f.s.fronts[id].border()
		for k := 0; k < pt.n; k++ {
			d := rows[0]
			if pair != nil && pair[k] {
				below := rows[m-k:]
				d = d*below[0] - rows[1]*rows[1]
				rows = below
				k++
			}
			rows = rows[m-k:]
			logAbs += math.Log(math.Abs(d))
			if d < 0 {
				sign = -sign
			}
		}
	}
	return logAbs, sign
}
