package minimize

import (
	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
)

// softened is an action with the cost of soft conditions added, so that a
// solver that knows nothing of them finds their compromise with the action. The
// second variation has the curvature of observations and cost conditions on its
// diagonal; soft linear conditions, which would fill it, are left to bordering.
type softened struct {
	Functional
	free *constraint.Unknowns
	bent *field.History // curvature of the terms
}

func (s *softened) Value(h *field.History) float64 {
	return s.Functional.Value(h) + s.free.Cost(h)
}

func (s *softened) Gradient(dst, h *field.History) *field.History {
	dst = s.Functional.Gradient(dst, h)
	s.free.AddGradient(dst, h)
	return dst
}

func (s *softened) SecondVariationMatrix(dst *action.Matrix, h *field.History) *action.Matrix {
	dst = s.Functional.SecondVariationMatrix(dst, h)
	if s.bent == nil {
		s.bent = field.NewHistory(h.Block, h.Components)
	}
	clear(s.bent.Data)
	s.free.AddCurvature(s.bent, h)
	for e, v := range s.bent.Data {
		if v == 0 {
			continue
		}
		columns, values := dst.Row(e)
		for k, f := range columns {
			if f == e {
				values[k] += v
				break
			}
		}
	}
	return dst
}
