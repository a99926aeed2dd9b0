package minimize

import (
	"context"
	"errors"
	"math"
	"strings"
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

// bands are the squared frequencies per 1/h² of wide links on sine modes.
var bands = map[action.Links][]float64{action.Nearest: {1}, action.Fourth: {4. / 3, -1. / 12}, action.Sixth: {3. / 2, -3. / 20, 1. / 90}}

// latticeFrequency returns ω of mode k on nx intervals between held ends: the
// semi-discrete Ω² = m² + Σ_d b_d (2 sin(dkπ/2nx)/h)², and sin(ω dt/2) = dt Ω/2; +Inf if
// the step is above the stability limit for this mode.
func latticeFrequency(k, nx int, dx, dt, mass float64, links action.Links) float64 {
	square := mass * mass
	for d, b := range bands[links] {
		v := 2 * math.Sin(float64((d+1)*k)*math.Pi/float64(2*nx)) / dx
		square += b * v * v
	}
	if x := dt / 2 * math.Sqrt(square); x < 1 {
		return 2 / dt * math.Asin(x)
	}
	return math.Inf(1)
}

// modeIndex returns Σ_k floor(ω_k T/π), at most nt − 1 each.
func modeIndex(nx, nt int, dx, dt, mass float64, links action.Links) (sum int) {
	for k := 1; k < nx; k++ {
		w := latticeFrequency(k, nx, dx, dt, mass, links) * float64(nt) * dt / math.Pi
		sum += int(min(math.Floor(w), float64(nt-1)))
	}
	return sum
}

// The Morse index of a massive block pinned at both times is Σ_k floor(ω_k T/π) with
// the frequencies of leapfrog: mode k turns over once for each half period (Morse
// 1934, The Calculus of Variations in the Large). The counts in the first three rows
// are an independent computation from the two-index formula.
func TestMorseIndexOfAMassiveBlock(t *testing.T) {
	for _, tc := range []struct {
		length, time, mass float64
		nx, nt             int
		links              action.Links
		want               int // 0: by the formula alone
	}{
		{1, 0.7, 1, 20, 28, action.Nearest, 103},
		{math.Pi, 2, 1, 16, 20, action.Nearest, 57},
		{10, 6, 1, 40, 40, action.Nearest, 393},
		{10, 6, 1, 40, 40, action.Fourth, 0},
		{10, 6, 1, 40, 40, action.Sixth, 0},
		{7, 3, 2.5, 35, 50, action.Sixth, 0},
		{5, 11, 0.3, 30, 90, action.Fourth, 0},
		{20, 0.9, 1, 100, 9, action.Nearest, 0},
	} {
		dx, dt := tc.length/float64(tc.nx), tc.time/float64(tc.nt)
		want := modeIndex(tc.nx, tc.nt, dx, dt, tc.mass, tc.links)
		if tc.want != 0 && want != tc.want {
			t.Errorf("%+v: the formula gives %d", tc, want)
		}
		s, held := twoTimes(t, tc.nx, tc.nt, dx, dt, action.Wave{Potential: action.Mass(tc.mass), Links: tc.links}, lattice.Held, lattice.Held, false)
		found, err := Stationary(context.Background(), s, held, field.NewHistory(s.Block(), 1), nil)
		if err != nil {
			t.Fatalf("%+v: %v", tc, err)
		}
		if i := found.Report.Inertia; i.Index != want || !i.Known || i.Nullity != 0 {
			t.Errorf("%+v: %v, want index %d", tc, i, want)
		}
	}
}

// The index grows with every refinement; relative to another history it is a
// difference of two sums over modes. With dt = dx and a rational T/L that settles, as
// high modes keep off the integers of ωT/π. In general it does not: their shift
// δω = δm²/2ω moves now and then one across, for ever more rarely.
func TestRelativeIndex(t *testing.T) {
	const length, time = 10, 6
	settled := 0
	for _, nx := range []int{40, 80, 160} {
		nt := nx * time / length
		h := length / float64(nx)
		// V″ = cos φ is 1 at φ = 0 and ¼ at the reference
		s, held := twoTimes(t, nx, nt, h, h, action.Wave{Potential: action.SineGordon{}}, lattice.Held, lattice.Held, false)
		tilted := field.NewHistory(s.Block(), 1)
		for e := range tilted.Data {
			tilted.Data[e] = math.Acos(0.25)
		}
		found, err := Stationary(context.Background(), s, held, field.NewHistory(s.Block(), 1), &Settings{Reference: tilted})
		if err != nil {
			t.Fatal(err)
		}
		i := found.Report.Inertia
		index, reference := modeIndex(nx, nt, h, h, 1, action.Nearest), modeIndex(nx, nt, h, h, 0.5, action.Nearest)
		if i.Index != index || i.ReferenceIndex != reference || i.RelativeIndex != index-reference || !i.ReferenceKnown {
			t.Errorf("nx = %d: %v, reference %d; want %d, %d", nx, i, i.ReferenceIndex, index, reference)
		}
		if nx == 160 && i.RelativeIndex != settled {
			t.Errorf("nx = %d: relative index %d after %d", nx, i.RelativeIndex, settled)
		}
		settled = i.RelativeIndex
	}
	for nx := 320; nx <= 5120; nx *= 2 { // by the formula
		nt, h := nx*time/length, length/float64(nx)
		if r := modeIndex(nx, nt, h, h, 1, action.Nearest) - modeIndex(nx, nt, h, h, 0.5, action.Nearest); r != settled {
			t.Errorf("nx = %d: relative index %d, want %d", nx, r, settled)
		}
	}
}

// The Klein–Gordon field with φ(x, 0) and φ(x, T) given in sine modes is
//
//	Σ_k sin(kπx/L) [a_k sin ω_k(T − t) + b_k sin ω_k t] / sin ω_k T,
//
// to rounding with the frequencies of the lattice, and with those of the continuum
// to order 2. One step suffices, the equation being linear.
func TestKleinGordonBetweenTwoTimes(t *testing.T) {
	const length, time, mass = 3, 2.2, 1.3
	modes := []struct {
		k    int
		a, b float64
	}{{1, 1, -0.5}, {2, 0.3, 0.8}, {5, -0.2, 0.1}}
	var off [3]float64
	for level, n := range []int{30, 60, 120} {
		dx, dt := length/float64(n), time/float64(n)
		exact := func(omega func(k int) float64) field.Profile {
			return func(x, at float64) (v, _ float64) {
				for _, m := range modes {
					w := omega(m.k)
					v += math.Sin(float64(m.k)*math.Pi*x/length) * (m.a*math.Sin(w*(time-at)) + m.b*math.Sin(w*at)) / math.Sin(w*time)
				}
				return v, 0
			}
		}
		onLattice := exact(func(k int) float64 { return latticeFrequency(k, n, dx, dt, mass, action.Nearest) })
		continuum := exact(func(k int) float64 { return math.Hypot(float64(k)*math.Pi/length, mass) })
		s, _ := twoTimes(t, n, n, dx, dt, action.Wave{Potential: action.Mass(mass)}, lattice.Held, lattice.Held, false)
		want := onLattice.Over(s.Block())
		held := constraint.On(s.Block())
		held.Slice(0, want.Slice(0))
		held.Slice(n, want.Slice(n))
		found, err := Stationary(context.Background(), s, held, field.NewHistory(s.Block(), 1), nil)
		if err != nil {
			t.Fatal(err)
		}
		r := found.Report
		if r.Iterations != 1 {
			t.Errorf("%d steps, want 1\n%v", r.Iterations, r)
		}
		// rounding of the second difference over the smallest eigenvalue
		tol := 1e-15 * 4 / (dt * dt) / math.Abs(r.Inertia.Smallest)
		if d := found.History.MaxDifference(want); d > tol {
			t.Errorf("n = %d: off by %.3g, want %.2g", n, d, tol)
		}
		off[level] = found.History.MaxDifference(continuum.Over(s.Block()))
	}
	if order := math.Log2(off[1] / off[2]); math.Abs(order-2) > 0.1 { // h⁴ of k = 5 beside h²
		t.Errorf("off by %.3g from the continuum, order %.3f; want 2", off, order)
	}
}

// Leapfrog is the condition ∂S/∂φ = 0, so a marched history is stationary between
// its own first and last slice, and comes back from a start that is off by 0.1.
func TestMarchedHistoryIsStationary(t *testing.T) {
	line := lattice.Axis{From: -6, Step: 0.2, Sites: 61, Left: lattice.Held, Right: lattice.Held}
	clock := lattice.Axis{Step: 0.1, Sites: 31}
	s := newAction(t, clock, line, action.Wave{Potential: action.SineGordon{}})
	march := s.March()
	h := field.NewHistory(s.Block(), 1)
	first := profile(field.SineGordonKink(field.Moving{Speed: 0.3})).On(line, 0)
	h.Slice(0).CopyFrom(first.Field)
	march.Start(h.Slice(1), first, 0)
	for n := 1; n+1 < clock.Sites; n++ {
		march.Step(h.Slice(n+1), h.Slice(n), h.Slice(n-1), n)
	}
	held := constraint.On(s.Block())
	held.Slice(0, h.Slice(0))
	held.Slice(30, h.Slice(30))
	start := h.Clone()
	for n := 1; n < 30; n++ {
		for i := 1; i < 60; i++ {
			start.Data[start.Index(n, 0, i)] += 0.1 * math.Sin(float64(3*n)) * math.Sin(float64(n*i))
		}
	}
	found, err := Stationary(context.Background(), s, held, start, nil)
	if err != nil {
		t.Fatal(err)
	}
	// rounding of second differences, 4e-14/dt², over the smallest eigenvalue
	if d := found.History.MaxDifference(h); d > 4e-14/math.Abs(found.Report.Inertia.Smallest) {
		t.Errorf("differs by %.3g\n%v", d, found.Report)
	}
}

// Of the histories of a singular block the minimum norm chooses the one nearest
// to the start. On 8 × 12 intervals the null vectors are sin(kπi/8) sin(qπn/12) with
// k/8 = q/12: k = 2, 4, 6. Slices in mode k = 1 are met by
//
//	sin(πi/8) [a sin ω(T − t) + b sin ωt]/sin ωT,  ω = π/8 a step,
//
// plus any of them; slices in mode 2 are not, unless b = ±a.
func TestMinimumNorm(t *testing.T) {
	const nx, nt = 8, 12
	s, _ := twoTimes(t, nx, nt, 1, 1, action.Wave{}, lattice.Held, lattice.Held, false)
	b := s.Block()
	shape := func(k float64, f func(n float64) float64) *field.History {
		return field.Profile(func(x, at float64) (float64, float64) { return math.Sin(k*math.Pi*x/nx) * f(at), 0 }).Over(b)
	}
	between := func(k int, first, last float64) *constraint.Set {
		held := constraint.On(b)
		rim := shape(float64(k), func(n float64) float64 {
			if n == 0 {
				return first
			}
			return last
		})
		held.Slice(0, rim.Slice(0))
		held.Slice(nt, rim.Slice(nt))
		return held
	}
	w := math.Pi / nx
	want := shape(1, func(n float64) float64 { return (math.Sin(w*(nt-n)) - 0.4*math.Sin(w*n)) / math.Sin(w*nt) })
	null := shape(2, func(n float64) float64 { return 0.7 * math.Sin(3*math.Pi*n/nt) })
	for name, start := range map[string]*field.History{"zero": field.NewHistory(b, 1), "null vector": null} {
		found, err := Stationary(context.Background(), s, between(1, 1, -0.4), start, &Settings{MinimumNorm: true})
		if err != nil {
			t.Fatal(err)
		}
		if i := found.Report.Inertia; i.Nullity != 3 || found.Report.Iterations > 2 {
			t.Errorf("%s: %v", name, found.Report)
		}
		for e, v := range want.Data {
			// rounding over the smallest eigenvalue that is not zero, 0.1
			if d := found.History.Data[e] - v - start.Data[e]; math.Abs(d) > 1e-13 {
				n, _, i := start.Place(e)
				t.Fatalf("%s: off by %.3g at %v", name, d, b.At(n, i))
			}
		}
		// without asking for it the same history is no answer
		found, err = Stationary(context.Background(), s, between(1, 1, -0.4), start, nil)
		var failed *NotConverged
		if !errors.As(err, &failed) || found.Report.Status != Singular || !strings.Contains(err.Error(), "nullity 3") {
			t.Errorf("%s: %v", name, err)
		}
	}
	found, err := Stationary(context.Background(), s, between(2, 1, 0.5), field.NewHistory(b, 1), &Settings{MinimumNorm: true})
	var failed *NotConverged
	if !errors.As(err, &failed) || found.Report.Status != Singular || !strings.Contains(err.Error(), "contradict") || found.Report.Inertia.Nullity != 3 {
		t.Errorf("%v\n%v", err, found.Report)
	}
}
