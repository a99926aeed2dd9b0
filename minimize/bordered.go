package minimize

import (
	"fmt"
	"math"
	"runtime"
	"slices"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/internal/nested"
	"gonum.org/v1/gonum/mat"
)

// A bordered is the second variation A on the space that m hard linear
// conditions leave, in the metric of the block. With W the areas of the unknowns
// and C the conditions, of unit length in this metric, the matrix
//
//	K = ( W^−½ S″ W^−½   σCᵀ )
//	    (      σC         0  )
//
// is factorised, the border last. The scaling is a congruence, which leaves the
// signs of the eigenvalues, gives them a continuum limit (S″v = λWv: λ is per hk)
// and makes the Euclidean length of a vector the L² norm of a change of the field.
// The border adds m eigenvalues of either sign: n₋(K) = n₋(A on Cy = 0) + m
// [Gould 1985, Math. Program. 32, 90]. σ makes the sums of its rows those of A,
// since the factorisation compares pivots with them.
type bordered struct {
	hess     *hessian
	root     []float64 // W^½
	rows     []linearRow
	gram     mat.Cholesky // of CCᵀ
	pattern  *nested.Pattern
	symbolic *nested.Symbolic
	factor   *nested.Factor
	values   []float64 // of K, without a shift
	shifted  []float64
	norm     float64 // of A, max Σ|aᵢⱼ|
	ends     [2]int  // of the pattern's entries: those of A, all
	long     []float64
	part     []float64
}

// newBordered prepares the factorisation of hess with the given rows, which are
// brought to the metric. Rows that vanish or depend on one another are a
// *Refusal, a factor above the limits is a *TooLarge.
func newBordered(p *problem, hess *hessian, rows []linearRow) (*bordered, error) {
	n := p.free.N
	b := &bordered{hess: hess, root: p.cells()}
	for u, w := range b.root {
		b.root[u] = math.Sqrt(w)
	}
	if len(rows) >= n {
		return nil, &Refusal{Problem: p.rep.Problem, Why: fmt.Sprintf("%d linear conditions on %d unknowns leave nothing free; leave some out", len(rows), n)}
	}
	for _, r := range rows {
		c := linearRow{name: r.name, unknown: r.unknown, coef: make([]float64, len(r.coef)), rhs: r.rhs}
		var square float64
		for k, u := range r.unknown {
			c.coef[k] = r.coef[k] / b.root[u]
			square += c.coef[k] * c.coef[k]
		}
		length := math.Sqrt(square)
		if !(length > 0) || math.IsInf(length, 0) {
			return nil, &Refusal{Problem: p.rep.Problem, Why: fmt.Sprintf("%s vanishes on what is free; leave it out", r.name)}
		}
		for k := range c.coef {
			c.coef[k] /= length
		}
		c.rhs /= length
		b.rows = append(b.rows, c)
	}
	if err := b.independent(p.rep.Problem); err != nil {
		return nil, err
	}
	g := *hess.pattern
	b.ends[0] = len(g.Adj)
	g.Row, g.Col = slices.Clone(g.Row), slices.Clone(g.Col)
	g.Ptr, g.Adj = slices.Clone(g.Ptr), slices.Clone(g.Adj)
	for j, r := range b.rows {
		g.N++
		g.Row, g.Col = append(g.Row, 0), append(g.Col, 0)
		g.Adj = append(g.Adj, r.unknown...)
		g.Ptr = append(g.Ptr, len(g.Adj))
		g.Last = append(g.Last, int32(n+j))
	}
	b.ends[1] = len(g.Adj)
	b.pattern = &g
	var err error
	if b.symbolic, err = p.symbolic(&g, "want a smaller block or higher limits in the settings"); err != nil {
		return nil, err
	}
	b.values, b.shifted = make([]float64, b.ends[1]), make([]float64, b.ends[1])
	b.long, b.part = make([]float64, g.N), make([]float64, len(rows))
	return b, nil
}

// independent factorises CCᵀ, or names a row that others imply.
func (b *bordered) independent(problem string) error {
	m := len(b.rows)
	if m == 0 {
		return nil
	}
	dense := make([]float64, len(b.root))
	g := mat.NewSymDense(m, nil)
	for j, r := range b.rows {
		for k, u := range r.unknown {
			dense[u] = r.coef[k]
		}
		for i, q := range b.rows[j:] {
			var dot float64
			for k, u := range q.unknown {
				dot += q.coef[k] * dense[u]
			}
			g.SetSym(j, j+i, dot)
		}
		for _, u := range r.unknown {
			dense[u] = 0
		}
	}
	// Cholesky's pivot is the square of the part of a unit row that the rows
	// before it do not have; rounding leaves 1e-16 of it.
	const own = 1e-14
	l := mat.NewDense(m, m, nil)
	for j := range m {
		for i := range j + 1 {
			v := g.At(j, i)
			for k := range i {
				v -= l.At(j, k) * l.At(i, k)
			}
			switch {
			case i < j:
				v /= l.At(i, i)
			case v > own:
				v = math.Sqrt(v)
			default:
				return &Refusal{Problem: problem, Why: fmt.Sprintf("%s follows from the linear conditions before it; leave it out", b.rows[j].name)}
			}
			l.Set(j, i, v)
		}
	}
	if !b.gram.Factorize(g) {
		return &Refusal{Problem: problem, Why: "linear conditions depend on one another to rounding; leave some out"}
	}
	return nil
}

