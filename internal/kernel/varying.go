package kernel

import "math"

// A Varying is a line of N sites whose coefficients are arrays. With
//
//	F(i) = Source(i) + Σ_d Link[d−1]·(κ_d(i)·(φ(i+d) − φ(i)) − κ_d(i−d)·(φ(i) − φ(i−d))) − Sigma(i)·V′(φ(i)),
//
// κ_d(i) belonging to the link from site i to i+d, its methods are those of
// [Line]; ρ, the time step and the losses stand in Keep and Give.
//
// The methods work on the n sites from site at on. Phi and now have ghost cells,
// as for Line.
type Varying struct {
	Radius int // 1, 2 or 3
	Link   [3]float64

	// Kappa[d−1][i+d] is κ of the link from site i to i+d, i = −d … N−1: N + d
	// values for each d up to Radius, those at the ends for links to ghosts.
	Kappa [3][]float64

	Keep      []float64 // what a loss leaves of the rate; not read without a rate
	Give      []float64 // what F is multiplied by; nil means 1
	Sigma     []float64 // strength of V; nil means 1
	Source    []float64 // nil means 0
	Potential Potential
}

// What the increment is added to: op = 3·base + radius.
const (
	ontoLeap = 0 // next = now + (keep(now − before) + give·F)
	ontoRate = 1 // dst = keep·rate + give·F
	alone    = 2 // dst = give·F
)

// Leapfrog writes the slice after now at the sites at, at + 1, …:
//
//	next(i) = now(i) + (Keep(i)·(now(i) − before(i)) + Give(i)·F(i)).
//
// next may be before.
func (v *Varying) Leapfrog(next, now, before []float64, at int) {
	v.run(ontoLeap, next, now, before, at)
}

// Accelerate writes Keep(i)·rate(i) + Give(i)·F(i) to dst; rate nil leaves its
// term out. dst may be rate.
func (v *Varying) Accelerate(dst, phi, rate []float64, at int) {
	if rate == nil {
		v.run(alone, dst, phi, nil, at)
		return
	}
	v.run(ontoRate, dst, phi, rate, at)
}

func (v *Varying) run(base int, dst, phi, other []float64, at int) {
	n := len(dst)
	if v.Radius < 1 || v.Radius > 3 {
		panic("kernel: radius of a line; want 1, 2 or 3")
	}
	if len(phi) != n+2*v.Radius || base != alone && len(other) != n {
		panic("kernel: slices of different lengths; want Radius ghost cells on both sides of φ")
	}
	c := coefficients{link: v.Link[0], link + 1: v.Link[1], link + 2: v.Link[2]}
	var small [few]float64
	buf := small[:]
	if n > few {
		var large [strip]float64
		buf = large[:]
	}
	for lo := 0; lo < n; lo += strip {
		hi := min(lo+strip, n)
		first, last := at+lo, at+hi
		p := phi[lo : hi+2*v.Radius]
		load := buf[:hi-lo]
		v.load(load, p[v.Radius:][:hi-lo], first)
		var kappa [3][]float64
		for d := 1; d <= v.Radius; d++ {
			kappa[d-1] = v.Kappa[d-1][first : last+d]
		}
		give := ones[:hi-lo]
		if v.Give != nil {
			give = v.Give[first:last]
		}
		var keep, o []float64
		if base != alone {
			keep, o = v.Keep[first:last], other[lo:hi]
		}
		varying(3*base+v.Radius, dst[lo:hi], p, o, &kappa, keep, give, load, &c)
	}
}

var zeros, ones [strip]float64

func init() { fill(ones[:], 1) }

// load writes Source − Sigma·V′ of a strip.
func (v *Varying) load(dst, phi []float64, at int) {
	source, sigma := zeros[:len(dst)], ones[:len(dst)]
	if v.Source != nil {
		source = v.Source[at : at+len(dst)]
	}
	if v.Potential.kind == none {
		copy(dst, source)
		return
	}
	if v.Sigma != nil {
		sigma = v.Sigma[at : at+len(dst)]
	}
	v.Potential.Slope(dst, phi)
	combine(opDeduct, dst, source, sigma, dst, 0)
}

// varyingPortable writes an update of a line with varying coefficients.
func varyingPortable(op int, dst, phi, other []float64, kappa *[3][]float64, keep, give, load []float64, c *coefficients) {
	base, radius := (op-1)/3, (op-1)%3+1
	var buf [patch]float64
	for lo := 0; lo < len(dst); lo += patch {
		hi := min(lo+patch, len(dst))
		n := hi - lo
		f, at, to, b := buf[:n], phi[lo+radius:][:n], dst[lo:hi], give[lo:hi]
		copy(f, load[lo:hi])
		for d := 1; d <= radius; d++ {
			left, right, w := phi[lo+radius-d:][:n], phi[lo+radius+d:][:n], c[link+d-1]
			before, after := kappa[d-1][lo:hi], kappa[d-1][lo+d:][:n]
			for i, p := range at {
				t := math.FMA(-(p - left[i]), before[i], float64((right[i]-p)*after[i]))
				f[i] = math.FMA(t, w, f[i])
			}
		}
		if base == alone {
			for i, v := range f {
				to[i] = v * b[i]
			}
			continue
		}
		o, a := other[lo:hi], keep[lo:hi]
		for i, p := range at {
			if base == ontoLeap {
				to[i] = p + math.FMA(f[i], b[i], float64((p-o[i])*a[i]))
			} else {
				to[i] = math.FMA(f[i], b[i], float64(o[i]*a[i]))
			}
		}
	}
}
