package action

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"gonum.org/v1/gonum/integrate/quad"
)

// GradientFlow states a field that runs downhill in its energy and is pushed by
// noise,
//
//	φ_t = −M δE/δφ + noise,  E[φ] = ∫ (½κφ_x² + σV − Jφ) dx,
//
// white in x and t with the strength √(2εM), which is what a bath of temperature
// ε gives.
type GradientFlow struct {
	// Energy is the density whose static part is E: its potential, κ, σ, source,
	// end fluxes and links. Its signature plays no part. ρ and losses are refused,
	// and so are coefficients that are known at the slices only.
	Energy Wave

	// Mobility is M > 0 on the sites, in the middle between two slices; nil means
	// 1. A loss αφ_t in place of φ_t is M = 1/α.
	Mobility Coefficient

	// Nodes is the number of nodes, 1 to 4, at which V′ is averaged over a time
	// link; 0 means 3. See NoisyFlow.
	Nodes int
}

// NoisyFlow is the action of Freidlin and Wentzell of a [GradientFlow],
//
//	S = ½∫∫ (φ_t + M δE/δφ)²/M dx dt,
//
// whose minima, with both ends in time held, are the likeliest ways from the one
// to the other: the probability of a path goes like exp(−S/2ε) as ε → 0
// [Freidlin & Wentzell 1984, Random Perturbations of Dynamical Systems]. Here it
// is
//
//	S = ½hk Σ_time links Σ_i u_i r²/M,  r = (φ(n+1) − φ(n))/k + M ∫₀¹ δE/δφ at φ(n) + s(φ(n+1) − φ(n)) ds,
//
// the integral by Gauss's rule on Nodes nodes and δE/δφ by the links and weights
// of [Discrete]. Second order in k.
//
// The averaged force is a discrete gradient [McLachlan, Quispel & Robidoux 1999,
// Phil. Trans. R. Soc. A 357, 1021]: along a time link its work is the difference
// of E, so that the square splits,
//
//	S = 2(E(last) − E(first)) + ½hk Σ Σ u_i r̄²/M,  r̄ = Δ_tφ/k − M ∫₀¹ δE/δφ ds,
//
// and S ≥ 2ΔE to rounding, with equality for a time-reversed relaxation: on the
// lattice, as in the continuum, no path is cheaper than the quasi-potential. This
// is exact for polynomials V of degree up to 2·Nodes and holds to O(k^(2·Nodes))
// otherwise; with one node, the midpoint rule, to O(k²).
//
// Time steps are those of an implicit method and need not be short for stability.
// But a mode that relaxes at a rate λ ≫ 2/k follows with alternating sign, at no
// cost, instead of dying out: held slices should be smooth on the scale √(Mκk).
//
// Ends are free, even, held, odd or periodic. A held or odd end has no equation
// and no noise. Time may be periodic. Potentials may depend on x and t; 2ΔE is a
// bound only if they do not depend on t.
//
// A NoisyFlow does not change and may be used from several goroutines. A history
// handed to its methods must lie on the block, else they panic.
type NoisyFlow struct {
	ground
	wave        *Discrete // E by its links and weights
	mobility    *track
	node, share []float64 // Gauss's nodes in (0, 1) and their weights
}

// NewNoisyFlow puts a gradient flow on a block.
func NewNoisyFlow(b lattice.Block, f GradientFlow) (*NoisyFlow, error) {
	w := f.Energy
	for _, c := range []struct {
		name string
		coef Coefficient
		want string
	}{
		{"ρ", w.Rho, "a relaxation has no inertia"},
		{"α", w.Alpha, "give the mobility M = 1/α"},
		{"β", w.Beta, "only local friction has a noise of its own here"},
	} {
		if c.coef != nil {
			return nil, fmt.Errorf("action: %s of the energy of a gradient flow; want none, %s", c.name, c.want)
		}
	}
	if f.Nodes < 0 || f.Nodes > 4 {
		return nil, fmt.Errorf("action: force averaged at %d nodes; want 1 to 4, or 0 for 3", f.Nodes)
	}
	if f.Nodes == 0 {
		f.Nodes = 3
	}
	if err := (ground{block: b}).refuseOpen(); err != nil {
		return nil, err
	}
	w.Signature = Euclidean
	d, err := New(b, w)
	if err != nil {
		return nil, err
	}
	if err := d.BetweenSlices(); err != nil {
		return nil, fmt.Errorf("action: energy of a gradient flow is wanted between slices: %w", err)
	}
	g, err := newGround(b, d.wave.Components)
	if err != nil {
		return nil, err
	}
	halves := d.block.Time
	halves.From += 0.5 * halves.Step
	halves.Sites = halves.Links()
	m, err := newTrack("mobility", f.Mobility, 1, g.components, d.xs, halves)
	if err != nil {
		return nil, err
	}
	if err := m.check("mobility", " > 0", func(v float64) bool { return v > 0 }); err != nil {
		return nil, err
	}
	s := &NoisyFlow{ground: g, wave: d, mobility: m, node: make([]float64, f.Nodes), share: make([]float64, f.Nodes)}
	quad.Legendre{}.FixedLocations(s.node, s.share, 0, 1)
	return s, nil
}

