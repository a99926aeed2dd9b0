//go:build slow

package minimize

import (
	"context"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// As TestBounce, one level finer.
func TestBounceSlow(t *testing.T) { checkBounces(t, 0.2, 0.005) }

// The formulas of TestNullityOfTheMasslessBlock and TestMorseIndexOfAMassiveBlock
// on blocks of 10⁵ events.
func TestLargeBlocksSlow(t *testing.T) {
	for _, c := range [][2]int{{320, 256}, {300, 400}, {256, 257}} {
		nx, nt := c[0], c[1]
		s, held := twoTimes(t, nx, nt, 1/float64(nx), 1/float64(nx), action.Wave{}, lattice.Held, lattice.Held, false)
		found, _ := Stationary(context.Background(), s, held, field.NewHistory(s.Block(), 1), nil)
		if i := found.Report.Inertia; i.Nullity != gcd(nx, nt)-1 || !i.Known {
			t.Errorf("%d × %d: %v, want nullity %d", nx, nt, i, gcd(nx, nt)-1)
		}
		t.Logf("%d × %d: %v\n%v", nx, nt, found.Report.Inertia, found.Report)
		for _, links := range []action.Links{action.Nearest, action.Fourth, action.Sixth} {
			dx, dt := 10/float64(nx), 6/float64(nt)
			s, held := twoTimes(t, nx, nt, dx, dt, action.Wave{Potential: action.Mass(1), Links: links}, lattice.Held, lattice.Held, false)
			found, err := Stationary(context.Background(), s, held, field.NewHistory(s.Block(), 1), nil)
			if err != nil {
				t.Fatal(err)
			}
			if i, want := found.Report.Inertia, modeIndex(nx, nt, dx, dt, 1, links); i.Index != want || !i.Known {
				t.Errorf("%d × %d, links of order %d: %v, want index %d", nx, nt, links, i, want)
			}
		}
	}
}
