package nested

import (
	"math/rand/v2"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// system is a symmetric matrix under construction.
type system struct {
	Pattern
	rows []map[int32]float64 // lower triangle
}

// newSystem makes unknowns without couplings on a grid.
func newSystem(rows, cols int) *system {
	return &system{Pattern: Pattern{Rows: rows, Cols: cols}}
}

func (s *system) unknown(r, c int) int {
	s.Row, s.Col = append(s.Row, int32(r)), append(s.Col, int32(c))
	s.rows = append(s.rows, map[int32]float64{})
	s.N++
	return s.N - 1
}

func (s *system) add(i, j int, v float64) { s.rows[max(i, j)][int32(min(i, j))] += v }

// finish writes Ptr and Adj and returns the values.
func (s *system) finish() []float64 {
	s.Ptr, s.Adj = make([]int, 1, s.N+1), s.Adj[:0]
	var values []float64
	for _, row := range s.rows {
		first := len(s.Adj)
		for j := range row {
			s.Adj = append(s.Adj, j)
		}
		slices.Sort(s.Adj[first:])
		for _, j := range s.Adj[first:] {
			values = append(values, row[j])
		}
		s.Ptr = append(s.Ptr, len(s.Adj))
	}
	return values
}

func (s *system) dense() *mat.SymDense {
	a := mat.NewSymDense(s.N, nil)
	for i, row := range s.rows {
		for j, v := range row {
			a.SetSym(i, int(j), v)
		}
	}
	return a
}

// recipe describes a random system. All of its fields may hold anything.
type recipe struct {
	seed                 uint64
	rows, cols           uint8 // extent
	reachRow, reachCol   uint8
	components           uint8
	missing              uint8 // sites in 256 that do not exist
	wrapRow, wrapCol     bool
	last                 uint8 // dense bordering rows
	definite, zeroCorner bool
}

func (c recipe) build() (*system, []float64) {
	r := rand.New(rand.NewPCG(c.seed, 7))
	rows, cols := 1+int(c.rows)%24, 1+int(c.cols)%24
	reachRow, reachCol := int(c.reachRow)%7, int(c.reachCol)%7
	components := 1 + int(c.components)%3
	s := newSystem(rows, cols)
	s.WrapRow, s.WrapCol = c.wrapRow, c.wrapCol
	at := make(map[[2]int][]int)
	for i := range rows {
		for j := range cols {
			if r.IntN(256) < int(c.missing) && s.N > 0 {
				continue
			}
			for range components {
				at[[2]int{i, j}] = append(at[[2]int{i, j}], s.unknown(i, j))
			}
		}
	}
	couple := func(i, j int) {
		if i != j && r.IntN(4) > 0 {
			s.add(i, j, r.NormFloat64())
		}
	}
	for i := range s.N {
		for di := -reachRow; di <= reachRow; di++ {
			for dj := -reachCol; dj <= reachCol; dj++ {
				y, x := int(s.Row[i])+di, int(s.Col[i])+dj
				if s.WrapRow {
					y = ((y % rows) + rows) % rows
				}
				if s.WrapCol {
					x = ((x % cols) + cols) % cols
				}
				for _, j := range at[[2]int{y, x}] {
					if j < i {
						couple(i, j)
					}
				}
			}
		}
	}
	for range int(c.last) % 4 {
		k := s.unknown(0, 0)
		s.Last = append(s.Last, int32(k))
		for i := range k {
			couple(k, i)
		}
	}
	weight := make([]float64, s.N)
	for i, row := range s.rows {
		for j, v := range row {
			weight[i] += max(v, -v)
			weight[j] += max(v, -v)
		}
	}
	for i := range s.N {
		switch {
		case c.definite:
			s.add(i, i, 0.5+weight[i]) // diagonally dominant
		case !c.zeroCorner:
			s.add(i, i, r.NormFloat64())
		case r.IntN(3) == 0:
			s.add(i, i, 0)
		}
	}
	return s, s.finish()
}

// stencil is a constant-coefficient operator with Dirichlet data on a grid.
func stencil(rows, cols int, offsets map[[2]int]float64) (Pattern, []float64) {
	p := Pattern{N: rows * cols, Rows: rows, Cols: cols, Ptr: make([]int, 1, rows*cols+1)}
	var lower [][2]int
	for o := range offsets {
		if o[0] < 0 || o[0] == 0 && o[1] <= 0 {
			lower = append(lower, o)
		}
	}
	slices.SortFunc(lower, func(a, b [2]int) int { return (a[0]-b[0])*1000 + a[1] - b[1] })
	var values []float64
	for i := range rows {
		for j := range cols {
			p.Row, p.Col = append(p.Row, int32(i)), append(p.Col, int32(j))
			for _, o := range lower {
				if y, x := i+o[0], j+o[1]; y >= 0 && x >= 0 && x < cols {
					p.Adj = append(p.Adj, int32(y*cols+x))
					values = append(values, offsets[o])
				}
			}
			p.Ptr = append(p.Ptr, len(p.Adj))
		}
	}
	return p, values
}

// fivePoint is −Δ with steps 1.
func fivePoint(rows, cols int) (Pattern, []float64) {
	return stencil(rows, cols, map[[2]int]float64{{0, 0}: 4, {-1, 0}: -1, {0, -1}: -1})
}

// thirteenPoint is Δ² away from the boundary, a diamond of radius 2.
func thirteenPoint(rows, cols int) (Pattern, []float64) {
	return stencil(rows, cols, map[[2]int]float64{
		{0, 0}: 20, {-1, 0}: -8, {0, -1}: -8, {-1, -1}: 2, {-1, 1}: 2, {-2, 0}: 1, {0, -2}: 1,
	})
}

// wave is the second difference in time (rows) minus that in space (columns) on
// the interior of nx × nt intervals, minus m² on the diagonal; its entries are
// divided by dt² and dx².
func wave(nx, nt int, dx, dt, m float64) (Pattern, []float64) {
	return stencil(nt-1, nx-1, map[[2]int]float64{
		{0, 0}: 2/(dx*dx) - 2/(dt*dt) + m*m, {-1, 0}: 1 / (dt * dt), {0, -1}: -1 / (dx * dx),
	})
}
