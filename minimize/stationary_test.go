package minimize

import (
	"context"
	"errors"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// twoTimes is a Lorentzian block with its first and last slice pinned to zero
// and the given ends (or a ring, of nx sites).
func twoTimes(t *testing.T, nx, nt int, dx, dt float64, w action.Wave, left, right lattice.End, ring bool) (*action.Discrete, *constraint.Set) {
	t.Helper()
	line := lattice.Axis{Step: dx, Sites: nx + 1, Left: left, Right: right}
	if ring {
		line = lattice.Axis{Step: dx, Sites: nx, Periodic: true}
	}
	s := newAction(t, lattice.Axis{Step: dt, Sites: nt + 1}, line, w)
	held := constraint.On(s.Block())
	none := field.NewSlice(1, s.Block().Sites())
	held.Slice(0, none)
	held.Slice(nt, none)
	return s, held
}

func gcd(a, b int) int {
	for b > 0 {
		a, b = b, a%b
	}
	return a
}

// The massless block with dt = dx has the eigenvalues (4 sin²(qπ/2Nt) − Λ)/h² with
// 1 ≤ q < Nt and
//
//	Λ = 4 sin²(kπ/2Nx),    1 ≤ k < Nx          both ends held
//	                       0 ≤ k ≤ Nx          both ends free
//	Λ = 4 sin²(kπ/4Nx),    k = 1, 3 … 2Nx − 1  one end free
//	Λ = 4 sin²(jπ/Nx),     0 ≤ j < Nx          ring
//
// and vanishes where the angles agree. Since 0 < q/Nt < 1 the uniform mode and the
// one that alternates (k = 0, Nx; j = 0, Nx/2) never do. This gives gcd(Nx, Nt) − 1
// for held and for free ends [Bourgin & Duffin 1939, Bull. Amer. Math. Soc. 45, 851;
// John 1941, Amer. J. Math. 63, 141] and on a ring 2·#{1 ≤ j < Nx/2 : Nx | 2Nt·j}.
func TestNullityOfTheMasslessBlock(t *testing.T) {
	for _, c := range [][2]int{{8, 12}, {7, 12}, {9, 12}, {10, 15}, {12, 12}, {13, 8}, {64, 65}, {60, 45}, {48, 64}} {
		nx, nt := c[0], c[1]
		oneFree, ring := 0, 0
		for k := 1; k < 2*nx; k += 2 {
			if k*nt%(2*nx) == 0 {
				oneFree++
			}
		}
		for j := 1; 2*j < nx; j++ {
			if 2*nt*j%nx == 0 {
				ring += 2
			}
		}
		for _, tc := range []struct {
			name        string
			left, right lattice.End
			ring        bool
			want        int
		}{
			{"held", lattice.Held, lattice.Held, false, gcd(nx, nt) - 1},
			{"free", lattice.Free, lattice.Free, false, gcd(nx, nt) - 1},
			{"even", lattice.Even, lattice.Even, false, gcd(nx, nt) - 1},
			{"one free", lattice.Free, lattice.Held, false, oneFree},
			{"ring", lattice.Free, lattice.Free, true, ring},
		} {
			s, held := twoTimes(t, nx, nt, 1/float64(nx), 1/float64(nx), action.Wave{}, tc.left, tc.right, tc.ring)
			found, err := Stationary(context.Background(), s, held, field.NewHistory(s.Block(), 1), nil)
			i := found.Report.Inertia
			if i == nil || i.Nullity != tc.want || !i.Known {
				t.Errorf("%d × %d %s: %v, want nullity %d", nx, nt, tc.name, i, tc.want)
				continue
			}
			var failed *NotConverged
			if tc.want > 0 != errors.As(err, &failed) || tc.want > 0 != (found.Report.Status == Singular) {
				t.Errorf("%d × %d %s: %v", nx, nt, tc.name, err)
			}
			if tc.want == 0 && math.Abs(i.Smallest) < 1e-6 {
				t.Errorf("%v", i)
			}
		}
	}
}
