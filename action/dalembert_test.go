package action_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// dyadic returns n numbers between −1 and 1 with 20 binary places, whose sums
// float64 holds exactly.
func dyadic(seed uint64, n int) []float64 {
	v := make([]float64, n)
	scatter(seed, 1, v)
	for i := range v {
		v[i] = math.Round(v[i]*(1<<20)) / (1 << 20)
	}
	return v
}

// TestDAlembert asks that at Courant number 1 the march carry any two profiles
// exactly, φ = f(x − t) + g(x + t) (d'Alembert's solution), however rough, with
// the mirror images that the ends call for. h = k = ¼ and dyadic profiles make
// every operation exact, so the bits are compared.
func TestDAlembert(t *testing.T) {
	const sites, slices = 17, 100
	const h = 0.25
	// Around two reflections the field repeats after 2(sites − 1) steps; even
	// images reverse a wave, odd ones reverse and negate it about the end's value 0.
	period := 2 * (sites - 1)
	wrap := func(i, n int) int { return ((i % n) + n) % n }
	for _, c := range []struct {
		name string
		line lattice.Axis
	}{
		{"ring", lattice.Axis{Step: h, Sites: sites, Periodic: true}},
		{"free", lattice.Axis{Step: h, Sites: sites}},
		{"even", lattice.Axis{Step: h, Sites: sites, Left: lattice.Even, Right: lattice.Even}},
		{"held", lattice.Axis{Step: h, Sites: sites, Left: lattice.Held, Right: lattice.Held}},
		{"odd", lattice.Axis{Step: h, Sites: sites, Left: lattice.Odd, Right: lattice.Odd}},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := mustNew(t, lattice.Block{Time: lattice.Axis{Step: h, Sites: slices}, Space: c.line}, action.Wave{})
			// exact(n, i) is the extension of two profiles by images.
			var exact func(n, i int) float64
			if c.line.Periodic {
				f, g := dyadic(1, sites), dyadic(2, sites)
				exact = func(n, i int) float64 { return f[wrap(i-n, sites)] + g[wrap(i+n, sites)] }
			} else {
				f := dyadic(3, period)
				sign := 1.0
				if c.line.Left == lattice.Held || c.line.Left == lattice.Odd {
					sign = -1
				}
				exact = func(n, i int) float64 { return f[wrap(i-n, period)] + sign*f[wrap(-i-n, period)] }
			}
			want := field.NewHistory(s.Block(), 1)
			for n := range slices {
				for i := range sites {
					want.Set(n, 0, i, exact(n, i))
				}
			}
			got := want.Clone()
			clear(got.Data[2*sites:])
			march(s, got)
			if d := got.MaxDifference(want); d != 0 {
				t.Errorf("after %d steps the field is off by %g; want the same bits", slices, d)
			}
		})
	}
}

// TestDAlembertFromRest starts from rest: φ = ½f(x − t) + ½f(x + t).
func TestDAlembertFromRest(t *testing.T) {
	const sites, slices = 24, 50
	b := ring(slices, 0.25, sites, 6)
	s := mustNew(t, b, action.Wave{})
	f := dyadic(5, sites)
	h := marchFrom(s, field.AtRest(field.SliceOf(f)))
	for n := range slices {
		for i := range sites {
			want := 0.5*f[((i-n)%sites+sites)%sites] + 0.5*f[(i+n)%sites]
			if h.At(n, 0, i) != want {
				t.Fatalf("site %d after %d steps is %v; want %v, the same bits", i, n, h.At(n, 0, i), want)
			}
		}
	}
}

// TestOpenEndsLetGo asks that at Courant number 1 open ends swallow any pulse
// without a trace: there the centred end equation is φ(n+1, 0) = φ(n, 1).
func TestOpenEndsLetGo(t *testing.T) {
	const sites, slices = 24, 50
	b := block(slices, 0.25, sites, 0.25)
	b.Space.Left, b.Space.Right = lattice.Open, lattice.Open
	s := mustNew(t, b, action.Wave{})
	start := field.NewSlice(1, sites)
	copy(start.Data[4:20], dyadic(6, 16))
	h := marchFrom(s, field.AtRest(start))
	if d := h.Slice(slices - 1).MaxAbs(); d != 0 {
		t.Errorf("after the pulse has left, |φ| = %g remains; want 0", d)
	}
	// The start divides by ρ₊ + ρ₋ and the end by u/k² + √(ρκ)/2kh, all dyadic.
}

// TestStartHasTheRate asks that φ(1) − φ(−1) be 2kφ_t for a solution known at
// all times, cos(qx − ωt) of the lattice, to the order of one step.
func TestStartHasTheRate(t *testing.T) {
	const sites, m = 32, 0.7
	for _, links := range everyLinks {
		b := ring(3, 0.1, sites, 8)
		s := mustNew(t, b, action.Wave{Potential: action.Mass(m), Links: links})
		q, omega := latticeFrequency(links, b, 3, m)
		exact := func(i int, t float64) float64 { return math.Cos(q*b.Space.At(i) - omega*t) }
		st, want := field.NewState(1, sites), field.NewSlice(1, sites)
		k := b.Time.Step
		for i := range sites {
			st.Field.Data[i] = exact(i, 0)
			st.Rate.Data[i] = (exact(i, k) - exact(i, -k)) / (2 * k)
			want.Data[i] = exact(i, k)
		}
		next := field.NewSlice(1, sites)
		s.March().Start(next, st, 0)
		// Rounding of the rate, 1e-16/2k, and of the force, 1e-16k²/h².
		if d := next.MaxDifference(want); !(d <= 1e-14) {
			t.Errorf("links of order %d: first slice off by %g", links, d)
		}
	}
}
