package kernel

import "math"

// patch is the number of sites for which the twins keep what lies between two of
// their loops.
const patch = 64

// leapPortable writes next = now + (keep·(now − before) + force).
func leapPortable(op int, next, now, before, slope []float64, c *coefficients) {
	source, radius := (op-1)/3, (op-1)%3+1
	if source == ofPhi4 && radius == 1 {
		leapPhi4(next, now, before, c)
		return
	}
	if source == given && radius == 1 {
		leapGiven(next, now, before, slope, c)
		return
	}
	var buf, gain [patch]float64
	for lo := 0; lo < len(next); lo += patch {
		hi := min(lo+patch, len(next))
		phi := now[lo : hi+2*radius]
		at := phi[radius:][:hi-lo]
		s := buf[:hi-lo]
		switch source {
		case given:
			s = slope[lo:hi]
		case ofPhi4:
			applyPortable(opPhi4Slope, s, at, nil)
		case ofSine:
			applyPortable(opSin, s, at, nil)
		}
		g, b, to := gain[:hi-lo], before[lo:hi], next[lo:hi]
		if radius == 1 {
			leapGiven(to, phi, b, s, c)
			continue
		}
		for i, p := range at {
			g[i] = p - b[i]
		}
		acceleratePortable(radius+withRate, g, phi, g, s, c)
		for i, p := range at {
			to[i] = p + g[i]
		}
	}
}

// leapPhi4 is the leapfrog loop of φ⁴ with links of order 2, the yardstick of
// the portable path.
func leapPhi4(next, now, before []float64, c *coefficients) {
	n := len(next)
	left, at, right, before := now[:n], now[1:][:n], now[2:][:n], before[:n]
	keep, bias, link, pull := c[keep], c[bias], c[link], c[pull]
	for i, p := range at {
		f := math.FMA(link, (right[i]-p)-(p-left[i]), math.FMA(keep, p-before[i], bias))
		next[i] = p + (f - float64(pull*phi4Slope(p)))
	}
}

func leapGiven(next, now, before, slope []float64, c *coefficients) {
	n := len(next)
	left, at, right, before, slope := now[:n], now[1:][:n], now[2:][:n], before[:n], slope[:n]
	keep, bias, link, pull := c[keep], c[bias], c[link], c[pull]
	for i, p := range at {
		f := math.FMA(link, (right[i]-p)-(p-left[i]), math.FMA(keep, p-before[i], bias))
		next[i] = p + (f - float64(pull*slope[i]))
	}
}

// acceleratePortable writes dst = keep·rate + force, the slope given. dst may be
// rate.
func acceleratePortable(op int, dst, phi, rate, slope []float64, c *coefficients) {
	n, radius := len(dst), (op-1)%3+1
	if op > withRate {
		for i, v := range rate[:n] {
			dst[i] = math.FMA(c[keep], v, c[bias])
		}
	} else {
		fill(dst, c[bias])
	}
	left, at, right := phi[radius-1:][:n], phi[radius:][:n], phi[radius+1:][:n]
	pull, slope, w := c[pull], slope[:n], c[link]
	if radius == 1 {
		for i, p := range at {
			f := math.FMA(w, (right[i]-p)-(p-left[i]), dst[i])
			dst[i] = f - float64(pull*slope[i])
		}
		return
	}
	left2, right2, w2 := phi[radius-2:][:n], phi[radius+2:][:n], c[link+1]
	if radius == 2 {
		for i, p := range at {
			f := math.FMA(w, (right[i]-p)-(p-left[i]), dst[i])
			f = math.FMA(w2, math.FMA(-2, p, right2[i]+left2[i]), f)
			dst[i] = f - float64(pull*slope[i])
		}
		return
	}
	left3, right3, w3 := phi[:n], phi[6:][:n], c[link+2]
	for i, p := range at {
		f := math.FMA(w, (right[i]-p)-(p-left[i]), dst[i])
		f = math.FMA(w2, math.FMA(-2, p, right2[i]+left2[i]), f)
		f = math.FMA(w3, math.FMA(-2, p, right3[i]+left3[i]), f)
		dst[i] = f - float64(pull*slope[i])
	}
}

// kickDriftPortable writes rate = keep·rate + force and next = φ + drift·rate.
func kickDriftPortable(op int, next, phi, rate, slope []float64, c *coefficients) {
	acceleratePortable(op+withRate, rate, phi, rate, slope, c)
	for i, p := range phi[op:][:len(next)] {
		next[i] = math.FMA(rate[i], c[extra], p)
	}
}

// stagePortable writes field = φ₀ + part·v and rate = v₀ + part·(keep·v + force).
func stagePortable(op int, field, rate, phi, v, phi0, v0, slope []float64, c *coefficients) {
	var kick [patch]float64
	for lo := 0; lo < len(field); lo += patch {
		hi := min(lo+patch, len(field))
		acceleratePortable(op+withRate, kick[:hi-lo], phi[lo:hi+2*op], v[lo:hi], slope[lo:hi], c)
		for i := lo; i < hi; i++ {
			speed := v[i]
			field[i] = math.FMA(speed, c[extra], phi0[i])
			rate[i] = math.FMA(kick[i-lo], c[extra], v0[i])
		}
	}
}

// finishPortable writes the end of a step of RK4.
func finishPortable(op int, field, rate, v2, v3, phi4, v4, slope []float64, c *coefficients) {
	sixth := c[extra]
	var kick [patch]float64
	for lo := 0; lo < len(field); lo += patch {
		hi := min(lo+patch, len(field))
		acceleratePortable(op+withRate, kick[:hi-lo], phi4[lo:hi+2*op], v4[lo:hi], slope[lo:hi], c)
		for i := lo; i < hi; i++ {
			first, second, middle, last := rate[i], v2[i], v3[i], v4[i]
			change := math.FMA(middle-first, 2, (second-first)+(last-first))
			rate[i] = first + math.FMA(change, 1./3, float64(kick[i-lo]*sixth))
			sum := math.FMA(second+middle, 2, first+last)
			field[i] = math.FMA(sum, sixth, field[i])
		}
	}
}
