package nested

// Solve sets dst to the solution of Ax = b. dst and b may be the same slice. It
// panics if their lengths are not the number of unknowns or if the last
// factorisation failed. It allocates nothing after the first call.
func (f *Factor) Solve(dst, b []float64) {
	f.one[0], f.one[1] = dst, b
	f.SolveMany(f.one[:1], f.one[1:])
	f.one[0], f.one[1] = nil, nil
}

// SolveMany solves for several right-hand sides at once, which reads the factor
// only once: dst[i] is the solution for b[i], to the same bits as by Solve.
func (f *Factor) SolveMany(dst, b [][]float64) {
	if len(dst) != len(b) {
		panic("nested: numbers of solutions and of right-hand sides differ")
	}
	for i := range b {
		f.check(dst[i])
		f.check(b[i])
	}
	if !f.ready {
		panic("nested: the last factorisation failed")
	}
	n := f.s.n
	f.x = grown(f.x, n*len(b))
	for i, from := range b {
		x := f.x[n*i : n*(i+1)]
		for k, j := range f.s.order {
			x[k] = from[j]
		}
	}
	for id := range f.s.fronts {
		f.sweep(id, len(b), false)
	}
	for id := len(f.s.fronts) - 1; id >= 0; id-- {
		f.sweep(id, len(b), true)
	}
	for i, to := range dst {
		x := f.x[n*i : n*(i+1)]
		for k, j := range f.s.order {
			to[j] = x[k]
		}
	}
}

func (f *Factor) check(x []float64) {
	if len(x) != f.s.n {
		panic("nested: length of a vector differs from the number of unknowns")
	}
}

// part returns what the elimination of front id has left in the factor.
func (f *Factor) part(id int) part {
	if f.indefinite {
		return f.parts[id]
	}
	fr := &f.s.fronts[id]
	return part{places: f.places[fr.lo:fr.hi], rows: f.store[fr.panel:], n: fr.pivots()}
}

// sweep solves with the rows of one front, forward or back, for the first count
// vectors of f.x: it gathers the unknowns of the front, pivots first, and puts
// them back.
func (f *Factor) sweep(id, count int, back bool) {
	pt := f.part(id)
	fr := &f.s.fronts[id]
	bound := f.s.bound[fr.low:fr.high]
	q := len(pt.places)
	f.y = grown(f.y, q+len(bound))
	y := f.y
	for i := range count {
		x := f.x[f.s.n*i : f.s.n*(i+1)]
		for i, r := range pt.places {
			y[i] = x[r]
		}
		for i, r := range bound {
			y[q+i] = x[r]
		}
		if back {
			pt.backward(y)
		} else {
			pt.forward(y)
		}
		for i, r := range pt.places {
			x[r] = y[i]
		}
		for i, r := range bound {
			x[r] = y[q+i]
		}
	}
}

// forward replaces the right-hand side y of the front's rows by the solution of
// LDz = y and updates the rest of y. It takes two rows at a time where it can.
func (pt *part) forward(y []float64) {
	rows, m := pt.rows, len(y)
	for k := 0; k < pt.n; k++ {
		v, r := y[k], rows[:m-k]
		rows = rows[m-k:]
		if k+1 == pt.n {
			subtract(y[k+1:], r[1:], v)
			y[k] = v / r[0]
			break
		}
		w, s := y[k+1], rows[:m-k-1]
		rows = rows[m-k-1:]
		if pt.pair != nil && pt.pair[k] {
			subtract2(y[k+2:], r[2:], s[1:], v, w)
			ab, cb := r[0]/r[1], s[0]/r[1]
			t := 1 / (ab*cb - 1) / r[1]
			y[k], y[k+1] = t*(cb*v-w), t*(ab*w-v)
		} else if pt.pair != nil && pt.pair[k+1] {
			// The second row begins a block of order 2: give it back.
			rows = pt.rows[(k+1)*m-k*(k+1)/2:]
			subtract(y[k+1:], r[1:], v)
			y[k] = v / r[0]
			continue
		} else {
			w -= v * r[1]
			subtract2(y[k+2:], r[2:], s[1:], v, w)
			y[k], y[k+1] = v/r[0], w/s[0]
		}
		k++
	}
}

// backward solves Lᵀx = y for the front's rows.
func (pt *part) backward(y []float64) {
	m := len(y)
	end := pt.n*m - pt.n*(pt.n-1)/2
	for k := pt.n - 1; k >= 0; k-- {
		row := pt.rows[end-(m-k) : end]
		end -= m - k
		first := 1
		if pt.pair != nil && pt.pair[k] {
			first = 2
		}
		y[k] -= dot(row[first:], y[k+first:])
	}
}

// subtract sets y −= v·r.
func subtract(y, r []float64, v float64) {
	y = y[:len(r)]
	for j, u := range r {
		y[j] -= v * u
	}
}

// subtract2 sets y −= v·r + w·s.
func subtract2(y, r, s []float64, v, w float64) {
	y, s = y[:len(r)], s[:len(r)]
	for j, u := range r {
		y[j] -= v*u + w*s[j]
	}
}

// dot keeps four sums, so that additions need not wait for each other.
func dot(x, y []float64) float64 {
	var a, b, c, d float64
	y = y[:len(x)]
	for len(x) >= 4 && len(y) >= 4 {
		a += x[0] * y[0]
		b += x[1] * y[1]
		c += x[2] * y[2]
		d += x[3] * y[3]
		x, y = x[4:], y[4:]
	}
	for j, u := range x {
		a += u * y[j]
	}
	return (a + b) + (c + d)
}
