package action

// A tridiagonal is a symmetric, diagonally dominant tridiagonal matrix, cyclic
// on a ring, with its working memory. Elimination without pivoting is stable
// for it [Golub & Van Loan 2013, Matrix Computations, §4.3].
type tridiagonal struct {
	diagonal []float64
	above    []float64 // entry (i, i+1); on a ring the last is (n−1, 0)
	pivot    []float64
	around   []float64 // solution for the column that a ring adds
	ring     bool
}

func newTridiagonal(n int) *tridiagonal {
	row := func() []float64 { return make([]float64, n) }
	return &tridiagonal{diagonal: row(), above: row(), pivot: row(), around: row()}
}

// subtractLinks subtracts scale times the second difference with the given link
// strengths from the matrix, whose diagonal is set already.
func (m *tridiagonal) subtractLinks(links []float64, ring bool, scale float64) {
	n := len(m.diagonal)
	clear(m.above)
	m.ring = ring
	for i, b := range links {
		v := scale * b
		j := i + 1
		if j == n {
			j = 0
		}
		m.diagonal[i] += v
		m.diagonal[j] += v
		m.above[i] -= v
	}
}

// fix makes unknown i, the first or last, equal to v and moves its coupling to
// the right-hand side f.
func (m *tridiagonal) fix(i int, v float64, f []float64) {
	if i == 0 {
		f[1] -= m.above[0] * v
		m.above[0] = 0
	} else {
		f[i-1] -= m.above[i-1] * v
		m.above[i-1] = 0
	}
	m.diagonal[i], f[i] = 1, v
}

// solve overwrites f with the solution.
func (m *tridiagonal) solve(f []float64) {
	n := len(f)
	if !m.ring {
		m.eliminate(n, f)
		return
	}
	if n == 2 { // both links join the same pair
		a, b, c := m.diagonal[0], m.above[0]+m.above[1], m.diagonal[1]
		det := a*c - b*b
		f[0], f[1] = (c*f[0]-b*f[1])/det, (a*f[1]-b*f[0])/det
		return
	}
	// Split off the last unknown z: the others solve T y = f − z·q with
	// q = (corner, 0, …, 0, above[n−2]).
	last := n - 1
	q := m.around[:last]
	clear(q)
	q[0] += m.above[last]
	q[last-1] += m.above[last-1]
	m.eliminate(last, f[:last])
	m.eliminate(last, q)
	corner, side := m.above[last], m.above[last-1]
	z := (f[last] - corner*f[0] - side*f[last-1]) / (m.diagonal[last] - corner*q[0] - side*q[last-1])
	for i := range q {
		f[i] -= z * q[i]
	}
	f[last] = z
}

// eliminate solves with the leading n × n part.
func (m *tridiagonal) eliminate(n int, f []float64) {
	m.pivot[0] = m.diagonal[0]
	for i := 1; i < n; i++ {
		r := m.above[i-1] / m.pivot[i-1]
		m.pivot[i] = m.diagonal[i] - r*m.above[i-1]
		f[i] -= r * f[i-1]
	}
	f[n-1] /= m.pivot[n-1]
	for i := n - 2; i >= 0; i-- {
		f[i] = (f[i] - m.above[i]*f[i+1]) / m.pivot[i]
	}
}
