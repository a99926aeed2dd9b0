package minimize

import "math"

// bend writes δ + ½a to curved, the step δ with its geodesic acceleration: a
// solves the damped normal equations
//
//	(JᵀJ/q² + λ)a = −Jᵀr″/q²
//
// for the second derivative r″ of the residual along δ, taken by a finite
// difference. It costs a residual and a solve, little beside the factorisation,
// and follows the bottoms of curved valleys that straight steps leave. It
// returns false if the step is so straight that nothing is gained, or so curved
// that the expansion says nothing: 2|a| above 3|δ| [Transtrum & Sethna 2012,
// arXiv:1201.5885, where the bound is 0.75; the larger one took fewer steps on
// kinks and collisions of the sine-Gordon equation].
func (l *least) bend() bool {
	const (
		reach    = 0.1 // of the step at which the residual is probed
		straight = 1e-3
		curved   = 3
	)
	for u, d := range l.delta {
		l.curved[u] = reach * d
	}
	l.evaluate(l.curved)
	l.free.Expand(l.trial, l.delta)
	second := l.trialRes.Data
	for _, e := range l.normal.rows {
		columns, values := l.jac.Row(int(e))
		var slope float64
		for k, f := range columns {
			slope += values[k] * l.trial.Data[f]
		}
		second[e] = 2 / reach * ((second[e]-l.res.Data[e])/reach - slope)
	}
	a := l.curved
	l.normal.gradient(a, l.size, l.jac, second)
	l.solver.Solve(a, a)
	var step, bent float64
	for u, d := range l.delta {
		step += d * d
		bent += a[u] * a[u]
		a[u] = d - 0.5*a[u]
	}
	ratio := 2 * math.Sqrt(bent/step)
	return ratio > straight && ratio < curved
}
