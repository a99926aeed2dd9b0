package action

import (
	"math"

	"github.com/tenter-go/tenter/internal/kernel"
	"github.com/tenter-go/tenter/lattice"
)

// A chain is one component on the line of sites as the loops of package kernel
// take it. With the force per cell
//
//	F(i) = J + Σ_d b_d/h²·[κ_d(i)(φ(i+d) − φ(i)) − κ_d(i−d)(φ(i) − φ(i−d))] − σV′,
//
// its methods work out (keep·rate + F)/den, where a recipe gives keep and den. A
// site with half a cell obeys the same formula: what it sees beyond the end is
// the image of the field, or, where links are cut, only itself.
type chain struct {
	s      *Discrete
	c      int
	linear bool // of a change of the field: no source, flux or jump
	given  bool // V′ is handed over
	mix    recipe

	radius, sites int
	first, last   int // the sites from first to last−1 have an equation
	jump          float64
	window        [2][7]float64 // what a site near either end sees
	fluxes        bool
	steady        bool // nothing depends on time

	// On a line with the same coefficients everywhere, line is for the sites
	// inside and near for those within radius of an end.
	uniform bool
	line    kernel.Line
	near    []kernel.Line

	// Else the coefficients stand here. load is J − σV′ where V′ is given.
	varying                   kernel.Varying
	load, source              []float64
	keep, give, sigma, buffer []float64 // memory of what varies
	fresh                     bool
}

// A recipe returns what the rate is multiplied by and the sum divided by, where
// ρ is before and after on the time links around a slice and the losses take loss
// times the rate.
type recipe func(before, after, loss float64) (keep, den float64)

// newChains returns a chain for each component, or nil with a loss β, which
// couples neighbours at the new time.
func (s *Discrete) newChains(mix recipe, linear bool) []*chain {
	if !s.beta.zero() {
		return nil
	}
	p, known := inKernel(s.wave.Potential)
	known = known && !linear
	var chains []*chain
	for c := range s.wave.Components {
		ch := &chain{s: s, c: c, linear: linear, given: !known, mix: mix, radius: s.elastic.radius, sites: len(s.xs)}
		ch.last = ch.sites
		if s.HeldLeft() {
			ch.first = 1
		}
		if s.HeldRight() {
			ch.last--
		}
		ch.steady = true
		for _, tr := range []*track{s.rho, s.kappa, s.sigma, s.source, s.alpha} {
			ch.steady = ch.steady && tr.fixed != nil
		}
		if !linear {
			ch.jump = s.block.Space.JumpOf(c)
			ch.fluxes = !s.flux[0].zero() || !s.flux[1].zero()
			ch.steady = ch.steady && (!ch.fluxes || s.flux[0].fixed != nil && s.flux[1].fixed != nil)
		}
		if !known {
			p = kernel.Potential{}
		}
		ch.uniform = s.cut() == [2]bool{} // else the links near an end differ
		for _, tr := range []*track{s.rho, s.kappa, s.sigma, s.source, s.alpha} {
			_, same := tr.coef.uniform(c)
			ch.uniform = ch.uniform && same
		}
		if ch.uniform {
			ch.setLines(p)
		} else {
			ch.setArrays(p)
		}
		chains = append(chains, ch)
	}
	return chains
}

// lossAt returns what the losses and an open end, with half a cell and an
// impedance, take of site i, per cell.
func (ch *chain) lossAt(i int, alpha, impedance float64) float64 {
	if ch.open(i) {
		return alpha + float64(2*impedance)/ch.s.block.Space.Step
	}
	return alpha
}

func (ch *chain) open(i int) bool {
	line := ch.s.block.Space
	return !line.Periodic && (i == 0 && line.Left == lattice.Open || i == ch.sites-1 && line.Right == lattice.Open)
}

// setLines works out the constants of a uniform line.
func (ch *chain) setLines(p kernel.Potential) {
	s, c := ch.s, ch.c
	rho, kappa, alpha := s.rho.values[c], s.kappa.values[c], s.alpha.values[c]
	at := func(loss float64) kernel.Line {
		keep, den := ch.mix(rho, rho, loss)
		l := kernel.Line{Radius: ch.radius, Keep: keep / den, Pull: s.sigma.values[c] / den, Potential: p}
		for k, w := range s.elastic.w {
			l.Link[k] = kappa * w / den
		}
		if !ch.linear {
			l.Bias = s.source.values[c] / den
		}
		return l
	}
	ch.line = at(alpha)
	ch.near = make([]kernel.Line, min(2*ch.radius, ch.sites))
	for k := range ch.near {
		ch.near[k] = at(ch.lossAt(ch.siteNear(k), alpha, math.Sqrt(rho*kappa)))
	}
}

// siteNear returns the site that ch.near[k] belongs to, and lineAt its reverse.
func (ch *chain) siteNear(k int) int {
	if k < ch.radius {
		return k
	}
	return ch.sites - len(ch.near) + k
}

func (ch *chain) lineAt(i int) *kernel.Line {
	switch {
	case i < ch.radius:
		return &ch.near[i]
	case i >= ch.sites-ch.radius:
		return &ch.near[len(ch.near)-ch.sites+i]
	}
	return &ch.line
}

