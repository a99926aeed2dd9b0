// Package integratetest checks a stepping method of one's own before it is
// trusted with a run, in the manner of testing/fstest: one call in a test, and
// an error that says what is wrong, with the numbers.
//
//	func TestMethod(t *testing.T) {
//		claims := integratetest.Claims{Order: 4, Reversible: true, Symplectic: true}
//		if err := integratetest.Method(mine.Blanes{}, claims); err != nil {
//			t.Fatal(err)
//		}
//	}
//
// [Method] runs the method on small lattices and looks at
//
//   - its order: the largest error of the field and of the rate over a nonlinear
//     run, on a fixed lattice, at the steps k, k/2 and k/4, against the
//     extrapolated modified midpoint rule [Hairer, Nørsett & Wanner 1993, Solving
//     Ordinary Differential Equations I, §II.9], which is good to 1e-12 there.
//     The slope must reach the claimed order less [Slack];
//   - the ends: held values are kept, or follow their function;
//   - its stability limit: a linear oscillation stays bounded at several kω
//     below Limit and grows at 1.01·Limit;
//   - its memory: what Memory and Seek carry to a new stepper gives the same
//     bits, and Start changes nothing that it is handed;
//   - Field and State, which must agree, and Step, which must not allocate;
//   - Advance, if the stepper offers it, which must give the bits of Step;
//   - reversibility and symplecticity, if they are claimed.
//
// Losses, open ends, a given second slice and coefficients known at slices only
// may be refused by an error from Start, unless the Claims say otherwise. What
// is not refused must be done to the claimed order: there is no middle way.
package integratetest
