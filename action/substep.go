package action

import (
	"math"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/internal/kernel"
)

// Substeps are the parts that stepping methods are composed of, acceleration and
// update in one pass over memory where V is of the catalogue and the
// coefficients are the same everywhere and at all times, and by way of
// Accelerator.At elsewhere. φ_tt is zero at held and odd ends.
//
// A Substeps has working memory and allocates nothing after it is made. It serves
// one goroutine at a time unless Steady, when several may call its methods for
// different sites.
type Substeps struct {
	a     *Accelerator
	fused bool
	kick  field.Slice
}

// Substeps returns substeps, or the error of Accelerator.
func (s *Discrete) Substeps() (*Substeps, error) {
	a, err := s.Accelerator()
	if err != nil {
		return nil, err
	}
	p := &Substeps{a: a, fused: a.chains != nil && steady(a.chains)}
	for _, ch := range a.chains {
		p.fused = p.fused && ch.fused()
	}
	if !p.fused {
		p.kick = field.NewSlice(s.wave.Components, len(s.xs))
	}
	return p, nil
}

// Steady reports whether the methods may be called for a part of the sites.
// Otherwise lo … hi−1 must be all of them.
func (p *Substeps) Steady() bool { return p.fused }

// KickDrift writes rate + kick·φ_tt to rate, φ_tt that of the field phi and the
// rate at time t, and then phi + drift·rate to next, at the sites from lo to hi−1.
func (p *Substeps) KickDrift(next, phi, rate field.Slice, kick, drift, t float64, lo, hi int) {
	if !p.fused {
		p.a.At(p.kick, field.State{Field: phi, Rate: rate}, t)
	}
	for c := range phi.Components {
		to, at, v := next.Component(c), phi.Component(c), rate.Component(c)
		if p.fused {
			p.a.chains[c].kickDrift(to, at, v, kick, drift, lo, hi)
			continue
		}
		kernel.AddScaled(v, v, kick, p.kick.Component(c))
		kernel.AddScaled(to, at, drift, v)
	}
}

// Stage writes start + part·(φ_t, φ_tt) to next, φ_t and φ_tt those of the state at
// at time t: the next stage of a Runge–Kutta method of a classical kind.
func (p *Substeps) Stage(next, at, start field.State, part, t float64, lo, hi int) {
	if !p.fused {
		p.a.At(p.kick, at, t)
	}
	for c := range at.Field.Components {
		field, rate := next.Field.Component(c), next.Rate.Component(c)
		v, phi0, v0 := at.Rate.Component(c), start.Field.Component(c), start.Rate.Component(c)
		if p.fused {
			p.a.chains[c].stage(field, rate, at.Field.Component(c), v, phi0, v0, part, lo, hi)
			continue
		}
		kernel.AddScaled(field, phi0, part, v)
		kernel.AddScaled(rate, v0, part, p.kick.Component(c))
	}
}

// Finish ends a step of RK4 of length 6·sixth at time t, in place, from the rates
// of its second and third stage and the fourth.
func (p *Substeps) Finish(st field.State, second, third field.Slice, fourth field.State, sixth, t float64, lo, hi int) {
	if !p.fused {
		p.a.At(p.kick, fourth, t)
	}
	for c := range st.Field.Components {
		field, rate := st.Field.Component(c), st.Rate.Component(c)
		v2, v3, v4 := second.Component(c), third.Component(c), fourth.Rate.Component(c)
		if p.fused {
			p.a.chains[c].finish(field, rate, v2, v3, fourth.Field.Component(c), v4, sixth, lo, hi)
			continue
		}
		for i, a := range p.kick.Component(c) {
			v := rate[i]
			change := math.FMA(v3[i]-v, 2, (v2[i]-v)+(v4[i]-v))
			field[i] = math.FMA(math.FMA(v2[i]+v3[i], 2, v+v4[i]), sixth, field[i])
			rate[i] = v + math.FMA(change, 1./3, float64(a*sixth))
		}
	}
}
