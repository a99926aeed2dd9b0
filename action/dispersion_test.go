package action_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// symbol returns Σ_d b_d·4 sin²(dθ/2), the symbol of −h²∂²/∂x², with the weights
// b of the central second difference [Fornberg 1988, Math. Comp. 51, 699, table
// 1; from memory].
func symbol(links action.Links, theta float64) float64 {
	weights := map[action.Links][]float64{
		action.Nearest: {1},
		action.Fourth:  {4. / 3, -1. / 12},
		action.Sixth:   {3. / 2, -3. / 20, 1. / 90},
	}[links]
	var sum float64
	for k, b := range weights {
		s := math.Sin(float64(k+1) * theta / 2)
		sum += 4 * b * s * s
	}
	return sum
}

// latticeFrequency returns the wave number of mode j of a ring and the frequency
// of leapfrog, sin²(ωk/2)/k² = c²·symbol/4h² + m²/4 with c = 1 (the standard
// dispersion relation of leapfrog; from memory).
func latticeFrequency(links action.Links, b lattice.Block, j int, m float64) (q, omega float64) {
	h, k := b.Space.Step, b.Time.Step
	q = 2 * math.Pi * float64(j) / b.Space.Length()
	r := symbol(links, q*h)/(4*h*h) + m*m/4
	return q, 2 / k * math.Asin(k*math.Sqrt(r))
}

// TestDispersion marches plane waves on a ring from two exact slices.
func TestDispersion(t *testing.T) {
	const sites, slices, m = 48, 400, 0.9
	for _, links := range everyLinks {
		for _, j := range []int{0, 1, 5, 13, 24} {
			b := ring(slices, 0.08, sites, 12)
			s := mustNew(t, b, action.Wave{Potential: action.Mass(m), Links: links})
			q, omega := latticeFrequency(links, b, j, m)
			want := field.NewHistory(b, 1)
			for n := range slices {
				for i := range sites {
					want.Set(n, 0, i, math.Cos(q*b.Space.At(i)-omega*b.Time.At(n)))
				}
			}
			got := want.Clone()
			clear(got.Data[2*sites:])
			march(s, got)
			// Two slices off by 1e-16 make a rate off by 1e-16/k, which grows to
			// 1e-16·n at most (ω ≥ m), and each of n steps adds its own: n²/2 ulp.
			if d := got.MaxDifference(want); !(d <= slices*slices/2*0x1p-53) {
				t.Errorf("links of order %d, mode %d: off by %g after %d steps", links, j, d, slices)
			}
		}
	}
}

// TestMu holds the largest frequency of the links against the symbol at θ = π.
func TestMu(t *testing.T) {
	// h²ω²/c² of the shortest wave; sums of the weights above by hand.
	for links, want := range map[action.Links]float64{action.Nearest: 4, action.Fourth: 16. / 3, action.Sixth: 272. / 45} {
		if got := links.Mu(); math.Abs(got-want) > 1e-14 || math.Abs(symbol(links, math.Pi)-want) > 1e-14 {
			t.Errorf("links of order %d: μ = %v, symbol %v; want %v", links, got, symbol(links, math.Pi), want)
		}
	}
}

// TestMaxFrequency asks that the estimate be the true largest frequency where
// nothing varies (that of the shortest wave) and not below it where κ and ρ do
// (the Rayleigh quotient of any field is a lower bound of the largest ω²).
func TestMaxFrequency(t *testing.T) {
	const m = 0.9
	for _, links := range everyLinks {
		b := ring(3, 0.1, 32, 8)
		s := mustNew(t, b, action.Wave{Potential: action.Mass(m), Links: links, Kappa: action.Uniform(2), Rho: action.Uniform(0.5)})
		omega, curvature := s.MaxFrequency(field.NewSlice(1, 32))
		h := b.Space.Step
		want := math.Sqrt(2/0.5*symbol(links, math.Pi)/(h*h) + m*m/0.5)
		if math.Abs(omega-want) > 1e-13*want || math.Abs(curvature-m*m/0.5) > 1e-14 {
			t.Errorf("links of order %d: ω = %v, σV″/ρ = %v; want %v, %v", links, omega, curvature, want, m*m/0.5)
		}

		vary := func(x float64) float64 { return 1.5 + math.Sin(x*math.Pi/4) }
		s = mustNew(t, b, action.Wave{Potential: action.Mass(m), Links: links, Kappa: action.Along(vary), Rho: action.Along(vary)})
		omega, _ = s.MaxFrequency(field.NewSlice(1, 32))
		a, err := s.Accelerator()
		if err != nil {
			t.Fatal(err)
		}
		largest := powerIteration(a, b.Space, vary)
		if !(omega*omega >= largest) || !(omega*omega <= 1.5*largest) {
			t.Errorf("links of order %d: ω² = %v, the largest of the lattice is %v; want it above, and not by half", links, omega*omega, largest)
		}
	}
}

// TestMaxFrequencyAtAStep asks that a light site count with the stiffer of the
// links beside it, whichever side that is on.
func TestMaxFrequencyAtAStep(t *testing.T) {
	for _, stiff := range []int{3, 4} { // the links on the left and right of site 4
		kappa, rho := action.Table{1, 1, 1, 1, 1, 1, 1, 1}, action.Table{1, 1, 1, 1, 0.25, 1, 1, 1}
		kappa[stiff] = 9
		s := mustNew(t, ring(3, 0.1, 8, 4), action.Wave{Kappa: kappa, Rho: rho})
		if omega, _ := s.MaxFrequency(field.NewSlice(1, 8)); math.Abs(omega-24) > 1e-13 { // √(4·(9/¼)/½²)
			t.Errorf("link %d of κ = 9 beside ρ = ¼: ω = %v; want 24", stiff, omega)
		}
	}
}

// TestMaxFrequencyOfEveryEnd asks that no kind of end has a faster oscillation
// than the estimate, which knows the inside only.
func TestMaxFrequencyOfEveryEnd(t *testing.T) {
	one := func(float64) float64 { return 1 }
	for _, links := range everyLinks {
		for name, line := range everyLine(0.25, 24, 0) {
			s := mustNew(t, lattice.Block{Time: lattice.Axis{Step: 0.1, Sites: 3}, Space: line}, action.Wave{Links: links})
			a, err := s.Accelerator()
			if err != nil {
				t.Fatal(err)
			}
			omega, _ := s.MaxFrequency(field.NewSlice(1, 24))
			largest := powerIteration(a, line, one)
			if !(largest <= omega*omega*(1+1e-12)) { // rounding of the quotient
				t.Errorf("links of order %d, %s: ω² = %v, the largest of the lattice is %v", links, name, omega*omega, largest)
			}
		}
	}
}

// powerIteration returns the Rayleigh quotient Σuρφ(−φ_tt)/Σuρφ² of a linear
// equation after many applications of φ_tt, a lower bound of the largest ω²
// (independent computation: power iteration).
func powerIteration(a *action.Accelerator, line lattice.Axis, rho func(x float64) float64) float64 {
	st, out := field.NewState(1, line.Sites), field.NewSlice(1, line.Sites)
	scatter(7, 1, st.Field.Data)
	var quotient float64
	for range 400 {
		a.At(out, st, 0)
		var above, below float64
		for i, v := range st.Field.Data {
			r := rho(line.At(i)) * line.Weight(i)
			above -= r * v * out.Data[i]
			below += r * v * v
		}
		quotient = above / below
		size := out.MaxAbs()
		for i, v := range out.Data {
			st.Field.Data[i] = -v / size
		}
	}
	return quotient
}
