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
// # Rates
//
// [Set.Rate] holds the rate (φ(n+1) − φ(n−1))/2k of an interior slice. It ties
// two values, φ(n+1) = φ(n−1) + 2kv, and so removes one unknown a site whether or
// not either of the two is pinned. A rate at the first or last slice has only
// one neighbour and is an error: pin a Cauchy pair there, which is two adjacent
// slices.
//
// # Conflicts and redundancies
//
// An event pinned twice must be given the same number, bit for bit. Pins joined
// by rates must agree to within the rounding of the sums that join them: eight
// units in the last place of the largest number in the chain, for each link of
// the chain. What does not agree is a [*Conflict] that names the event. What
// agrees is a redundancy, and is counted.
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
// # Reactions
//
// After a solve every condition carries a [Reaction]: what it must push to hold.
package constraint
