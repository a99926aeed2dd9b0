// Package actiontest checks potentials and densities of one's own before they
// are trusted with a run, in the manner of testing/fstest: one call in a test,
// and an error that says what is wrong and where.
//
//	func TestPotential(t *testing.T) {
//		if err := actiontest.Potential(washboard{0.3}, actiontest.Settings{}); err != nil {
//			t.Fatal(err)
//		}
//	}
//
// [Potential] holds V, V′ and V″ against each other, and against the contract
// of [action.Potential]: that methods overwrite what they are given, look at one
// site at a time, keep nothing between calls, and accept any length and stride.
//
// [Density] puts a density on small blocks with every kind of end and holds the
// derivatives of the action, the residual, the march and the energies against
// one another.
//
// [Functional] holds value, gradient and second variation of any action of a whole
// block against one another, at histories of one's own if wanted, and [Lagrangian]
// the derivatives of a density L(φ, φ_t, φ_x; x, t).
//
// # How derivatives are judged
//
// A derivative is compared with central differences of what it derives from,
// with steps h, h/2, h/4 and h/8 and Richardson extrapolation, which removes the
// errors of order h², h⁴ and h⁶ [Ridders 1982, Adv. Eng. Software 4, 75]. It may
// differ by
//
//	Tolerance × (largest derivative of its kind in the test) + rounding,
//
// the rounding being 64 ε max|f|/(h/8)ᵖ for a derivative of order p. Where
// the extrapolation itself does not settle to that accuracy the finding says
// so: then f has a kink there, or Settings.Step is too long for it.
//
// Each kind of finding is reported once a component or block, at its worst
// place.
package actiontest
