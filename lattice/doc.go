// Package lattice holds the geometry of a problem and nothing else: where the
// sites and slices are, how the ends behave, which events a signal can reach,
// and how a block is refined.
//
// # Axes and blocks
//
// An [Axis] is a row of equally spaced sites x(i) = From + i·Step. A [Block] is
// a time axis times a space axis. Slices are numbered n along time, sites i
// along space; the pair (n, i) is an event, and [Block.At] and [Block.Index]
// translate between the numbers and the [Event] (T, X).
//
// Conditions and sources are placed on sites. A position that is more than
// [OnSite] of a step away from a site is an error, never rounded.
//
// # Ends
//
// Each end of an axis is one of
//
//	Free  the natural condition: prescribed flux (zero unless said), half a cell
//	Held  no equation at the end site; its value is given
//	Open  outgoing waves leave, half a cell
//	Even  the mirror image continues the field, φ(−x) = φ(x), half a cell
//	Odd   the mirror image about the end's own value, φ(−x) = 2φ(0) − φ(x)
//
// or the axis is Periodic: site Sites is site 0 again, with φ increased by
// Jump, in field units and one number a component (2π for one fluxon on a
// ring). The time axis is Free or Periodic.
//
// [Axis.Weight] is the share of a cell that belongs to a site: ½ at Free, Open
// and Even ends, 1 elsewhere. A Held or Odd end site carries the weight 1.
//
// # Units
//
// Everything is in the caller's natural units. A speed is a length of the space
// axis divided by a length of the time axis.
package lattice
