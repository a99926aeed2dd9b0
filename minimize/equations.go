package minimize

import (
	"errors"
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
)

// equations are the stationary equations ∂S/∂φ = 0 of the unknowns of one
// problem, of either signature, S with the cost of soft conditions.
type equations struct {
	*problem
	leads  []int32
	slope  *field.History
	second *action.Matrix
}

// newEquations checks a problem called name and refuses what has no action.
func newEquations(name string, f Functional, held *constraint.Set, start *field.History, set *Settings) (*equations, error) {
	if f = given(f); f != nil {
		if err := conservative(name, f); err != nil {
			return nil, err
		}
	}
	p, err := newProblem(name, f, held, start, set)
	if err != nil {
		return nil, err
	}
	if p.hard != nil || p.bounds != nil || len(p.free.SoftRows()) > 0 {
		return nil, &Refusal{Problem: name, Why: "linear conditions or bounds; want pins, rates, costs and observations only"}
	}
	q := &equations{problem: p}
	for k := range p.free.N {
		q.leads = append(q.leads, int32(p.free.Lead(k)))
	}
	return q, nil
}

// refuseLorentzian returns a *Refusal if f is known to be Lorentzian.
func refuseLorentzian(name string, f Functional) error {
	if g, ok := f.(signed); ok && g.Signature() != action.Euclidean {
		return &Refusal{Problem: name, Why: "the density is Lorentzian, whose stationary histories are saddles; want the Euclidean signature, or ask for the least residual"}
	}
	return nil
}

// gradient writes ∂S/∂x at the unknowns x to g; the history stands in trial.
func (q *equations) gradient(g, x []float64) {
	q.free.Scatter(q.trial, x)
	q.slope = q.f.Gradient(q.slope, q.trial)
	q.free.Reduce(g, q.slope)
}

// tolerance returns what the largest |∂S/∂x|/hk of a solution is at most: the
// given number, or 1e-10 of the largest term of the equation at the trial, whose
// second variation and slope are at hand.
func (q *equations) tolerance() float64 {
	if q.set.Tolerance > 0 {
		return q.set.Tolerance
	}
	q.h, q.trial = q.trial, q.h
	defer func() { q.h, q.trial = q.trial, q.h }()
	return 1e-10 * q.scale(q.second, q.slope.Data, q.leads) / q.hk
}

// size returns the norm of ∂S/∂x per hk.
func (q *equations) size(g []float64) Norm {
	var n Norm
	var sum float64
	for k, v := range g {
		v = math.Abs(v) / q.hk
		sum += v * v
		if k == 0 || v > n.Max || math.IsNaN(v) {
			n.Max = v
			_, _, _, n.At = q.free.Event(int(q.leads[k]))
			if math.IsNaN(v) {
				break
			}
		}
	}
	n.RMS = math.Sqrt(sum / float64(len(g)))
	return n
}

// where says where the null vector of a singular bordered matrix stands.
func (q *equations) where(err error) error {
	var s *singularMatrix
	if !errors.As(err, &s) || s.unknown >= len(q.leads) {
		return err
	}
	_, c, _, at := q.free.Event(int(q.leads[s.unknown]))
	return fmt.Errorf("%w, its null vector largest in component %d at %v", err, c, at)
}
