// Package track finds kinks and pulses between the sites of a lattice and
// follows them in time: through collisions, mergers and bounces. It knows no
// equation. What the vacua are, and what the energy density is, comes from the
// caller.
//
// # What is found
//
// A kink stands where the field passes the level between two neighbouring vacua,
// upwards for a kink and downwards for an antikink; Vacua.Find lists them from
// left to right. The level is met by the cubic through the four sites around it,
//
//	φ(x) = level,  error at most 3h⁴/128·max|φ⁗|/|φ_x| inside the line,
//
// which across Even and Odd ends takes the mirror image and on a ring goes round.
// A pulse is a peak of a density; Pulses lists those above a floor, each with the
// top of the quartic through its five sites, of fourth order in h too, and with
// its centroid.
//
// # Following
//
// Kinks and PulseTrain are fed slice by slice, during a run or from a History,
// and sort what they find into Paths. A path goes on at the nearest new place of
// the same kind. Two paths that vanish side by side have merged; when a pair
// appears where one has merged, they are the same two again:
//
//   - a kink goes on as a kink and an antikink as an antikink, whether they have
//     turned back or passed through each other (charge is conserved);
//   - pulses have no charge and keep their order, as if they had turned back;
//   - on a half line with an Even end, of which one partner is seen, the path goes
//     on with whatever comes back from the end.
//
// # Speeds and verdicts
//
// Path.Speed fits a straight line by least squares over a window of time and
// gives the slope with its standard error. Path.Bounces counts mergers. Bond tells
// from the mass of the kinks and the tails they turn to each other whether a pair
// that draws apart has escaped or will come back, and from the energy left
// between them whether it can part at all.
package track
