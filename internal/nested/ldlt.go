package nested

// LDLT factorises a symmetric matrix that may be indefinite: PAPᵀ = LDLᵀ with D
// made of blocks of order 1 and 2. values and workers are as for Cholesky.
//
// It returns a factor of a singular matrix too. The pivots that are left at the
// root and vanish, being below 1e-13·‖A‖ with ‖A‖ = max Σ|aᵢⱼ|, are replaced by small
// ones; Nullity counts them and Inertia is unknown. An eigenvalue that small may
// count as zero. The error is a *NotFinite.
func (s *Symbolic) LDLT(values []float64, workers int) (*Factor, error) {
	f := newFactor(s, workers, true)
	f.parts = make([]part, len(s.fronts))
	if err := f.Refactor(values); err != nil {
		return nil, err
	}
	return f, nil
}

// part is what the elimination of a front of an indefinite matrix has left in
// the factor. The layout of rows is that of storePanel with the pivots that were
// put off counted among the columns; of a pivot of order 2 the two diagonal
// entries and the entry of L between them hold the block of D.
type part struct {
	places    []int32   // of all candidates, first those that were eliminated
	rows      []float64 // of Lᵀ and D
	pair      []bool    // pivot k is the first of a block of order 2
	n         int       // number eliminated
	perturbed int       // number of vanishing pivots replaced
}

// ldlt eliminates front id as far as its pivots are good, and puts the others
// off to the parent [Duff & Reid 1983, ACM Trans. Math. Softw. 9, 302].
func (w *worker) ldlt(f *Factor, id int) error {
	g, out := w.assemble(f, id, true)
	fr := &f.s.fronts[id]
	pt := &f.parts[id]
	own, q := fr.pivots(), g.pivots

	if q == own {
		pt.places = f.places[fr.lo:fr.hi:fr.hi]
	} else {
		pt.places = grown(pt.places, q)
	}
	copy(pt.places, w.places)

	e := &w.elimination
	e.begin(&g, w.panel, pt.places, f.tiny)
	pt.n = e.eliminate()
	pt.perturbed = 0
	if fr.parent < 0 {
		pt.perturbed = q - pt.n
		d := f.norm * perturbation
		if d == 0 { // the matrix is zero
			d = 1
		}
		e.perturb(pt.n, d)
		pt.n = q
	}
	pt.pair = append(pt.pair[:0], e.pair[:pt.n]...)

	boundary := w.panel[g.rows*g.pivotSlots:]
	w.scaled = grown(w.scaled, g.rows*g.stride)
	e.scale(w.scaled, boundary, pt.n)
	g.subtractProduct(boundary, w.scaled, out, pt.n)

	size := 0
	for k := range pt.n {
		size += q - k + g.border
	}
	if room := own*(own+1)/2 + own*g.border; size <= room {
		pt.rows = f.store[fr.panel:][:size:size]
	} else {
		pt.rows = grown(pt.rows, size)
	}
	e.store(pt.rows, pt.n)

	if d := q - pt.n; d > 0 {
		c := &f.schurs[id]
		c.put = append(c.put, pt.places[pt.n:]...)
		if size := d * (d + g.border); c.lent {
			c.off = f.pool.take(size)
		} else {
			c.off = w.stacks[fr.depth&1].take(size)
		}
		for i := range d {
			e.row(c.off[i*(d+g.border):], pt.n+i, pt.n)
		}
	}
	return nil
}

// Inertia returns the number of positive, negative and zero eigenvalues, by
// Sylvester's law the same as those of D. It is known unless vanishing pivots had
// to be replaced; then zero counts these and the other two numbers are what the
// good pivots say.
func (f *Factor) Inertia() (positive, negative, zero int, known bool) {
	if !f.indefinite {
		return f.s.n, 0, 0, true
	}
	for id := range f.parts {
		pt := &f.parts[id]
		m := len(pt.places) + f.s.fronts[id].border()
		zero += pt.perturbed
		at := 0
		for k := 0; k < pt.n-pt.perturbed; k++ {
			switch {
			case pt.pair[k]:
				// A block of order 2 is taken only when it is indefinite or
				// its determinant is far from cancelling: det tells the signs.
				a, b, c := pt.rows[at], pt.rows[at+1], pt.rows[at+m-k]
				switch {
				case a*c < b*b:
					positive++
					negative++
				case a > 0:
					positive += 2
				default:
					negative += 2
				}
				at += m - k
				k++
			case pt.rows[at] > 0:
				positive++
			default:
				negative++
			}
			at += m - k
		}
	}
	return positive, negative, zero, zero == 0
}

// Nullity returns the number of vanishing pivots that were replaced: the
// dimension of the null space to working accuracy, 0 for a good factor.
func (f *Factor) Nullity() int {
	n := 0
	for id := range f.parts {
		n += f.parts[id].perturbed
	}
	return n
}
