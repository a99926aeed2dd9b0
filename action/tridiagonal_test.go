package action

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// TestTridiagonal solves lines and rings, with and without held ends, against a
// dense solver (independent computation: gonum's LU factorisation).
func TestTridiagonal(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for _, n := range []int{2, 3, 4, 17} {
		for _, c := range []struct {
			name        string
			ring        bool
			left, right bool
		}{{"line", false, false, false}, {"held left", false, true, false}, {"held right", false, false, true}, {"held", false, true, true}, {"ring", true, false, false}} {
			m := newTridiagonal(n)
			links := make([]float64, n-1, n)
			if c.ring {
				links = links[:n]
			}
			dense := mat.NewDense(n, n, nil)
			add := func(i, j int, v float64) { dense.Set(i, j, dense.At(i, j)+v) }
			for i := range n {
				m.diagonal[i] = 1 + r.Float64()
				add(i, i, m.diagonal[i])
			}
			for i := range links {
				links[i] = r.Float64()
				j, v := (i+1)%n, 2*links[i]
				add(i, i, v)
				add(j, j, v)
				add(i, j, -v)
				add(j, i, -v)
			}
			m.subtractLinks(links, c.ring, 2)
			for end, held := range []bool{c.left, c.right} {
				if held {
					m.hold(end)
					for j := range n {
						dense.Set(end*(n-1), j, 0)
					}
					dense.Set(end*(n-1), end*(n-1), 1)
				}
			}
			m.factor()
			for range 2 { // the factors serve again
				f := make([]float64, n)
				for i := range f {
					f[i] = 2*r.Float64() - 1
				}
				var want mat.VecDense
				if err := want.SolveVec(dense, mat.NewVecDense(n, append([]float64(nil), f...))); err != nil {
					t.Fatal(err)
				}
				left, right := f[0], f[n-1]
				if c.left {
					m.set(0, left, f)
				}
				if c.right {
					m.set(1, right, f)
				}
				m.solve(f)
				for i, v := range f {
					if math.Abs(v-want.AtVec(i)) > 1e-14 { // condition below 10, values below 1
						t.Errorf("%s of %d: unknown %d is %.16g; want %.16g", c.name, n, i, v, want.AtVec(i))
					}
				}
			}
		}
	}
}
