package minimize

import (
	"errors"
	"fmt"
	"runtime"
	"slices"

	"github.com/tenter-go/tenter/internal/nested"
)

// A factoriser solves linear systems with symmetric positive definite matrices
// of one pattern. It is the only seam between this package and linear solvers:
// the caller numbers the unknowns, says where on the grid each lives, adds up the
// values entry by entry at Pattern.Place, and hands them over.
type factoriser interface {
	// Factor factorises the matrix with the given values of the lower triangle.
	// An error of type *nested.NotPositive names the failing pivot.
	Factor(values []float64) error
	// Solve writes the solution for the right-hand side b to dst, which may be
	// b.
	Solve(dst, b []float64)
}

// cholesky is the factoriser by nested dissection. Its bits do not depend on
// the number of processors.
type cholesky struct {
	symbolic *nested.Symbolic
	factor   *nested.Factor
}

func (c *cholesky) Factor(values []float64) (err error) {
	if c.factor != nil {
		return c.factor.Refactor(values)
	}
	c.factor, err = c.symbolic.Cholesky(values, runtime.GOMAXPROCS(0))
	return err
}

func (c *cholesky) Solve(dst, b []float64) { c.factor.Solve(dst, b) }

// factoriser returns the factoriser of a pattern, bordered by the linear
// conditions if there are any, or a *TooLarge.
func (p *problem) factoriser(pattern *nested.Pattern, suggestion string) (factoriser, error) {
	if rows := append(slices.Clone(p.free.HardRows()), p.free.SoftRows()...); len(rows) > 0 {
		for k := range rows {
			rows[k].Precision /= p.unit
		}
		return p.bordering(pattern, rows, suggestion)
	}
	symbolic, err := p.symbolic(pattern, suggestion)
	if err != nil {
		return nil, err
	}
	return &cholesky{symbolic: symbolic}, nil
}

// symbolic returns the analysis of a pattern, or a *TooLarge.
func (p *problem) symbolic(pattern *nested.Pattern, suggestion string) (*nested.Symbolic, error) {
	symbolic, err := nested.Analyse(*pattern)
	if err != nil {
		return nil, fmt.Errorf("minimize: %w", err)
	}
	size := symbolic.Stats()
	if float64(size.Bytes) > p.set.Memory || size.Flops > p.set.Work {
		return nil, &TooLarge{
			Unknowns: pattern.N, Front: size.LargestFront, Bytes: float64(size.Bytes), Flops: size.Flops, Memory: p.set.Memory, Work: p.set.Work,
			problem: p.rep.Problem, suggestion: suggestion,
		}
	}
	p.rep.Front = size.LargestFront
	return symbolic, nil
}

// singular says where a factorisation failed.
func (p *problem) singular(err error) string {
	var bad *nested.NotPositive
	if !errors.As(err, &bad) {
		return err.Error()
	}
	_, c, _, at := p.free.Event(p.free.Lead(bad.Unknown))
	return fmt.Sprintf("matrix is not positive definite: pivot %.3g of component %d at %v", bad.Pivot, c, at)
}
