package minimize

import (
	"context"
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"gonum.org/v1/gonum/floats"
)

// Saddle finds a stationary point of index 1 of a Euclidean action near the
// start: the top of the lowest pass between two valleys, such as the bounce of a
// false vacuum, a sphaleron or a critical droplet. Descent runs away from it.
//
// The method is eigenvector following. The quadratic model of the action is
// climbed along the lowest eigenvector of the second variation and descended
// along all others: Newton's step, its sign changed along the few eigenvectors
// whose eigenvalue has the wrong one. Steps are kept where the model predicts the
// change of the action. [Cerjan & Miller 1981, J. Chem. Phys. 75, 2800; Simons,
// Jørgensen, Taylor & Ozment 1983, J. Phys. Chem. 87, 2745]
//
// Zero modes are held as Settings.Shifts and Settings.ZeroModes say: a bounce that
// nothing holds in its place has two, one in its own length each. Without them
// the lattice decides on the sign of two tiny eigenvalues, and the index reads 1, 2
// or 3 depending on where the centre lies between the sites.
//
// Errors, conditions and settings are as for Stationary; a Lorentzian density is
// refused. The status is Converged only if the second variation has, with the
// zero modes held, one negative eigenvalue and none that vanishes; it is Singular
// if the gradient vanishes where that is not so, such as at the false vacuum
// itself. Report.Inertia has the numbers.
func Saddle(ctx context.Context, f Functional, held *constraint.Set, start *field.History, set *Settings) (*Found, error) {
	if g, ok := given(f).(signed); ok && g.Signature() != action.Euclidean {
		return nil, &Refusal{Problem: problemSaddle, Why: "the density is Lorentzian, whose stationary histories have an index that grows with the number of events; want the Euclidean signature, or ask for a stationary history"}
	}
	s, err := newStationary(problemSaddle, f, held, start, set)
	if err != nil {
		return nil, err
	}
	s.rep.Method = "eigenvector following, nested-dissection LDLᵀ"
	return (&saddle{stationary: s}).solve(ctx)
}

// saddle is a search for a point of index 1.
type saddle struct {
	*stationary
	index  int
	low    []eigenpair // the lowest first
	radius float64     // of steps, in the metric
}

// followed is the largest index for which eigenvectors are followed one by one.
const followed = 12

func (s *saddle) solve(ctx context.Context) (*Found, error) {
	y, image := make([]float64, s.free.N), make([]float64, s.free.N)
	limit := s.limit()
	for {
		switch {
		case ctx.Err() != nil:
			return s.finish(Stopped, context.Cause(ctx).Error(), context.Cause(ctx))
		case s.rep.After.Max <= s.rep.Tolerance:
			return s.verify(ctx)
		case s.rep.Iterations == limit:
			return s.finish(Stopped, fmt.Sprintf("limit of %d steps reached", limit), nil)
		}
		if s.bare {
			if err := s.look(); err != nil {
				return s.finish(Stalled, err.Error(), err)
			}
		}
		if err := s.follow(y); err != nil {
			return s.finish(Stalled, err.Error(), err)
		}
		length := floats.Norm(y, 2)
		if s.radius == 0 {
			s.radius = length
		}
		if length > s.radius {
			floats.Scale(s.radius/length, y)
			length = s.radius
		}
		s.bordered.mul(image, y)
		predicted := floats.Dot(s.r, y) + 0.5*floats.Dot(y, image)
		value, square := s.evaluate(y)
		step := Step{Gain: (value - s.value) / predicted}
		// Where the action no longer tells histories apart the gradient does.
		blind := math.Abs(predicted) < 1e-10*(math.Abs(value)+math.Abs(s.value))
		lower := square < floats.Dot(s.r, s.r)
		off := math.Abs(step.Gain - 1)
		step.Accepted = !blind && off < 0.9 || lower && (blind || s.index == 1)
		switch {
		case !step.Accepted || !blind && !(off < 0.75):
			s.radius = 0.3 * length
		case blind || off < 0.25:
			s.radius = max(s.radius, 2*length)
		}
		if step.Accepted {
			s.accept(value)
			s.measure()
		}
		step.Cost, step.Max = s.rep.CostAfter, s.rep.After.Max
		s.step(step)
		if s.radius < 1e-12*s.h.Norm() {
			return s.stall()
		}
	}
}

// look factorises the second variation and finds its index and, unless that is
// 1, the eigenvectors that are wrong.
func (s *saddle) look() error {
	if err := s.linearise(); err != nil {
		return err
	}
	s.index, _ = s.bordered.negative()
	s.low = nil
	if s.index == 1 {
		return nil
	}
	if s.index > followed {
		return s.shift()
	}
	if l := s.bordered.nearest(3 * lanczosSteps); s.index == 0 {
		s.low = []eigenpair{l.positive()}
	} else {
		s.low = l.negative(followed)
	}
	return nil
}

// shift factorises A + μ with μ so large that only the lowest eigenvalue stays
// negative, by bisection. The step −(A + μ)⁻¹r is uphill along its vector and
// downhill along all others as well, and shorter.
func (s *saddle) shift() error {
	low, high := 0.0, s.bordered.norm
	const halvings = 60
	for range halvings {
		mu := 0.5 * (low + high)
		s.rep.Factorisations++
		if err := s.bordered.factorise(mu); err != nil {
			return err
		}
		n, zero := s.bordered.negative()
		switch {
		case n == 1 && zero == 0:
			return nil
		case n == 0:
			high = mu
		default:
			low = mu
		}
	}
	return fmt.Errorf("minimize: second variation of index %d on the way, its lowest two eigenvalues equal; want a start without that symmetry, or nearer to a saddle", s.index)
}

// follow writes the step to y: uphill along the lowest eigenvector, downhill along
// all others.
func (s *saddle) follow(y []float64) error {
	if err := s.newtonStep(y); err != nil {
		return err
	}
	for k, e := range s.low {
		if k == 0 && e.value > 0 || k > 0 && e.value < 0 {
			floats.AddScaled(y, -2*floats.Dot(y, e.vector), e.vector)
		}
	}
	return nil
}

// verify polishes, counts, and says whether it is a saddle of index 1.
func (s *saddle) verify(ctx context.Context) (*Found, error) {
	if err := s.polish(ctx); err != nil {
		return s.finish(Stalled, err.Error(), err)
	}
	low := s.bordered.nearest(3 * lanczosSteps).negative(followed)
	if err := s.count(); err != nil {
		return s.finish(Stalled, err.Error(), err)
	}
	i := s.rep.Inertia
	for _, e := range low {
		i.Negative = append(i.Negative, e.value)
	}
	if i.Index != 1 || i.Nullity > 0 || !i.Known {
		return s.finish(Singular, fmt.Sprintf("gradient vanishes, but the second variation has index %d and nullity %d, smallest |eigenvalue| %.2g at %v; want a start nearer to a saddle, or zero modes held", i.Index, i.Nullity, math.Abs(i.Smallest), i.At), nil)
	}
	return s.finish(Converged, "gradient within the tolerance, second variation of index 1", nil)
}
