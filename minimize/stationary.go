package minimize

import (
	"context"
	"fmt"
	"math"
	"slices"

	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"gonum.org/v1/gonum/floats"
)

// Stationary finds a history that makes the action S stationary under the
// conditions, for either signature: ∂S/∂φ = 0 at every free value, with the
// natural condition at free ends and at a first or last slice that is not pinned.
// It does not ask whether that is a minimum or a saddle, and goes to a stationary
// point near the start; Report.Inertia says which kind was found.
//
// The method is Newton's, with the second variation factorised as LDLᵀ, so that a
// linear equation takes one step. Away from the solution the steps are Powell's
// dogleg, which lower the squared gradient ∫(δS/δφ)² dx dt; they can end in a place
// where that has a minimum above zero, which is reported as Stalled.
//
// Losses and open ends are refused with a *Refusal. The start history is adjusted
// to the conditions first and is not changed. nil conditions hold nothing, nil
// settings are the defaults.
//
// The error is a *NotConverged unless the status is Converged; Found then holds
// the best history. The status is Singular if the second variation has
// eigenvalues that vanish: the conditions leave a family of histories, of which
// one more condition, or Settings.ZeroModes, would choose one, or they contradict
// the equation, as the reason says. A two-time problem is singular if a normal mode
// fits the time between the slices [Bourgin & Duffin 1939, Bull. Amer. Math. Soc.
// 45, 851]. Inertia has the numbers: nullity, smallest |eigenvalue| and the event
// where its vector is largest. With Settings.MinimumNorm the member of the family
// nearest to the start is an answer. The push of a reaction is −∂S/∂φ(E), the
// impulse that a source at E would need to hold the field there.
func Stationary(ctx context.Context, f Functional, held *constraint.Set, start *field.History, set *Settings) (*Found, error) {
	s, err := newStationary(problemStationary, f, held, start, set)
	if err != nil {
		return nil, err
	}
	s.rep.Method = "Newton with Powell's dogleg, nested-dissection LDLᵀ"
	return s.solve(ctx)
}

// stationary is a problem ∂S/∂φ = 0 being solved. Vectors in the metric are W^½
// times changes of the unknowns and W^−½ times derivatives.
type stationary struct {
	*minimum
	bordered  *bordered
	modes     int         // zero modes held, the last rows of the border
	r, trialR []float64   // gradient in the metric, on the constrained space
	null      [][]float64 // null vectors of A at h, once they are asked for
	bare      bool        // no second variation of h is factorised
}

func newStationary(name string, f Functional, held *constraint.Set, start *field.History, set *Settings) (*stationary, error) {
	if f = given(f); f != nil {
		if err := conservative(name, f); err != nil {
			return nil, err
		}
		if set != nil {
			if err := checkReference(f, set.Reference); err != nil {
				return nil, err
			}
		}
	}
	m, err := newMinimum(name, f, held, start, set)
	if err != nil {
		return nil, err
	}
	if m.bounds != nil || m.free.Tally().Soft > 0 {
		return nil, &Refusal{Problem: name, Why: "bounds or soft linear conditions; want hard ones, or ask for the minimum"}
	}
	s := &stationary{minimum: m, bare: true}
	modes, err := s.zeroModes()
	if err != nil {
		return nil, err
	}
	s.modes = len(modes)
	s.hess = newHessian(s.second, s.free, s.grid())
	if s.bordered, err = newBordered(s.problem, s.hess, append(s.linearRows(), modes...)); err != nil {
		return nil, err
	}
	n := s.free.N
	s.r, s.trialR, s.delta = make([]float64, n), make([]float64, n), make([]float64, n)
	first := make([]float64, n)
	s.bordered.meet(first, s.free.Gather(nil, s.h))
	value, _ := s.evaluate(first)
	s.accept(value)
	s.measure()
	s.rep.Before, s.rep.CostBefore = s.rep.After, s.value
	return s, nil
}

// evaluate moves the trial to h + W^−½y and returns the action and |r|² there.
func (s *stationary) evaluate(y []float64) (value, square float64) {
	root := s.bordered.root
	for u, v := range y {
		s.delta[u] = v / root[u]
	}
	s.move(s.delta)
	value = s.f.Value(s.trial)
	s.trialSlope = s.f.Gradient(s.trialSlope, s.trial)
	s.free.Reduce(s.trialGrad, s.trialSlope)
	for u, g := range s.trialGrad {
		s.trialR[u] = g / root[u]
	}
	s.bordered.project(s.trialR)
	for u, v := range s.trialR {
		s.trialGrad[u] = v * root[u]
	}
	return value, floats.Dot(s.trialR, s.trialR)
}

// accept makes the trial the best history.
func (s *stationary) accept(value float64) {
	s.minimum.accept(value)
	s.r, s.trialR = s.trialR, s.r
	s.bare = true
}

// linearise factorises the second variation at h, which measure has evaluated.
func (s *stationary) linearise() error {
	if !s.bare {
		return nil
	}
	s.bordered.assemble(s.second)
	s.rep.Factorisations++
	if err := s.bordered.factorise(0); err != nil {
		return err
	}
	s.null, s.bare = nil, false
	return nil
}

