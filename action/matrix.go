package action

import "fmt"

// A Matrix is a sparse square matrix in compressed rows: row r has the values
// Value[Start[r]:Start[r+1]] in the columns Column[Start[r]:Start[r+1]], each
// column at most once, in no particular order. Rows and columns are numbered
// like the data of a history.
type Matrix struct {
	Start  []int
	Column []int
	Value  []float64
}

// Rows returns the number of rows.
func (m *Matrix) Rows() int { return len(m.Start) - 1 }

// Row returns the columns and values of row r. They share memory with m.
func (m *Matrix) Row(r int) (columns []int, values []float64) {
	a, b := m.Start[r], m.Start[r+1]
	return m.Column[a:b], m.Value[a:b]
}

// MulVec writes m·x to dst. It panics unless the lengths fit.
func (m *Matrix) MulVec(dst, x []float64) {
	if len(dst) != m.Rows() || len(x) != m.Rows() {
		panic(fmt.Sprintf("action: matrix of %d rows times %d values into %d", m.Rows(), len(x), len(dst)))
	}
	for r := range dst {
		columns, values := m.Row(r)
		var sum float64
		for k, j := range columns {
			sum += values[k] * x[j]
		}
		dst[r] = sum
	}
}

// MulTransVec writes mᵀ·x to dst. It panics unless the lengths fit.
func (m *Matrix) MulTransVec(dst, x []float64) {
	if len(dst) != m.Rows() || len(x) != m.Rows() {
		panic(fmt.Sprintf("action: transposed matrix of %d rows times %d values into %d", m.Rows(), len(x), len(dst)))
	}
	clear(dst)
	for r, v := range x {
		if v == 0 {
			continue
		}
		columns, values := m.Row(r)
		for k, j := range columns {
			dst[j] += values[k] * v
		}
	}
}

// reset empties m and keeps its memory.
func (m *Matrix) reset() {
	m.Start = append(m.Start[:0], 0)
	m.Column = m.Column[:0]
	m.Value = m.Value[:0]
}

// add adds v at column j of the row being written; entries of equal column are
// merged. Zeros are kept, so that the pattern does not depend on the values.
func (m *Matrix) add(j int, v float64) {
	for k := m.Start[len(m.Start)-1]; k < len(m.Column); k++ {
		if m.Column[k] == j {
			m.Value[k] += v
			return
		}
	}
	m.Column = append(m.Column, j)
	m.Value = append(m.Value, v)
}

// endRow closes the row being written.
func (m *Matrix) endRow() { m.Start = append(m.Start, len(m.Column)) }
