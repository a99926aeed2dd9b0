package actiontest

import (
	"errors"
	"fmt"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// An Action is what every action of the library offers, and what the solvers of
// a whole block ask for: [action.Discrete], [action.Cells], [action.Shaped] and
// [action.NoisyFlow] have it.
type Action interface {
	Block() lattice.Block
	Components() int
	Fits(h *field.History) error
	Conservative() error

	Value(h *field.History) float64
	Gradient(dst, h *field.History) *field.History
	SecondVariation(dst, h, direction *field.History) *field.History
	SecondVariationMatrix(dst *action.Matrix, h *field.History) *action.Matrix
}

var (
	_ Action = (*action.Discrete)(nil)
	_ Action = (*action.Cells)(nil)
	_ Action = (*action.Shaped)(nil)
	_ Action = (*action.NoisyFlow)(nil)
)

// Functional returns what is wrong with an action, or nil. At each of the given
// histories, or at a random one between Settings.Low and High, it asks that the
// gradient be the derivative of the action at every event, that the second
// variation be that of the gradient, as a product and as a symmetric matrix, and
// that the pattern of the matrix and the results not depend on what dst held
// before. Errors name the quantity, the component and the event (x, t).
//
// Give histories where a random one would be outside of the domain of the
// density.
func Functional(f Action, s Settings, at ...*field.History) error {
	if f == nil {
		return errors.New("actiontest: action is nil; want one such as *action.Cells")
	}
	s, err := s.fill(1)
	if err != nil {
		return err
	}
	if len(at) == 0 {
		at = []*field.History{newTrial(f, s).h}
	}
	var all []error
	for k, h := range at {
		if err := f.Fits(h); err != nil {
			all = append(all, fmt.Errorf("actiontest: history %d: %w", k, err))
			continue
		}
		e := newTrial(f, s)
		e.h = h
		e.gradient()
		e.secondVariation()
		e.reuse()
		all = append(all, e.found.err())
	}
	return errors.Join(all...)
}

// reuse asks for the same bits in memory that held something else.
func (e *trial) reuse() {
	fresh := e.of.SecondVariationMatrix(nil, e.h)
	other := e.h.Clone()
	unit(e.r, other.Data)
	used := e.of.SecondVariationMatrix(e.of.SecondVariationMatrix(nil, other), e.h)
	for r := range fresh.Rows() {
		columns, values := fresh.Row(r)
		again, also := used.Row(r)
		for k, c := range columns {
			if k >= len(again) || again[k] != c || also[k] != values[k] {
				e.found.add("matrix memory", 1, "row of the second variation matrix, %s, is not the same in used memory; want the pattern to depend on the action alone and values overwritten", e.place(r))
				break
			}
		}
	}
	eta := e.direction()
	for _, c := range []struct {
		name string
		f    func(dst *field.History) *field.History
	}{
		{"gradient", func(dst *field.History) *field.History { return e.of.Gradient(dst, e.h) }},
		{"second variation", func(dst *field.History) *field.History { return e.of.SecondVariation(dst, e.h, eta) }},
	} {
		want := c.f(nil)
		dst := e.direction()
		c.f(dst)
		for k, v := range want.Data {
			if dst.Data[k] != v {
				e.found.add(c.name+" memory", 1, "%s, %s, is %.12g in new memory and %.12g in used memory; want dst overwritten", c.name, e.place(k), v, dst.Data[k])
			}
		}
	}
}
