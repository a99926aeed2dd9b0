package minimize

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"
)

// nullSpace returns k orthonormal vectors spanning what A takes nearest to zero.
// Inverse iteration of all of them at once finds the null vectors of the matrix
// that was factorised, in which small pivots were replaced: the inverse is large
// on exactly these. Corrections with the true image, v −= A⁻¹Av, take out what
// distinguishes them from those of A.
func (b *bordered) nullSpace(k int) [][]float64 {
	n := len(b.root)
	space, image := make([][]float64, k), make([][]float64, k)
	for j := range space {
		space[j] = scattered(b.pattern.N, uint64(j)+2)
		image[j] = make([]float64, b.pattern.N)
	}
	for range 2 { // each gains 3 digits or more, the ratio of a replaced pivot to an eigenvalue
		for _, v := range space {
			clear(v[n:])
			b.project(v[:n])
		}
		b.factor.SolveMany(space, space)
		b.orthonormalise(space)
	}
	const most = 6
	last := math.Inf(1)
	for range most {
		worst := 0.0
		for j, v := range space {
			clear(image[j][n:])
			b.mul(image[j][:n], v[:n])
			worst = max(worst, floats.Norm(image[j][:n], 2))
		}
		if !(worst < 0.5*last) {
			break
		}
		last = worst
		b.factor.SolveMany(image, image)
		for j, v := range space {
			b.project(image[j][:n])
			floats.Sub(v[:n], image[j][:n])
		}
		b.orthonormalise(space)
	}
	for j := range space {
		space[j] = space[j][:n]
	}
	return space
}

// orthonormalise makes the unknowns of the vectors an orthonormal set on the
// constrained space.
func (b *bordered) orthonormalise(space [][]float64) {
	n := len(b.root)
	for j := range space {
		v := space[j][:n]
		b.project(v)
		for range 2 {
			for _, u := range space[:j] {
				floats.AddScaled(v, -floats.Dot(v, u[:n]), u[:n])
			}
		}
		floats.Scale(1/floats.Norm(v, 2), v)
	}
}

// outside removes from x its part in the given space and returns the length of
// that part.
func outside(x []float64, space [][]float64) float64 {
	part := make([]float64, len(space))
	for j, v := range space {
		part[j] = floats.Dot(x, v)
		floats.AddScaled(x, -part[j], v)
	}
	return floats.Norm(part, 2)
}

// solveWithin writes to dst the shortest vector for which |A·dst − x| is as small
// as it can be: A⁻¹ on what is orthogonal to the null space. The factor, whose
// replaced pivots are small, is as good as exact there up to a fraction that
// refinement removes.
func (b *bordered) solveWithin(dst, x []float64, null [][]float64) {
	rest := slices.Clone(x)
	step, image := make([]float64, len(x)), make([]float64, len(x))
	clear(dst)
	outside(rest, null)
	first := floats.Norm(rest, 2)
	for last := first; last > 1e-15*first; {
		b.solve(step, rest)
		outside(step, null)
		b.mul(image, step)
		floats.Sub(rest, image)
		outside(rest, null)
		size := floats.Norm(rest, 2)
		if !(size < 0.5*last) {
			break
		}
		floats.Add(dst, step)
		last = size
	}
}
