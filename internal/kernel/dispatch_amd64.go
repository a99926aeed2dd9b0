//go:build amd64 && !noasm

package kernel

// Each function here takes the path of this process.

func leap(op int, next, now, before, slope []float64, c *coefficients) {
	n := len(next)
	if n <= few || taken == portable {
		leapPortable(op, next, now, before, slope, c)
		return
	}
	radius := (op-1)%3 + 1
	for i := 0; i < n; {
		s := &now[i] // read only if the slope is given
		if op <= 3 {
			s = &slope[i]
		}
		if taken == avx512 {
			i += leapAVX512(op, n-i, &next[i], &now[i], &before[i], s, &c[0])
		} else {
			i += leapAVX2(op, n-i, &next[i], &now[i], &before[i], s, &c[0])
		}
		if i < n { // a sine out of reach
			j := min(i+resume, n)
			leapPortable(op, next[i:j], now[i:j+2*radius], before[i:j], nil, c)
			i = j
		}
	}
}

func accelerate(op int, dst, phi, rate, slope []float64, c *coefficients) {
	n := len(dst)
	if n <= few || taken == portable {
		acceleratePortable(op, dst, phi, rate, slope, c)
		return
	}
	v := &slope[0] // read only if there is a rate
	if op > withRate {
		v = &rate[0]
	}
	if taken == avx512 {
		accelerateAVX512(op, n, &dst[0], &phi[0], v, &slope[0], &c[0])
	} else {
		accelerateAVX2(op, n, &dst[0], &phi[0], v, &slope[0], &c[0])
	}
}

func kickDrift(op int, next, phi, rate, slope []float64, c *coefficients) {
	n := len(next)
	switch {
	case n <= few || taken == portable:
		kickDriftPortable(op, next, phi, rate, slope, c)
	case taken == avx512:
		kickDriftAVX512(op, n, &next[0], &phi[0], &rate[0], &slope[0], &c[0])
	default:
		kickDriftAVX2(op, n, &next[0], &phi[0], &rate[0], &slope[0], &c[0])
	}
}

func stage(op int, field, rate, phi, v, phi0, v0, slope []float64, c *coefficients) {
	n := len(field)
	switch {
	case n <= few || taken == portable:
		stagePortable(op, field, rate, phi, v, phi0, v0, slope, c)
	case taken == avx512:
		stageAVX512(op, n, &field[0], &rate[0], &phi[0], &v[0], &phi0[0], &v0[0], &slope[0], &c[0])
	default:
		stageAVX2(op, n, &field[0], &rate[0], &phi[0], &v[0], &phi0[0], &v0[0], &slope[0], &c[0])
	}
}

func finish(op int, field, rate, v2, v3, phi4, v4, slope []float64, c *coefficients) {
	n := len(field)
	switch {
	case n <= few || taken == portable:
		finishPortable(op, field, rate, v2, v3, phi4, v4, slope, c)
	case taken == avx512:
		finishAVX512(op, n, &field[0], &rate[0], &v2[0], &v3[0], &phi4[0], &v4[0], &slope[0], &c[0])
	default:
		finishAVX2(op, n, &field[0], &rate[0], &v2[0], &v3[0], &phi4[0], &v4[0], &slope[0], &c[0])
	}
}

func varying(op int, dst, phi, other []float64, kappa *[3][]float64, keep, give, load []float64, c *coefficients) {
	n := len(dst)
	if n <= few || taken == portable {
		varyingPortable(op, dst, phi, other, kappa, keep, give, load, c)
		return
	}
	var k [3]*float64
	for d := range (op-1)%3 + 1 {
		k[d] = &kappa[d][0]
	}
	o, a := &load[0], &load[0] // read only if the op has a rate
	if op <= 3*alone {
		o, a = &other[0], &keep[0]
	}
	if taken == avx512 {
		varyingAVX512(op, n, &dst[0], &phi[0], o, k[0], k[1], k[2], a, &give[0], &load[0], &c[0])
	} else {
		varyingAVX2(op, n, &dst[0], &phi[0], o, k[0], k[1], k[2], a, &give[0], &load[0], &c[0])
	}
}

// resume is the number of elements that the portable twin does where a vector
// has found a lane out of reach.
const resume = 8

func apply(op int, dst, x []float64, c *[9]float64) {
	n := len(x)
	dst = dst[:n]
	if n <= few || taken == portable {
		applyPortable(op, dst, x, c)
		return
	}
	if c == nil {
		c = &noCoefficients
	}
	for i := 0; i < n; {
		if taken == avx512 {
			i += applyAVX512(op, n-i, &dst[i], &x[i], &c[0])
		} else {
			i += applyAVX2(op, n-i, &dst[i], &x[i], &c[0])
		}
		if i < n {
			j := min(i+resume, n)
			applyPortable(op, dst[i:j], x[i:j], c)
			i = j
		}
	}
}

var noCoefficients [9]float64

func combine(op int, dst, x, y, z []float64, a float64) {
	n := len(dst)
	if n <= few || taken == portable {
		combinePortable(op, dst, x, y, z, a)
		return
	}
	third := &y[0] // read only if the op has it
	if op == opDeduct {
		third = &z[0]
	}
	if taken == avx512 {
		combineAVX512(op, n, &dst[0], &x[0], &y[0], third, &a)
	} else {
		combineAVX2(op, n, &dst[0], &x[0], &y[0], third, &a)
	}
}

func reduce(op int, x, y, w []float64, lanes *[8]float64) {
	n := len(x)
	if n <= few || taken == portable {
		reducePortable(op, x, y, w, lanes)
		return
	}
	py, pw := &x[0], &x[0] // read only if the op has them
	if y != nil {
		py = &y[0]
	}
	if w != nil {
		pw = &w[0]
	}
	if taken == avx512 {
		reduceAVX512(op, n, &x[0], py, pw, &lanes[0])
	} else {
		reduceAVX2(op, n, &x[0], py, pw, &lanes[0])
	}
}