// nullVectors returns the null vectors of the second variation that is
// factorised, none if it has none.
func (s *stationary) nullVectors() ([][]float64, error) {
	_, zero := s.bordered.negative()
	if zero == 0 || s.null != nil {
		return s.null, nil
	}
	if size := 16 * float64(zero) * float64(s.free.N); size > s.set.Memory {
		return nil, fmt.Errorf("minimize: %d null vectors of %d unknowns need %.2g bytes, above the limit of %.2g in the settings", zero, s.free.N, size, s.set.Memory)
	}
	s.null = s.bordered.nullSpace(zero)
	return s.null, nil
}

// newtonStep writes the step to dst, the shortest there is if A is singular.
func (s *stationary) newtonStep(dst []float64) error {
	null, err := s.nullVectors()
	if err != nil {
		return err
	}
	if null == nil {
		s.bordered.solve(dst, s.r)
	} else {
		s.bordered.solveWithin(dst, s.r, null)
	}
	floats.Scale(-1, dst)
	return nil
}

// contradicted reports whether all that is left of the gradient lies along the
// null vectors, where no step can reach it.
func (s *stationary) contradicted() bool {
	if s.null == nil {
		return false
	}
	rest := slices.Clone(s.r)
	along := outside(rest, s.null)
	return floats.Norm(rest, 2) <= 1e-6*along
}

func (s *stationary) solve(ctx context.Context) (*Found, error) {
	limit := s.limit()
	d := newDogleg(s.free.N)
	for square := floats.Dot(s.r, s.r); ; {
		switch {
		case ctx.Err() != nil:
			return s.finish(Stopped, context.Cause(ctx).Error(), context.Cause(ctx))
		case s.rep.After.Max <= s.rep.Tolerance:
			return s.verify(ctx)
		case s.rep.Iterations == limit:
			return s.finish(Stopped, fmt.Sprintf("limit of %d steps reached", limit), nil)
		}
		if s.bare {
			if err := s.linearise(); err != nil {
				return s.finish(Stalled, err.Error(), err)
			}
			if err := s.newtonStep(d.newton); err != nil {
				return s.finish(Stalled, err.Error(), err)
			}
			if s.contradicted() {
				return s.contradiction()
			}
			d.aim(s.bordered, s.r)
		}
		length := d.choose()
		predicted := square - d.predict(s.bordered, s.r)
		value, trial := s.evaluate(d.step)
		step := Step{Gain: (square - trial) / predicted}
		step.Accepted = step.Gain > 1e-4 && trial < square
		d.judge(step.Gain, length)
		if step.Accepted {
			s.accept(value)
			s.measure()
			square = trial
		}
		step.Cost, step.Max = s.rep.CostAfter, s.rep.After.Max
		s.step(step)
		if d.radius < 1e-12*s.h.Norm() || !(predicted > 1e-12*square) {
			return s.stall()
		}
	}
}

// limit returns the largest number of steps.
func (s *stationary) limit() int {
	if s.set.Iterations == 0 {
		return 200
	}
	return s.set.Iterations
}

// stall ends a solve in which no step lowers the gradient.
func (s *stationary) stall() (*Found, error) {
	if err := s.linearise(); err != nil {
		return s.finish(Stalled, err.Error(), err)
	}
	if err := s.count(); err != nil {
		return s.finish(Stalled, err.Error(), err)
	}
	return s.finish(Stalled, "no step lowers the squared gradient, which is not zero; want another start", nil)
}

// contradiction ends a solve whose conditions the equation cannot meet.
func (s *stationary) contradiction() (*Found, error) {
	if err := s.count(); err != nil {
		return s.finish(Singular, err.Error(), err)
	}
	i := s.rep.Inertia
	return s.finish(Singular, fmt.Sprintf("conditions contradict the equation: the second variation has %d null vectors, one of them largest at %v, and the gradient along them cannot vanish", i.Nullity, i.At), nil)
}

// verify takes corrections with one factor for as long as they halve the
// gradient, and says what was found.
func (s *stationary) verify(ctx context.Context) (*Found, error) {
	if err := s.polish(ctx); err != nil {
		return s.finish(Stalled, err.Error(), err)
	}
	if err := s.count(); err != nil {
		return s.finish(Stalled, err.Error(), err)
	}
	reason := "gradient within the tolerance"
	if i := s.rep.Inertia; i.Nullity > 0 || !i.Known {
		reason = fmt.Sprintf("gradient vanishes, but the second variation has nullity %d: smallest |eigenvalue| %.2g, its vector largest at %v", i.Nullity, math.Abs(i.Smallest), i.At)
		if !s.set.MinimumNorm {
			return s.finish(Singular, reason+"; want one more condition or zero modes held, or ask for the minimum norm", nil)
		}
		reason += "; of the family the history nearest to the start"
	}
	return s.finish(Converged, reason, nil)
}

// polish corrects with the factor at h for as long as that halves the gradient.
func (s *stationary) polish(ctx context.Context) error {
	if err := s.linearise(); err != nil {
		return err
	}
	y := make([]float64, s.free.N)
	const most = 20
	for range most {
		if ctx.Err() != nil || s.rep.After.Max == 0 {
			break
		}
		if err := s.newtonStep(y); err != nil {
			return err
		}
		value, _ := s.evaluate(y)
		var after float64
		for _, g := range s.trialGrad {
			after = max(after, math.Abs(g)/s.hk)
		}
		before := s.rep.After.Max
		if !(after < before) {
			break
		}
		s.rep.Corrections++
		s.accept(value)
		s.bare = false // the factor of a history this near will do
		s.rep.After.Max = after
		if after > 0.5*before {
			break
		}
	}
	return nil
}
