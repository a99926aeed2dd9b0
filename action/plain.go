package action

import (
	"math"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A plain line has nearest-neighbour links and one value of ρ, κ, σ, J and α
// each for all sites and times of a component, and no β. Its march is
//
//	φ(n+1) − φ(n) = keep·(φ(n) − φ(n−1)) + stiff·δ²φ(n) − pull·V′ + push
//
// with four numbers for the sites inside, and four for each end.
type plain struct {
	inside      recipe
	left, right recipe
	jump        float64
}

type recipe struct{ keep, stiff, pull, push, flux float64 }

// plainLines returns the plain line of each component, or nil if any is not
// plain.
func (s *Discrete) plainLines() []plain {
	if s.wave.Links != Nearest || !s.beta.zero() {
		return nil
	}
	for _, tr := range []*track{s.rho, s.kappa, s.sigma, s.source, s.alpha} {
		if !tr.flat {
			return nil
		}
	}
	lines := make([]plain, s.wave.Components)
	h, k := s.block.Space.Step, s.block.Time.Step
	for c := range lines {
		rho, kappa, alpha := s.rho.values[c], s.kappa.values[c], s.alpha.values[c]
		at := func(u, open float64) recipe {
			a := u*alpha/(2*k) + open/(2*k*h)
			den := u*rho/(k*k) + a
			return recipe{
				keep:  (u*rho/(k*k) - a) / den,
				stiff: kappa / (h * h) / den,
				pull:  u * s.sigma.values[c] / den,
				push:  u * s.source.values[c] / den,
				flux:  1 / (h * den),
			}
		}
		impedance := func(end lattice.End) float64 {
			if end == lattice.Open {
				return math.Sqrt(rho * kappa)
			}
			return 0
		}
		line := s.block.Space
		lines[c] = plain{inside: at(1, 0), left: at(s.u[0], impedance(line.Left)), right: at(s.u[len(s.u)-1], impedance(line.Right)), jump: line.JumpOf(c)}
	}
	return lines
}

// advancePlain is advance on plain lines; the slope or, for the tangent, the
// curvature times the change stands in the working memory.
func (m *March) advancePlain(next, now, before field.Slice, n int, full bool) {
	s := m.s
	t := s.block.Time.At(n)
	line := s.block.Space
	last := len(s.xs) - 1
	for c, p := range m.plain {
		to, at, from, slope := next.Component(c), now.Component(c), before.Component(c), m.w.slope.Component(c)
		var left, right float64
		if !line.Periodic && full {
			left, right = s.fluxAt(m.w, c, n, t)
		}
		if !full {
			p.inside.push, p.left.push, p.right.push, p.jump = 0, 0, 0, 0
		}
		first, final := p.left.end(at[0], at[1], from[0], slope[0], -left), p.right.end(at[last], at[last-1], from[last], slope[last], right)
		if line.Periodic {
			first = p.left.site(at[last]-p.jump, at[0], at[1], from[0], slope[0])
			final = p.right.site(at[last-1], at[last], at[0]+p.jump, from[last], slope[last])
		}
		p.inside.row(to, at, from, slope)
		if !s.HeldLeft() {
			to[0] = first
		}
		if !s.HeldRight() {
			to[last] = final
		}
	}
}

// row marches the sites between the first and the last. Products are rounded
// before they are added, so that the bits do not depend on the machine.
func (r recipe) row(next, now, before, slope []float64) {
	if len(now) < 3 {
		return
	}
	n := len(now) - 2
	right, before, slope, next := now[2:], before[1:], slope[1:], next[1:]
	right, before, slope, next = right[:n], before[:n], slope[:n], next[:n]
	left, here := now[0], now[1]
	for i, ahead := range right {
		next[i] = r.site(left, here, ahead, before[i], slope[i])
		left, here = here, ahead
	}
}

func (r recipe) site(left, here, right, before, slope float64) float64 {
	second := (right - here) - (here - left)
	return here + (float64(r.keep*(here-before)) + (float64(r.stiff*second) + (r.push - float64(r.pull*slope))))
}

// end marches a site with a neighbour on one side and the outward flux of the
// other.
func (r recipe) end(here, inside, before, slope, flux float64) float64 {
	return here + (float64(r.keep*(here-before)) + (float64(r.stiff*(inside-here)) + float64(r.flux*flux) + (r.push - float64(r.pull*slope))))
}
