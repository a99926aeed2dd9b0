// Package kernel holds the inner loops: stencil, force and update of one
// component of a field in one pass over memory, on plain []float64. It knows
// lines of numbers and what is done to them; ends, times and physics belong to
// the caller.
//
// # What is here
//
//   - [Line] and [Varying]: the steps of leapfrog, of symplectic kicks and drifts
//     and of Runge–Kutta stages on the sites inside a line, with constant or
//     varying coefficients and links of order 2, 4 and 6;
//   - [Potential]: V, V′ and V″ of the catalogue; [Sin] and [Cos];
//   - [Sum], [Dot], [WeightedDistance], [MaxAbs] and the like, the reductions that
//     energies and norms are made of, and [AddScaled];
//   - [Tiles]: many steps a pass over memory, on one or more cores.
//
// # Ends
//
// A method of Line works on n sites and reads Radius ghost cells beyond them on
// both sides. In the middle of an array these are its neighbours there:
//
//	line.Leapfrog(next[r:n-r], now, before[r:n-r])
//
// For the r sites at an end copy what they see, images or the far side of a ring
// included, into a window of 3r values and call the same method on that; one or
// two sites cost a few nanoseconds, as they do not go through assembly. The bits
// are those of any other site, so a ring has no seam and a mirror no mark. Sites
// with an equation of their own (held, open, with a prescribed flux) are the
// caller's.
//
// # Same bits
//
// Each loop exists three times: for AVX-512F, for AVX2 with FMA, and in Go. The
// two in assembly are written by the program in folder generate, which describes
// each loop once; the one in Go, its portable twin, makes the same operations in
// the same order, math.FMA where the assembly fuses and an explicit float64(x*y)
// where it does not, since the language lets a compiler fuse the rest. So every
// path gives the same bits, and so does any split of a line into runs. The sign
// and payload of a NaN are left to the processor.
//
// Fusing costs the twin a test of the processor at every operation on amd64, so
// where precision does not ask for it the loops multiply and add: in the φ⁴
// kernel only the sums with Keep and Link are fused.
//
// The second difference is taken as (φ(i+1) − φ(i)) − (φ(i) − φ(i−1)): for a
// smooth field both differences are exact, as is the step from before to now, and
// what is rounded is a small increment and then once the field. At Courant
// number 1 without a potential that is d'Alembert's solution, up to that last
// rounding.
//
// Sums run in eight lanes whatever the registers; [Sum] says in which order.
//
// # Speed
//
// The loops are bound by loads and stores as much as by arithmetic. They align
// what they write first to the width of a register, so the arrays of one call
// should agree in the address of a site modulo 64 bytes: slices of one length and
// one allocator do. Potentials that no loop has built in cost a pass through the
// nearest cache, in strips. Where the arrays of a step do not fit the nearest
// cache, Tiles help even if they fit the next one: the stages of a Runge–Kutta
// step may be its steps, slice 4s + m being stage m of step s.
//
// # Choosing the path
//
// The path is chosen once, from CPUID; on other architectures, arm64 among them,
// and with the build tag noasm it is the twin. For tests the environment
// variable TENTER_KERNEL names one: portable, avx2 or avx512. A name that this
// machine cannot honour stops the program. [Path] tells which is in use. It is
// read before a test begins, so go test does not notice that it changed: add
// -count=1.
//
// # Changing a loop
//
// Change the generator and the twin, run
//
//	go generate ./internal/kernel
//
// and the tests, which run all paths that the processor has on the same inputs
// and demand equal bits. The generator has a go.mod of its own, for avo. That
// the assembly is what it writes is checked by
//
//	go generate ./internal/kernel && git diff --exit-code -- internal/kernel
//
// The benchmarks compile testdata/peer.c, the plain loop in C, where there is a
// gcc, and alternate with it.
package kernel

//go:generate go -C generate run .
