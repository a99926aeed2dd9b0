package action

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Shaped is a [Wave] on a region of any shape,
//
//	S = hk { Σ_time links W ½ρ(Δ_tφ/k)² ∓ [ Σ_space links W ½κ(Δ_xφ/h)² + Σ_events W (σV − Jφ) ] },
//
// − for the Lorentzian and + for the Euclidean signature, with the weights W of
// [lattice.Region]: half for each existing cell beside a link, a quarter for each
// around an event. It is the sum over cells of [Cells], with ρ and κ in the
// middle of their links and V on whole slices at once, and on a whole block with
// free ends it is [Discrete]. A rim gets the natural condition, zero flux and zero
// momentum. Second order in h and k.
//
// Held and odd ends count like free ones, with half cells; they differ only in
// that a solver leaves them as they are.
//
// A Shaped does not change and may be used from several goroutines. A history
// handed to its methods must lie on the block, else they panic. Values at events
// outside of the region are ignored.
type Shaped struct {
	ground
	region *lattice.Region
	wave   *Discrete // the coefficients on the whole block

	event, up, right []float64 // weights of events and of the links from them
	span             [][2]int  // sites from ≤ i < to of each slice that may be in the region
}

// NewShaped puts a Wave on a region. Its coefficients must be finite on the
// whole block. Losses, open ends, prescribed end fluxes and wide links are
// refused by name.
func NewShaped(r *lattice.Region, w Wave) (*Shaped, error) {
	if r == nil {
		return nil, fmt.Errorf("action: region is nil; want one from lattice.NewRegion")
	}
	d, err := New(r.Block(), w)
	if err != nil {
		return nil, err
	}
	if part := d.lossy(); part != "" {
		return nil, fmt.Errorf("action: %s on a region; want a density without losses and open ends", part)
	}
	for k, side := range [...]string{"left", "right"} {
		if !d.flux[k].zero() {
			return nil, fmt.Errorf("action: %s flux on a region; want a source J = ±2·flux/h at the events of a straight wall", side)
		}
	}
	if d.wave.Links != Nearest {
		return nil, fmt.Errorf("action: links of order %d on a region; want Nearest", int(d.wave.Links))
	}
	g, err := newGround(r.Block(), d.wave.Components)
	if err != nil {
		return nil, err
	}
	s := &Shaped{ground: g, region: r, wave: d}
	s.weigh()
	return s, nil
}

// weigh tabulates the weights of the region.
func (s *Shaped) weigh() {
	sites := s.block.Sites()
	size := s.block.Slices() * sites
	s.event, s.up, s.right = make([]float64, size), make([]float64, size), make([]float64, size)
	s.span = make([][2]int, s.block.Slices())
	for n := range s.span {
		from, to := sites, 0
		for i := range sites {
			e := n*sites + i
			s.event[e], s.up[e], s.right[e] = s.region.Event(n, i), s.region.TimeLink(n, i), s.region.SpaceLink(n, i)
			if s.event[e] > 0 {
				from, to = min(from, i), i+1
			}
		}
		s.span[n] = [2]int{min(from, to), to}
	}
}

// Region returns the region; its Inside tells the events that take part.
func (s *Shaped) Region() *lattice.Region { return s.region }

// Density returns the density with its defaults filled in.
func (s *Shaped) Density() Wave { return s.wave.wave }

// Signature returns whether the action is of T − U or T + U.
func (s *Shaped) Signature() Signature { return s.wave.wave.Signature }

// Conservative returns nil: losses are refused.
func (s *Shaped) Conservative() error { return nil }

// Value returns S.
func (s *Shaped) Value(h *field.History) float64 {
	s.mustFit(h)
	w := s.wave.newScratch()
	sites := s.block.Sites()
	v := make([]float64, sites)
	var sum float64
	for n := range s.block.Slices() {
		var u float64
		if part, at, ok := s.part(n, h); ok {
			s.wave.wave.Potential.Value(v[:part.Sites], part, at)
			u += s.siteEnergy(w, v, h, n)
		}
		for c := range s.components {
			u += s.elasticEnergy(w, h, n, c)
			sum += s.kineticEnergy(w, h, n, c)
		}
		sum -= s.wave.sign() * u
	}
	return s.cellArea() * sum
}

// part returns the sites of slice n that may be in the region, and where they
// stand; ok is false if there are none.
func (s *Shaped) part(n int, h *field.History) (phi field.Slice, at Sites, ok bool) {
	from, to := s.span[n][0], s.span[n][1]
	if from == to {
		return field.Slice{}, Sites{}, false
	}
	return h.Slice(n).Part(from, to), Sites{T: s.block.Time.At(n), X: s.wave.xs[from:to]}, true
}

// siteEnergy returns Σ W(σV − Jφ) of slice n, with V in v from the start of the
// slice's span.
func (s *Shaped) siteEnergy(w *scratch, v []float64, h *field.History, n int) float64 {
	t, sites := s.block.Time.At(n), s.block.Sites()
	from := s.span[n][0]
	var u float64
	sigma := s.wave.sigma.row(w.sigma, 0, n, t)
	for i := from; i < s.span[n][1]; i++ {
		if weight := s.event[n*sites+i]; weight > 0 {
			u += weight * sigma[i] * v[i-from]
		}
	}
	for c := range s.components {
		for i, j := range s.wave.source.row(w.src, c, n, t) {
			if weight := s.event[n*sites+i]; weight > 0 {
				u -= weight * j * h.At(n, c, i)
			}
		}
	}
	return u
}

func (s *Shaped) elasticEnergy(w *scratch, h *field.History, n, c int) (u float64) {
	s.eachSpaceLink(w, n, c, func(i, j int, stiff, jump float64) {
		d := h.At(n, c, j) + jump - h.At(n, c, i)
		u += 0.5 * stiff * d * d
	})
	return u
}

func (s *Shaped) kineticEnergy(w *scratch, h *field.History, n, c int) (u float64) {
	s.eachTimeLink(w, n, c, func(m, i int, stiff, jump float64) {
		d := h.At(m, c, i) + jump - h.At(n, c, i)
		u += 0.5 * stiff * d * d
	})
	return u
}

// eachSpaceLink visits the links of slice n that are in the region: from site i
// to site j, with Wκ/h² and the jump across.
func (s *Shaped) eachSpaceLink(w *scratch, n, c int, visit func(i, j int, stiff, jump float64)) {
	line, sites := s.block.Space, s.block.Sites()
	hh := 1 / (line.Step * line.Step)
	kappa := s.wave.kappa.row(w.kl, c, n, s.block.Time.At(n))
	for i, k := range kappa {
		weight := s.right[n*sites+i]
		switch {
		case weight == 0:
		case i+1 < sites:
			visit(i, i+1, weight*k*hh, 0)
		default:
			visit(i, 0, weight*k*hh, line.JumpOf(c))
		}
	}
}

// eachTimeLink visits the links from slice n to the next slice m that are in the
// region, with Wρ/k² and the jump across.
func (s *Shaped) eachTimeLink(w *scratch, n, c int, visit func(m, i int, stiff, jump float64)) {
	clock, sites := s.block.Time, s.block.Sites()
	if n == clock.Links() {
		return
	}
	m, wraps := s.wave.next(n)
	var jump float64
	if wraps {
		jump = clock.JumpOf(c)
	}
	kk := 1 / (clock.Step * clock.Step)
	for i, rho := range s.wave.rhoLink(w.ra, c, n) {
		if weight := s.up[n*sites+i]; weight > 0 {
			visit(m, i, weight*rho*kk, jump)
		}
	}
}
