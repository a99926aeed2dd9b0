// Package field holds the values of a classical field on a lattice: at one
// time, as Cauchy data, and over a whole block of space and time. It knows how
// values lie in memory, how to measure and resample them, and a few solutions
// to start from. It knows nothing of energies or of equations being solved.
//
// # Slices, states, histories
//
// A [Slice] is the field at one time: a number for every component and site.
// A [State] is a slice and its rate ∂φ/∂t at the same time, which is what an
// evolution starts from. A [History] is the field on every event of a
// [lattice.Block]: a slice for every site of its time axis.
//
// # Memory
//
// Values are float64 and row-major, [slice][component][site]:
//
//	component c of site i of a slice      Data[c*Stride + i]
//	component c of event (n, i)           Data[(n*Components + c)*Sites + i]
//
// A history saved to a file opens in NumPy with the shape (slices, components,
// sites). [History.Slice], [Slice.Part] and [Slice.Component] are views: they
// share memory with what they were taken from, and a write to one shows in the
// other. [Slice.Clone], [State.Clone], [History.Clone] and [History.Window]
// copy. A Slice is small and is passed by value.
//
// # Measures
//
// [Slice.MaxAbs] and [Slice.MaxDifference] are maximum norms; they are NaN as
// soon as one value is, so that a blow-up cannot hide. [Slice.Norm] and
// [History.Norm] are L² norms with the cell weights of [lattice.Axis.Weight].
// Check methods name the first value that is not finite by component and site
// or event.
//
// # Profiles
//
// A [Profile] is a history given by a formula: the value and the rate at (x, t).
// [Profile.On] puts it on a line, as a state; [Profile.Over] on a block.
//
//	sine-Gordon  SineGordonKink, SineGordonAntikink, SineGordonBreather,
//	             SineGordonKinkAntikink, SineGordonKinkKink
//	φ⁴           Phi4Kink, Phi4Antikink
//	φ⁶           Phi6Kink in four sectors
//	linear       PlaneWave, GaussianPacket
//	round        NewLump, a guess for a bounce
//	any          Superpose
//
// The kinks, breathers and collisions are exact solutions of the continuum
// equation at every t, in units in which waves travel at the speed 1; so is the
// plane wave for its linear equation. The packet says how far it is from one,
// and a superposition of kinks is good to e^(−distance). All are finite for any
// finite x and t. They are moved by [Moving], whose zero value is at rest at the
// origin; numbers out of range, such as a speed of 1, are errors.
//
// On a lattice an exact solution of the continuum is no longer exact: evolved
// at the spacing h it is off by O(h²) or whatever the order of the scheme is.
//
// # Slopes
//
// [History.TimeSlope] and [History.SpaceSlope] are ∂φ/∂t and ∂φ/∂x by differences of
// order 2: the directions in which a history moves when it is shifted.
//
// # Resampling
//
// [Slice.Resample], [State.Resample] and [History.Resample] carry values to
// another axis or block by [Linear] (order 2) or [Cubic] (order 4)
// interpolation. Values at coinciding sites are copied unchanged, periodic
// axes go round and add their jump, and nothing is extrapolated.
package field
