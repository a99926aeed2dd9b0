package action

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A Density is a Lagrangian density that can be put on a block. [Wave] is one.
type Density interface {
	discretise(b lattice.Block) (*Discrete, error)
}

// Signature says how kinetic and elastic energy enter the action.
type Signature uint8

// The signatures. Stationary histories of a Lorentzian action are saddles of
// it; a Euclidean action is bounded below if V is.
const (
	Lorentzian Signature = iota // S = ∫ T − U
	Euclidean                   // S = ∫ T + U
)

// String returns the name in lower case.
func (s Signature) String() string {
	if s == Euclidean {
		return "Euclidean"
	}
	return "Lorentzian"
}

// Wave is the density
//
//	L = ½ρφ_t² − ½κφ_x² − σV(φ; x, t) + Jφ,  κ = ρc²
//
// of one or more components, with the losses −αφ_t + βφ_xxt of its equation
//
//	(ρφ_t)_t + αφ_t = (κφ_x + βφ_xt)_x − σ∂V/∂φ + J.
//
// With the Euclidean signature it is ½ρφ_t² + ½κφ_x² + σV − Jφ. The zero value
// is the massless wave equation of one component.
type Wave struct {
	Potential Potential // V; nil means none
	Signature Signature
	Links     Links // order of the links; 0 means Nearest

	// Components is the number of components. 0 means that of the potential, 1
	// without one.
	Components int

	Rho    Coefficient // ρ > 0 on the time links; nil means 1
	Kappa  Coefficient // κ ≥ 0 on the space links; nil means 1
	Sigma  Coefficient // σ on the sites, the strength of V; nil means 1
	Source Coefficient // J on the sites: bias, drive; nil means 0

	// LeftFlux and RightFlux prescribe κφ_x (with the loss β, κφ_x + βφ_xt) at
	// a free end, sampled at the end's position; nil means 0.
	LeftFlux, RightFlux Coefficient

	Alpha Coefficient // α ≥ 0 on the sites; nil means 0
	Beta  Coefficient // β ≥ 0 on the space links; nil means 0
}

// New puts a density on a block.
func New(b lattice.Block, d Density) (*Discrete, error) {
	if d == nil {
		return nil, fmt.Errorf("action: density is nil; want a Density such as Wave")
	}
	b, err := lattice.NewBlock(b.Time, b.Space)
	if err != nil {
		return nil, fmt.Errorf("action: %w", err)
	}
	return d.discretise(b)
}

func (w Wave) discretise(b lattice.Block) (*Discrete, error) {
	if w.Links == 0 {
		w.Links = Nearest
	}
	if w.Potential == nil {
		w.Potential = none(max(w.Components, 1))
	}
	if err := checkPotential(w.Potential); err != nil {
		return nil, err
	}
	if w.Components == 0 {
		w.Components = w.Potential.Components()
	}
	if n := w.Potential.Components(); n != w.Components {
		return nil, fmt.Errorf("action: potential of %d components in a density of %d; want equally many", n, w.Components)
	}
	if w.Signature > Euclidean {
		return nil, fmt.Errorf("action: signature %d; want Lorentzian or Euclidean", w.Signature)
	}
	if n := max(len(b.Time.Jump), len(b.Space.Jump)); n > w.Components {
		return nil, fmt.Errorf("action: an axis has a jump for %d components, the density has %d", n, w.Components)
	}
	s := &Discrete{block: b, wave: w, xs: b.Space.Positions(nil), u: make([]float64, b.Sites())}
	for i := range s.u {
		s.u[i] = b.Space.Weight(i)
	}
	var err error
	if err := s.sample(); err != nil {
		return nil, err
	}
	if s.elastic, err = newElastic(b.Space, w.Links, s.cut()); err != nil {
		return nil, err
	}
	if s.viscous, err = newElastic(b.Space, Nearest, [2]bool{}); err != nil {
		return nil, err
	}
	return s, s.refuse()
}

// cut reports where wide links stop at an end: where φ_x is neither zero nor
// prescribed, at open ends and, with β, at free ones whose flux varies in time.
func (s *Discrete) cut() (cut [2]bool) {
	line := s.block.Space
	for k, end := range []lattice.End{line.Left, line.Right} {
		cut[k] = s.wave.Links > Nearest && (end == lattice.Open || end == lattice.Free && !s.beta.zero() && s.flux[k].fixed == nil)
	}
	return cut
}

