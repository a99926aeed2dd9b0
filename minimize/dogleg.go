package minimize

import (
	"math"

	"gonum.org/v1/gonum/floats"
)

// A dogleg is a path of steps that lower |r + As|², r being the gradient of the
// action in the metric: from 0 to the lowest point along the steepest descent and
// on to Newton's step. The longest step within the radius is taken [Powell 1970,
// in Numerical Methods for Nonlinear Algebraic Equations, ed. Rabinowitz, 87].
type dogleg struct {
	radius        float64 // 0: that of the first Newton step
	newton, steep []float64
	step, image   []float64
}

func newDogleg(n int) *dogleg {
	row := func() []float64 { return make([]float64, n) }
	return &dogleg{newton: row(), steep: row(), step: row(), image: row()}
}

// aim prepares the path for the Newton step that stands in d.newton.
func (d *dogleg) aim(b *bordered, r []float64) {
	if d.radius == 0 {
		d.radius = floats.Norm(d.newton, 2)
	}
	b.mul(d.steep, r) // half the gradient of |r|²
	b.mul(d.image, d.steep)
	g, a := floats.Norm(d.steep, 2), floats.Norm(d.image, 2)
	if a > 0 {
		floats.Scale(-(g/a)*(g/a), d.steep)
	}
}

// choose sets the step for the radius and returns its length.
func (d *dogleg) choose() float64 {
	length, cauchy := floats.Norm(d.newton, 2), floats.Norm(d.steep, 2)
	switch {
	case length <= d.radius:
		copy(d.step, d.newton)
		return length
	case cauchy >= d.radius:
		floats.ScaleTo(d.step, d.radius/cauchy, d.steep)
		return d.radius
	}
	// |steep + t(newton − steep)| = radius
	var a, c float64
	for u, p := range d.newton {
		q := p - d.steep[u]
		a += q * q
		c += q * d.steep[u]
	}
	t := (math.Sqrt(c*c+a*(d.radius*d.radius-cauchy*cauchy)) - c) / a
	for u, p := range d.newton {
		d.step[u] = d.steep[u] + t*(p-d.steep[u])
	}
	return d.radius
}

// predict returns |r + As|².
func (d *dogleg) predict(b *bordered, r []float64) float64 {
	b.mul(d.image, d.step)
	floats.Add(d.image, r)
	return floats.Dot(d.image, d.image)
}

// judge sets the radius by the gain of a step, actual over predicted decrease.
func (d *dogleg) judge(gain, length float64) {
	switch {
	case !(gain > 0.25):
		d.radius = 0.25 * length
	case gain > 0.75 && length > 0.99*d.radius:
		d.radius *= 2
	}
}
