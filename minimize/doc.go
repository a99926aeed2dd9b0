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
// # Outcome
//
// Both return a [Found] with the history, the reactions and a [Report]. Unless
// the status is Converged the error is a [*NotConverged], and the history is the
// best one so far; a context that ends is one of the reasons. Problems that
// cannot be asked are a [*Refusal], those above the limits of the settings a
// [*TooLarge]. There is no silent fall-back: the report names the method.
//
// # Response
//
// [NewResponse] takes what was found and tells how it depends on what it was
// found with. [Response.Of] gives the [Influence] of a pinned or observed value,
// of the number of a linear condition, or of a source at one event on every other
// event, and [Influence.Shares] how much of it lies outside of a light cone: of a
// source nothing if Cauchy data are pinned, much if two times are. [Response.Posterior]
// gives the standard deviation of the field at chosen events and the covariance
// between them.
//
// [Response.Verdict] says which conditions the equation cannot meet together:
// what each would save of the cost if it were given up, and how far its values
// would move.
//
//	r, err := minimize.NewResponse(s, held, found, nil)
//	v, err := r.Verdict(ctx, nil)
//	fmt.Println(v)
//
// All are derivatives at the solution, from one factor of the exact second
// derivative there. They cost about as much as one step of the solve and a
// solution with the factor for each question.
//
// # Size and time
//
// Linear systems are factorised exactly by nested dissection of the grid, in
// O(N^1.5) operations and O(N log N) memory for N events. A block of 100 slices
// and 400 sites takes a few hundredths of a second for each factorisation, and a
// cold start over eight units of time of a sine-Gordon collision about twenty of
// them. Much longer blocks need a start that knows more than the first slice.
package minimize
