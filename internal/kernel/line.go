package kernel

// A Line holds the constants of one component on a line with constant
// coefficients. With
//
//	F(i) = Bias + Σ_d Link[d−1]·((φ(i+d) − φ(i)) − (φ(i) − φ(i−d))) − Pull·V′(φ(i)),
//
// d = 1 … Radius, its methods are the steps that time integrators are made of.
// The caller has multiplied the constants by whatever powers of the time step,
// weights of the links and losses belong to the step; Keep is what a loss leaves
// of the rate, 1 without one.
//
// In every method n is the length of the slices but phi or now, which has
// Radius ghost cells on each side: its length is n + 2·Radius, and site i stands
// at i + Radius. For sites lo … hi−1 in the middle of a longer array pass
// phi[lo−Radius : hi+Radius]; the methods panic if a length is wrong. What is
// written may be the very memory of what is read at the same site, but must not
// overlap phi or now.
type Line struct {
	Radius           int // 1, 2 or 3: links of order 2, 4, 6
	Link             [3]float64
	Keep, Bias, Pull float64
	Potential        Potential
}

// coefficients are the constants as the loops read them: keep, bias, three
// links, pull, and two that differ from step to step.
type coefficients [8]float64

const (
	keep  = 0
	bias  = 1
	link  = 2
	pull  = 5
	extra = 6
)

// How a loop comes by V′: op = 3·source + radius. Only leap knows ofSine.
const (
	given  = 0 // read from memory
	ofPhi4 = 1
	ofSine = 2

	withRate = 6 // added to the op of accelerate
)

// strip is the number of sites whose slopes are found ahead of the stencil, for
// potentials that no loop has built in. They take 4 kB of the nearest cache.
const strip = 512

// set writes the constants to c. It goes by a pointer because to copy what was
// written just now, in wider pieces, stalls the processor for a dozen cycles.
func (l *Line) set(c *coefficients) {
	c[keep], c[bias], c[pull] = l.Keep, l.Bias, l.Pull
	c[link], c[link+1], c[link+2] = l.Link[0], l.Link[1], l.Link[2]
	switch l.Potential.kind {
	case none:
		c[pull] = 0
	case quadratic:
		c[pull] = float64(l.Pull * l.Potential.slope[1])
	}
}

// direct returns the op of a loop that needs no slopes ahead, if there is one for
// n sites. It may be handed φ in their place: the slope of a quadratic potential
// is φ, m² being in the pull, and that of none is φ with no pull.
func (l *Line) direct(n int) (op int, ok bool) {
	if n <= few || taken == portable {
		return 0, false
	}
	switch l.Potential.kind {
	case none, quadratic:
		return 3*given + l.Radius, true
	case phi4:
		return 3*ofPhi4 + l.Radius, true
	}
	return 0, false
}

// slopes returns V′ of up to a strip of sites, or what stands for it.
func (l *Line) slopes(buf, phi []float64) []float64 {
	if l.Potential.kind == none || l.Potential.kind == quadratic {
		return phi
	}
	l.Potential.Slope(buf, phi)
	return buf[:len(phi)]
}

func (l *Line) check(n, phi int, others ...int) {
	if l.Radius < 1 || l.Radius > 3 {
		panic("kernel: radius of a line; want 1, 2 or 3")
	}
	if phi != n+2*l.Radius {
		panic("kernel: length of φ does not fit; want the sites and Radius ghost cells on each side")
	}
	for _, m := range others {
		if m != n {
			panic("kernel: slices of different lengths")
		}
	}
}

// Leapfrog writes the slice after now,
//
//	next(i) = now(i) + (Keep·(now(i) − before(i)) + F(i)),
//
// F of now. next may be before.
func (l *Line) Leapfrog(next, now, before []float64) {
	n := len(next)
	l.check(n, len(now), len(before))
	var c coefficients
	l.set(&c)
	if op, ok := l.direct(n); ok {
		leap(op, next, now, before, now[l.Radius:], &c)
		return
	}
	switch l.Potential.kind { // leap has a twin for these, and sine besides
	case phi4:
		leap(3*ofPhi4+l.Radius, next, now, before, nil, &c)
		return
	case sine:
		leap(3*ofSine+l.Radius, next, now, before, nil, &c)
		return
	}
	var small [few]float64
	buf := small[:]
	if n > few {
		var large [strip]float64
		buf = large[:]
	}
	for lo := 0; lo < n; lo += strip {
		hi := min(lo+strip, n)
		phi := now[lo : hi+2*l.Radius]
		slope := l.slopes(buf, phi[l.Radius:][:hi-lo])
		leap(l.Radius, next[lo:hi], phi, before[lo:hi], slope, &c)
	}
}

// LeapfrogGiven is Leapfrog with V′ given at the n sites.
func (l *Line) LeapfrogGiven(next, now, before, slope []float64) {
	l.check(len(next), len(now), len(before), len(slope))
	var c coefficients
	l.set(&c)
	c[pull] = l.Pull // whatever the potential
	leap(l.Radius, next, now, before, slope, &c)
}