// setArrays makes room for coefficients that vary.
func (ch *chain) setArrays(p kernel.Potential) {
	s, n := ch.s, ch.sites
	v := &ch.varying
	v.Radius, v.Potential = ch.radius, p
	copy(v.Link[:], s.elastic.w)
	for d := 1; d <= ch.radius; d++ {
		v.Kappa[d-1] = make([]float64, n+d)
	}
	ch.keep, ch.give = make([]float64, n), make([]float64, n)
	v.Keep, v.Give = ch.keep, ch.give
	ch.buffer, ch.sigma = make([]float64, n), make([]float64, n)
	if ch.given {
		ch.load = make([]float64, n)
		v.Source = ch.load
	}
}

// refresh brings the coefficients to time t, row n.
func (ch *chain) refresh(w *scratch, n int, t float64) {
	if ch.fresh && ch.steady {
		return
	}
	if ch.uniform {
		ch.refreshLines(w, n, t)
	} else {
		ch.refreshArrays(w, n, t)
	}
	ch.fresh = true
}

// refreshLines brings the prescribed fluxes into the bias of the sites near ends.
func (ch *chain) refreshLines(w *scratch, n int, t float64) {
	if !ch.fluxes {
		return
	}
	s, c := ch.s, ch.c
	left, right := s.fluxAt(w, c, n, t)
	for k := range ch.near {
		i, l := ch.siteNear(k), &ch.near[k]
		_, den := ch.mix(s.rho.values[c], s.rho.values[c], ch.lossAt(i, s.alpha.values[c], math.Sqrt(s.rho.values[c]*s.kappa.values[c])))
		l.Bias = (s.source.values[c] + ch.fluxForce(i, left, right)) / den
	}
}

// fluxForce returns the force of the prescribed fluxes per cell of site i.
func (ch *chain) fluxForce(i int, left, right float64) float64 {
	e, h := ch.s.elastic, ch.s.block.Space.Step
	var f float64
	if i < len(e.flux[0]) {
		f -= float64(e.flux[0][i]*left) / h
	}
	if j := ch.sites - 1 - i; j < len(e.flux[1]) {
		f += float64(e.flux[1][j]*right) / h
	}
	return f / ch.s.u[i]
}

func (ch *chain) refreshArrays(w *scratch, n int, t float64) {
	s, c := ch.s, ch.c
	if !ch.fresh || s.kappa.fixed == nil || s.kappaSites != nil && s.kappaSites.fixed == nil {
		s.elastic.beyondEnds(&ch.varying.Kappa, s.kappaAt(w, c, n, t), s.cut())
	}
	if !ch.fresh || s.rho.fixed == nil || s.alpha.fixed == nil || s.kappa.fixed == nil {
		var impedance [2]float64
		for k := range impedance {
			if ch.open(k * (ch.sites - 1)) {
				impedance[k] = s.impedance(w, c, n, t, k == 1)
			}
		}
		before, after := s.rhoAround(w, c, n)
		for i, alpha := range s.alpha.row(w.al, c, n, t) {
			keep, den := ch.mix(before[i], after[i], ch.lossAt(i, alpha, impedance[min(i, 1)]))
			ch.keep[i], ch.give[i] = keep/den, 1/den
		}
	}
	ch.varying.Sigma = s.sigma.row(ch.sigma, c, n, t)
	if ch.linear {
		return
	}
	source := s.source.row(ch.buffer, c, n, t)
	if ch.fluxes {
		copy(ch.buffer, source) // onto itself if it varies in time
		source = ch.buffer
		left, right := s.fluxAt(w, c, n, t)
		for i := range source {
			if i < ch.radius || i >= ch.sites-ch.radius {
				source[i] += ch.fluxForce(i, left, right)
			}
		}
	}
	ch.source = source
	if !ch.given {
		ch.varying.Source = source
	}
}

// beyondEnds writes κ of all links of each length that touch a site, so that
// dst[d−1][i+d] belongs to the link from site i to i+d. Beyond an end it is κ of
// the image or, where links are cut, zero but for the links of the end site.
func (e *elastic) beyondEnds(dst *[3][]float64, k stiffness, cut [2]bool) {
	n := e.line.Sites
	for d := 1; d <= e.radius; d++ {
		row := dst[d-1]
		copy(row[d:n], k.along(d))
		if e.line.Periodic {
			for i := n - d; i < n; i++ {
				row[i+d] = k.edge(edge{d: d, at: e.on(i + d/2)})
				row[i+d-n] = row[i+d]
			}
			continue
		}
		for _, g := range e.edges {
			if d == 1 && g.d == 1 { // it makes up for links that are cut
				row[g.at+1] += float64(g.half * k.links[g.at])
			}
		}
		for m := 1; m < d; m++ {
			var left, right float64
			if !cut[0] {
				left = k.edge(edge{d: d})
			}
			if !cut[1] {
				right = k.edge(edge{d: d, at: n - 1 - d%2})
			}
			row[m], row[n-1+m] = left, right
		}
		row[0], row[n-1+d] = row[d], row[n-1]
	}
}
