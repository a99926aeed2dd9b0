package nested

import (
	"fmt"
	"math"
	"slices"
)

// Pattern says which entries of a symmetric matrix may differ from zero, and
// where on the grid each unknown lives.
//
// The lower triangle is stored by rows: unknown i couples to the unknowns
// Adj[Ptr[i]:Ptr[i+1]], which are ≤ i and increase. A diagonal entry that is
// zero may be left out. Values handed to Cholesky and LDLT stand in the order of
// Adj.
type Pattern struct {
	N                int     // number of unknowns
	Row, Col         []int32 // grid coordinates of each unknown; several may share a site
	Rows, Cols       int     // 0 ≤ Row[i] < Rows, 0 ≤ Col[i] < Cols
	WrapRow, WrapCol bool    // the axis is periodic: Rows − 1 is a neighbour of 0
	Ptr              []int   // N + 1 offsets into Adj
	Adj              []int32 // columns of the lower triangle

	// Last lists unknowns to be eliminated at the end, in the root of the tree.
	// Their rows may be dense, and where on the grid they are put does not
	// matter: the multipliers of linear conditions belong here.
	Last []int32
}

// BadPattern is the error of Analyse: what is wrong, and at which row of the
// pattern (−1 if it is not the fault of one row).
type BadPattern struct {
	Row     int
	Problem string
}

func (e *BadPattern) Error() string {
	if e.Row < 0 {
		return "nested: pattern: " + e.Problem
	}
	return fmt.Sprintf("nested: pattern: row %d: %s", e.Row, e.Problem)
}

// maxExtent bounds the grid because the dissection counts unknowns by row and column.
const maxExtent = 1 << 24

func (p *Pattern) check() error {
	bad := func(row int, format string, args ...any) error {
		return &BadPattern{row, fmt.Sprintf(format, args...)}
	}
	switch {
	case p.N < 1 || p.N > math.MaxInt32/2:
		return bad(-1, "%d unknowns, want 1 to %d", p.N, math.MaxInt32/2)
	case len(p.Row) != p.N || len(p.Col) != p.N:
		return bad(-1, "%d rows and %d columns of coordinates, want %d of each", len(p.Row), len(p.Col), p.N)
	case len(p.Ptr) != p.N+1:
		return bad(-1, "%d offsets in Ptr, want N + 1 = %d", len(p.Ptr), p.N+1)
	case p.Ptr[0] != 0 || p.Ptr[p.N] != len(p.Adj):
		return bad(-1, "Ptr runs from %d to %d, want 0 to len(Adj) = %d", p.Ptr[0], p.Ptr[p.N], len(p.Adj))
	case len(p.Adj) > math.MaxInt32:
		return bad(-1, "%d entries, want at most %d", len(p.Adj), math.MaxInt32)
	}
	if p.Rows < 1 || p.Cols < 1 || max(p.Rows, p.Cols) > maxExtent {
		return bad(-1, "a grid of %d × %d, want 1 to %d either way", p.Rows, p.Cols, maxExtent)
	}
	for i := range p.N {
		if p.Ptr[i+1] < p.Ptr[i] || p.Ptr[i+1] > len(p.Adj) {
			return bad(i, "Ptr goes from %d to %d, want it to grow up to len(Adj) = %d", p.Ptr[i], p.Ptr[i+1], len(p.Adj))
		}
		if r, c := int(p.Row[i]), int(p.Col[i]); r < 0 || r >= p.Rows || c < 0 || c >= p.Cols {
			return bad(i, "site (%d, %d) lies outside the grid of %d × %d", r, c, p.Rows, p.Cols)
		}
		before := int32(-1)
		for _, j := range p.Adj[p.Ptr[i]:p.Ptr[i+1]] {
			if j <= before || int(j) > i {
				return bad(i, "neighbour %d after %d, want them increasing and at most %d", j, before, i)
			}
			before = j
		}
	}
	seen := make(map[int32]bool, len(p.Last))
	for _, i := range p.Last {
		if i < 0 || int(i) >= p.N {
			return bad(-1, "Last names unknown %d, want 0 to %d", i, p.N-1)
		}
		if seen[i] {
			return bad(int(i), "listed twice in Last")
		}
		seen[i] = true
	}
	return nil
}

// Place returns where among the values entry (i, j), j ≤ i, stands, or −1 if the
// pattern does not have it.
func (p *Pattern) Place(i, j int) int {
	row := p.Adj[p.Ptr[i]:p.Ptr[i+1]]
	if k, found := slices.BinarySearch(row, int32(j)); found {
		return p.Ptr[i] + k
	}
	return -1
}
