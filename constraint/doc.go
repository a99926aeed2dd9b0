// Package constraint says what is held in a block of space and time: which
// events carry a given value, which are tied to one another, and what is left
// free for a solver to find. It knows nothing of actions or solvers.
//
// # Pins
//
// A [Set] belongs to a block and collects conditions:
//
//	held := constraint.On(block)
//	held.Slice(0, first)           // a whole slice
//	held.Part(9, 10, 30, shape)    // the sites 10 ≤ i < 30 of slice 9
//	held.Event(12.0, -13.5, math.Pi)
//	held.Left(func(t float64) float64 { return 0 })
//	held.Component(1).Event(3, 0, 0.5)
//	if err := held.Err(); err != nil { … }
//
// The methods return nothing. What is wrong with a condition is kept and handed
// out by [Set.Err], which every solver asks before it starts; a condition with an
// error is left out of the set.
//
// A condition stands on a site: an event more than [lattice.OnSite] of a step
// off one is an error. On periodic axes positions beyond the block are brought
// back and the jump of the axis is taken off the value.
//
// [Set.Within] restricts the set to a region of the block: events that are not in
// it keep the start's value, and a condition on one is an error.
//
// # Rates
//
// [Set.Rate] holds the rate (φ(n+1) − φ(n−1))/2k of an interior slice. It ties
// two values, φ(n+1) = φ(n−1) + 2kv, and so removes one unknown a site whether or
// not either of the two is pinned. The rate at the first or last slice is the
// one-sided three-point formula and becomes a linear condition a site.
//
// # Costs and observations
//
// A [Cost] may be broken at a price. [Set.Observe] and its kin say that a value d
// was found with the standard deviation σ and cost (φ − d)²/2σ². [Set.Cost] puts
// any [Penalty] on an event; CostAlong, CostSlice, CostPart, CostLeft and
// CostRight put one on a wall, with a weight for each event:
//
//	wall := held.CostLeft(nil, constraint.RapiniPapoular{W: 3, Easy: 0})
//	wall.Strength = 0.5 // when it is to be weaker
//
// [Quadratic], [Cosine] and [RapiniPapoular] are ready-made. A penalty of your own
// is one method that returns cost, slope and curvature; [CheckPenalty] tests it.
//
// # Linear conditions
//
// A [Linear] condition is Σ a φ = b over any values ([Set.Linear]), or one of
// those with names: Mean of a slice, Average over a window around an event,
// Between sites, EndToEnd difference, Collective coordinate along a profile (of a
// slice or of the whole block), Phase of a periodic history, and the rates at the
// first and last slice. It is hard unless made soft:
//
//	held.Mean(3, 0.5)             // exactly
//	held.Mean(4, 0.5).Soft(0.01)  // an observation of the mean
//
// Means and integrals use the weights of the trapezoid rule: ½ at the two ends of
// an axis that is not periodic, whatever the kind of the end, and 1 elsewhere.
//
// # Bounds
//
// [Set.Bound], [Set.BoundSlice] and [Set.Bounds] keep the field between two
// numbers or functions, low ≤ φ ≤ high: the obstacle problem.
//
// # Conflicts and redundancies
//
// An event pinned twice must be given the same number, bit for bit. Pins joined
// by rates must agree to within the rounding of the sums that join them: eight
// units in the last place of the largest number in the chain, for each link of
// the chain. What does not agree is a [*Conflict] that names the event. What
// agrees is a redundancy, and is counted.
//
// Bounds that cross, or that exclude a value that is held, are a [*Crossing].
//
// A hard linear condition may have all its values held, or may follow from
// others. If its number agrees, to rounding in the first case and to 10⁻¹⁰ of the
// numbers at hand in the second, it is redundant and named in Unknowns.Repeats;
// if not, it is a [*Contradiction] that names it and what forces it. Dependences
// are looked for among up to 400 conditions with common unknowns, beyond that
// among those on the same unknowns. Whether bounds leave room for the linear
// conditions is for the solver to find.
//
// # What stays free
//
// [Set.Free] resolves pins and ties exactly (a union-find whose links carry
// differences [Tarjan 1975, J. ACM 22, 215]) and returns the [Unknowns]: for
// every value of a history its fixed number, or the unknown that it follows and
// the constant difference to it. Ends of kind Held and Odd have no equation;
// where the set does not pin them they are fixed at the value of the history
// that a solver starts from.
//
// The other conditions come resolved: HardRows and SoftRows over the unknowns,
// with what is fixed on the right-hand side; Bounds of the unknowns; Terms, the
// costs of single values; and Cost, AddGradient and AddCurvature, their sum at a
// history with its derivatives. [Unknowns.Tally] says which of these there are.
//
// # Continuation
//
// [Blend] makes the set between two sets of the same shape, for a parameter that
// goes from 0 to 1. The Strength of a single cost may be changed between solves.
//
// # Reactions and misfits
//
// After a solve every hard condition carries a [Reaction], what it must push to
// hold, and every soft one a [Misfit], how far it was overruled. Both are sorted,
// the largest first.
package constraint
