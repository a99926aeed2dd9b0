package main

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/integrate/quad"
)

// A well is a metastable minimum of a potential V and its way out: the barrier to
// one side of it and what lies beyond.
//
// The problem is solved in units of the well's own: lengths in 1/m, and the field
// as f = (φ − φ_false)/A, which is 0 in the false vacuum and 1 at the turning
// point, where V has come down to V_false again. Then
//
//	V − V_false = m²A² W(f),  W = ½f² + …,  S[φ] − S[φ_false] = A² S_W[f],
//
// and neither the scales nor the sign nor the origin of φ matter any more.
type well struct {
	potential polynomial // V
	vacuum    float64    // φ_false
	mass      float64    // m = √V″ there
	reach     float64    // A, negative if the way out is downwards
	shape     polynomial // W
	truth     float64    // f of the first minimum beyond the turning point; NaN if V falls for ever
	sides     int        // on how many sides there is a way out
}

// newWell finds the minimum of V nearest to a guess and the way out of it.
func newWell(v polynomial, guess float64) (*well, error) {
	for k, c := range v {
		if math.IsNaN(c - c) {
			return nil, fmt.Errorf("-coeffs: c%d is %g; want finite numbers", k, c)
		}
	}
	if math.IsNaN(guess - guess) {
		return nil, fmt.Errorf("-vacuum %g; want a finite number", guess)
	}
	for len(v) > 0 && v[len(v)-1] == 0 {
		v = v[:len(v)-1]
	}
	if len(v) < 4 {
		return nil, fmt.Errorf("-coeffs: V of degree %d; want at least 3: c0,c1,c2,c3", len(v)-1)
	}

	// From the right, minima of V are every second place where V′ changes sign.
	places := v.slope().roots()
	if v[len(v)-1] < 0 && len(places) > 0 {
		places = places[:len(places)-1]
	}
	w := &well{potential: v, vacuum: math.Inf(1)}
	for i := len(places) - 1; i >= 0; i -= 2 {
		if math.Abs(places[i]-guess) < math.Abs(w.vacuum-guess) {
			w.vacuum = places[i]
		}
	}
	if math.IsInf(w.vacuum, 0) {
		return nil, fmt.Errorf("-coeffs: V has no minimum, so there is no false vacuum; want a potential with a well")
	}
	u := v.about(w.vacuum) // V − V_false as a function of φ − φ_false, but for
	u[0], u[1] = 0, 0      // these, which are V_false and rounding

	var terms float64 // of V″ before they cancel
	for k := 2; k < len(v); k++ {
		terms += math.Abs(float64(k*(k-1)) * v[k] * math.Pow(w.vacuum, float64(k-2)))
	}
	if !(2*u[2] > 1e-8*terms) {
		return nil, massless(w.vacuum)
	}
	w.mass = math.Sqrt(2 * u[2])
	if err := w.findWayOut(u); err != nil {
		return nil, err
	}
	return w, nil
}

// findWayOut looks on both sides for the place where V comes down to V_false, and
// takes the one behind the weaker wall.
func (w *well) findWayOut(u polynomial) error {
	crossings := u[2:].roots() // u/(φ − φ_false)² is positive at the false vacuum
	at, _ := slices.BinarySearch(crossings, 0)
	best := math.Inf(1)
	for _, i := range []int{at, at - 1} {
		if i < 0 || i >= len(crossings) {
			continue
		}
		a := crossings[i]
		side := &well{reach: a, truth: math.NaN()}
		for k, c := range u {
			side.shape = append(side.shape, c*math.Pow(a, float64(k-2))/(w.mass*w.mass))
		}
		dW := side.shape.slope()
		for _, f := range dW.roots() {
			if f > 1 && dW.slope().at(f) > 0 {
				side.truth = f
				break
			}
		}
		w.sides++
		if tension := a * a * side.tension(); tension < best {
			best = tension
			w.reach, w.shape, w.truth = side.reach, side.shape, side.truth
		}
	}
	if w.sides == 0 {
		return fmt.Errorf("the minimum φ = %g is the true vacuum: V is nowhere lower, so nothing decays; want -vacuum near a higher minimum", w.vacuum)
	}
	for _, c := range w.shape {
		if !(math.Abs(c) < 1e8) {
			return massless(w.vacuum)
		}
	}
	if r := w.thinRadius(); r > 100 {
		return fmt.Errorf("the vacua differ by so little that the bounce has a radius of %.3g/m; want at most 100: trust the thin wall, whose action is %.4g", r, w.thinAction())
	}
	return nil
}

func massless(vacuum float64) error {
	return fmt.Errorf("no mass, or hardly any: V″ vanishes at the minimum φ = %.6g; want a well with a mass, or the tails of the bounce fall too slowly for any box", vacuum)
}

// tension is ∫ √(2W) df up to the turning point. With f = 1 − u² the integrand has
// no root at the end.
func (w *well) tension() float64 {
	return quad.Fixed(func(u float64) float64 {
		return 2 * u * math.Sqrt(2*max(0, w.shape.at(1-u*u)))
	}, 0, 1, 400, quad.Legendre{}, 1)
}

// thinRadius and thinAction are the radius, in 1/m, and the action of the bounce
// where the wall is thin, σ/ε and πσ²/ε [Coleman 1977, Phys. Rev. D 15, 2929]; NaN
// if V falls for ever, so that there is no ε.
func (w *well) thinRadius() float64 { return w.tension() / -w.shape.at(w.truth) }

func (w *well) thinAction() float64 {
	return w.reach * w.reach * math.Pi * w.tension() * w.thinRadius()
}

// field returns φ for f.
func (w *well) field(f float64) float64 { return w.vacuum + w.reach*f }
