package constraint

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
)

// Collective holds a collective coordinate of slice n at zero,
//
//	Σ_c Σ_i u_i h w_ci (φ_ci − φ⁰_ci) = 0,
//
// w being the profile, for instance the zero mode ∂φ⁰/∂x of a kink φ⁰, whose
// position it then fixes, and φ⁰ the slice about; an empty about is zero. u_i are
// the weights of the trapezoid rule. The reaction is the force along the profile.
func (s *Set) Collective(n int, profile, about field.Slice) *Linear {
	l := newLinear(fmt.Sprintf("collective coordinate of slice %d", n), 0)
	if !s.onBlock(n, "collective coordinate of slice") || !s.fits(profile, s.block.Sites(), "profile of the "+l.Name) {
		return l
	}
	if !about.Empty() && !(s.fits(about, s.block.Sites(), "slice about which the "+l.Name+" is") && s.alike(l.Name, profile.Components, about.Components)) {
		return l
	}
	first, ok := s.from(profile.Components, l.Name)
	if !ok {
		return l
	}
	l.at, l.component = s.block.At(n, 0), first
	s.project(l, n, first, s.block.Space.Step, profile, about)
	return s.hold(l)
}

// CollectiveBlock holds a collective coordinate of the whole block at zero,
//
//	Σ_n w_n k Σ_c Σ_i u_i h w_nci (φ_nci − φ⁰_nci) = 0,
//
// with the trapezoid rule along both axes. A nil about is zero. In a region the
// profile must be zero at events that are not in it.
func (s *Set) CollectiveBlock(profile, about *field.History) *Linear {
	return s.collective(newLinear("collective coordinate", 0), profile, about)
}

// Phase holds the phase of a history that is periodic in time: the
// CollectiveBlock about a reference history whose profile is the rate of that
// history, (φ⁰(n+1) − φ⁰(n−1))/2k around the period with the jump of the clock.
// Without it a solution may slide along time at no cost. It is an error on a
// clock that is not periodic, and for a reference that does not change.
func (s *Set) Phase(about *field.History) *Linear {
	l := newLinear("phase", 0)
	if !s.block.Time.Periodic {
		s.fail(fmt.Errorf("constraint: phase condition on a clock with ends; want a periodic time axis"))
		return l
	}
	if err := about.Check(); err != nil {
		s.fail(fmt.Errorf("constraint: reference of the phase condition: %w", err))
		return l
	}
	if !s.covered(l.Name, about) {
		return l
	}
	rate := field.NewHistory(s.block, about.Components)
	first := max(s.component, 0)
	for n := range s.block.Slices() {
		before, back := wrap(s.block.Time, n-1)
		after, ahead := wrap(s.block.Time, n+1)
		for c := range about.Components {
			jump := (ahead - back) * s.block.Time.JumpOf(first+c)
			for i := range s.block.Sites() {
				rate.Set(n, c, i, (about.At(after, c, i)-about.At(before, c, i)+jump)/(2*s.block.Time.Step))
			}
		}
	}
	return s.collective(l, rate, about)
}

func (s *Set) collective(l *Linear, profile, about *field.History) *Linear {
	given := []*field.History{profile}
	if about != nil {
		given = append(given, about)
	}
	for _, h := range given {
		if err := h.Check(); err != nil {
			s.fail(fmt.Errorf("constraint: %s: %w", l.Name, err))
			return l
		}
		if !s.covered(l.Name, h) || !s.alike(l.Name, profile.Components, h.Components) {
			return l
		}
	}
	first, ok := s.from(profile.Components, l.Name)
	if !ok {
		return l
	}
	l.at, l.component = s.block.At(0, 0), first
	area := s.block.Time.Step * s.block.Space.Step
	for n := range s.block.Slices() {
		var base field.Slice
		if about != nil {
			base = about.Slice(n)
		}
		s.project(l, n, first, area*trapezoid(s.block.Time, n), profile.Slice(n), base)
	}
	return s.hold(l)
}

// project adds weight·Σ_c Σ_i u_i w (φ − φ⁰) of slice n to a condition and moves
// its event to the first coefficient that is not zero.
func (s *Set) project(l *Linear, n, first int, weight float64, profile, about field.Slice) {
	for c := range profile.Components {
		for i, w := range profile.Component(c) {
			if w == 0 {
				continue
			}
			a := weight * trapezoid(s.block.Space, i) * w
			if len(l.terms) == 0 {
				l.at, l.component = s.block.At(n, i), first+c
			}
			l.terms = append(l.terms, coefficient{place{n, first + c}, i, a})
			if !about.Empty() {
				l.asked += a * about.At(c, i)
			}
		}
	}
}

// covered reports whether a history has the slices and sites of the block.
func (s *Set) covered(name string, h *field.History) bool {
	b, g := s.block, h.Block
	if b.Slices() != g.Slices() || b.Sites() != g.Sites() {
		s.fail(fmt.Errorf("constraint: %s by a history of %d slices × %d sites; the block has %d × %d", name, g.Slices(), g.Sites(), b.Slices(), b.Sites()))
		return false
	}
	return true
}

// alike reports whether profile and reference have equally many components.
func (s *Set) alike(name string, profile, about int) bool {
	if profile != about {
		s.fail(fmt.Errorf("constraint: %s with a profile of %d components about a field of %d; want equally many", name, profile, about))
	}
	return profile == about
}
