package minimize

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// stretched is the action of one period T of a history of given slices,
//
//	S(T) = K/T − UT,
//
// K/T the kinetic and UT the rest, as a combination a(T)S₁ + b(T)S₂ of the
// actions of two blocks with the periods T₁ and T₂ = 2T₁. Derivatives by T are
// exact that way.
type stretched struct {
	block         lattice.Block
	first         float64 // T₁
	one, two      *action.Discrete
	g1, g2        *field.History // ∂S₁/∂φ, ∂S₂/∂φ
	matrix, other *action.Matrix
}

func newStretched(b lattice.Block, d action.Density) (*stretched, error) {
	s := &stretched{block: b, first: b.Time.Length()}
	var err error
	if s.one, err = action.New(b, d); err != nil {
		return nil, err
	}
	s.two, err = action.New(s.at(2*s.first), d)
	return s, err
}

// at returns the block with period T.
func (s *stretched) at(period float64) lattice.Block {
	b := s.block
	b.Time.Step = period / float64(b.Time.Sites)
	return b
}

// weights returns a and b and their first and second derivatives at T.
func (s *stretched) weights(period float64) (a, b [3]float64) {
	t1, t := s.first, period
	t2 := 2 * t1
	d := t2*t2 - t1*t1
	over := [3]float64{1 / t, -1 / (t * t), 2 / (t * t * t)}
	rest := [3]float64{t1*t1/t - t, -t1*t1/(t*t) - 1, 2 * t1 * t1 / (t * t * t)}
	for k := range 3 {
		a[k] = t1 * (over[k] + rest[k]/d)
		b[k] = -t2 * rest[k] / d
	}
	return a, b
}

// value returns S and its first two derivatives by T.
func (s *stretched) value(h *field.History, period float64) (v [3]float64) {
	a, b := s.weights(period)
	one, two := s.one.Value(h), s.two.Value(h)
	for k := range v {
		v[k] = a[k]*one + b[k]*two
	}
	return v
}

// gradient writes ∂S/∂φ to g and ∂²S/∂φ∂T to by.
func (s *stretched) gradient(g, by, h *field.History, period float64) {
	a, b := s.weights(period)
	s.g1, s.g2 = s.one.Gradient(s.g1, h), s.two.Gradient(s.g2, h)
	for e, v := range s.g1.Data {
		w := s.g2.Data[e]
		g.Data[e] = a[0]*v + b[0]*w
		by.Data[e] = a[1]*v + b[1]*w
	}
}

// second returns the second variation by φ, valid until the next call.
func (s *stretched) second(h *field.History, period float64) *action.Matrix {
	a, b := s.weights(period)
	s.matrix, s.other = s.one.SecondVariationMatrix(s.matrix, h), s.two.SecondVariationMatrix(s.other, h)
	for e, v := range s.other.Value {
		s.matrix.Value[e] = a[0]*s.matrix.Value[e] + b[0]*v
	}
	return s.matrix
}

// autonomous returns a *Refusal if the action of h does not depend on the period
// as it should: if the density depends on time.
func (s *stretched) autonomous(d action.Density, h *field.History) error {
	third, err := action.New(s.at(3*s.first), d)
	if err != nil {
		return err
	}
	g, by := h.Clone(), h.Clone()
	s.gradient(g, by, h, 3*s.first)
	want := third.Gradient(nil, h)
	// the weights at 3T₁ are below 10 in size
	size := max(s.g1.MaxAbs(), s.g2.MaxAbs(), want.MaxAbs())
	for e, v := range want.Data {
		if math.Abs(v-g.Data[e]) > 1e-10*size {
			n, c, i := h.Place(e)
			return &Refusal{Problem: problemPeriodic, Why: fmt.Sprintf(
				"the density depends on time: at three periods ∂S/∂φ of component %d at %v is not of the form K/T − UT; want coefficients and a potential that depend on x only", c, s.block.At(n, i))}
		}
	}
	return nil
}
