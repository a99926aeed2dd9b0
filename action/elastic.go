package action

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/internal/kernel"
	"github.com/tenter-go/tenter/lattice"
)

// elastic is the quadratic form of the links on one slice of an axis, per hk:
// U = Σ ½wκ(Σ_p coef_p φ(site_p) + offset)², w = b_d/h². Links inside the axis
// run in loops; the few that cross an end or close the ring are kept as edges.
type elastic struct {
	line   lattice.Axis
	order  Links
	radius int
	w      []float64 // w[d−1] = b_d/h²
	edges  []edge

	// flux[k] has the weights with which a flux through the left (0) or right (1)
	// end enters the sites next to it.
	flux [2][]float64
}

// An edge is a link, mirrored or wrapped, between the sites a and b and, at an
// odd end, the end site itself.
type edge struct {
	d    int        // length of the link
	site [3]int     // a, b, end; on a ring b may be ≥ Sites
	coef [3]float64 // 0 for an unused third site
	jump float64    // multiple of the axis's jump that is added
	half float64    // weight: ½ for a link that is its own mirror image
	at   int        // where κ is sampled: the link if d is odd, the site if even
}

// newElastic puts links on an axis. Where cut is set for its left or right end
// they stop there, for fields that have a slope at the end and no smooth mirror
// image.
func newElastic(line lattice.Axis, order Links, cut [2]bool) (*elastic, error) {
	b := order.weights()
	if b == nil {
		return nil, fmt.Errorf("action: links of order %d; want 2, 4 or 6", int(order))
	}
	if line.Sites <= len(b) {
		return nil, fmt.Errorf("action: links of order %d on %d sites; want at least %d", int(order), line.Sites, len(b)+1)
	}
	e := &elastic{line: line, order: order, radius: len(b)}
	for _, v := range b {
		e.w = append(e.w, v/(line.Step*line.Step))
	}
	if line.Periodic {
		for d := 1; d <= e.radius; d++ {
			e.wrap(d)
		}
		return e, nil
	}
	for k, end := range []lattice.End{line.Left, line.Right} {
		if cut[k] {
			e.flux[k] = []float64{1}
			continue
		}
		e.flux[k] = make([]float64, e.radius)
		for i, v := range b {
			d := i + 1
			e.mirror(d, end, func(j int) int {
				if k == 1 {
					return line.Sites - 1 - j
				}
				return j
			})
			e.flux[k][0] += v * float64(d)
			for j := 1; j < d; j++ {
				e.flux[k][j] += 2 * v * float64(d-j)
			}
		}
	}
	e.stiffen(b, cut)
	return e, nil
}

// stiffen makes up for the links that a cut end lacks by nearest-neighbour
// links, so that the tension of a field of uniform slope is the same across
// every cut between sites and pulls at the end site alone.
func (e *elastic) stiffen(b []float64, cut [2]bool) {
	last := e.line.Sites - 1
	for i := range last {
		missing := 1.0
		for k, v := range b {
			d := k + 1
			from, to := i-d+1, i // where links across the cut may start
			if cut[0] {
				from = max(from, 0)
			}
			if cut[1] {
				to = min(to, last-d)
			}
			missing -= v * float64(d*(to-from+1))
		}
		const rounding = 1e-12
		if math.Abs(missing) > rounding {
			e.edges = append(e.edges, edge{d: 1, site: [3]int{i, i + 1, 0}, coef: [3]float64{-1, 1, 0}, half: missing / b[0], at: i})
		}
	}
}

// wrap adds the links of length d that close a ring.
func (e *elastic) wrap(d int) {
	n := e.line.Sites
	for i := n - d; i < n; i++ {
		// the middle of the link, on links or sites of the ring
		at := (i + (d-1)/2) % n
		if d == 2 {
			at = (i + 1) % n
		}
		e.edges = append(e.edges, edge{d: d, site: [3]int{i, i + d, 0}, coef: [3]float64{-1, 1, 0}, jump: 1, half: 1, at: at})
	}
}

// mirror adds the links of length d that cross an end, from the image of site
// a to site b = d − a, counted from the end; site(j) is the j-th site from it.
// Each link and its image are one edge.
func (e *elastic) mirror(d int, end lattice.End, site func(j int) int) {
	for a := 1; 2*a <= d; a++ {
		b := d - a
		g := edge{d: d, site: [3]int{site(a), site(b), site(0)}, coef: [3]float64{-1, 1, 0}, half: 1}
		if end == lattice.Held || end == lattice.Odd {
			g.coef = [3]float64{1, 1, -2}
		} else if a == b {
			continue // the link from a site to its own even image never stretches
		}
		if a == b {
			g.half = 0.5
			g.coef = [3]float64{2, -2, 0}
			g.site = [3]int{site(a), site(0), 0}
		}
		// The middle lies (b − a)/2 from the end: a link for odd d, a site else.
		if d%2 == 1 {
			j := (b - a - 1) / 2
			g.at = min(site(j), site(j+1))
		} else {
			g.at = site((b - a) / 2)
		}
		e.edges = append(e.edges, g)
	}
}

// A stiffness is κ on one slice: on the links and, for links of even length, on
// the sites.
type stiffness struct{ links, sites []float64 }

// along returns κ of the links of length d that start at sites 0, 1, ….
func (k stiffness) along(d int) []float64 {
	switch d {
	case 1:
		return k.links
	case 2:
		return k.sites[1:]
	}
	return k.links[1:]
}

func (k stiffness) edge(g edge) float64 {
	if g.d%2 == 1 {
		return k.links[g.at]
	}
	return k.sites[g.at]
}

