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
// # Stationary histories and saddles
//
// [Stationary] solves the same equations for either signature, without asking
// for a minimum, and [Saddle] looks for a point of index 1 of a Euclidean action: a
// bounce, a sphaleron, a critical droplet. Both factorise the second variation as
// LDLᵀ and report an [Inertia]: the Morse index, the nullity, and the eigenvalue
// nearest to zero with the event where its vector is largest. Eigenvalues are
// those of S″v = λWv with the areas W of the events, so that they converge.
//
// A two-time problem is singular if a normal mode fits the time between the
// slices, and nearly so if one almost does, which on fine lattices one always does.
// Singular blocks are told, and the history nearest to the start can be asked for.
//
// A translation that nothing hinders is a zero mode. The lattice makes it a tiny
// eigenvalue whose sign depends on where the centre lies between the sites, so that
// a bounce reads as index 1, 2 or 3. Settings.Shifts and Settings.ZeroModes hold such
// directions by bordering the matrix; m of them add m negative eigenvalues, which
// are taken off. A quarter of the plane with free sides along the axes of symmetry
// has no zero modes and needs none held.
//
// The index of a Lorentzian block grows with every refinement, being Σ_k
// floor(ω_kT/π) for a massive field pinned at both times. Relative to a reference
// history it is a small number. It settles if the frequencies of high modes keep away
// from the multiples of π/T, as with dt = dx and a rational ratio of T to the
// length. In general it goes on changing, ever more rarely, as higher modes cross:
// by about (A·δm²/2π²)·log(1/h) for a change δm² of the mean of V″ on a block of area
// A. Compare it on the same lattice only.
//
// # Ways downhill
//
// [Relax] and [RelaxResidual] let a history flow in a relaxation time τ beside the
// times of the block, down a Euclidean action or the squared residual, with or
// without inertia and friction. Explicit steps carry a disturbance by one link or
// two and are refused above their limit of stability; implicit ones use the exact
// factor. What counts is the way: the solvers above reach the end sooner.
//
// # Families
//
// [Continue] follows a stationary history of either signature as a parameter
// changes, with pseudo-arclength steps around folds, and locates folds and branch
// points, where the index tells of them. At a fold of a family of minima, the
// index goes from 0 to 1: the upper branch is the saddle over which the lower one
// decays.
//
// [Periodic] finds histories that are periodic in time, breathers and oscillons,
// of which there is a family: one of period, frequency, energy and amplitude is
// given, and the step of the clock is an unknown. For given slices the action of
// one period T is S = K/T − UT, so that the energy is −dS/dT and the condition on it
// is one more stationary equation.
//
// [TakeCensus] solves from many starts and lists the distinct histories, up to
// symmetries if one likes, with action and index.
//
// Both families meet singular second variations by design: at a fold, and because
// a shift in time costs nothing. Their matrix is bordered by what fixes that, the
// tangent of the branch or the rate of the history, and it is the bordered matrix
// that is factorised.
//
// # Conditions
//
// Conditions come from package constraint. Pins and ties are eliminated. Hard
// linear conditions border the matrix, so that steps keep them; so do soft ones,
// with their precision. Observations and cost conditions add to the action or to
// the cost, and a solve settles their compromise with it: for a Gaussian problem
// that is the posterior mean of Gauss and Markov. Bounds are kept by an active
// set, in Minimum and Relax only; Continue takes neither bounds nor linear
// conditions. Ends of kind Held and Odd, which have no equation, stay at
// the values of the start history unless the conditions pin them.
//
// Each hard condition has a reaction: −∂S/∂φ for a minimum, the impulse of the
// source that would have to be added there; the multiplier ∂cost/∂φ for the
// least residual. Both vanish where a pin asks for nothing that the equation would
// not do by itself. Each soft condition has a misfit.
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
// Solvers return a [Found] with the history, the reactions and a [Report], flows
// and families in an outcome of their own. Unless the status is Converged the error
// is a [*NotConverged], for a branch a [*BrokenBranch], and the history is the best
// one so far; a context that ends is one of the reasons. Problems that cannot be
// asked are a [*Refusal], those above the limits of the settings a [*TooLarge],
// explicit steps above theirs an [*Unstable]. There is no silent fall-back: the
// report names the method.
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
// them. Growing windows take a block of 1024 × 1024 events, from two
// slices, in less than a minute and 3 GB.
package minimize
