// Bench times the library beside its peers in one run and prints ratios.
//
//	go run ./internal/bench -set evolve     stepping: ns per site and step
//	go run ./internal/bench -set block      factorisations: seconds
//
// A line a case: its name, our time, the peer's, the ratio of the two, and who
// the peer is. Ours and the peer's runs alternate and
// the medians are printed, since machines are noisy: compare ratios, not times.
// Where both run on one core it is the processor time of the process, which others
// at work on the machine disturb less than the clock on the wall.
// A peer that is not installed is said to be so.
package main