// tension returns wκ times the stretch of an edge.
func (e *elastic) tension(g edge, phi []float64, k stiffness, jump float64) float64 {
	return g.half * e.w[g.d-1] * k.edge(g) * e.stretch(g, phi, jump)
}

func (e *elastic) stretch(g edge, phi []float64, jump float64) float64 {
	s := float64(g.coef[0]*phi[e.on(g.site[0])]) + float64(g.coef[1]*phi[e.on(g.site[1])]) + float64(g.jump*jump)
	if g.coef[2] != 0 {
		s += float64(g.coef[2] * phi[g.site[2]])
	}
	return s
}

// on maps the unwrapped number of a site to the site.
func (e *elastic) on(i int) int {
	if i >= e.line.Sites {
		return i - e.line.Sites
	}
	return i
}

// addForce adds scale·(−∂U/∂φ) to dst.
func (e *elastic) addForce(dst, phi []float64, k stiffness, jump, scale float64) {
	for d := 1; d <= e.radius; d++ {
		w := scale * e.w[d-1]
		kd := k.along(d)
		n := len(phi) - d
		near, far := phi[:n], phi[d:][:n]
		from, to, kd := dst[:n], dst[d:][:n], kd[:n]
		if d == 1 {
			var before float64
			for i, p := range near {
				t := float64(w * kd[i] * (far[i] - p))
				from[i] += t - before
				before = t
			}
			dst[n] -= before
			continue
		}
		for i, p := range near {
			t := float64(w * kd[i] * (far[i] - p))
			from[i] += t
			to[i] -= t
		}
	}
	for _, g := range e.edges {
		t := scale * e.tension(g, phi, k, jump)
		dst[e.on(g.site[0])] -= float64(t * g.coef[0])
		dst[e.on(g.site[1])] -= float64(t * g.coef[1])
		if g.coef[2] != 0 {
			dst[g.site[2]] -= float64(t * g.coef[2])
		}
	}
}

// energy returns U.
func (e *elastic) energy(phi []float64, k stiffness, jump float64) float64 {
	var sum float64
	for d := 1; d <= e.radius; d++ {
		kd := k.along(d)
		n := len(phi) - d
		sum += float64(0.5 * e.w[d-1] * kernel.WeightedDistance(kd[:n], phi[:n], phi[d:]))
	}
	for _, g := range e.edges {
		sum += float64(0.5 * e.tension(g, phi, k, jump) * e.stretch(g, phi, jump))
	}
	return sum
}

// share adds the energy of each link, half and half, to the sites at its ends.
func (e *elastic) share(dst, phi []float64, k stiffness, jump float64) {
	for d := 1; d <= e.radius; d++ {
		kd := k.along(d)
		for i := range len(phi) - d {
			s := phi[i+d] - phi[i]
			u := 0.25 * e.w[d-1] * kd[i] * s * s
			dst[i] += u
			dst[i+d] += u
		}
	}
	for _, g := range e.edges {
		u := 0.25 * e.tension(g, phi, k, jump) * e.stretch(g, phi, jump)
		dst[e.on(g.site[0])] += u
		dst[e.on(g.site[1])] += u
	}
}

// power adds to dst[i], for every cut between the sites i and i+1, the power per
// hk that the links carry across it to the right. With the shares of share,
// h·u·∂e/∂t of a site is the power that enters less the power that leaves.
func (e *elastic) power(dst, phi, rate []float64, k stiffness, jump float64) {
	for d := 1; d <= e.radius; d++ {
		kd := k.along(d)
		for i := range len(phi) - d {
			p := -0.5 * e.w[d-1] * kd[i] * (phi[i+d] - phi[i]) * (rate[i] + rate[i+d])
			for cut := i; cut < i+d; cut++ {
				dst[cut] += p
			}
		}
	}
	for _, g := range e.edges {
		a, b := g.site[0], g.site[1]
		va, vb := rate[e.on(a)], rate[e.on(b)]
		t := e.tension(g, phi, k, jump)
		stretching := g.coef[0]*va + g.coef[1]*vb
		if g.coef[2] != 0 {
			// What the work of a moving end brings goes to the nearer site first.
			work := t * g.coef[2] * rate[g.site[2]]
			e.carry(dst, g.site[2], a, work)
			stretching += g.coef[2] * rate[g.site[2]]
		}
		e.carry(dst, a, b, t*(0.5*stretching-g.coef[1]*vb)) // what b gains
	}
}

// carry adds the power p from site a to site b to the cuts between them.
func (e *elastic) carry(dst []float64, a, b int, p float64) {
	if a > b {
		a, b, p = b, a, -p
	}
	for cut := a; cut < b; cut++ {
		dst[e.on(cut)] += p
	}
}

// width is the number of places of a row of the band that fillBand writes.
func (e *elastic) width() int { return 2*e.radius + 1 }

// fillBand writes −∂²U/∂φ(i)∂φ(j) to band[i·width + (j − i + radius)], with j
// unwrapped on a ring.
func (e *elastic) fillBand(band []float64, k stiffness) {
	clear(band)
	n, width := e.line.Sites, e.width()
	add := func(i, j int, v float64) { band[e.on(i)*width+j-i+e.radius] += v }
	for d := 1; d <= e.radius; d++ {
		kd := k.along(d)
		for i := range n - d {
			v := e.w[d-1] * kd[i]
			add(i, i, -v)
			add(i+d, i+d, -v)
			add(i, i+d, v)
			add(i+d, i, v)
		}
	}
	for _, g := range e.edges {
		v := g.half * e.w[g.d-1] * k.edge(g)
		for p, a := range g.site {
			for q, b := range g.site {
				if g.coef[p] != 0 && g.coef[q] != 0 {
					add(a, b, -v*g.coef[p]*g.coef[q])
				}
			}
		}
	}
}
