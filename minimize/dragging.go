package minimize

import (
	"context"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"

	"github.com/tenter-go/tenter/field"
)

// dragging carries the pins from where the march from the start's first two
// slices has them to where they are wanted. With the misfits m(y) of the free
// Cauchy data y, and m₀ those of the start, it follows the curve
//
//	m(y) = (1 − s)m₀
//
// from s = 0 by pseudo-arclength steps, around folds, until it passes s = 1
// [Keller 1977, in Rabinowitz (ed.), Applications of Bifurcation Theory, 359].
// From there shooting ends the work.
func (l *least) dragging(ctx context.Context, stage *Stage) (*field.History, error) {
	sh, err := l.shots(Dragging, 1)
	if err != nil {
		return nil, err
	}
	if n := len(sh.nodes[0].free); n != sh.misfits {
		return nil, l.refuse(Dragging, "%d pinned values to drag and %d free values of the first two slices; want equally many", sh.misfits, n)
	}
	d := newDrag(sh)
	limit := l.set.Iterations
	if limit == 0 {
		limit = 200
	}
	reached := d.follow(ctx, limit, stage)
	stage.Outcome = fmt.Sprintf("pins dragged to s = %.4g in %d arclength steps around %d folds", d.s, d.steps, d.folds)
	if !reached {
		return d.h, nil
	}
	carried := stage.Outcome
	a := newAim(sh)
	a.run(ctx, limit, stage)
	l.exact = a.rms() < rounding
	stage.Outcome = carried + "; " + stage.Outcome
	return a.h, nil
}

// drag is a point (y, s) on the curve of a dragging.
type drag struct {
	*shots
	nd      *node
	first   []float64 // m₀
	s       float64
	tangent *mat.VecDense // (ẏ, ṡ), of unit length with s in units of unit
	unit    float64
	matrix  *mat.Dense
	lu      mat.LU
	steps   int
	folds   int
}

func newDrag(sh *shots) *drag {
	nd := &sh.nodes[0]
	n := len(nd.free)
	return &drag{shots: sh, nd: nd, tangent: mat.NewVecDense(n+1, nil), matrix: mat.NewDense(n+1, n+1, nil)}
}

// follow walks along the curve until s has passed 1 and returns whether it did.
// The steps grow where two corrections are enough and shrink where five are not.
func (d *drag) follow(ctx context.Context, limit int, stage *Stage) bool {
	n := len(d.nd.free)
	d.shoot(d.h)
	d.first = append(d.first, d.nd.res...)
	// One unit of s moves the pins by m₀ and the Cauchy data, by the march's
	// gain of about the number of slices, by |m₀| over it.
	var sum float64
	for _, v := range d.first {
		sum += v * v
	}
	if sum == 0 {
		d.s = 1
		return true
	}
	d.unit = math.Sqrt(sum) / float64(d.h.Block.Slices())
	d.tangent.SetVec(n, 1)
	d.linearise(ctx, d.h)
	if !d.border() || !d.turn() {
		return false
	}
	length := 0.05 * d.unit
	for ctx.Err() == nil && d.steps < limit && length > 1e-8*d.unit {
		s := d.s
		corrections, ok := d.correct(ctx, length)
		stage.Iterations++
		stage.Factorisations += corrections
		if !ok {
			length /= 3
			continue
		}
		d.keep()
		d.steps++
		before := d.tangent.AtVec(n)
		if d.s >= 1 || !d.turn() {
			break
		}
		if before*d.tangent.AtVec(n) < 0 {
			d.folds++
		}
		if d.s < -2 || s > 2 {
			break
		}
		if corrections <= 3 {
			length *= 1.6
		}
	}
	return d.s >= 1
}

// border factorises [∂m/∂y, m₀/unit; tangent], the matrix of the curve and its
// arclength at the Jacobian at hand.
func (d *drag) border() bool {
	n := len(d.nd.free)
	for r := range n {
		for u := range n {
			d.matrix.Set(r, u, d.nd.jac[u*n+r])
		}
		d.matrix.Set(r, n, d.first[r]/d.unit)
	}
	for u := range n + 1 {
		d.matrix.Set(n, u, d.tangent.AtVec(u))
	}
	d.lu.Factorize(d.matrix)
	return !math.IsInf(d.lu.Cond(), 1)
}

// turn makes the tangent that of the curve at the matrix at hand.
func (d *drag) turn() bool {
	n := len(d.nd.free)
	b := mat.NewVecDense(n+1, nil)
	b.SetVec(n, 1)
	if err := solveLU(&d.lu, b); err != nil {
		return false
	}
	b.ScaleVec(1/mat.Norm(b, 2), b)
	d.tangent = b
	return true
}

// correct goes by the length along the tangent and back to the curve by Newton
// steps at right angles to it, into the trial history. The number of them is
// returned, and false if they do not converge.
func (d *drag) correct(ctx context.Context, length float64) (corrections int, ok bool) {
	const most = 5
	n := len(d.nd.free)
	copy(d.trial.Data, d.h.Data)
	s := d.s + length*d.tangent.AtVec(n)/d.unit
	for u, k := range d.nd.free {
		d.trial.Data[k] += length * d.tangent.AtVec(u)
	}
	b := mat.NewVecDense(n+1, nil)
	for c := 1; c <= most; c++ {
		d.shoot(d.trial)
		d.linearise(ctx, d.trial)
		if !d.border() {
			return c, false
		}
		for r, v := range d.nd.res {
			b.SetVec(r, (1-s)*d.first[r]-v)
		}
		b.SetVec(n, 0)
		if err := solveLU(&d.lu, b); err != nil {
			return c, false
		}
		for u, k := range d.nd.free {
			d.trial.Data[k] += b.AtVec(u)
		}
		s += b.AtVec(n) / d.unit
		switch size := mat.Norm(b, 2); {
		case !(size < 0.5*length):
			return c, false
		case size < 1e-4*length:
			d.s = s
			d.shoot(d.trial)
			return c, true
		}
	}
	return most, false
}

// solveLU overwrites b by the solution. A matrix near a singular one is no
// error: Newton steps show whether the solution is of use.
func solveLU(lu *mat.LU, b *mat.VecDense) error {
	err := lu.SolveVecTo(b, false, b)
	if _, near := err.(mat.Condition); near && !math.IsInf(lu.Cond(), 1) {
		return nil
	}
	return err
}
