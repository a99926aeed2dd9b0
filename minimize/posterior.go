package minimize

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/lattice"
	"gonum.org/v1/gonum/mat"
)

// A Posterior is what conditions and equation together tell of the field at a
// few events: mean and covariance of one component.
type Posterior struct {
	Component  int
	At         []lattice.Event
	Mean       []float64     // the history that was found
	Covariance *mat.SymDense // in units of the field, squared
}

// Deviation returns the standard deviation of the field at the i-th event.
func (p *Posterior) Deviation(i int) float64 { return math.Sqrt(p.Covariance.At(i, i)) }

// Posterior returns the posterior of the field at the given events, by the
// covariance K⁻¹ of the histories φ whose probability is
//
//	exp(−C(φ))
//
// up to a factor, C being the cost that was made least and K its second
// derivative. For the least residual that is the field equation driven by white
// noise of the strength q, ⟨ξ(x, t)ξ(x′, t′)⟩ = q²δ(x − x′)δ(t − t′) or of
// standard deviation q/√hk on the lattice; for a minimum it is the weight e⁻ˢ.
// Observations count with their standard deviations, cost conditions with their
// curvature. Pins and hard linear conditions leave no spread along them.
//
// It is exact if the cost is quadratic (Gauss and Markov), and otherwise the
// normal distribution with the curvature of the peak [Laplace's method; MacKay
// 2003, Information Theory, Inference and Learning Algorithms, chapter 27]. A
// history with an active bound is refused, for its spread is one-sided.
func (q *Response) Posterior(component int, at ...lattice.Event) (*Posterior, error) {
	if name := q.found.Report.Problem; q.k.jac == nil && name != problemMinimum {
		return nil, &Refusal{Problem: "posterior", Why: "a " + name + " history is no maximum of a probability; want a minimum or a least residual"}
	}
	if q.k.still != nil {
		return nil, &Refusal{Problem: "posterior", Why: fmt.Sprintf("%d bounds are active; want a history that stands away from them", q.k.still.count)}
	}
	p := &Posterior{Component: component, At: append([]lattice.Event(nil), at...)}
	places, loads := make([]int, len(at)), make([]load, len(at))
	for i, e := range at {
		var err error
		if places[i], err = q.index(e, component); err != nil {
			return nil, fmt.Errorf("minimize: posterior: %w", err)
		}
		p.Mean = append(p.Mean, q.p.h.Data[places[i]])
		loads[i].force = []entry{{places[i], -1}}
	}
	if len(at) == 0 {
		return p, nil
	}
	p.Covariance = mat.NewSymDense(len(at), nil)
	for i, y := range q.k.solve(loads) {
		for j := range i + 1 {
			p.Covariance.SetSym(i, j, y.moved.Data[places[j]])
		}
	}
	return p, nil
}
