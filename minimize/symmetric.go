package minimize

import (
	"math"

	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/internal/nested"
	"gonum.org/v1/gonum/mat"
)

// symmetric is a sparse symmetric matrix, the lower triangle of a pattern and its
// values, plus Σp aaᵀ over the soft linear conditions of weights a and precision p.
type symmetric struct {
	*nested.Pattern
	values []float64
	soft   []constraint.Row
}

// mul writes the matrix times x to dst.
func (a symmetric) mul(dst, x []float64) {
	clear(dst)
	for i := range a.N {
		for e := a.Ptr[i]; e < a.Ptr[i+1]; e++ {
			j, v := int(a.Adj[e]), a.values[e]
			dst[i] += v * x[j]
			if i != j {
				dst[j] += v * x[i]
			}
		}
	}
	for _, row := range a.soft {
		var along float64
		for k, u := range row.Unknown {
			along += row.Weight[k] * x[u]
		}
		for k, u := range row.Unknown {
			dst[u] += row.Precision * along * row.Weight[k]
		}
	}
}

// bound returns max Σ|aᵢⱼ| over the rows, which no eigenvalue exceeds
// [Gershgorin 1931, Izv. Akad. Nauk SSSR 7, 749], and the largest eigenvalue of
// each soft condition on top.
func (a symmetric) bound() float64 {
	sum := make([]float64, a.N)
	for i := range a.N {
		for e := a.Ptr[i]; e < a.Ptr[i+1]; e++ {
			v := math.Abs(a.values[e])
			sum[i] += v
			if j := int(a.Adj[e]); j != i {
				sum[j] += v
			}
		}
	}
	var top float64
	for _, s := range sum {
		top = max(top, s)
	}
	for _, row := range a.soft {
		top += row.Precision * math.Pow(length(row.Weight), 2)
	}
	return top
}

// largest returns an estimate of the largest eigenvalue that is never above it
// but for rounding: the largest Ritz value of so many steps of the Lanczos method
// with a fixed start that oscillates from site to site, as the fastest mode of a
// lattice does [Kuczyński & Woźniakowski 1992, SIAM J. Matrix Anal. Appl. 13,
// 1094].
func (a symmetric) largest(steps int) float64 {
	n := a.N
	steps = min(steps, n)
	now, before, w := make([]float64, n), make([]float64, n), make([]float64, n)
	for u := range now {
		// fractional parts of a Weyl sequence, alternating in sign
		_, f := math.Modf(0.7548776662466927 * float64(u+1))
		now[u] = 1 + f
		if (int(a.Row[u])+int(a.Col[u]))%2 == 1 {
			now[u] = -now[u]
		}
	}
	scale := 1 / length(now)
	for u := range now {
		now[u] *= scale
	}
	var diagonal, beside []float64
	for k := range steps {
		a.mul(w, now)
		var alpha, beta float64
		for u, v := range now {
			alpha += v * w[u]
		}
		diagonal = append(diagonal, alpha)
		if k > 0 {
			beta = beside[k-1]
		}
		for u := range w {
			w[u] -= alpha*now[u] + beta*before[u]
		}
		next := length(w)
		if k+1 == steps || next <= 1e-12*math.Abs(alpha) {
			break
		}
		beside = append(beside, next)
		before, now, w = now, w, before
		for u := range now {
			now[u] /= next
		}
	}
	t := mat.NewSymDense(len(diagonal), nil)
	for k, d := range diagonal {
		t.SetSym(k, k, d)
		if k > 0 {
			t.SetSym(k-1, k, beside[k-1])
		}
	}
	var eigen mat.EigenSym
	if !eigen.Factorize(t, false) {
		return diagonal[0] // a Rayleigh quotient is a lower bound as well
	}
	values := eigen.Values(nil)
	return values[len(values)-1]
}