// assemble takes the second variation m.
func (b *bordered) assemble(m *action.Matrix) {
	b.hess.assemble(m)
	sum := b.long
	clear(sum)
	for u := range b.root {
		for e := b.pattern.Ptr[u]; e < b.pattern.Ptr[u+1]; e++ {
			v := int(b.pattern.Adj[e])
			a := b.hess.values[e] / (b.root[u] * b.root[v])
			b.values[e] = a
			sum[u] += math.Abs(a)
			if u != v {
				sum[v] += math.Abs(a)
			}
		}
	}
	b.norm = slices.Max(sum)
	e := b.ends[0]
	for _, r := range b.rows {
		var total float64
		for _, c := range r.coef {
			total += math.Abs(c)
		}
		sigma := b.norm / total
		if sigma == 0 {
			sigma = 1
		}
		for _, c := range r.coef {
			b.values[e] = sigma * c
			e++
		}
	}
}

// factorise factorises K for A + shift.
func (b *bordered) factorise(shift float64) (err error) {
	copy(b.shifted, b.values)
	for _, at := range b.hess.diagonal {
		b.shifted[at] += shift
	}
	if b.factor != nil {
		return b.factor.Refactor(b.shifted)
	}
	b.factor, err = b.symbolic.LDLT(b.shifted, runtime.GOMAXPROCS(0))
	return err
}

// negative returns the number of negative eigenvalues of A + shift on the
// constrained space that the factor at hand says, and how many it cannot tell
// from zero.
func (b *bordered) negative() (n, zero int) {
	_, n, zero, _ = b.factor.Inertia()
	return n - len(b.rows), zero
}

// solve writes A⁻¹x on the constrained space to dst, which may be x.
func (b *bordered) solve(dst, x []float64) {
	n := len(b.root)
	copy(b.long, x)
	clear(b.long[n:])
	b.factor.Solve(b.long, b.long)
	copy(dst, b.long[:n])
	b.project(dst)
}

// mul writes Ax to dst, projected on the constrained space.
func (b *bordered) mul(dst, x []float64) {
	clear(dst)
	for u := range b.root {
		for e := b.pattern.Ptr[u]; e < b.pattern.Ptr[u+1]; e++ {
			v, a := int(b.pattern.Adj[e]), b.values[e]
			dst[u] += a * x[v]
			if u != v {
				dst[v] += a * x[u]
			}
		}
	}
	b.project(dst)
}

// project removes from x what the conditions forbid, x −= Cᵀ(CCᵀ)⁻¹Cx, and
// returns its parts along the rows.
func (b *bordered) project(x []float64) []float64 {
	if len(b.rows) == 0 {
		return nil
	}
	for j := range b.rows {
		b.part[j] = -b.along(j, x)
	}
	b.correct(x)
	return b.part
}

// along returns (Cx)ⱼ.
func (b *bordered) along(j int, x []float64) (sum float64) {
	for k, u := range b.rows[j].unknown {
		sum += b.rows[j].coef[k] * x[u]
	}
	return sum
}

// correct adds Cᵀ(CCᵀ)⁻¹·part to x.
func (b *bordered) correct(x []float64) {
	v := mat.NewVecDense(len(b.part), b.part)
	if err := b.gram.SolveVecTo(v, v); err != nil {
		panic(fmt.Sprintf("minimize: linear conditions that were independent are not: %v", err))
	}
	for j, r := range b.rows {
		for k, u := range r.unknown {
			x[u] += b.part[j] * r.coef[k]
		}
	}
}

// meet writes to dst the smallest change, in the metric, after which the
// unknowns x satisfy the conditions.
func (b *bordered) meet(dst, x []float64) {
	clear(dst)
	if len(b.rows) == 0 {
		return
	}
	for j, r := range b.rows {
		b.part[j] = r.rhs
		for k, u := range r.unknown {
			b.part[j] -= r.coef[k] * x[u] * b.root[u]
		}
	}
	b.correct(dst)
}
