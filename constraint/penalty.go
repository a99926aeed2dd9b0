package constraint

import (
	"fmt"
	"math"
)

// A Penalty is a cost of one value of the field. At returns the cost P(φ), its
// slope P′ and its curvature P″. It is called for every event of a condition in
// every step of a solve, by one goroutine at a time, and must return the same
// for the same φ. [CheckPenalty] compares the three.
//
// A penalty may have two more methods. If it has Check() error, a condition asks
// it once and fails with its error. If it has Preferred() float64, the result is
// what a [Misfit] shows as asked; otherwise that is NaN.
type Penalty interface {
	At(phi float64) (cost, slope, curvature float64)
}

// Quadratic is the penalty (φ − Centre)²/2σ², σ = Sigma > 0 in units of the
// field.
type Quadratic struct{ Centre, Sigma float64 }

// At returns the penalty, its slope (φ − Centre)/σ² and its curvature 1/σ².
func (q Quadratic) At(phi float64) (cost, slope, curvature float64) {
	d := (phi - q.Centre) / q.Sigma
	return 0.5 * d * d, d / q.Sigma, 1 / (q.Sigma * q.Sigma)
}

// Check returns an error unless Centre is finite and Sigma finite and above 0.
func (q Quadratic) Check() error {
	if !finite(q.Centre) {
		return fmt.Errorf("quadratic penalty around %v; want a finite number", q.Centre)
	}
	return checkSigma(q.Sigma)
}

// Preferred returns Centre.
func (q Quadratic) Preferred() float64 { return q.Centre }

// Cosine is the penalty 1 − cos(φ − Around) of an angle in radians: zero at
// Around and every 2π from there, 2 halfway between.
type Cosine struct{ Around float64 }

// At returns the penalty, its slope sin(φ − Around) and its curvature
// cos(φ − Around).
func (p Cosine) At(phi float64) (cost, slope, curvature float64) {
	half := math.Sin(0.5 * (phi - p.Around))
	sin, cos := math.Sincos(phi - p.Around)
	return 2 * half * half, sin, cos
}

// Check returns an error unless Around is finite.
func (p Cosine) Check() error {
	if !finite(p.Around) {
		return fmt.Errorf("cosine penalty around %v; want a finite number", p.Around)
	}
	return nil
}

// Preferred returns Around.
func (p Cosine) Preferred() float64 { return p.Around }

// RapiniPapoular is the anchoring of a director of angle φ at a wall,
// ½W sin²(φ − Easy): the director has no head or tail, so the penalty repeats
// every π. W ≥ 0 is the anchoring strength, an energy per length of the wall in
// units of the elastic constant; Easy is the angle of the easy axis in radians.
// [Rapini & Papoular 1969, J. Phys. Colloques 30, C4-54]
type RapiniPapoular struct{ W, Easy float64 }

// At returns the penalty, its slope ½W sin 2(φ − Easy) and its curvature
// W cos 2(φ − Easy).
func (p RapiniPapoular) At(phi float64) (cost, slope, curvature float64) {
	s := math.Sin(phi - p.Easy)
	sin, cos := math.Sincos(2 * (phi - p.Easy))
	return 0.5 * p.W * s * s, 0.5 * p.W * sin, p.W * cos
}

// Check returns an error unless both are finite and W ≥ 0.
func (p RapiniPapoular) Check() error {
	if !finite(p.W) || !finite(p.Easy) || p.W < 0 {
		return fmt.Errorf("anchoring of strength %v around %v; want finite numbers and a strength ≥ 0", p.W, p.Easy)
	}
	return nil
}

// Preferred returns Easy.
func (p RapiniPapoular) Preferred() float64 { return p.Easy }

// A mixture is the sum of two penalties in a blend, each with its share and
// weight.
type mixture struct {
	a, b           Penalty
	shareA, shareB float64
}

func (m mixture) At(phi float64) (cost, slope, curvature float64) {
	c, s, k := m.a.At(phi)
	c1, s1, k1 := m.b.At(phi)
	return m.shareA*c + m.shareB*c1, m.shareA*s + m.shareB*s1, m.shareA*k + m.shareB*k1
}

// CheckPenalty compares slope and curvature of a penalty with five-point
// differences of its cost and slope at each of the given field values, at a
// distance of 10⁻³ from one another. It returns an error that names the first
// value at which one is off by more than 10⁻⁷ of the numbers it is made from, or
// where a number is not finite. A penalty with features much narrower than 10⁻³
// cannot be checked this way.
func CheckPenalty(p Penalty, values ...float64) error {
	const d = 1e-3
	for _, phi := range values {
		cost, slope, curvature := p.At(phi)
		if !finite(cost) || !finite(slope) || !finite(curvature) {
			return fmt.Errorf("constraint: penalty at φ = %g has cost %v, slope %v, curvature %v; want finite numbers", phi, cost, slope, curvature)
		}
		var bySlope, byCurvature float64
		sizes := [2]float64{math.Abs(cost) + math.Abs(slope), math.Abs(slope) + math.Abs(curvature)}
		for _, at := range [...]struct{ step, weight float64 }{{-2, 1}, {-1, -8}, {1, 8}, {2, -1}} {
			c, s, _ := p.At(phi + at.step*d)
			bySlope += at.weight * c / (12 * d)
			byCurvature += at.weight * s / (12 * d)
			sizes[0], sizes[1] = max(sizes[0], math.Abs(c)), max(sizes[1], math.Abs(s))
		}
		if !(math.Abs(bySlope-slope) <= 1e-7*sizes[0]) {
			return fmt.Errorf("constraint: penalty at φ = %g has the slope %g, differences of its cost give %g; want the derivative of the cost", phi, slope, bySlope)
		}
		if !(math.Abs(byCurvature-curvature) <= 1e-7*sizes[1]) {
			return fmt.Errorf("constraint: penalty at φ = %g has the curvature %g, differences of its slope give %g; want the derivative of the slope", phi, curvature, byCurvature)
		}
	}
	return nil
}

// checkSigma returns an error unless sigma is a standard deviation.
func checkSigma(sigma float64) error {
	if !finite(sigma) || !(sigma > 0) {
		return fmt.Errorf("standard deviation %v; want a finite number > 0", sigma)
	}
	return nil
}