// Conservative returns nil: the equation of the likeliest path comes from S,
// though the flow has losses.
func (s *NoisyFlow) Conservative() error { return nil }

// Energy returns E of a slice at time t, by the trapezoid rule, a half at every
// end. ([Discrete.Energy] counts the potential of a held or odd end site whole.)
func (s *NoisyFlow) Energy(phi field.Slice, t float64) float64 {
	d := s.wave
	e := d.Energy(field.State{Field: phi, Rate: field.NewSlice(phi.Components, phi.Sites)}, t).Total()
	w := d.newScratch()
	n := d.rowAt(t)
	d.wave.Potential.Value(w.tmp, phi, d.at(t))
	sigma := d.sigma.row(w.sigma, 0, n, t)
	for _, i := range s.ends() {
		site := sigma[i] * w.tmp[i]
		for c := range s.components {
			site -= d.source.row(w.src, c, n, t)[i] * phi.At(c, i)
		}
		e -= 0.5 * d.block.Space.Step * site
	}
	return e
}

// ends returns the sites that have no equation.
func (s *NoisyFlow) ends() (sites []int) {
	if s.wave.HeldLeft() {
		sites = append(sites, 0)
	}
	if s.wave.HeldRight() {
		sites = append(sites, s.block.Sites()-1)
	}
	return sites
}

// Value returns S.
func (s *NoisyFlow) Value(h *field.History) float64 {
	s.mustFit(h)
	l := s.newTimeLink()
	var sum float64
	for n := range s.block.Time.Links() {
		l.at(n, h)
		for c := range s.components {
			r := l.noise.Component(c)
			for i, q := range l.weight.Component(c) {
				sum += 0.5 * q * r[i] * r[i]
			}
		}
	}
	return s.cellArea() * sum
}

// Noise returns r on every time link: the push, per unit of time, that drives the
// field along the history. Row n is the link that starts at slice n; components
// and sites are those of a slice, and sites without an equation have zero.
func (s *NoisyFlow) Noise(h *field.History) []field.Slice {
	s.mustFit(h)
	l := s.newTimeLink()
	rows := make([]field.Slice, s.block.Time.Links())
	for n := range rows {
		l.at(n, h)
		rows[n] = l.noise.Clone()
	}
	return rows
}

// Gradient writes ∂S/∂φ at every event to dst and returns it; a nil dst is
// allocated.
func (s *NoisyFlow) Gradient(dst, h *field.History) *field.History {
	s.mustFit(h)
	dst = s.zeroed(dst)
	l := s.newTimeLink()
	for n := range s.block.Time.Links() {
		l.at(n, h)
		l.bend()
		l.pull(dst, l.noise)
	}
	return dst
}

// SecondVariation writes the second variation of S at the history h times a
// direction, Σ_F ∂²S/∂φ(E)∂φ(F) η(F), to dst and returns it; a nil dst is
// allocated. It is exact, V‴ included, as far as [NoisyFlow.ThirdDerivatives] says.
// Jumps do not apply to the direction.
func (s *NoisyFlow) SecondVariation(dst, h, direction *field.History) *field.History {
	s.mustFit(h)
	s.mustFit(direction)
	dst = s.zeroed(dst)
	l := s.newTimeLink()
	change := field.NewSlice(s.components, s.block.Sites())
	for n := range s.block.Time.Links() {
		l.at(n, h)
		l.bend()
		l.twist()
		l.push(change, direction)
		l.pull(dst, change)
		l.addTwist(dst, direction)
	}
	return dst
}

// ThirdDerivatives reports whether V‴, which the second variation needs away from
// relaxations, is exact: for the catalogue and its combinations, and potentials
// with a method
//
//	CurvatureAlong(dst, phi, direction field.Slice, at action.Sites)
//
// that writes Σ_c ∂³V/∂φ_a∂φ_b∂φ_c d_c like a curvature. For others it is
// measured by differences of V″ with steps of 0.001 and 0.002 in φ, good to about
// 1e-12 where V varies over distances of order one. A type that embeds one of the
// catalogue and changes its potential inherits the method and must change it too;
// actiontest.Potential finds out.
func (s *NoisyFlow) ThirdDerivatives() bool { return bends(s.wave.wave.Potential) }
