package action_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// TestMirrorImages asks that the action of a field on a line with a mirror at
// its end be half of that of the field and its image on the whole line: what the
// mirror stands for. κ is even about the mirror, a function or a table. The field
// vanishes near the other end, where nothing is being tested.
func TestMirrorImages(t *testing.T) {
	const sites, h = 16, 0.25
	kappa := func(x float64) float64 { return 1 + 0.5*math.Cos(x) }
	for _, links := range everyLinks {
		for _, c := range []struct {
			end   lattice.End
			image float64
		}{{lattice.Even, 1}, {lattice.Free, 1}, {lattice.Odd, -1}, {lattice.Held, -1}} {
			for _, right := range []bool{false, true} {
				for _, tabled := range []bool{false, true} {
					clock := lattice.Axis{Step: 0.1, Sites: 4}
					half := lattice.Axis{Step: h, Sites: sites, Left: c.end, Right: lattice.Held}
					if right {
						half = lattice.Axis{From: -h * (sites - 1), Step: h, Sites: sites, Left: lattice.Held, Right: c.end}
					}
					whole := lattice.Axis{From: -h * (sites - 1), Step: h, Sites: 2*sites - 1, Left: lattice.Held, Right: lattice.Held}
					on := func(line lattice.Axis) *action.Discrete {
						w := action.Wave{Potential: action.Mass(1), Links: links, Kappa: action.Along(kappa)}
						if tabled {
							var values action.Table
							for i := range line.Links() {
								values = append(values, kappa(line.Between(i)))
							}
							w.Kappa = values
						}
						return mustNew(t, lattice.Block{Time: clock, Space: line}, w)
					}
					one, both := on(half), on(whole)
					small, large := field.NewHistory(one.Block(), 1), field.NewHistory(both.Block(), 1)
					values := make([]float64, 4*(sites-5))
					scatter(17, 1, values)
					for n := range 4 {
						for j, v := range values[n*(sites-5) : (n+1)*(sites-5)] { // j sites from the mirror
							if j == 0 && c.image < 0 {
								v = 0 // where the image is odd about zero
							}
							at := j
							if right {
								at = sites - 1 - j
							}
							small.Set(n, 0, at, v)
							large.Set(n, 0, sites-1+j, v)
							large.Set(n, 0, sites-1-j, c.image*v)
							if j == 0 {
								large.Set(n, 0, sites-1, v)
							}
						}
					}
					got, want := one.Value(small), both.Value(large)/2
					// Two sums of a few hundred terms of the size of S.
					if math.Abs(got-want) > 1e-13*math.Abs(want) {
						t.Errorf("links of order %d, %v end, on the right %v, table %v: S = %.16g; want half of the whole line's, %.16g", links, c.end, right, tabled, got, want)
					}
				}
			}
		}
	}
}
