package minimize

import (
	"fmt"
	"math"
	"runtime"
	"slices"

	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/internal/nested"
)

// bordered is the factoriser for a matrix H with linear conditions,
//
//	( H   Aᵀ   ) (δ)   (b)
//	( A  −1/p  ) (μ) = (0),
//
// p the precision of a soft condition, 0 in place of −1/p for a hard one. The
// steps satisfy the hard ones, Aδ = 0, and know what the soft ones cost. It
// plays the part of a positive definite factor: Factor fails unless H + Σp aaᵀ is
// positive definite on the space that the hard conditions leave, which is so
// if the bordered matrix has one negative eigenvalue for each condition and no
// more [Gould 1985, Math. Program. 32, 90].
type bordered struct {
	symbolic *nested.Symbolic
	factor   *nested.Factor
	n        int // unknowns
	rows     []constraint.Row
	held     []bool    // unknowns that do not move; nil if all do
	values   []float64 // of H, then of the borders
	rhs      []float64
}

// newBordered returns the factoriser of a pattern with the given rows, hard or
// soft.
func newBordered(inner *nested.Pattern, rows []constraint.Row) (*bordered, error) {
	p := *inner
	p.N += len(rows)
	p.Row, p.Col = slices.Clone(inner.Row), slices.Clone(inner.Col)
	p.Ptr, p.Adj = slices.Clone(inner.Ptr), slices.Clone(inner.Adj)
	for r, row := range rows {
		p.Row, p.Col = append(p.Row, 0), append(p.Col, 0)
		p.Adj = append(append(p.Adj, row.Unknown...), int32(inner.N+r))
		p.Ptr = append(p.Ptr, len(p.Adj))
		p.Last = append(p.Last, int32(inner.N+r))
	}
	s, err := nested.Analyse(p)
	if err != nil {
		return nil, fmt.Errorf("minimize: %w", err)
	}
	return &bordered{symbolic: s, n: inner.N, rows: rows, values: make([]float64, len(p.Adj)), rhs: make([]float64, p.N)}, nil
}

func (b *bordered) Factor(values []float64) error {
	copy(b.values, values)
	// Borders are scaled to the matrix, which the factor's test for zero asks
	// for.
	var largest float64
	for _, v := range values {
		largest = max(largest, math.Abs(v))
	}
	at := len(values)
	for _, row := range b.rows {
		var most float64
		for _, w := range row.Weight {
			most = max(most, math.Abs(w))
		}
		scale := 1.0
		if most > 0 && largest > 0 {
			scale = largest / most
		}
		for k, w := range row.Weight {
			if b.values[at] = scale * w; b.held != nil && b.held[row.Unknown[k]] {
				b.values[at] = 0
			}
			at++
		}
		if b.values[at] = 0; row.Precision > 0 {
			b.values[at] = -scale * scale / row.Precision
		}
		at++
	}
	var err error
	if b.factor == nil {
		b.factor, err = b.symbolic.LDLT(b.values, runtime.GOMAXPROCS(0))
	} else {
		err = b.factor.Refactor(b.values)
	}
	if err != nil {
		return err
	}
	if _, negative, _, known := b.factor.Inertia(); !known || negative != len(b.rows) {
		return &notDefinite{negative: negative - len(b.rows), singular: !known}
	}
	return nil
}

func (b *bordered) Solve(dst, rhs []float64) {
	copy(b.rhs, rhs)
	clear(b.rhs[b.n:])
	b.factor.Solve(b.rhs, b.rhs)
	copy(dst, b.rhs[:b.n])
}

// notDefinite is the error of a bordered matrix that is not positive definite
// on the space of its conditions.
type notDefinite struct {
	negative int
	singular bool
}

func (e *notDefinite) Error() string {
	if e.singular {
		return "matrix is singular on the space that the linear conditions leave"
	}
	return fmt.Sprintf("matrix has %d negative eigenvalues on the space that the linear conditions leave", e.negative)
}
