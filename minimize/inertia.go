package minimize

import (
	"fmt"
	"math"
	"strings"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"gonum.org/v1/gonum/floats"
)

// An Inertia says what kind of stationary point a history is, by the signs of
// the eigenvalues λ of the second variation, S″v = λWv, on the changes that the
// conditions and the zero modes held leave. W are the areas that belong to the
// events, so that λ is per hk and has a continuum limit.
type Inertia struct {
	// Index is the number of negative eigenvalues: the Morse index. Nullity is
	// the number of those that vanish, |λ| ≤ Zero. Known is false if some could be
	// either.
	Index   int
	Nullity int
	Known   bool
	Zero    float64

	// Smallest is the λ of least modulus that was found, with an error of a few
	// per cent at worst, and At where its vector is largest.
	Smallest float64
	At       lattice.Event

	// Negative are the negative eigenvalues found, the lowest first. Saddle only.
	Negative []float64

	// ZeroModesHeld is the number of zero modes held, Force the largest part of
	// the gradient per hk along any of them (of unit L² norm): what keeps the
	// history from moving along it, such as the pull of a lattice on a kink.
	ZeroModesHeld int
	Force         float64

	// RelativeIndex is Index less ReferenceIndex, that of Settings.Reference.
	// Both are 0 without one; ReferenceKnown is as Known.
	ReferenceIndex, RelativeIndex int
	ReferenceKnown                bool
}

// String returns the inertia in one line.
func (i *Inertia) String() string {
	var s strings.Builder
	fmt.Fprintf(&s, "index %d", i.Index)
	if !i.Known {
		s.WriteString(" (uncertain)")
	}
	if i.Nullity > 0 {
		fmt.Fprintf(&s, ", nullity %d", i.Nullity)
	}
	if i.ReferenceKnown {
		fmt.Fprintf(&s, ", relative %+d", i.RelativeIndex)
	}
	if i.ZeroModesHeld > 0 {
		fmt.Fprintf(&s, ", %d zero modes held (force %.2g)", i.ZeroModesHeld, i.Force)
	}
	if len(i.Negative) > 0 {
		fmt.Fprintf(&s, ", lowest λ %.4g", i.Negative[0])
	}
	fmt.Fprintf(&s, ", smallest |λ| %.4g at %v", math.Abs(i.Smallest), i.At)
	return s.String()
}

// vanishing, times the norm of the second variation, is the size up to which
// an eigenvalue counts as zero: above rounding, 1e-16 times some growth, and below
// any with which a solve keeps five digits.
const vanishing = 1e-11

// lanczosSteps finds the eigenvalue of least modulus to two digits unless the
// next is within a few per cent.
const lanczosSteps = 24

// count fills in the inertia at h, whose second variation is factorised.
func (s *stationary) count() error {
	b := s.bordered
	i := &Inertia{ZeroModesHeld: s.modes, Force: s.force(), Zero: vanishing * b.norm}
	s.rep.Inertia = i
	low := b.nearest(lanczosSteps).smallest()
	image := make([]float64, len(low.vector))
	b.mul(image, low.vector)
	n, zero := b.negative()
	if zero > 0 { // a null vector of the matrix with replaced pivots is not quite one of A
		b.solve(image, image)
		floats.Sub(low.vector, image)
		floats.Scale(1/floats.Norm(low.vector, 2), low.vector)
		b.mul(image, low.vector)
	}
	// the length of the image does not cancel as the eigenvalue does
	i.Smallest = math.Copysign(floats.Norm(image, 2), low.value)
	i.At = s.where(low.vector)
	i.Index, i.Nullity, i.Known = n, zero, zero == 0
	if zero > 0 || math.Abs(i.Smallest) <= i.Zero {
		var err error
		if i.Index, i.Nullity, i.Known, err = s.countBeside(i.Zero); err != nil {
			return err
		}
	}
	if s.set.Reference == nil {
		return nil
	}
	return s.countReference(i)
}

// countBeside counts eigenvalues below −ε and between −ε and ε from the inertia of
// A + ε and A − ε.
func (s *stationary) countBeside(eps float64) (index, nullity int, known bool, err error) {
	var below [2]int
	known = true
	for k, shift := range [2]float64{eps, -eps} {
		s.rep.Factorisations++
		if err := s.bordered.factorise(shift); err != nil {
			return 0, 0, false, err
		}
		n, zero := s.bordered.negative()
		below[k], known = n, known && zero == 0
	}
	return below[0], below[1] - below[0], known, nil
}

func (s *stationary) countReference(i *Inertia) error {
	s.second = s.f.SecondVariationMatrix(s.second, s.set.Reference)
	s.bordered.assemble(s.second)
	s.rep.Factorisations++
	if err := s.bordered.factorise(0); err != nil {
		return err
	}
	n, zero := s.bordered.negative()
	i.ReferenceIndex, i.ReferenceKnown = n, zero == 0
	if zero > 0 {
		var err error
		if i.ReferenceIndex, _, i.ReferenceKnown, err = s.countBeside(vanishing * s.bordered.norm); err != nil {
			return err
		}
	}
	i.RelativeIndex = i.Index - i.ReferenceIndex
	i.ReferenceKnown = i.ReferenceKnown && i.Known
	return nil
}

// where returns the event where a vector in the metric is largest.
func (s *stationary) where(v []float64) lattice.Event {
	worst := 0
	for u := range v {
		if math.Abs(v[u])/s.bordered.root[u] > math.Abs(v[worst])/s.bordered.root[worst] {
			worst = u
		}
	}
	_, _, _, at := s.free.Event(s.free.Lead(worst))
	return at
}

// force returns the largest part of the gradient along a zero mode held.
func (s *stationary) force() (largest float64) {
	r := make([]float64, len(s.trialR))
	slope := s.f.Gradient(nil, s.h)
	s.free.Reduce(r, slope)
	for u := range r {
		r[u] /= s.bordered.root[u]
	}
	for j := len(s.bordered.rows) - s.modes; j < len(s.bordered.rows); j++ {
		largest = max(largest, math.Abs(s.bordered.along(j, r)))
	}
	return largest
}

// checkReference returns an error unless the reference lies on the block.
func checkReference(f Functional, h *field.History) error {
	if h == nil {
		return nil
	}
	if err := f.Fits(h); err != nil {
		return fmt.Errorf("minimize: reference history: %w", err)
	}
	return nil
}
