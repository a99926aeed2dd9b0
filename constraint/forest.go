package constraint

import "math"

// A forest is a union-find over values x whose links carry differences: it
// answers x[a] − x[b] for any two values joined by ties
// [Tarjan 1975, J. ACM 22, 215].
type forest struct {
	parent []int32
	above  []float64 // x[a] − x[parent[a]]
	scale  []float64 // at a root: the largest |difference| in its tree
	links  []int32   // at a root: the number of ties in its tree
}

func newForest(n int) *forest {
	f := &forest{parent: make([]int32, n), above: make([]float64, n), scale: make([]float64, n), links: make([]int32, n)}
	for a := range f.parent {
		f.parent[a] = int32(a)
	}
	return f
}

// root returns the root of a and x[a] − x[root], and hangs everything on the way
// directly under the root.
func (f *forest) root(a int) (root int, above float64) {
	root = a
	for int(f.parent[root]) != root {
		above += f.above[root]
		root = int(f.parent[root])
	}
	rest := above
	for a != root && int(f.parent[a]) != root {
		next, step := int(f.parent[a]), f.above[a]
		f.parent[a], f.above[a] = int32(root), rest
		rest -= step
		a = next
	}
	return root, above
}

// tie joins a to b with x[b] = x[a] + gain. If they are joined already it
// returns false and the gain that the earlier ties imply.
func (f *forest) tie(a, b int, gain float64) (implied float64, joined bool) {
	ra, da := f.root(a)
	rb, db := f.root(b)
	if ra == rb {
		f.scale[ra] = max(f.scale[ra], math.Abs(gain))
		f.links[ra]++
		return db - da, false
	}
	// x[rb] = x[b] − db = x[ra] + da + gain − db. The root of the larger tree,
	// or else the earlier value, stays.
	d := da + gain - db
	if f.links[rb] > f.links[ra] || f.links[rb] == f.links[ra] && rb < ra {
		ra, rb, d = rb, ra, -d
	}
	f.parent[rb], f.above[rb] = int32(ra), d
	f.scale[ra] = max(f.scale[ra], f.scale[rb], math.Abs(d), math.Abs(gain))
	f.links[ra] += f.links[rb] + 1
	return gain, true
}

// slack returns how far sums along the ties of a tree may be off by rounding,
// for values of size v: eight units in the last place for each tie.
func (f *forest) slack(root int, v float64) float64 {
	const ulp = 0x1p-52
	return 8 * ulp * float64(f.links[root]) * max(math.Abs(v), f.scale[root])
}
