package minimize

import (
	"fmt"
	"math"
	"runtime"
	"slices"

	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/internal/nested"
)

// bordering is the factoriser for a matrix H with linear conditions,
//
//	( H   Aᵀ   ) (δ)   (b)
//	( A  −1/p  ) (μ) = (0),
//
// p the precision of a soft condition, 0 in place of −1/p for a hard one. The
// steps satisfy the hard ones, Aδ = 0, and know what the soft ones cost. It
// plays the part of a positive definite factor: Factor fails unless H + Σp aaᵀ is
// positive definite on the space that the hard conditions leave, which is so
// if the bordering matrix has one negative eigenvalue for each condition and no
// more [Gould 1985, Math. Program. 32, 90].
type bordering struct {
	symbolic *nested.Symbolic
	factor   *nested.Factor
	n        int // unknowns
	rows     []constraint.Row
	held     []bool    // unknowns that do not move; nil if all do
	values   []float64 // of H, then of the borders
	rhs      []float64
}

// bordering returns the factoriser of a pattern with the given rows, hard or
// soft, or a *TooLarge.
func (p *problem) bordering(inner *nested.Pattern, rows []constraint.Row, suggestion string) (*bordering, error) {
	g := *inner
	g.N += len(rows)
	g.Row, g.Col = slices.Clone(inner.Row), slices.Clone(inner.Col)
	g.Ptr, g.Adj = slices.Clone(inner.Ptr), slices.Clone(inner.Adj)
	for r, row := range rows {
		g.Row, g.Col = append(g.Row, 0), append(g.Col, 0)
		g.Adj = append(append(g.Adj, row.Unknown...), int32(inner.N+r))
		g.Ptr = append(g.Ptr, len(g.Adj))
		g.Last = append(g.Last, int32(inner.N+r))
	}
	s, err := p.symbolic(&g, suggestion)
	if err != nil {
		return nil, err
	}
	b := &bordering{symbolic: s, n: inner.N, rows: rows, values: make([]float64, len(g.Adj)), rhs: make([]float64, g.N)}
	if p.bounds != nil {
		b.held = p.bounds.active
	}
	return b, nil
}

func (b *bordering) Factor(values []float64) error {
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

func (b *bordering) Solve(dst, rhs []float64) {
	copy(b.rhs, rhs)
	clear(b.rhs[b.n:])
	b.factor.Solve(b.rhs, b.rhs)
	copy(dst, b.rhs[:b.n])
}

// notDefinite is the error of a bordering matrix that is not positive definite
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
