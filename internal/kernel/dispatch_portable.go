//go:build !amd64 || noasm

package kernel

// fastest returns the only path there is.
func fastest() path { return portable }

func leap(op int, next, now, before, slope []float64, c *coefficients) {
	leapPortable(op, next, now, before, slope, c)
}

func accelerate(op int, dst, phi, rate, slope []float64, c *coefficients) {
	acceleratePortable(op, dst, phi, rate, slope, c)
}

func kickDrift(op int, next, phi, rate, slope []float64, c *coefficients) {
	kickDriftPortable(op, next, phi, rate, slope, c)
}

func stage(op int, field, rate, phi, v, phi0, v0, slope []float64, c *coefficients) {
	stagePortable(op, field, rate, phi, v, phi0, v0, slope, c)
}

func finish(op int, field, rate, v2, v3, phi4, v4, slope []float64, c *coefficients) {
	finishPortable(op, field, rate, v2, v3, phi4, v4, slope, c)
}

func varying(op int, dst, phi, other []float64, kappa *[3][]float64, keep, give, load []float64, c *coefficients) {
	varyingPortable(op, dst, phi, other, kappa, keep, give, load, c)
}

func apply(op int, dst, x []float64, c *[9]float64) { applyPortable(op, dst[:len(x)], x, c) }

func combine(op int, dst, x, y, z []float64, a float64) { combinePortable(op, dst, x, y, z, a) }

func reduce(op int, x, y, w []float64, lanes *[8]float64) { reducePortable(op, x, y, w, lanes) }
