// Package action turns a Lagrangian density into numbers. The density is stated
// once, and everything is derived from one discrete action on a block: its value
// and variations, the field equation and its residual, the explicit march in
// time, energy, momentum and charge.
//
//	s, err := action.New(block, action.Wave{Potential: action.SineGordon{}})
//
// # The density
//
// There are three ways to state one: a [Wave] with a potential of the catalogue,
// a Wave with a potential of one's own, and, for everything else, a [Lagrangian]
// (see Cells and regions). A Wave is the density of one or more components
//
//	L = ½ρφ_t² − ½κφ_x² − σV(φ; x, t) + Jφ
//
// with the inertia ρ > 0, the stiffness κ = ρc² ≥ 0, the strength σ of the
// potential V and a source J. Its field equation, with two kinds of loss that no
// Lagrangian has, is
//
//	(ρφ_t)_t + αφ_t = (κφ_x + βφ_xt)_x − σ∂V/∂φ + J.
//
// In a long Josephson junction, in its usual units, φ is the phase difference, V
// is 1 − cos φ, σ the critical current, J the bias current, α the loss of the
// quasiparticles through the junction and β that along its electrodes.
//
// V is stated in one of two ways. The catalogue has [Mass], [Polynomial],
// [Phi4], [Phi6], [SineGordon] and [DoubleSineGordon], and [Each], [Bilinear] and
// [Sum] combine them for several components. Any other type with the methods of
// [Potential] will do: they evaluate V, V′ and V″ on a whole slice of numbers at
// once and are told where and when these stand. [Scalar] makes one of three
// functions of φ, and [Auto] of V alone, differentiated exactly. Package
// actiontest finds wrong derivatives and says where they are.
//
// # Coefficients
//
// A [Coefficient] is a number ([Uniform]), a function of x ([Along]) or of x and
// t ([Over]), the values themselves ([Table]), or one of these for each component
// ([PerComponent]). Nil is the default. Each lives at its own places and a
// function is sampled there:
//
//	σ, J, α          sites, at the times of the slices
//	κ, β             middles of the space links, at the times of the slices
//	ρ                sites, in the middle between two slices
//	prescribed flux  an end, at the times of the slices
//
// # The discrete action
//
// The block has the time step k and the spacing h. With Δ the difference along a
// link,
//
//	S = hk { Σ_n Σ_i u_i ½ρ(Δ_tφ/k)²
//	       ∓ Σ_n w_n [ Σ_d b_d Σ_i ½κ(Δ_dφ/h)² + Σ_i u_i (σV − Jφ) − (fφ)|ends/h ] },
//
// the first sum over time links, and w_n = ½ on the first and last slice, u_i = ½
// at a free, open or even end, else 1: the trapezoid rule. Links of length
// d = 1, 2, 3 carry the weights b of the central second difference, so that the
// elastic energy and all that follows from it is of the order 2, 4 or 6 in h; see
// [Links]. Time links are always of order 2.
//
// The upper sign is the [Lorentzian] signature, S = ∫T − U, whose stationary
// histories are saddles. The lower is the [Euclidean] one, S = ∫T + U, whose
// minima are the solutions of an elliptic problem; statics is the case of equal
// slices.
//
// [Discrete.Value], [Discrete.Gradient], [Discrete.SecondVariation] and
// [Discrete.SecondVariationMatrix] are S and its derivatives at all events, those
// at ends and in the first and last slice included. The matrix is symmetric.
//
// # Ends
//
// Links that reach beyond an end join the mirror image of the field there, and
// count with the half of their energy that belongs to the axis:
//
//	free, even  the even image, φ(−x) = φ(x)
//	held, odd   the odd image about the end's own value, φ(−x) = 2φ(0) − φ(x)
//
// Nearest-neighbour links never reach beyond. A mirror image that is not smooth
// (a kink in a derivative of κ or of φ) lowers the order locally: a field that is
// even or odd about the end keeps the full order of the links.
//
// On a ring the field is continued by its jump.
//
// A flux f prescribed at a free end is the value of κφ_x there, on the left as on
// the right. It enters through the end site and, for wide links, through the next
// one or two with weights that add up to 1 and make φ = fx/κ an exact solution:
// they are what the ghost φ(−x) = φ(x) − 2xf/κ gives.
//
// At an open end φ_x is neither zero nor prescribed: a wave that leaves through
// an end of impedance √(ρκ) has κφ_x = −√(ρκ)φ_t on the right. Wide links stop
// there, and the first few nearest-neighbour links are made stiffer or softer so
// that a linear field pulls at the end site alone. They do the same at a free end
// where a flux that varies in time meets the loss β, since then κφ_x is not what
// is prescribed. Both are of order 2 near the end.
//
// Held and odd ends have no equation. Their values are data: a march leaves them
// as they stand, a solver holds them, and ∂S/∂φ there is the force they carry.
//
// # Cells and regions
//
// [Cells] is the action of any density L(φ, φ_t, φ_x; x, t), cell by cell,
//
//	S = hk Σ_cells ¼ Σ_corners L(φ, Δ_tφ/k, Δ_xφ/h; x, t),
//
// the differences along the two sides that meet at the corner, and φ, x and t at
// the corner itself. Plain averages over the cell would not see a checkerboard.
// Positions at the corners, rather than on sides, keep a cell the same as its
// mirror image, which makes every error even in h and k whatever L depends on;
// for a Wave that means ρ and κ averaged over the ends of a link. L is written once
// with hyperdual numbers ([AutoLagrangian]), which costs a few microseconds a cell,
// or is a type with derivatives of its own.
//
// Cells live on a [lattice.Region], which says which cells exist: an L, a T, a disc
// of steps. Where a neighbour is missing the natural condition holds. [Shaped] is a
// Wave on a region at the price of a Wave: events, time links and space links count
// with a quarter, a half and a half for each existing cell around them. Both have
// neither losses nor a march; they are for problems that are solved all at once.
// Events outside of the region have no gradient and empty rows in the matrix.
//
// # Noisy gradient flow
//
// [NoisyFlow] is the action of Freidlin and Wentzell of a field that runs downhill
// in the static energy E of a Wave and is pushed by noise,
//
//	S = ½∫∫ (φ_t + M δE/δφ)²/M dx dt.
//
// Its minima are the likeliest transitions, and the least of them over all
// durations is the quasi-potential, twice the barrier of E. The force is averaged
// along every time link so that the square splits exactly and no lattice path is
// cheaper than that. Second differences in space make its second variation twice
// as wide as that of other actions.
//
// # Two sets of equations
//
// The stationary equations are ∂S/∂φ = 0 at every event that nothing holds. In
// the first and last slice and at free ends they are the natural conditions: no
// momentum, the prescribed flux. Their matrix, the second variation, is square
// and symmetric.
//
// The residual, [Discrete.Residual], is the field equation itself, per hk, at
// every event of the interior slices. There it is ∂S/∂φ/hk less what the losses
// and open ends take,
//
//	uαφ_t − (βφ_xt)_x + √(ρκ)φ_t/h at an open end,  φ_t = (φ(n+1) − φ(n−1))/2k.
//
// Losses and open ends have no action: [Discrete.Conservative] names them,
// Value and Gradient leave them out, and a Euclidean density refuses them.
// [Discrete.ResidualJacobian] is the derivative of the residual.
//
// # The march
//
// A [March] solves the residual of slice n for slice n+1: the leapfrog method
// [Hairer, Lubich & Wanner 2003, Acta Numerica 12, 399]. A marched history
// therefore makes the action stationary at its interior slices, to rounding.
// α and open ends are solved for at the site and keep the order 2; β takes one
// tridiagonal solve a step. [March.Start] makes the second slice from Cauchy data,
// [March.Tangent] is the derivative of a step. Nothing here watches the stability
// of the step; [Discrete.MaxFrequency] gives the number to do it with. An
// [Accelerator] gives φ_tt in continuous time to methods that step inside a time
// link.
//
// # Energy and its like
//
// [Discrete.Energy] counts the energy of a state by the same links and weights.
// In the semi-discrete equation, lattice in space and continuous in time, it is
// conserved exactly but for [Discrete.Power], which lists sources, losses and
// ends, and [Discrete.EnergyFlux] balances [Discrete.EnergyDensity] at every
// site. Leapfrog adds an oscillation of order k². [Discrete.Momentum] is
// −∫ρφ_tφ_x, conserved on a uniform lattice to the order of the links only.
// [Discrete.Charge] is the topological charge in units of the distance between
// vacua.
package action
