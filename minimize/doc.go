// Package minimize solves for whole histories at once: the field on every event
// of a block of space and time, with conditions held anywhere in it.
//
//	held := constraint.On(block)
//	held.Slice(0, first)
//	held.Event(12, -13.5, math.Pi)
//	found, err := minimize.LeastResidual(ctx, s, held, start, nil)
//	fmt.Println(found.Report)
//
// # Two problems
//
// [LeastResidual] makes the residual r of the field equation as small as it can,
// in the sense of the cost Σ hk r²/2q² over all interior events, pinned ones
// included. A Lorentzian action has no minimum to descend to, its second
// variation having both signs, but this cost has. It accepts losses, drives and
// open ends, and fewer or more conditions than the equation can meet. With a
// Cauchy pair pinned, two adjacent slices, it reproduces the march of the
// action.
//
// [Minimum] makes a Euclidean action as small as it can: one equation, ∂S/∂φ = 0,
// for each free value, natural conditions where nothing is pinned.
//
// The two are not to be mixed: with a Cauchy pair pinned, the equations
// ∂S/∂φ = 0 of the free events lack that of slice 1 and have a natural condition
// at the last slice instead.
//
// # Conditions
//
// Conditions come from package constraint and hold exactly. Ends of kind Held and
// Odd, which have no equation, stay at the values of the start history unless the
// conditions pin them. Each condition has a reaction: −∂S/∂φ for a minimum, the
// impulse of the source that would have to be added there; the multiplier
// ∂cost/∂φ for the least residual. Both vanish where a pin asks for nothing that
// the equation would not do by itself.
//
// # Strategies
//
// Levenberg–Marquardt on the whole block stalls where the start is too far from
// any solution: on long blocks, and where slices at two times are pinned. A
// [Strategy] in the settings of LeastResidual comes nearer first; the solve for
// the whole block then ends the work, to the same tolerance for all of them.
//
//	Marching      a Cauchy pair is pinned: the action's march, which is the
//	              solution if nothing else is held
//	Windows       16 new slices at a time; from a Cauchy pair the slices behind
//	              stay, without one the window grows
//	CoarseToFine  the block without every other slice and site first
//	Shooting      the first two slices are corrected until the march from them
//	              meets the pins; several nodes make it multiple shooting
//	Dragging      the pins are carried to where they are wanted by
//	              pseudo-arclength steps
//
// The zero value, Fitting, takes Marching where a Cauchy pair is pinned and the
// equation allows it, and the start alone otherwise; it keeps what marching gives
// only if that lowers the cost. Where two slices are pinned and the whole block leaves a
// residual, it shoots, from the start and from the straight one. The report says which was taken, why, and what
// each stage did.
//
// Two slices of a nonlinear field at different times are joined by many histories.
// [Straight] makes a start that knows the conditions alone, and [Vary] others
// from it, by number. Shooting from the straight start has joined the slices of a
// sine-Gordon collision over 40 units of time, where block-wide steps stall.
//
// # Outcome
//
// Both return a [Found] with the history, the reactions and a [Report]. Unless
// the status is Converged the error is a [*NotConverged], and the history is the
// best one so far; a context that ends is one of the reasons. Problems that
// cannot be asked are a [*Refusal], those above the limits of the settings a
// [*TooLarge]. There is no silent fall-back: the report names the method.
//
// # Size and time
//
// Linear systems are factorised exactly by nested dissection of the grid, in
// O(N^1.5) operations and O(N log N) memory for N events. A block of 100 slices
// and 400 sites takes a few hundredths of a second for each factorisation, and a
// cold start over eight units of time of a sine-Gordon collision about twenty of
// them. Growing windows take a block of 1024 × 1024 events, from two
// slices, in less than a minute and 3 GB.
package minimize
