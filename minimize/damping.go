package minimize

import "math"

// damping steers the λ of a damped Newton or Gauss–Newton method by the gain
// ratio of each trial step, the actual over the predicted decrease
// [Marquardt 1963, J. SIAM 11, 431; Nielsen 1999, IMM-REP-1999-05].
type damping struct {
	lambda float64
	least  float64 // λ is never below
	grow   float64
}

func newDamping(lambda, least float64) *damping {
	return &damping{lambda: max(lambda, least), least: least, grow: 2}
}

// accepted lowers λ after a step that gained, the more the better the
// prediction was.
func (d *damping) accepted(gain float64) {
	f := 1 - math.Pow(2*gain-1, 3)
	d.lambda = max(d.least, d.lambda*min(max(f, 0.1), 2))
	d.grow = 2
}

// rejected raises λ, faster each time in a row.
func (d *damping) rejected() {
	d.lambda *= d.grow
	d.grow *= 2
}
