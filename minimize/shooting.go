package minimize

import (
	"context"
	"fmt"
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"

	"github.com/tenter-go/tenter/field"
)

// shooting returns the history that Levenberg–Marquardt on the misfits gives.
func (l *least) shooting(ctx context.Context, stage *Stage) (*field.History, error) {
	sh, err := l.shots(Shooting, l.set.Nodes)
	if err != nil {
		return nil, err
	}
	a := newAim(sh)
	limit := l.set.Iterations
	if limit == 0 {
		limit = 200
	}
	a.run(ctx, limit, stage)
	l.exact = a.rms() < rounding && l.set.Nodes == 1
	return a.h, nil
}

// rounding is the misfit below which a march, of values of order one, is not
// improved by more steps.
const rounding = 1e-12

// shots returns the least-residual problem as one of marches from so many nodes,
// evenly spread.
func (l *least) shots(s Strategy, nodes int) (*shots, error) {
	if err := l.marches(s); err != nil {
		return nil, err
	}
	if l.tied() {
		return nil, l.refuse(s, "rates tie values of different slices; want BlockWide")
	}
	slices := l.s.Block().Slices()
	if 3*nodes > slices {
		return nil, l.refuse(s, "%d nodes on %d slices; want at least 3 slices a node", nodes, slices)
	}
	var at []int
	for j := range nodes {
		at = append(at, j*(slices-1)/nodes)
	}
	p := *l.problem
	p.h, p.trial = l.h.Clone(), l.h.Clone()
	sh := newShots(&p, l.s, l.lifted, at)
	if sh.misfits == 0 || len(sh.nodes[0].free) == 0 {
		return nil, l.refuse(s, "there is nothing to aim with or at: %d free values in the first two slices, %d misfits; want BlockWide or Marching", len(sh.nodes[0].free), sh.misfits)
	}
	var bytes float64
	for _, nd := range sh.nodes {
		bytes += 8 * float64(len(nd.free)) * float64(len(nd.rows)+4*len(nd.free))
	}
	if bytes > l.set.Memory {
		return nil, l.refuse(s, "its dense matrices take %.2g bytes, above the limit of %.2g; want BlockWide or Windows", bytes, l.set.Memory)
	}
	sh.fill()
	return sh, nil
}

// An aim is Levenberg–Marquardt on the misfits of shots.
type aim struct {
	*shots
	normal, damped *chain
	grad, delta    []blas64.Vector
	sum            float64 // of the squared misfits of h
}

func newAim(sh *shots) *aim {
	a := &aim{shots: sh}
	var sizes []int
	for _, nd := range sh.nodes {
		n := len(nd.free)
		sizes = append(sizes, n)
		a.grad = append(a.grad, blas64.Vector{N: n, Inc: 1, Data: make([]float64, n)})
		a.delta = append(a.delta, blas64.Vector{N: n, Inc: 1, Data: make([]float64, n)})
	}
	a.normal, a.damped = newChain(sizes), newChain(sizes)
	return a
}

// rms returns the root mean square misfit.
func (a *aim) rms() float64 { return math.Sqrt(a.sum / float64(a.misfits)) }

// run lowers the misfits until rounding stops it, and leaves the best history in
// h.
func (a *aim) run(ctx context.Context, limit int, stage *Stage) {
	a.sum = a.shoot(a.h)
	a.linearise(ctx, a.h)
	a.assemble()
	largest := a.normal.largest()
	first := a.set.Damping
	if first == 0 {
		first = 1e-6
	}
	d := newDamping(first*largest, 1e-15*largest)
	outcome := "limit of steps reached"
	for range limit {
		if ctx.Err() != nil {
			outcome = context.Cause(ctx).Error()
			break
		}
		if d.lambda > 1e6*largest {
			outcome = "no step lowers the misfit"
			break
		}
		stage.Iterations++
		stage.Factorisations++
		sum, predicted, ok := a.try(d.lambda)
		if !ok || !(sum < a.sum) {
			if a.rms() < rounding {
				outcome = "misfit at rounding level"
				break
			}
			d.rejected()
			continue
		}
		gain := (a.sum - sum) / predicted
		small := a.sum-sum < 1e-9*a.sum
		a.keep()
		a.sum = sum
		if a.sum == 0 || small && d.lambda < 1e-3*largest && a.rms() > 1e-9 {
			outcome = "misfit no longer falls"
			break
		}
		a.linearise(ctx, a.h)
		a.assemble()
		d.accepted(gain)
	}
	a.sum = a.shoot(a.h)
	unknowns := 0
	for _, nd := range a.nodes {
		unknowns += len(nd.free)
	}
	stage.Outcome = fmt.Sprintf("%d nodes, %d unknowns, %d misfits, rms %.3g: %s", len(a.nodes), unknowns, a.misfits, a.rms(), outcome)
}

// try solves for the step with the damping λ, shoots from there into the trial
// history and returns the sum of its squared misfits and the decrease predicted.
func (a *aim) try(lambda float64) (sum, predicted float64, ok bool) {
	a.damped.copyFrom(a.normal, lambda)
	if !a.damped.factor() {
		return 0, 0, false
	}
	for j, g := range a.grad {
		for u, v := range g.Data {
			a.delta[j].Data[u] = -v
		}
	}
	a.damped.solve(a.delta)
	for j, x := range a.delta {
		for u, v := range x.Data {
			predicted += v * (lambda*v - a.grad[j].Data[u])
		}
	}
	for j := range a.nodes {
		nd := &a.nodes[j]
		from := nd.slice * a.size
		copy(a.trial.Data[from:from+2*a.size], a.h.Data[from:])
		for u, k := range nd.free {
			a.trial.Data[from+k] += a.delta[j].Data[u]
		}
	}
	return a.shoot(a.trial), predicted, true
}

// assemble writes the normal matrix of the misfits and their gradient.
func (a *aim) assemble() {
	for j := range a.nodes {
		nd := &a.nodes[j]
		rows, free := len(nd.rows), len(nd.free)
		d := a.normal.diagonal[j]
		if rows > 0 {
			jt := blas64.General{Rows: free, Cols: rows, Stride: rows, Data: nd.jac}
			blas64.Syrk(blas.NoTrans, 1, jt, 0, d)
			blas64.Gemv(blas.NoTrans, 1, jt, blas64.Vector{N: rows, Inc: 1, Data: nd.res}, 0, a.grad[j])
		} else {
			clear(d.Data)
			clear(a.grad[j].Data)
		}
		if j == 0 {
			continue
		}
		b, from := a.normal.below[j-1], &a.nodes[j-1]
		clear(b.Data)
		for r, m := range from.rows {
			if m.next < 0 {
				continue
			}
			d.Data[m.next*d.Stride+m.next]++
			a.grad[j].Data[m.next] -= from.res[r]
			for u := range from.free {
				b.Data[m.next*b.Stride+u] = -from.jac[u*len(from.rows)+r]
			}
		}
	}
}