// Accelerate writes the right-hand side
//
//	dst(i) = Keep·rate(i) + F(i);
//
// rate nil leaves its term out. With dst and rate the same it is a kick.
func (l *Line) Accelerate(dst, phi, rate []float64) {
	n, rated := len(dst), 0
	l.check(n, len(phi))
	if rate != nil {
		l.check(n, len(phi), len(rate))
		rated = withRate
	}
	var c coefficients
	l.set(&c)
	if op, ok := l.direct(n); ok {
		accelerate(op+rated, dst, phi, rate, phi[l.Radius:], &c)
		return
	}
	var small [few]float64
	buf := small[:]
	if n > few {
		var large [strip]float64
		buf = large[:]
	}
	for lo := 0; lo < n; lo += strip {
		hi := min(lo+strip, n)
		at := phi[lo : hi+2*l.Radius]
		var v []float64
		if rate != nil {
			v = rate[lo:hi]
		}
		accelerate(l.Radius+rated, dst[lo:hi], at, v, l.slopes(buf, at[l.Radius:][:hi-lo]), &c)
	}
}

// AddForce adds F(i) to dst(i): the gradient of the energy with its sign
// changed, times whatever the constants carry.
func (l *Line) AddForce(dst, phi []float64) {
	whole := *l
	whole.Keep = 1
	whole.Accelerate(dst, phi, dst)
}

// KickDrift is the pair of sub-steps that symplectic methods are composed of,
//
//	rate(i) ← Keep·rate(i) + F(i),  next(i) = φ(i) + drift·rate(i).
func (l *Line) KickDrift(next, phi, rate []float64, drift float64) {
	n := len(next)
	l.check(n, len(phi), len(rate))
	var c coefficients
	l.set(&c)
	c[extra] = drift
	if op, ok := l.direct(n); ok {
		kickDrift(op, next, phi, rate, phi[l.Radius:], &c)
		return
	}
	var small [few]float64
	buf := small[:]
	if n > few {
		var large [strip]float64
		buf = large[:]
	}
	for lo := 0; lo < n; lo += strip {
		hi := min(lo+strip, n)
		at := phi[lo : hi+2*l.Radius]
		kickDrift(l.Radius, next[lo:hi], at, rate[lo:hi], l.slopes(buf, at[l.Radius:][:hi-lo]), &c)
	}
}

// Stage writes the field and rate of the next stage of an explicit Runge–Kutta
// step of a classical kind from those of this one, phi and v, and of the start
// of the step, phi0 and v0:
//
//	field(i) = phi0(i) + part·v(i),  rate(i) = v0(i) + part·(Keep·v(i) + F(i)).
//
// part is ½k or k; Keep is −α/ρ and F the force per ρ, neither with a k.
func (l *Line) Stage(field, rate, phi, v, phi0, v0 []float64, part float64) {
	n := len(field)
	l.check(n, len(phi), len(rate), len(v), len(phi0), len(v0))
	var c coefficients
	l.set(&c)
	c[extra] = part
	if op, ok := l.direct(n); ok {
		stage(op, field, rate, phi, v, phi0, v0, phi[l.Radius:], &c)
		return
	}
	var small [few]float64
	buf := small[:]
	if n > few {
		var large [strip]float64
		buf = large[:]
	}
	for lo := 0; lo < n; lo += strip {
		hi := min(lo+strip, n)
		at := phi[lo : hi+2*l.Radius]
		stage(l.Radius, field[lo:hi], rate[lo:hi], at, v[lo:hi], phi0[lo:hi], v0[lo:hi], l.slopes(buf, at[l.Radius:][:hi-lo]), &c)
	}
}

// Finish ends a step of RK4, in place, from the rates of its stages 2, 3 and 4
// and the field of the last, with ghost cells:
//
//	field ← φ + sixth·(v + 2(v₂ + v₃) + v₄)
//	rate  ← v + ((v₂ − v) + 2(v₃ − v) + (v₄ − v))/3 + sixth·(Keep·v₄ + F)
//
// sixth is k/6. These are the classical weights, as the rate of a stage is that
// of the start plus a part of a step of the force before it.
func (l *Line) Finish(field, rate, v2, v3, phi4, v4 []float64, sixth float64) {
	n := len(field)
	l.check(n, len(phi4), len(rate), len(v2), len(v3), len(v4))
	var c coefficients
	l.set(&c)
	c[extra] = sixth
	if op, ok := l.direct(n); ok {
		finish(op, field, rate, v2, v3, phi4, v4, phi4[l.Radius:], &c)
		return
	}
	var small [few]float64
	buf := small[:]
	if n > few {
		var large [strip]float64
		buf = large[:]
	}
	for lo := 0; lo < n; lo += strip {
		hi := min(lo+strip, n)
		at := phi4[lo : hi+2*l.Radius]
		finish(l.Radius, field[lo:hi], rate[lo:hi], v2[lo:hi], v3[lo:hi], at, v4[lo:hi],
			l.slopes(buf, at[l.Radius:][:hi-lo]), &c)
	}
}
