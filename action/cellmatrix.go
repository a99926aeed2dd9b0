package action

import "github.com/tenter-go/tenter/field"

// SecondVariationMatrix writes the matrix ∂²S/∂φ(E)∂φ(F) at the history h to
// dst and returns it; a nil dst is allocated. An event is coupled to those it
// shares a cell with, up to nine; events outside of the region have empty rows.
// The pattern does not depend on h, so that a second call with the same dst
// allocates nothing large.
func (s *Cells) SecondVariationMatrix(dst *Matrix, h *field.History) *Matrix {
	s.mustFit(h)
	if dst == nil {
		dst = new(Matrix)
	}
	s.writePattern(dst)
	m := 3 * s.components
	q, curve := make([]float64, m), make([]float64, m*m)
	w := 0.25 * s.cellArea()
	s.corners(func(c corner) {
		s.l.Curvature(curve, s.jet(q, c, h, true))
		// The jet as a linear function of the field at three events: rows are
		// φ, φ_t and φ_x.
		events := [3][2]int{{c.n, c.i}, {c.m, c.i}, {c.n, c.j}}
		jet := [3][3]float64{{1, 0, 0}, {-c.up, c.up, 0}, {-c.right, 0, c.right}}
		for e, from := range events {
			for f, to := range events {
				for a := range s.components {
					row := s.index(from[0], a, from[1])
					for b := range s.components {
						var v float64
						for u := range jet {
							for t := range jet {
								v += jet[u][e] * curve[(u*s.components+a)*m+t*s.components+b] * jet[t][f]
							}
						}
						dst.accumulate(row, s.index(to[0], b, to[1]), w*v)
					}
				}
			}
		}
	})
	return dst
}

// writePattern fills dst with zeros at the places of the second variation.
func (s *Cells) writePattern(dst *Matrix) {
	dst.reset()
	clock, line := s.block.Time, s.block.Space
	for n := range clock.Sites {
		for range s.components {
			for i := range line.Sites {
				for _, cell := range [4][2]int{{n - 1, i - 1}, {n - 1, i}, {n, i - 1}, {n, i}} {
					if !s.region.Cell(cell[0], cell[1]) {
						continue
					}
					for _, corner := range [4][2]int{{0, 0}, {0, 1}, {1, 0}, {1, 1}} {
						m := (cell[0] + corner[0] + clock.Sites) % clock.Sites
						j := (cell[1] + corner[1] + line.Sites) % line.Sites
						for b := range s.components {
							dst.add(s.index(m, b, j), 0)
						}
					}
				}
				dst.endRow()
			}
		}
	}
}

// accumulate adds v at column j of row r, which has a place there.
func (m *Matrix) accumulate(r, j int, v float64) {
	for k := m.Start[r]; k < m.Start[r+1]; k++ {
		if m.Column[k] == j {
			m.Value[k] += v
			return
		}
	}
	panic("action: no such place in the pattern")
}
