package action

// A tridiagonal is a symmetric, diagonally dominant tridiagonal matrix, cyclic
// on a ring, and its factors. Elimination without pivoting is stable for it
// [Golub & Van Loan 2013, Matrix Computations, §4.3].
//
// Products are rounded before they are added, so that the bits are the same on
// every machine.
//
// Fill diagonal, then call subtractLinks, hold for known unknowns, and factor;
// solve may then be called any number of times.
type tridiagonal struct {
	diagonal []float64
	above    []float64 // entry (i, i+1); on a ring the last is (n−1, 0)
	ends     [2]float64
	ring     bool
	factored bool

	ratio   []float64 // above over pivot
	inverse []float64 // 1 over pivot
	around  []float64 // solution for the column that a ring adds
	schur   float64   // 1 over the last pivot of a ring
}

func newTridiagonal(n int) *tridiagonal {
	row := func() []float64 { return make([]float64, n) }
	return &tridiagonal{diagonal: row(), above: row(), ratio: row(), inverse: row(), around: row()}
}

// subtractLinks subtracts scale times the second difference with the given link
// strengths from the matrix, whose diagonal is set already.
func (m *tridiagonal) subtractLinks(links []float64, ring bool, scale float64) {
	n := len(m.diagonal)
	clear(m.above)
	m.ring = ring
	m.ends = [2]float64{}
	for i, b := range links {
		v := float64(scale * b)
		j := i + 1
		if j == n {
			j = 0
		}
		m.diagonal[i] += v
		m.diagonal[j] += v
		m.above[i] -= v
	}
	if ring && n == 2 { // both links join the same pair
		m.above[0] += m.above[1]
		m.ring = false
	}
}

// hold makes the first or last unknown known.
func (m *tridiagonal) hold(end int) {
	i, link := 0, 0
	if end == 1 {
		i, link = len(m.diagonal)-1, len(m.diagonal)-2
	}
	m.ends[end] = m.above[link]
	m.above[link] = 0
	m.diagonal[i] = 1
}

// set gives the first or last unknown, which is held, the value v in the
// right-hand side f.
func (m *tridiagonal) set(end int, v float64, f []float64) {
	i, beside := 0, 1
	if end == 1 {
		i, beside = len(f)-1, len(f)-2
	}
	f[beside] -= float64(m.ends[end] * v)
	f[i] = v
}

func (m *tridiagonal) factor() {
	m.factored = true
	n := len(m.diagonal)
	if m.ring {
		n--
	}
	pivot := m.diagonal[0]
	for i := range n {
		m.inverse[i] = 1 / pivot
		if i+1 < n {
			m.ratio[i] = m.above[i] * m.inverse[i]
			pivot = m.diagonal[i+1] - float64(m.ratio[i]*m.above[i])
		}
	}
	if !m.ring {
		return
	}
	// Split off the last unknown z: the others solve T y = f − z·q with
	// q = (corner, 0, …, 0, side).
	q := m.around[:n]
	clear(q)
	corner, side := m.above[n], m.above[n-1]
	q[0] += corner
	q[n-1] += side
	m.eliminate(q)
	m.schur = 1 / (m.diagonal[n] - float64(corner*q[0]) - float64(side*q[n-1]))
}

// solve overwrites f with the solution.
func (m *tridiagonal) solve(f []float64) {
	if !m.ring {
		m.eliminate(f)
		return
	}
	last := len(f) - 1
	m.eliminate(f[:last])
	corner, side := m.above[last], m.above[last-1]
	z := (f[last] - float64(corner*f[0]) - float64(side*f[last-1])) * m.schur
	for i, q := range m.around[:last] {
		f[i] -= float64(z * q)
	}
	f[last] = z
}

// eliminate solves with the leading part that f covers.
func (m *tridiagonal) eliminate(f []float64) {
	n := len(f)
	ratio, inverse := m.ratio[:n], m.inverse[:n]
	var carried float64
	for i, v := range f {
		v -= carried
		f[i] = v * inverse[i]
		carried = float64(ratio[i] * v)
	}
	for i := n - 2; i >= 0; i-- {
		f[i] -= float64(ratio[i] * f[i+1])
	}
}
