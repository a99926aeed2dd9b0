package track

import (
	"math"
	"slices"

	"github.com/tenter-go/tenter/lattice"
)

// follower sorts the kinks or pulses of successive slices into paths.
type follower struct {
	paths   []*Path
	open    []*Path // seen at the last slice, from left to right
	mergers []merger
	time    float64
	started bool
}

// merger is two paths that have merged and not parted again. Of two kinks neither
// is seen meanwhile, of two pulses b is.
type merger struct {
	a, b *Path // b is nil if a has merged with its mirror image
	left bool  // a was to the left of b
	x    float64
}

// add takes the kinks of the next slice, from left to right. reach is how far
// one may get between slices.
func (f *follower) add(t float64, line lattice.Axis, found []Kink, reach float64) {
	if !f.started {
		f.started = true
		for _, k := range found {
			f.born(t, k)
		}
		f.time = t
		return
	}
	taken := make([]*Path, len(found)) // the path that goes on at each of found
	missing := f.match(line, found, taken, t, reach)
	f.merge(t, line, missing, reach)
	f.emerge(line, found, taken, reach)
	f.open = f.open[:0]
	for k, p := range taken {
		if p == nil {
			f.born(t, found[k])
			continue
		}
		p.see(t, found[k], line)
		f.open = append(f.open, p)
	}
	f.time = t
}

func (f *follower) born(t float64, k Kink) {
	p := &Path{Times: []float64{t}, Kinks: []Kink{k}}
	f.paths = append(f.paths, p)
	f.open = append(f.open, p)
}

// see adds a place, on a ring the image of it that is nearest to the last.
func (p *Path) see(t float64, k Kink, line lattice.Axis) {
	if line.Periodic {
		_, last := p.Last()
		k.X += line.Length() * math.Round((last-k.X)/line.Length())
	}
	p.Times = append(p.Times, t)
	p.Kinks = append(p.Kinks, k)
}

// expected returns where the path would be at time t if it went on as before.
func (p *Path) expected(t float64) float64 {
	last, x := p.Last()
	n := len(p.Times) - 2
	if n < 0 {
		return x
	}
	// Level crossings rush together before a merger: no faster than light.
	v := (x - p.Kinks[n].X) / (last - p.Times[n])
	return x + max(-1, min(1, v))*(t-last)
}

// match joins open paths to the nearest of found with the same vacua beside
// them, nearest first, writes the paths to taken, and returns those left over.
func (f *follower) match(line lattice.Axis, found []Kink, taken []*Path, t, reach float64) []*Path {
	type joint struct {
		path, kink int
		distance   float64
	}
	var joints []joint
	for a, p := range f.open {
		x, last := p.expected(t), p.Kinks[len(p.Kinks)-1]
		for b, k := range found {
			if d := apart(line, x, k.X); k.Left == last.Left && k.Right == last.Right && d <= reach {
				joints = append(joints, joint{a, b, d})
			}
		}
	}
	slices.SortStableFunc(joints, func(a, b joint) int {
		switch {
		case a.distance < b.distance:
			return -1
		case a.distance > b.distance:
			return 1
		}
		return 0
	})
	used := make([]bool, len(f.open))
	for _, j := range joints {
		if !used[j.path] && taken[j.kink] == nil {
			used[j.path] = true
			taken[j.kink] = f.open[j.path]
		}
	}
	var missing []*Path
	for a, p := range f.open {
		if !used[a] {
			missing = append(missing, p)
		}
	}
	return missing
}

// merge pairs neighbours of opposite charge that have vanished together, a kink
// next to an Even end with its image, and a pulse with one that is still seen.
// Others have ended.
func (f *follower) merge(t float64, line lattice.Axis, missing []*Path, reach float64) {
	gone := slices.Clone(missing)
	for len(missing) > 0 {
		p := missing[0]
		_, x := p.Last()
		missing = missing[1:]
		if p.charge() == 0 {
			f.absorb(t, line, p, gone, reach)
			continue
		}
		if end, ok := mirror(line, x, reach); ok {
			p.Merged = append(p.Merged, t)
			f.mergers = append(f.mergers, merger{a: p, x: end})
			continue
		}
		if len(missing) > 0 {
			q := missing[0]
			_, y := q.Last()
			if p.charge()+q.charge() == 0 && apart(line, x, y) <= 2*reach {
				missing = missing[1:]
				p.Merged = append(p.Merged, t)
				q.Merged = append(q.Merged, t)
				f.mergers = append(f.mergers, merger{a: p, b: q, left: true, x: x + 0.5*(y-x)})
				continue
			}
		}
		p.Ended = true
	}
}