// sample puts the coefficients where they live.
func (s *Discrete) sample() error {
	line, clock := s.block.Space, s.block.Time
	between := make([]float64, line.Links())
	for i := range between {
		between[i] = line.Between(i)
	}
	halves := clock
	halves.From += 0.5 * clock.Step
	halves.Sites = clock.Links()

	w := s.wave
	if _, split := w.Sigma.(PerComponent); split {
		return fmt.Errorf("action: σ given per component; it multiplies V, which is one number for all of them")
	}
	finite := func(float64) bool { return true }
	notNegative := func(v float64) bool { return v >= 0 }
	for _, t := range []struct {
		dst   **track
		name  string
		coef  Coefficient
		unset float64
		xs    []float64
		time  lattice.Axis
		want  string
		ok    func(float64) bool
	}{
		{&s.rho, "ρ", w.Rho, 1, s.xs, halves, " > 0", func(v float64) bool { return v > 0 }},
		{&s.kappa, "κ", w.Kappa, 1, between, clock, " ≥ 0", notNegative},
		{&s.sigma, "σ", w.Sigma, 1, s.xs, clock, "", finite},
		{&s.source, "source", w.Source, 0, s.xs, clock, "", finite},
		{&s.alpha, "α", w.Alpha, 0, s.xs, clock, " ≥ 0", notNegative},
		{&s.beta, "β", w.Beta, 0, between, clock, " ≥ 0", notNegative},
		{&s.flux[0], "left flux", w.LeftFlux, 0, s.xs[:1], clock, "", finite},
		{&s.flux[1], "right flux", w.RightFlux, 0, s.xs[len(s.xs)-1:], clock, "", finite},
	} {
		tr, err := newTrack(t.name, t.coef, t.unset, w.Components, t.xs, t.time)
		if err != nil {
			return err
		}
		if err := tr.check(t.name, t.want, t.ok); err != nil {
			return err
		}
		*t.dst = tr
	}
	// Links of even length need κ on sites. A table has it on links only and is
	// averaged; see kappaAt.
	if w.Links > Nearest && !s.kappa.coef.table() {
		tr, err := newTrack("κ", w.Kappa, 1, w.Components, s.xs, clock)
		if err != nil {
			return err
		}
		if err := tr.check("κ", " ≥ 0", notNegative); err != nil {
			return err
		}
		s.kappaSites = tr
	}
	return nil
}

// refuse returns an error if parts of the density contradict each other.
func (s *Discrete) refuse() error {
	line := s.block.Space
	for k, end := range []lattice.End{line.Left, line.Right} {
		side := [...]string{"left", "right"}[k]
		if s.flux[k].zero() {
			continue
		}
		if line.Periodic {
			return fmt.Errorf("action: %s flux on a periodic axis; want none, or an axis with ends", side)
		}
		if end != lattice.Free {
			return fmt.Errorf("action: %s flux at a %v end at x = %g; want a free end", side, end, s.flux[k].xs[0])
		}
	}
	if s.wave.Signature == Euclidean {
		if why := s.lossy(); why != "" {
			return fmt.Errorf("action: %s with the Euclidean signature; losses and open ends belong to the Lorentzian equation", why)
		}
	}
	return nil
}

// lossy names the first part of the equation that has no Lagrangian, or "".
func (s *Discrete) lossy() string {
	line := s.block.Space
	switch {
	case !s.alpha.zero():
		return "loss α"
	case !s.beta.zero():
		return "loss β"
	case line.Periodic:
		return ""
	case line.Left == lattice.Open:
		return "open left end"
	case line.Right == lattice.Open:
		return "open right end"
	}
	return ""
}

// A NoActionError says that part of an equation does not come from an action.
type NoActionError struct{ Part string }

func (e *NoActionError) Error() string {
	return fmt.Sprintf("action: %s does not come from an action; evolve, or ask for the least residual", e.Part)
}

// none is the potential V = 0 of so many components.
type none int

func (n none) Components() int                           { return int(n) }
func (none) Value(dst []float64, _ field.Slice, _ Sites) { clear(dst) }
func (none) Slope(dst, _ field.Slice, _ Sites)           { dst.Zero() }
func (none) Curvature(dst, _ field.Slice, _ Sites)       { dst.Zero() }
