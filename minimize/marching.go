package minimize

import (
	"context"
	"fmt"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
)

// marching returns the history that the march makes of the pinned Cauchy pair:
// forward to the last slice and, without losses, backward to the first.
func (l *least) marching(ctx context.Context, stage *Stage) (*field.History, error) {
	if err := l.marches(Marching); err != nil {
		return nil, err
	}
	pair, ok := l.free.CauchyPair()
	if !ok {
		return nil, l.refuse(Marching, "no Cauchy pair is pinned; want two adjacent slices held, or Shooting")
	}
	if err := l.s.Conservative(); pair > 0 && err != nil {
		return nil, l.refuse(Marching, "the pair is pinned at slice %d, and the equation cannot be marched back (%v); want a pair at slice 0, or BlockWide", pair, err)
	}
	h := l.h.Clone()
	st := newStepper(l.s, l.free, l.lifted)
	last := h.Block.Slices() - 1
	for n := pair + 1; n < last && ctx.Err() == nil; n++ {
		st.step(h.Slice(n+1), h.Slice(n), h.Slice(n-1), n)
	}
	for n := pair; n > 0 && ctx.Err() == nil; n-- {
		st.back(h.Slice(n-1), h.Slice(n), h.Slice(n+1), n)
	}
	l.exact = ctx.Err() == nil
	stage.Outcome = fmt.Sprintf("%d slices from slices %d and %d", last-1, pair, pair+1)
	return h, nil
}

// A stepper marches a history slice by slice with the action's own recursion.
// Values that drive the field, ends without an equation and pinned events whose
// row is lifted, stand in the history already and are kept.
type stepper struct {
	s            *action.Discrete
	march        *action.March
	ahead, aback [][]int // of each slice: places that the march forward or back may not set
	kept         []float64
}

// newStepper returns the stepper of an action without the rows that are lifted.
func newStepper(s *action.Discrete, free *constraint.Unknowns, lifted map[int]bool) *stepper {
	slices := s.Block().Slices()
	st := &stepper{s: s, march: s.March(), ahead: make([][]int, slices), aback: make([][]int, slices)}
	size := s.Components() * s.Block().Sites()
	keep := func(driven [][]int, e int) {
		if e < 0 || e >= free.Values() {
			return
		}
		if k, _ := free.At(e); k < 0 {
			driven[e/size] = append(driven[e/size], e%size)
		}
	}
	for row := range lifted { // the row of slice n sets slice n+1, or n−1
		keep(st.ahead, row+size)
		keep(st.aback, row-size)
	}
	return st
}

// clone returns a stepper for another goroutine.
func (st *stepper) clone() *stepper {
	c := *st
	c.march, c.kept = st.s.March(), nil
	return &c
}

// step writes slice n+1 to next, given the slices n and n−1.
func (st *stepper) step(next, now, before field.Slice, n int) {
	st.save(next, st.ahead[n+1])
	st.march.Step(next, now, before, n)
	st.restore(next, st.ahead[n+1])
}

// back writes slice n−1 to before, given the slices n and n+1.
func (st *stepper) back(before, now, next field.Slice, n int) {
	st.save(before, st.aback[n-1])
	st.march.Back(before, now, next, n)
	st.restore(before, st.aback[n-1])
}

func (st *stepper) save(s field.Slice, driven []int) {
	st.kept = st.kept[:0]
	for _, i := range driven {
		st.kept = append(st.kept, s.Data[i])
	}
}

func (st *stepper) restore(s field.Slice, driven []int) {
	for k, i := range driven {
		s.Data[i] = st.kept[k]
	}
}

// tangent writes the change of slice n+1 to next, given the changes of the
// slices n and n−1 around the slice phi. What drives the field does not change.
func (st *stepper) tangent(next, now, before, phi field.Slice, n int) {
	st.march.Tangent(next, now, before, phi, n)
	for _, i := range st.ahead[n+1] {
		next.Data[i] = 0
	}
}
