package action

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/field"
)

// An Accelerator evaluates φ_tt of the semi-discrete equation, space on the
// lattice and time continuous,
//
//	ρφ_tt = (κφ_x + βφ_xt)_x − σV′ + J − αφ_t,
//
// for methods that step inside a time link. It has working memory, serves one
// goroutine at a time and allocates nothing after it is made.
type Accelerator struct {
	s      *Discrete
	w      *scratch
	chains []*chain // nil with β
}

// Accelerator returns an accelerator, or an error if the density is Euclidean
// or has coefficients that are known at the slices of the block only.
func (s *Discrete) Accelerator() (*Accelerator, error) {
	if s.wave.Signature == Euclidean {
		return nil, fmt.Errorf("action: acceleration of a Euclidean density; want a Lorentzian one")
	}
	if err := s.BetweenSlices(); err != nil {
		return nil, err
	}
	perRho := func(before, _, loss float64) (keep, den float64) { return -loss, before }
	a := &Accelerator{s: s, w: s.newScratch(), chains: s.newChains(perRho, false)}
	a.refresh(s.block.Time.From)
	return a, nil
}

func (a *Accelerator) refresh(t float64) {
	for _, ch := range a.chains {
		ch.refresh(a.w, 0, t)
	}
}

// At writes φ_tt of the state at time t to dst. It is zero at held and odd ends.
func (a *Accelerator) At(dst field.Slice, st field.State, t float64) {
	s := a.s
	if a.chains == nil {
		a.viscous(dst, st, t)
		return
	}
	a.refresh(t)
	if a.chains[0].given {
		s.inStrips(st.Field, t, 0, len(s.xs), func(slope field.Slice, lo, hi int) {
			for c, ch := range a.chains {
				ch.accelerate(dst.Component(c), st.Field.Component(c), st.Rate.Component(c), slope.Component(c), lo, hi)
			}
		})
		return
	}
	for c, ch := range a.chains {
		ch.accelerate(dst.Component(c), st.Field.Component(c), st.Rate.Component(c), nil, 0, len(s.xs))
	}
}

// viscous is At with a loss β.
func (a *Accelerator) viscous(dst field.Slice, st field.State, t float64) {
	s := a.s
	s.wave.Potential.Slope(a.w.slope, st.Field, s.at(t))
	for c := range s.wave.Components {
		d := dst.Component(c)
		clear(d)
		s.addForce(d, a.w, st.Field.Component(c), a.w.slope.Component(c), c, 0, t, 1)
		s.addLoss(d, a.w, st.Rate.Component(c), c, 0, t, 1)
		for i, r := range s.rho.row(a.w.rb, c, 0, t) {
			d[i] /= s.u[i] * r
		}
		s.clearHeld(d)
	}
}

// MaxFrequency returns an upper estimate of the angular frequency of the
// fastest small oscillation around a slice,
//
//	ω² = μ max(κ/ρ)/h² + max(σV″/ρ),  μ = Links.Mu(),
//
// and the largest σV″/ρ alone. κ/ρ takes the larger κ beside a site, V″ the
// largest row sum of |∂²V/∂φ_a∂φ_b| for several components, and both the largest
// value on up to 64 slices if the coefficients vary in time. Potentials that
// steepen away from the slice make the true maximum larger later.
func (s *Discrete) MaxFrequency(phi field.Slice) (omega, curvature float64) {
	w := s.newScratch()
	clock, line := s.block.Time, s.block.Space
	curvature = math.Inf(-1)
	var speed float64
	rows := min(64, clock.Sites)
	if s.kappa.fixed != nil && s.sigma.fixed != nil && s.rho.fixed != nil {
		rows = 1
	}
	sites := len(s.xs)
	for r := range rows {
		n := 0
		if rows > 1 {
			n = r * (clock.Sites - 1) / (rows - 1)
		}
		t := clock.At(n)
		s.wave.Potential.Curvature(w.curve, phi, s.at(t))
		for c := range s.wave.Components {
			rho := s.rhoAt(w, c, n, t)
			links := s.kappaAt(w, c, n, t).links
			sigma := s.sigma.row(w.sigma, c, n, t)
			for i := range sites {
				var k float64
				if i < len(links) {
					k = links[i]
				}
				if i > 0 {
					k = max(k, links[i-1])
				} else if line.Periodic {
					k = max(k, links[sites-1])
				}
				speed = max(speed, k/rho[i])
				v := sigma[i] * w.curve.Component(c*s.wave.Components + c)[i]
				for b := range s.wave.Components {
					if b != c {
						v += math.Abs(sigma[i] * w.curve.Component(c*s.wave.Components + b)[i])
					}
				}
				curvature = max(curvature, v/rho[i])
			}
		}
	}
	return math.Sqrt(max(0, s.wave.Links.Mu()*speed/(line.Step*line.Step)+curvature)), curvature
}
