package minimize

import (
	"gonum.org/v1/gonum/floats"
)

// nullSpace returns k orthonormal vectors spanning what A takes nearest to zero,
// by inverse iteration of all of them at once. The pivots that were replaced in
// the factor make its inverse large on exactly these.
func (b *bordered) nullSpace(k int) [][]float64 {
	n, full := len(b.root), b.pattern.N
	space := make([][]float64, k)
	for j := range space {
		space[j] = scattered(full, uint64(j)+2)
	}
	const rounds = 4 // each gains the ratio of a replaced pivot to an eigenvalue, 1e-3 or better
	for range rounds {
		for _, v := range space {
			clear(v[n:])
		}
		b.factor.SolveMany(space, space)
		for j, v := range space {
			v = v[:n]
			b.project(v)
			for range 2 {
				for _, u := range space[:j] {
					floats.AddScaled(v, -floats.Dot(v, u[:n]), u[:n])
				}
			}
			floats.Scale(1/floats.Norm(v, 2), v)
		}
	}
	for j := range space {
		space[j] = space[j][:n]
	}
	return space
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
	rest := append([]float64(nil), x...)
	step, image := make([]float64, len(x)), make([]float64, len(x))
	clear(dst)
	outside(rest, null)
	last := floats.Norm(rest, 2)
	const most = 8
	for range most {
		b.solve(step, rest)
		outside(step, null)
		b.mul(image, step)
		floats.Sub(rest, image)
		outside(rest, null)
		size := floats.Norm(rest, 2)
		if !(size < last) {
			break
		}
		floats.Add(dst, step)
		if size < 1e-15*last || size > 0.5*last {
			break
		}
		last = size
	}
}
