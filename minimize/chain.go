package minimize

import (
	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack/lapack64"
)

// A chain is a symmetric positive definite matrix of dense blocks in which each
// block is coupled to the one before and the one after it, and its Cholesky
// factor, which overwrites it.
type chain struct {
	diagonal []blas64.Symmetric // lower triangles
	below    []blas64.General   // below[j] couples block j+1 (rows) to block j
	lower    []blas64.Triangular
}

func newChain(sizes []int) *chain {
	c := &chain{lower: make([]blas64.Triangular, len(sizes))}
	for j, n := range sizes {
		c.diagonal = append(c.diagonal, blas64.Symmetric{N: n, Stride: max(n, 1), Data: make([]float64, n*n), Uplo: blas.Lower})
		if j > 0 {
			c.below = append(c.below, blas64.General{Rows: n, Cols: sizes[j-1], Stride: max(sizes[j-1], 1), Data: make([]float64, n*sizes[j-1])})
		}
	}
	return c
}

// copyFrom makes c, of the same sizes, the matrix d with shift added to its
// diagonal.
func (c *chain) copyFrom(d *chain, shift float64) {
	for j, a := range c.diagonal {
		copy(a.Data, d.diagonal[j].Data)
		for i := range a.N {
			a.Data[i*a.Stride+i] += shift
		}
	}
	for j, b := range c.below {
		copy(b.Data, d.below[j].Data)
	}
}

// factor overwrites the matrix by its factor. It returns false if a pivot is not
// positive.
func (c *chain) factor() (ok bool) {
	for j, a := range c.diagonal {
		if j > 0 {
			b := c.below[j-1]
			blas64.Trsm(blas.Right, blas.Trans, 1, c.lower[j-1], b)
			blas64.Syrk(blas.NoTrans, -1, b, 1, a)
		}
		if c.lower[j], ok = lapack64.Potrf(a); !ok {
			return false
		}
	}
	return true
}

// solve overwrites x, cut into the blocks, by the solution.
func (c *chain) solve(x []blas64.Vector) {
	for j, l := range c.lower {
		if j > 0 {
			blas64.Gemv(blas.NoTrans, -1, c.below[j-1], x[j-1], 1, x[j])
		}
		blas64.Trsv(blas.NoTrans, l, x[j])
	}
	for j := len(c.lower) - 1; j >= 0; j-- {
		if j+1 < len(c.lower) {
			blas64.Gemv(blas.Trans, -1, c.below[j], x[j+1], 1, x[j])
		}
		blas64.Trsv(blas.Trans, c.lower[j], x[j])
	}
}

// largest returns the largest entry of the diagonal.
func (c *chain) largest() (d float64) {
	for _, a := range c.diagonal {
		for i := range a.N {
			d = max(d, a.Data[i*a.Stride+i])
		}
	}
	return d
}