// absorb merges a pulse that has vanished with the nearest that has not.
func (f *follower) absorb(t float64, line lattice.Axis, p *Path, gone []*Path, reach float64) {
	_, x := p.Last()
	var best *Path
	reach *= 2
	for _, q := range f.open {
		if _, y := q.Last(); !slices.Contains(gone, q) && apart(line, x, y) <= reach {
			best, reach = q, apart(line, x, y)
		}
	}
	if best == nil {
		p.Ended = true
		return
	}
	_, y := best.Last()
	p.Merged = append(p.Merged, t)
	best.Merged = append(best.Merged, t)
	f.mergers = append(f.mergers, merger{a: p, b: best, left: x < y})
}

func (p *Path) charge() int { return p.Kinks[len(p.Kinks)-1].Charge() }

// emerge gives paths that have merged to those of found that nothing has taken.
func (f *follower) emerge(line lattice.Axis, found []Kink, taken []*Path, reach float64) {
	for k := range found {
		if taken[k] != nil {
			continue
		}
		charge := found[k].Charge()
		if charge == 0 {
			f.part(line, found, taken, k, reach)
			continue
		}
		if _, ok := mirror(line, found[k].X, reach); ok {
			if m := f.nearest(line, found[k].X, reach, true); m >= 0 {
				taken[k] = f.mergers[m].a
				f.mergers = slices.Delete(f.mergers, m, m+1)
				continue
			}
		}
		if k+1 == len(found) || taken[k+1] != nil || charge+found[k+1].Charge() != 0 {
			continue
		}
		m := f.nearest(line, 0.5*(found[k].X+found[k+1].X), 2*reach, false)
		if m < 0 {
			continue
		}
		a, b := f.mergers[m].a, f.mergers[m].b
		if a.charge() != charge {
			a, b = b, a
		}
		taken[k], taken[k+1] = a, b
		f.mergers = slices.Delete(f.mergers, m, m+1)
	}
}

// part gives the pulse k of found to one that has merged with a pulse near it,
// the two keeping their order.
func (f *follower) part(line lattice.Axis, found []Kink, taken []*Path, k int, reach float64) {
	for m, g := range f.mergers {
		j := slices.Index(taken, g.b)
		if g.b == nil || j < 0 || apart(line, found[k].X, found[j].X) > 2*reach {
			continue
		}
		taken[k] = g.a
		if g.left != (k < j) {
			taken[k], taken[j] = g.b, g.a
		}
		f.mergers = slices.Delete(f.mergers, m, m+1)
		return
	}
}

// nearest returns the number of the merger nearest to x and within reach, with a
// mirror image or of two, or −1.
func (f *follower) nearest(line lattice.Axis, x, reach float64, image bool) int {
	best := -1
	for m, g := range f.mergers {
		if d := apart(line, x, g.x); (g.b == nil) == image && d <= reach {
			best, reach = m, d
		}
	}
	return best
}

// mirror returns the Even end within reach of x.
func mirror(line lattice.Axis, x, reach float64) (end float64, ok bool) {
	if line.Periodic {
		return 0, false
	}
	if line.Left == lattice.Even && x-line.From <= reach {
		return line.From, true
	}
	if line.Right == lattice.Even && line.To()-x <= reach {
		return line.To(), true
	}
	return 0, false
}

// apart returns the distance between two places, the shorter way round a ring.
func apart(line lattice.Axis, x, y float64) float64 {
	d := math.Abs(x - y)
	if line.Periodic {
		l := line.Length()
		d = math.Mod(d, l)
		d = min(d, l-d)
	}
	return d
}
