package action_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// block returns a block of free ends that starts at the origin.
func block(slices int, k float64, sites int, h float64) lattice.Block {
	return lattice.Block{Time: lattice.Axis{Step: k, Sites: slices}, Space: lattice.Axis{Step: h, Sites: sites}}
}

// ring returns a block whose line is a ring of the given circumference.
func ring(slices int, k float64, sites int, around float64) lattice.Block {
	b := block(slices, k, sites, around/float64(sites))
	b.Space.Periodic = true
	return b
}

func mustNew(t testing.TB, b lattice.Block, d action.Density) *action.Discrete {
	t.Helper()
	s, err := action.New(b, d)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func mustProfile(t testing.TB, p field.Profile, err error) field.Profile {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// march fills the slices 2, 3, … of h from its first two; held ends keep the
// value they have in h.
func march(s *action.Discrete, h *field.History) {
	m := s.March()
	for n := 1; n < h.Block.Slices()-1; n++ {
		m.Step(h.Slice(n+1), h.Slice(n), h.Slice(n-1), n)
	}
}

// marchFrom returns the history that the march gives from Cauchy data at the
// first slice, held ends at rest.
func marchFrom(s *action.Discrete, st field.State) *field.History {
	h := field.Repeat(s.Block(), st.Field)
	s.March().Start(h.Slice(1), st, 0)
	march(s, h)
	return h
}

// scatter fills dst with values between −size and size.
func scatter(seed uint64, size float64, dst []float64) {
	r := rand.New(rand.NewPCG(seed, 2))
	for i := range dst {
		dst[i] = size * (2*r.Float64() - 1)
	}
}

// slopes asks that each error be smaller than the one before by the power of
// two that an order says.
func slopes(t *testing.T, name string, order, slack float64, errs ...float64) {
	t.Helper()
	for i := 1; i < len(errs); i++ {
		got := math.Log2(math.Abs(errs[i-1] / errs[i]))
		t.Logf("%s: observed order %.3f (errors %.3g, %.3g)", name, got, errs[i-1], errs[i])
		if !(math.Abs(got-order) <= slack) {
			t.Errorf("%s: observed order %.3f from errors %g and %g; want %g ± %g", name, got, errs[i-1], errs[i], order, slack)
		}
	}
}
