// Package nested factorises sparse symmetric matrices whose unknowns live on the
// sites of a two-dimensional grid. It knows where the unknowns are and which of
// them are coupled, and nothing of what they mean.
//
// # Dissection
//
// A line across the grid that is as thick as the stencil is wide leaves two
// regions that do not know of each other. If the unknowns of the line are
// eliminated last, no entry of the factor joins the regions, and each may be cut
// in the same way: nested dissection [George 1973]. For N unknowns of a square
// the factor holds O(N log N) entries and costs O(N^{3/2}) operations, which is
// the best that elimination can do. The coordinates tell where to cut; which
// unknowns beside the cut belong to the separator is read off the matrix, so any
// stencil, missing sites and several unknowns at a site need no special care. A
// periodic axis is a ring, and its first cut is made at two opposite places.
//
// # Fronts
//
// The separators form a binary tree. Elimination goes through it from the leaves
// to the root: at each node the separator's unknowns and the later unknowns they
// are coupled to, the boundary, make up a small dense symmetric matrix, the
// front. It is the sum of the matrix's own entries and of what the two children
// have left; its pivots are eliminated, and the Schur complement of the boundary
// is left to the parent: the multifrontal method [Duff & Reid 1983]. All
// arithmetic but the summing up is thus done in dense blocks. Three kernels carry
// it (tile.go). The front is laid out for them from the start (front.go), so that
// nothing need be copied; with AVX-512 they reach 100 Gflop/s a core, ten times
// what gonum's multiplication gives, which is why none of it goes through blas64.
//
// # Two factorisations
//
// Cholesky is for positive definite matrices and stops at the first pivot that
// is not positive. LDLT is for indefinite ones. It chooses pivots of order 1 or 2
// within a front, accepts only those that bound the growth in the whole column,
// and puts the others off to the parent, whose front grows by them (pivot.go).
// No pivot is ever changed below the root. This matters for operators like the
// wave equation's, whose sub-rectangles are singular in great number although the
// whole is not: the second difference in time minus that in space on Nx × Nt
// intervals has gcd(Nx, Nt) − 1 null vectors. Since the inertia of D is that of
// the matrix, the signs of the eigenvalues are counted exactly. What is left
// at the root and vanishes is the null space; it is counted, and replaced by
// something small so that solving remains possible.
//
// # Same bits
//
// Subtrees are eliminated by several goroutines. Which of them takes a front has
// no influence on the arithmetic: a front is always the sum of its entries, its
// left and its right child in this order, and the kernels add up in a fixed order
// in any version. Factors are the same to the last bit for any number of workers.
//
// # References
//
//   - C. Ashcraft, R. G. Grimes & J. G. Lewis 1998, SIAM J. Matrix Anal. Appl. 20, 513
//   - J. R. Bunch & L. Kaufman 1977, Math. Comp. 31, 163
//   - I. S. Duff & J. K. Reid 1983, ACM Trans. Math. Softw. 9, 302
//   - A. George 1973, SIAM J. Numer. Anal. 10, 345
package nested
