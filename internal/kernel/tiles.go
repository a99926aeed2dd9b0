package kernel

import (
	"sync"
	"sync/atomic"
)

// Tiles advances a long array by many steps a pass over memory. The sites are
// cut into blocks, each of which stays in a core's cache while it goes through
// Depth steps of time. A block narrows by Radius sites a step at each cut, as
// what lies beyond is not known there yet; then the gaps, which widen at the
// same rate, are filled in:
//
//	step 2   ──block──╱  gap  ╲──block──
//	step 1   ──block───╱     ╲───block──
//	step 0   ──block────│cut│────block──
//
// These are the trapezoids of [Frigo & Strumpen 2005, ICS 19, 361], without
// their recursion. Every site is computed once, by the formula and from the
// numbers of a plain loop, so the bits do not depend on the tiles or on the
// number of workers.
//
// Two arrays are enough, the next slice taking the place of the one before: a
// gap finds at its edges the slices that it needs.
type Tiles struct {
	Sites    int
	Radius   int  // sites that a step looks to each side
	Periodic bool // the first and the last site are neighbours

	Width   int // sites of a block; 0 means 8192
	Depth   int // steps of a pass, less if the blocks are too narrow; 0 means 64
	Workers int // 0 means 1
}

// Advance calls row(step, lo, hi) so often that each step from 0 to steps−1 has
// been made at every site, in an order in which what a step needs is there. Row
// advances the sites lo … hi−1 from slice step to step+1. It may read the sites
// from lo−Radius to hi+Radius−1 of slice step and its own of slice step−1, and
// write over the latter; it deals with the ends of the array, or the wrap of a
// periodic one, where they lie within Radius of its sites. With several workers
// it is called from several goroutines, for different sites.
//
// With one worker Advance starts no goroutine and allocates nothing.
func (t *Tiles) Advance(steps int, row func(step, lo, hi int)) {
	p := t.plan()
	if p.workers == 1 {
		for first := 0; first < steps; first += p.depth {
			depth := min(p.depth, steps-first)
			for k := range p.blocks {
				p.block(k, first, depth, row)
			}
			for k := range p.blocks {
				p.gap(k, first, depth, row)
			}
		}
		return
	}
	p.together(steps, row)
}

// A plan is a cut of the sites into blocks; block k begins at cut k.
type plan struct {
	sites, radius, blocks, depth, workers int
	periodic                              bool
}

func (t *Tiles) plan() plan {
	width, depth := t.Width, t.Depth
	if width <= 0 {
		width = 8192
	}
	if depth <= 0 {
		depth = 64
	}
	blocks := max(1, t.Sites/width)
	narrowest := t.Sites / blocks
	return plan{
		sites: t.Sites, radius: t.Radius, periodic: t.Periodic, blocks: blocks,
		// A block must not vanish before its last step.
		depth:   max(1, min(depth, narrowest/(2*max(1, t.Radius)))),
		workers: max(1, min(t.Workers, blocks)),
	}
}

// cut returns the first site of block k.
func (p *plan) cut(k int) int { return k * p.sites / p.blocks }

// block makes the steps from first on in block k.
func (p *plan) block(k, first, depth int, row func(step, lo, hi int)) {
	for s := range depth {
		lo, hi := p.cut(k)+s*p.radius, p.cut(k+1)-s*p.radius
		if !p.periodic && k == 0 {
			lo = 0
		}
		if !p.periodic && k == p.blocks-1 {
			hi = p.sites
		}
		if lo < hi {
			row(first+s, lo, hi)
		}
	}
}

// gap makes the steps that the blocks beside cut k left out.
func (p *plan) gap(k, first, depth int, row func(step, lo, hi int)) {
	if k == 0 && !p.periodic || p.radius == 0 {
		return
	}
	at := p.cut(k)
	for s := 1; s < depth; s++ {
		reach := s * p.radius
		if k == 0 {
			row(first+s, p.sites-reach, p.sites)
			row(first+s, 0, reach)
			continue
		}
		row(first+s, at-reach, at+reach)
	}
}

// together is Advance with several workers. The blocks of a pass are free of
// each other, and so are the gaps once the blocks are done: whoever is idle
// takes the next.
func (p plan) together(steps int, row func(step, lo, hi int)) {
	share := func(work func(k int)) {
		var next atomic.Int64
		var wg sync.WaitGroup
		for range p.workers {
			wg.Go(func() {
				for k := next.Add(1) - 1; k < int64(p.blocks); k = next.Add(1) - 1 {
					work(int(k))
				}
			})
		}
		wg.Wait()
	}
	for first := 0; first < steps; first += p.depth {
		depth := min(p.depth, steps-first)
		share(func(k int) { p.block(k, first, depth, row) })
		share(func(k int) { p.gap(k, first, depth, row) })
	}
}
