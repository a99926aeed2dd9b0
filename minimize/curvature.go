package minimize

import (
	"errors"
	"fmt"
	"math"
	"runtime"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/internal/nested"
)

// curvature is the second derivative of what a solve has made stationary, at
// the history that it found, by all values of the history:
//
//	K = hk/q² (JᵀJ + Σ r ∂²r) + T    least residual
//	K = S″ + T                       minimum
//
// with J = ∂r/∂φ over the rows that count and the diagonal T of observations and
// cost conditions. Over the free values, bordered by the linear conditions a,
//
//	( K   Aᵀ   ) (x)   (f)
//	( A  −1/P  ) (μ) = (b),
//
// P the precision of a soft condition, 0 in place of −1/P for a hard one, it is
// factorised once. Solutions are corrected with K as it stands above, the least
// residual's by products with J, until they no longer change: a solution by the
// normal equations has twice the error exponent of one by J [Björck 1996,
// Numerical Methods for Least Squares Problems, section 2.9].
type curvature struct {
	free    *constraint.Unknowns
	shape   *field.History   // for block and components
	borders []constraint.Row // hard, then soft
	scale   []float64        // of each border in the factorised matrix
	still   *bounds          // active bounds; nil without any

	jac    *action.Matrix // least residual
	rows   []int32        // of jac, those that count
	weight float64        // hk/q²
	bent   *field.History // hk/q² Σ r ∂²r; see residualCurvature
	second *action.Matrix // minimum
	terms  *field.History // T; nil without terms

	factor   *nested.Factor
	damp     float64 // added to the diagonal of the factorised matrix alone
	largest  float64 // diagonal entry
	out, row []float64
}

// factorise analyses and factorises the matrix over the unknowns. definite says
// that it must be positive definite on the space of the linear conditions.
func (k *curvature) factorise(p *problem, definite bool) error {
	grid := p.grid()
	var values []float64
	var diagonal []int
	if k.jac != nil {
		m := newNormal(k.jac, k.rows, k.free, grid)
		m.assemble(k.jac)
		values, diagonal = m.values, m.diagonal
		for i := range values {
			values[i] *= k.weight
		}
		k.addBent(values, grid.Place)
	} else {
		m := newHessian(k.second, k.free, grid)
		m.assemble(k.second)
		values, diagonal = m.values, m.diagonal
	}
	if k.terms != nil {
		for u, v := range k.free.Reduce(nil, k.terms) {
			values[diagonal[u]] += v
		}
	}
	for _, at := range diagonal {
		k.largest = max(k.largest, math.Abs(values[at]))
	}
	if k.jac != nil {
		// as the solver does; solutions are corrected for it
		k.damp = leastDamping * k.largest
		for _, at := range diagonal {
			values[at] += k.damp
		}
	}
	if k.still != nil {
		k.still.isolate(grid, values)
	}
	values = k.addBorders(grid, values)
	symbolic, err := nested.Analyse(*grid)
	if err != nil {
		return fmt.Errorf("minimize: %w", err)
	}
	size := symbolic.Stats()
	if float64(size.Bytes) > p.set.Memory || size.Flops > p.set.Work {
		return &TooLarge{
			Unknowns: grid.N, Front: size.LargestFront, Bytes: float64(size.Bytes), Flops: size.Flops, Memory: p.set.Memory, Work: p.set.Work,
			problem: "response", suggestion: "want a smaller block or higher limits in the settings",
		}
	}
	if definite && len(k.borders) == 0 {
		k.factor, err = symbolic.Cholesky(values, runtime.GOMAXPROCS(0))
	} else {
		k.factor, err = symbolic.LDLT(values, runtime.GOMAXPROCS(0))
	}
	k.out, k.row = make([]float64, k.free.Values()), make([]float64, k.free.Values())
	if bad := (*nested.NotPositive)(nil); errors.As(err, &bad) {
		return k.undetermined(bad.Unknown, bad.Pivot)
	}
	if err != nil {
		return fmt.Errorf("minimize: %w", err)
	}
	return k.judge(definite)
}

// judge returns an *Undetermined unless the factorised matrix is fit for
// responses.
func (k *curvature) judge(definite bool) error {
	if _, negative, _, known := k.factor.Inertia(); !known || definite && negative != len(k.borders) {
		smallest, _, at := k.factor.Smallest(probes)
		return k.undetermined(at, smallest)
	}
	if k.jac == nil || len(k.borders) > 0 {
		return nil
	}
	// With the normal equations at their limit Smallest, which is |Kv|, says more
	// than there is; the growth of v by K⁻¹ does not. Rounding of the factor is
	// below ten times the damping, which is all that then is left.
	_, v, at := k.factor.Smallest(probes)
	var smallest float64
	for range 2 {
		k.factor.Solve(v, v)
		var square float64
		for u, x := range v {
			square += x * x
			if math.Abs(x) > math.Abs(v[at]) {
				at = u
			}
		}
		smallest = 1 / math.Sqrt(square)
		for u := range v {
			v[u] *= smallest
		}
	}
	if smallest <= 10*k.damp {
		return k.undetermined(at, smallest)
	}
	return nil
}

const probes = 10 // steps of the Lanczos method for the smallest eigenvalue

func (k *curvature) undetermined(unknown int, smallest float64) error {
	e := &Undetermined{Smallest: smallest, Largest: k.largest}
	if unknown < k.free.N {
		_, e.Component, _, e.Event = k.free.Event(k.free.Lead(unknown))
	} else {
		r := &k.borders[unknown-k.free.N]
		e.Component, e.Event, e.Condition = r.Component, r.Event, r.Name
	}
	return e
}

// addBorders appends the linear conditions to the pattern and returns the values
// with theirs. They are scaled to the matrix.
func (k *curvature) addBorders(p *nested.Pattern, values []float64) []float64 {
	for _, r := range k.borders {
		var most float64
		for _, w := range r.Weight {
			most = max(most, math.Abs(w))
		}
		scale := 1.0
		if most > 0 && k.largest > 0 {
			scale = k.largest / most
		}
		k.scale = append(k.scale, scale)
		for j, w := range r.Weight {
			if k.still != nil && k.still.active[r.Unknown[j]] {
				w = 0
			}
			values = append(values, scale*w)
		}
		var corner float64
		if r.Precision > 0 {
			corner = -scale * scale / r.Precision
		}
		values = append(values, corner)
		p.Row, p.Col = append(p.Row, 0), append(p.Col, 0)
		p.Adj = append(append(p.Adj, r.Unknown...), int32(p.N))
		p.Ptr = append(p.Ptr, len(p.Adj))
		p.Last = append(p.Last, int32(p.N))
		p.N++
	}
	return values
}
