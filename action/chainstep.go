package action

import (
	"math"

	"github.com/tenter-go/tenter/internal/kernel"
)

// each calls do for the sites from lo to hi−1 that have an equation: once for
// those inside, and once for each that sees beyond an end or around the ring. At
// holds the field of the sites from i to j−1 with radius ghost cells on each
// side. Two goroutines may be at work on different sites.
func (ch *chain) each(phi []float64, lo, hi int, do func(at []float64, i, j int)) {
	lo, hi = max(lo, ch.first), min(hi, ch.last)
	r, n := ch.radius, ch.sites
	from := max(lo, min(r, hi))
	to := max(from, min(hi, n-r))
	for i := lo; i < from; i++ {
		do(ch.sees(phi, i), i, i+1)
	}
	if from < to {
		do(phi[from-r:to+r], from, to)
	}
	for i := to; i < hi; i++ {
		do(ch.sees(phi, i), i, i+1)
	}
}

func (ch *chain) sees(phi []float64, i int) []float64 {
	w := &ch.window[0]
	if i >= ch.radius {
		w = &ch.window[1]
	}
	for d := -ch.radius; d <= ch.radius; d++ {
		if j := i + d; j >= 0 && j < len(phi) {
			w[d+ch.radius] = phi[j]
		} else {
			w[d+ch.radius] = ch.s.elastic.beyond(phi, j, ch.jump, [2]float64{})
		}
	}
	return w[:2*ch.radius+1]
}

// at returns the line of the sites from i to j−1 as each hands them out.
func (ch *chain) at(i, j int) *kernel.Line {
	if j-i > 1 {
		return &ch.line
	}
	return ch.lineAt(i)
}

// leap writes the slice after now at the sites from lo to hi−1 that have an
// equation. slope is V′ of these sites where it is given. next may be before.
func (ch *chain) leap(next, now, before, slope []float64, lo, hi int) {
	if ch.fused() {
		ch.leapFused(next, now, before, lo, hi)
		return
	}
	ch.bear(slope, lo, hi)
	ch.each(now, lo, hi, func(at []float64, i, j int) {
		if ch.uniform {
			ch.at(i, j).LeapfrogGiven(next[i:j], at, before[i:j], slope[i-lo:j-lo])
			return
		}
		ch.varying.Leapfrog(next[i:j], at, before[i:j], i)
	})
}

// leapFused is leap for V of the catalogue on a uniform line: each, written out,
// since on a line of a thousand sites the calls would count.
func (ch *chain) leapFused(next, now, before []float64, lo, hi int) {
	lo, hi = max(lo, ch.first), min(hi, ch.last)
	r, n := ch.radius, ch.sites
	from := max(lo, min(r, hi))
	to := max(from, min(hi, n-r))
	for i := lo; i < from; i++ {
		ch.lineAt(i).Leapfrog(next[i:i+1], ch.sees(now, i), before[i:i+1])
	}
	if from < to {
		ch.line.Leapfrog(next[from:to], now[from-r:to+r], before[from:to])
	}
	for i := to; i < hi; i++ {
		ch.lineAt(i).Leapfrog(next[i:i+1], ch.sees(now, i), before[i:i+1])
	}
}

// accelerate writes (keep·rate + F)/den, and zero to sites without an equation.
func (ch *chain) accelerate(dst, phi, rate, slope []float64, lo, hi int) {
	ch.bear(slope, lo, hi)
	ch.each(phi, lo, hi, func(at []float64, i, j int) {
		if !ch.uniform {
			ch.varying.Accelerate(dst[i:j], at, rate[i:j], i)
			return
		}
		l := ch.at(i, j)
		l.Accelerate(dst[i:j], at, rate[i:j])
		if ch.given {
			kernel.AddScaled(dst[i:j], dst[i:j], -l.Pull, slope[i-lo:j-lo])
		}
	})
	ch.ends(lo, hi, func(i int) { dst[i] = 0 })
}

// bear works the given slopes into the load of a line that varies.
func (ch *chain) bear(slope []float64, lo, hi int) {
	if !ch.given || ch.uniform {
		return
	}
	load, sigma := ch.load[lo:hi], ch.varying.Sigma[lo:hi]
	if ch.linear {
		clear(load)
		kernel.Deduct(load, load, sigma, slope)
		return
	}
	kernel.Deduct(load, ch.source[lo:hi], sigma, slope)
}

// ends calls do for the end sites without an equation among lo … hi−1.
func (ch *chain) ends(lo, hi int, do func(i int)) {
	for i := lo; i < min(ch.first, hi); i++ {
		do(i)
	}
	for i := max(lo, ch.last); i < hi; i++ {
		do(i)
	}
}

// fused reports whether the sub-steps of kickDrift, stage and finish are at hand,
// for V of the catalogue and the same coefficients everywhere.
func (ch *chain) fused() bool { return ch.uniform && !ch.given }

func (ch *chain) kickDrift(next, phi, rate []float64, kick, drift float64, lo, hi int) {
	ch.each(phi, lo, hi, func(at []float64, i, j int) {
		l := *ch.at(i, j)
		l.Keep = 1 + float64(kick*l.Keep)
		l.Bias *= kick
		l.Pull *= kick
		for d := range l.Link {
			l.Link[d] *= kick
		}
		l.KickDrift(next[i:j], at, rate[i:j], drift)
	})
	ch.ends(lo, hi, func(i int) { next[i] = math.FMA(rate[i], drift, phi[i]) })
}

func (ch *chain) stage(field, rate, phi, v, phi0, v0 []float64, part float64, lo, hi int) {
	ch.each(phi, lo, hi, func(at []float64, i, j int) {
		ch.at(i, j).Stage(field[i:j], rate[i:j], at, v[i:j], phi0[i:j], v0[i:j], part)
	})
	ch.ends(lo, hi, func(i int) { field[i], rate[i] = math.FMA(v[i], part, phi0[i]), v0[i] })
}

func (ch *chain) finish(field, rate, v2, v3, phi4, v4 []float64, sixth float64, lo, hi int) {
	ch.each(phi4, lo, hi, func(at []float64, i, j int) {
		ch.at(i, j).Finish(field[i:j], rate[i:j], v2[i:j], v3[i:j], at, v4[i:j], sixth)
	})
	ch.ends(lo, hi, func(i int) {
		sum := math.FMA(v2[i]+v3[i], 2, rate[i]+v4[i])
		field[i] = math.FMA(sum, sixth, field[i])
	})
}
