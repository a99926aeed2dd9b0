package minimize

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/constraint"
	"gonum.org/v1/gonum/mat"
)

// linear is the hard linear conditions Ax = b on the unknowns. Solvers start on
// them and step along them, Aδ = 0.
type linear struct {
	rows []constraint.Row
	gram mat.Cholesky // of AAᵀ over the unknowns that may move
	held []bool       // unknowns that may not; nil if all may
}

// newLinear returns nil for no rows.
func newLinear(rows []constraint.Row) (*linear, error) {
	if len(rows) == 0 {
		return nil, nil
	}
	l := &linear{rows: rows}
	return l, l.hold(nil)
}

// hold says which unknowns may not move, such as those at a bound.
func (l *linear) hold(held []bool) error {
	l.held = held
	n := len(l.rows)
	gram := mat.NewSymDense(n, nil)
	for i := range l.rows {
		full := make(map[int32]float64, len(l.rows[i].Unknown))
		for k, u := range l.rows[i].Unknown {
			if held == nil || !held[u] {
				full[u] = l.rows[i].Weight[k]
			}
		}
		for j := range i + 1 {
			var sum float64
			for k, u := range l.rows[j].Unknown {
				sum += l.rows[j].Weight[k] * full[u]
			}
			gram.SetSym(i, j, sum)
		}
	}
	if !l.gram.Factorize(gram) || l.gram.Cond() > 1e14 {
		return fmt.Errorf("minimize: %d hard linear conditions depend on one another where they may act; want fewer, or looser bounds", n)
	}
	return nil
}

// coefficients returns the solution μ of AAᵀμ = v.
func (l *linear) coefficients(v []float64) []float64 {
	var mu mat.VecDense
	if l.gram.SolveVecTo(&mu, mat.NewVecDense(len(v), v)) != nil {
		return v // the factor is good, see hold
	}
	return mu.RawVector().Data
}

// add adds Aᵀμ·scale to x at the unknowns that may move.
func (l *linear) add(x, mu []float64, scale float64) {
	for r, row := range l.rows {
		for k, u := range row.Unknown {
			if l.held == nil || !l.held[u] {
				x[u] += scale * mu[r] * row.Weight[k]
			}
		}
	}
}

// project moves x to the nearest point with Ax = b and returns how far the
// worst condition was missed.
func (l *linear) project(x []float64) (miss float64) {
	v := make([]float64, len(l.rows))
	for r := range l.rows {
		v[r] = -l.rows[r].Miss(x)
		miss = max(miss, math.Abs(v[r]))
	}
	l.add(x, l.coefficients(v), 1)
	return miss
}

// multipliers returns the μ for which |g − Aᵀμ| is least.
func (l *linear) multipliers(g []float64) []float64 {
	v := make([]float64, len(l.rows))
	for r, row := range l.rows {
		for k, u := range row.Unknown {
			if l.held == nil || !l.held[u] {
				v[r] += row.Weight[k] * g[u]
			}
		}
	}
	return l.coefficients(v)
}

// tangent writes g − Aᵀμ to dst, over all unknowns.
func (l *linear) tangent(dst, g, mu []float64) {
	copy(dst, g)
	for r, row := range l.rows {
		for k, u := range row.Unknown {
			dst[u] -= mu[r] * row.Weight[k]
		}
	}
}
