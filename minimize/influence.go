package minimize

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// An Influence is the change δφ of a whole history for a unit of one change, to
// first order: the map of one event's bearing on all others. As a difference of
// fields it does not jump around periodic axes.
type Influence struct {
	Change  Change
	History *field.History // δφ
}

// Of returns the influences of the changes, in their order. They are solved for
// together, sixteen at a time, with the factor at hand and corrected until they
// are exact to rounding. Errors name the change.
func (q *Response) Of(changes ...Change) ([]*Influence, error) {
	loads := make([]load, len(changes))
	for i, c := range changes {
		var err error
		if loads[i], err = q.load(c); err != nil {
			return nil, err
		}
	}
	found := make([]*Influence, len(changes))
	for i, y := range q.k.solve(loads) {
		found[i] = &Influence{Change: changes[i], History: y.moved}
	}
	return found, nil
}

// Shares tells how an influence is spread as seen from the apex of a light cone.
// Past, Future and Outside add up to 1; the cone's surface belongs to its inside
// and the apex to its future. All are zero if Total is.
type Shares struct {
	Past, Future, Outside float64 // of Total
	Total                 float64 // Σ hk δφ², over events and components
}

// String returns the shares in one line.
func (s Shares) String() string {
	return fmt.Sprintf("past %.4g, future %.4g, outside %.4g", s.Past, s.Future, s.Outside)
}

// Shares returns how the influence is spread over a light cone, which should
// have its apex at the event that is changed. An evolution from Cauchy data sends
// nothing outside of the future cone. On the lattice signals move by one link a
// step if links join nearest neighbours, faster than light unless the Courant
// number is 1; the cone of that is
//
//	lattice.NewCone(b.Space, event, b.Space.Step/b.Time.Step)
//
// On a periodic clock times are those of the block, first slice to last.
func (f *Influence) Shares(cone *lattice.Cone) Shares {
	h := f.History
	var s Shares
	for e, v := range h.Data {
		n, _, i := h.Place(e)
		switch cone.Side(h.Block.At(n, i)) {
		case lattice.Past:
			s.Past += v * v
		case lattice.Future:
			s.Future += v * v
		default:
			s.Outside += v * v
		}
	}
	total := s.Past + s.Future + s.Outside
	if total > 0 {
		s.Past, s.Future, s.Outside = s.Past/total, s.Future/total, s.Outside/total
	}
	s.Total = total * h.Block.Time.Step * h.Block.Space.Step
	return s
}
