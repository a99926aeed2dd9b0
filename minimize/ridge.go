package minimize

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
)

// Ridge returns the history of highest action on the straight line
//
//	φ = (1 − s) from + s to,  0 ≤ s ≤ 1,
//
// between two histories, such as a vacuum and a droplet that is too large or two
// vacua: a start for Saddle. s is found to 1e-3 by comparing 33 places and then
// by the golden section around the highest. It is an error if the histories are not
// on the block of f, or if the action is highest at an end, so that there is no
// ridge between them.
func Ridge(f Functional, from, to *field.History) (*field.History, error) {
	for _, h := range []*field.History{from, to} {
		if err := f.Fits(h); err != nil {
			return nil, fmt.Errorf("minimize: ridge: %w", err)
		}
	}
	h := from.Clone()
	at := func(s float64) float64 {
		for e, v := range from.Data {
			h.Data[e] = (1-s)*v + s*to.Data[e]
		}
		return f.Value(h)
	}
	const places = 32
	best, top := 0, at(0)
	for k := 1; k <= places; k++ {
		if v := at(float64(k) / places); v > top {
			best, top = k, v
		}
	}
	if best == 0 || best == places {
		return nil, fmt.Errorf("minimize: ridge: action is highest, %g, at an end of the line (%d of %d); want histories with a ridge between them", top, best, places)
	}
	const golden = 0.6180339887498949
	a, b := float64(best-1)/places, float64(best+1)/places
	c, d := b-golden*(b-a), a+golden*(b-a)
	vc, vd := at(c), at(d)
	for b-a > 1e-3 {
		if vc > vd {
			b, d, vd = d, c, vc
			c = b - golden*(b-a)
			vc = at(c)
		} else {
			a, c, vc = c, d, vd
			d = a + golden*(b-a)
			vd = at(d)
		}
	}
	at(0.5 * (a + b))
	return h, nil
}
