package kernel

import (
	"math"
	"testing"
)

// A pendulum is a chain of oscillators without links, in whose middle a stepping
// method can be watched alone: φ″ = −V′(φ) − αφ′.
func pendulum(p Potential, alpha float64) Line {
	return Line{Radius: 1, Keep: -alpha, Pull: 1, Potential: p}
}

// rk4 makes a step of length k in place; phi has ghost cells.
func rk4(l *Line, phi, v []float64, k float64) {
	r := l.Radius
	n := len(v)
	var p, q [3][]float64
	at, speed := phi, v
	for s, part := range [3]float64{0.5, 0.5, 1} {
		p[s], q[s] = make([]float64, n+2*r), make([]float64, n)
		l.Stage(p[s][r:r+n], q[s], at, speed, phi[r:r+n], v, part*k)
		at, speed = p[s], q[s]
	}
	l.Finish(phi[r:r+n], v, q[0], q[1], p[2], q[2], k/6)
}

// slopeOfError returns the observed order of a method between two step counts.
func slopeOfError(err func(steps int) float64, steps int) float64 {
	return math.Log2(err(steps) / err(2*steps))
}

// TestStagesAreRK4 finds order 4 on a damped oscillator with known motion
// e^(−αt/2)·cos ωt·…, at several steps, three levels apart.
func TestStagesAreRK4(t *testing.T) {
	const alpha, end = 0.2, 5.0
	l := pendulum(Quadratic(1), alpha)
	omega := math.Sqrt(1 - alpha*alpha/4)
	// φ(0) = 1, φ′(0) = −α/2
	want := math.Exp(-alpha*end/2) * math.Cos(omega*end)
	err := func(steps int) float64 {
		phi, v := []float64{1, 1, 1, 1, 1, 1}, []float64{-alpha / 2, -alpha / 2, -alpha / 2, -alpha / 2}
		for range steps {
			rk4(&l, phi, v, end/float64(steps))
		}
		return math.Abs(phi[2] - want)
	}
	for _, steps := range []int{50, 100, 200} {
		// the next order is k ≤ 0.1 times smaller
		if order := slopeOfError(err, steps); math.Abs(order-4) > 0.1 {
			t.Errorf("order %.3f between %d and %d steps, want 4", order, steps, 2*steps)
		}
	}
}

// TestKickDriftComposes makes Yoshida's fourth-order method of kicks and drifts,
// w₁ = 1/(2 − 2^⅓) [Yoshida 1990, Phys. Lett. A 150, 262], on a pendulum, and
// watches the energy ½φ′² + 1 − cos φ, whose error is of order 4.
func TestKickDriftComposes(t *testing.T) {
	const end = 10.0
	w1 := 1 / (2 - math.Cbrt(2))
	w := [4]float64{0.5 * w1, 0.5 - 0.5*w1, 0.5 - 0.5*w1, 0.5 * w1} // drifts
	kicks := [3]float64{w1, 1 - 2*w1, w1}
	err := func(steps int) float64 {
		k := end / float64(steps)
		phi, v := []float64{1, 1, 1, 1, 1}, []float64{0.5, 0.5, 0.5}
		energy := func() float64 { return 0.5*v[1]*v[1] + 1 - math.Cos(phi[2]) }
		start, worst := energy(), 0.0
		for range steps {
			AddScaled(phi[1:4], phi[1:4], w[0]*k, v)
			for m, kick := range kicks {
				l := Line{Radius: 1, Keep: 1, Pull: kick * k, Potential: Sine()}
				next := make([]float64, 5)
				l.KickDrift(next[1:4], phi, v, w[m+1]*k)
				phi = next
			}
			worst = max(worst, math.Abs(energy()-start))
		}
		return worst
	}
	for _, steps := range []int{100, 200, 400} {
		// the error is even in k: the next order is k² ≤ 0.01 times a constant
		if order := slopeOfError(err, steps); math.Abs(order-4) > 0.1 {
			t.Errorf("order %.3f between %d and %d steps, want 4", order, steps, 2*steps)
		}
	}
}
