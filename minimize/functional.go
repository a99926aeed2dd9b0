package minimize

import (
	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A Functional is an action on a block whose stationary histories are looked
// for. *action.Discrete is one, and so are the actions of regions, of general
// Lagrangians and of noisy flows in package action. What its methods must do is
// said there; package actiontest checks a functional of one's own.
type Functional interface {
	Block() lattice.Block
	Components() int

	// Fits returns an error unless the history is finite and lies on the block.
	Fits(h *field.History) error

	// Conservative returns nil, or an error, such as *action.NoActionError,
	// that names what is in the equation and not in the action.
	Conservative() error

	// Value returns the action of a history.
	Value(h *field.History) float64

	// Gradient writes ∂S/∂φ at every event to dst, SecondVariationMatrix the
	// matrix of second derivatives; a nil dst is allocated. The pattern of the
	// matrix does not depend on the history.
	Gradient(dst, h *field.History) *field.History
	SecondVariationMatrix(dst *action.Matrix, h *field.History) *action.Matrix
}

// signed is a Functional that knows its signature.
type signed interface{ Signature() action.Signature }

var (
	_ Functional = (*action.Discrete)(nil)
	_ Functional = (*action.Shaped)(nil)
	_ Functional = (*action.Cells)(nil)
	_ Functional = (*action.NoisyFlow)(nil)
	_ signed     = (*action.Discrete)(nil)
	_ signed     = (*action.Shaped)(nil)
)

// given returns f, or nil if it is an action that is nil.
func given(f Functional) Functional {
	if s, ok := f.(*action.Discrete); ok && s == nil {
		return nil
	}
	return f
}
