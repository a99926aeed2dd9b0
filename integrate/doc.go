// Package integrate carries Cauchy data forward in time.
//
// # A run
//
// A run starts from a [field.State], the field and its rate at the first slice of
// the block of an [action.Discrete], and goes slice by slice to the last.
// [Evolve] does it, and returns a [Run]: the recorded slices, the state at the
// end, a checkpoint to go on from, and what ended the run. What the field does
// in between is seen by observers.
//
// The state must be a consistent pair: the rate is ∂φ/∂t at the time of the
// field, not half a step beside it. Profiles of package field give such pairs.
// Where the first two slices are known instead, as when a history is to be
// continued or reproduced, [Settings].Second takes the second of them.
//
// # Methods
//
//	          order  symplectic  reversible  losses  kω below  forces a step
//	leapfrog    2       yes         yes        yes    2            1
//	Yoshida 4   4       yes         yes        no     1.573        3
//	RK4         4       no          no         yes    2√2          4
//
// Leapfrog is the condition ∂S/∂φ = 0 of the discrete action, so that its history
// is stationary to rounding and what package minimize finds for the same first
// two slices is the same history. Its energy oscillates by O(k²) about a value
// that it keeps. Yoshida 4 costs three times as much a step and is the better
// choice where a trajectory matters for long, with links of fourth or sixth
// order. RK4 loses energy, at the rate (kω)⁶/72k; it takes everything that has
// no action and a longer step.
//
// The order is that in time, on a fixed lattice. Space has the order of the
// links: refine both together and the lower one shows.
//
// # The stability limit
//
// The fastest small oscillation of the lattice has ω² ≤ μ max(κ/ρ)/h² +
// max(σV″/ρ), with μ = 4, 16/3 and 272/45 for links of order 2, 4 and 6
// [action.Discrete.MaxFrequency]. Evolve refuses a step k with kω above the
// limit of the method, with [*Unstable], which names the largest step that is
// stable. For the massless line with nearest-neighbour links it is Courant
// number 1, where leapfrog carries every profile exactly.
//
// V″ is taken at the start. A field that climbs to where the potential is
// steeper may leave the stable range later. RK4 also needs k(α + 4β/h²)/ρ < 2.785,
// the losses taken at the start. Leapfrog solves the losses at the new slice and
// has no such limit.
//
// # The start of leapfrog
//
// Leapfrog knows slices, not rates. The rate of slice n is the centred
// (φ(n+1) − φ(n−1))/2k, of second order, and the stepper is one slice ahead of
// what it shows so as to know it. Slice 1 is the one for which this rate at
// slice 0 is the given one, φ(−1) being what the field equation implies:
//
//	φ(1) = φ(0) + kφ_t(0) + ½k²φ_tt(0)
//
// without losses and with a steady ρ; the losses act on the given rate. Reversing
// the rate of a state and starting again therefore runs back to the beginning.
//
// # Ends
//
// Free, Even and Odd ends and rings are part of the action. A Held end keeps the
// value of the start, or follows a function of time given in [Ends]; its rate is
// the central difference of that function, or zero, whatever the start says. The
// function stands in for an equation: it may be called at any time within a step
// of the block. Yoshida 4 and RK4 keep their order with an end that moves.
//
// # Losses
//
// αφ_t and −βφ_xxt are centred in time: leapfrog takes them at the mean of the
// links before and after a slice and solves for the new slice, site by site
// for α and by one tridiagonal solve for β. The order stays 2, at held and free
// ends and on rings, and a free end with β carries κφ_x + βφ_xt = the prescribed
// flux. Yoshida 4 steps backward in time inside each step, where a loss is a
// gain, and refuses it.
//
// # Open ends
//
// An Open end lets waves leave by φ_t + cφ_x = 0 at the end site [Engquist &
// Majda 1977, Math. Comp. 31, 629]. A wave of the wave number q in a medium of
// mass m is reflected with the amplitude
//
//	|R| = |(ω − cq)/(ω + cq)|,  ω² = c²q² + m².
//
// Measured with Gaussian packets, as the root of the energy that came back:
//
//	massless, Courant number 1, nearest links    2e-13
//	massless, Courant number 0.8, q = 3          h = 0.2    0.1     0.05
//	    links of order 2                         0.024   0.0061  0.0015
//	    links of order 4                         0.023   0.0056  0.0014
//	    links of order 6                         0.024   0.0057  0.0014
//	m = 1, width 6, fine lattice    q = 0.5      1       2       4
//	    measured                    0.402     0.174   0.0560  0.0156
//	    formula, over the packet    0.394     0.174   0.0559  0.0152
//
// so that the reflection without a mass is of second order in qh for links of
// every order, and slow massive waves do not get out: give them room, or a
// stretch with α rising smoothly.
//
// # Runs that fail
//
// A value that is not finite ends the run with [*BlowUp]: the event and component
// of the first such value, and the last state in which all were finite, which is
// that of a run stopped there, bit for bit. Looking costs time, so unwatched slices are
// looked at every 512 steps and the run goes back to find the place. A cancelled
// context ends the run at the next slice that is recorded, observed or looked at,
// and on a line of 10⁶ sites and more after 64 steps at most. In both cases, and when an observer
// returns an error, the Run is returned beside the error and holds what was
// computed.
//
// # Observers
//
// An [Observer] is shown every n-th slice, the first and the last. [Ledger] keeps
// the account of the energy, [MeanRate] the mean of φ_t (the voltage of a
// junction), [Probe] the field at chosen sites, [Progress] tells how long it will
// take, and [Watch] makes an observer of a function. One that returns [Stop] ends
// the run without an error.
//
// # Speed
//
// Where the density has a potential of the catalogue and the same coefficients at
// all sites and times, every sub-step is one pass of the loops of package kernel;
// what varies costs more passes. Slices that nobody looks at let a run go block by
// block: a block of sites stays in the second cache for up to 64 steps, and the
// blocks of a long line are shared among [Settings].Workers goroutines. Record
// and observe every hundredth slice or so rather than each one. None of this
// changes a bit: the same start gives the same history, blocked or not, with any
// number of workers, with or without assembly.
//
// # Checkpoints
//
// A [Checkpoint] is the memory of the stepper and the number of its slice. A run
// resumed from it on the same action has the same bits as one that never
// stopped. [WriteCheckpoint] and [ReadCheckpoint] keep it in a file.
//
// # Methods of one's own
//
// A [Method] makes a [Stepper]; package integratetest checks one against all that
// is said here. Steppers get the force from [action.Discrete.March] or
// [action.Discrete.Accelerator].
package integrate
