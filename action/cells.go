package action

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Cells is the action of any Lagrangian on any region of a block, cell by cell,
//
//	S = hk Σ_cells ¼ Σ_corners L(φ, Δ_tφ/k, Δ_xφ/h; x, t),
//
// with φ, x and t at the corner and the differences along the two sides of the
// cell that meet there. A cell and its mirror image count alike, so that S and
// its derivatives have errors of even order only, second order in h and k, for
// every smooth L. A rim, of whatever shape, gets the natural condition: ∂L/∂φ_x
// or ∂L/∂φ_t vanishes across it, nearly, where nothing is held.
//
// For a [Wave] of nearest-neighbour links and uniform ρ and κ on a whole block
// with free ends it is the action of [Discrete], to rounding. Varying ρ and κ are
// averaged over the ends of a link where Discrete samples them in its middle.
// A [Shaped] does this faster for a Wave on a region.
//
// Held and odd ends count like free ones here, with half cells; they differ only
// in that a solver leaves them as they are.
//
// Cells do not change and may be used from several goroutines. A history handed
// to their methods must lie on the block: equally many slices, components and
// sites, else they panic. Values at events outside of the region are ignored.
type Cells struct {
	ground
	region *lattice.Region
	l      Lagrangian
}

// NewCells puts a Lagrangian on a region. On a ring L must be the same for φ and
// for φ + jump, for it is given φ as it stands in the history.
func NewCells(r *lattice.Region, l Lagrangian) (*Cells, error) {
	if r == nil {
		return nil, fmt.Errorf("action: region is nil; want one from lattice.NewRegion")
	}
	if err := checkLagrangian(l); err != nil {
		return nil, err
	}
	g, err := newGround(r.Block(), l.Components())
	if err != nil {
		return nil, err
	}
	if err := g.refuseOpen(); err != nil {
		return nil, err
	}
	return &Cells{ground: g, region: r, l: l}, nil
}

// Region returns the region; its Inside tells the events that take part.
func (s *Cells) Region() *lattice.Region { return s.region }

// Conservative returns nil: there are no losses.
func (s *Cells) Conservative() error { return nil }

// Value returns S. It is NaN where L is.
func (s *Cells) Value(h *field.History) float64 {
	s.mustFit(h)
	q := make([]float64, 3*s.components)
	var sum float64
	s.corners(func(c corner) {
		sum += s.l.Value(s.jet(q, c, h, true))
	})
	return 0.25 * s.cellArea() * sum
}

// Gradient writes ∂S/∂φ at every event to dst, zero outside of the region, and
// returns it; a nil dst is allocated.
func (s *Cells) Gradient(dst, h *field.History) *field.History {
	s.mustFit(h)
	dst = s.zeroed(dst)
	q, g := make([]float64, 3*s.components), make([]float64, 3*s.components)
	s.corners(func(c corner) {
		s.l.Slope(g, s.jet(q, c, h, true))
		s.spread(dst, c, g)
	})
	return dst
}

// SecondVariation writes the second variation of S at the history h times a
// direction, Σ_F ∂²S/∂φ(E)∂φ(F) η(F), to dst and returns it; a nil dst is
// allocated. Jumps do not apply to the direction.
func (s *Cells) SecondVariation(dst, h, direction *field.History) *field.History {
	s.mustFit(h)
	s.mustFit(direction)
	dst = s.zeroed(dst)
	m := 3 * s.components
	q, eta, g, curve := make([]float64, m), make([]float64, m), make([]float64, m), make([]float64, m*m)
	s.corners(func(c corner) {
		s.l.Curvature(curve, s.jet(q, c, h, true))
		s.jet(eta, c, direction, false)
		for u := range g {
			g[u] = 0
			for v, e := range eta {
				g[u] += curve[u*m+v] * e
			}
		}
		s.spread(dst, c, g)
	})
	return dst
}

// A corner is one corner of a cell that exists. Its event is (n, i); the side
// along time leads to slice m, the side along space to site j.
type corner struct {
	n, i, m, j int

	// up and right are 1/k and 1/h, negative if the side leads to the slice
	// before or the site to the left.
	up, right float64

	wrapsT, wrapsX bool // whether the side closes the ring of its axis
}

// corners calls visit for the four corners of every cell of the region.
func (s *Cells) corners(visit func(corner)) {
	clock, line := s.block.Time, s.block.Space
	k, h := 1/clock.Step, 1/line.Step
	for n := range clock.Links() {
		after := (n + 1) % clock.Sites
		for i := range line.Links() {
			if !s.region.Cell(n, i) {
				continue
			}
			beside := (i + 1) % line.Sites
			c := corner{n: n, i: i, m: after, j: beside, up: k, right: h, wrapsT: after == 0, wrapsX: beside == 0}
			visit(c)
			visit(c.turnedX())
			visit(c.turnedT())
			visit(c.turnedT().turnedX())
		}
	}
}

// turnedT and turnedX return the corner at the other end of a side.
func (c corner) turnedT() corner {
	c.n, c.m, c.up = c.m, c.n, -c.up
	return c
}

func (c corner) turnedX() corner {
	c.i, c.j, c.right = c.j, c.i, -c.right
	return c
}

// jet writes the jet of h at a corner to q, with the jumps of the axes if jumps
// is set, and returns it.
func (s *Cells) jet(q []float64, c corner, h *field.History, jumps bool) Jet {
	jet := newJet(q)
	jet.At = s.block.At(c.n, c.i)
	for a := range jet.Phi {
		p := h.At(c.n, a, c.i)
		jet.Phi[a] = p
		jet.Rate[a] = c.up * (h.At(c.m, a, c.i) - p)
		jet.Tilt[a] = c.right * (h.At(c.n, a, c.j) - p)
		if jumps && c.wrapsT {
			jet.Rate[a] += s.block.Time.JumpOf(a) / s.block.Time.Step
		}
		if jumps && c.wrapsX {
			jet.Tilt[a] += s.block.Space.JumpOf(a) / s.block.Space.Step
		}
	}
	return jet
}

// spread adds to dst what the derivatives g by the jet of a corner are by the
// field: the transpose of jet, times ¼hk.
func (s *Cells) spread(dst *field.History, c corner, g []float64) {
	jet := newJet(g)
	w := 0.25 * s.cellArea()
	for a, p := range jet.Phi {
		t, x := w*c.up*jet.Rate[a], w*c.right*jet.Tilt[a]
		dst.Data[s.index(c.n, a, c.i)] += w*p - t - x
		dst.Data[s.index(c.m, a, c.i)] += t
		dst.Data[s.index(c.n, a, c.j)] += x
	}
}
