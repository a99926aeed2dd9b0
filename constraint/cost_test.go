package constraint

import (
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A wall of the constant penalty 1 costs its length times the weight, so the
// weights are those of the trapezoid rule.
func TestWallWeights(t *testing.T) {
	b := small(t)
	unit := Quadratic{Centre: -math.Sqrt2, Sigma: 1} // 1 at φ = 0
	zero := constant(b, 1, 0)
	for _, tc := range []struct {
		name string
		hold func(*Set) *Cost
		want float64
	}{
		{"event", func(s *Set) *Cost { return s.Cost(1, 0, unit) }, 1},
		{"slice", func(s *Set) *Cost { return s.CostSlice(1, nil, unit) }, 3},
		{"part", func(s *Set) *Cost { return s.CostPart(1, 1, 4, nil, unit) }, 2},
		{"left", func(s *Set) *Cost { return s.CostLeft(nil, unit) }, 2},
		{"right, weight t", func(s *Set) *Cost { return s.CostRight(func(x, t float64) float64 { return t }, unit) }, 2},
		{"slice, weight x + 1", func(s *Set) *Cost { return s.CostSlice(0, func(x, t float64) float64 { return x + 1 }, unit) }, 4.5},
		{"pinned events", func(s *Set) *Cost {
			s.Slice(3, field.NewSlice(1, 4))
			return s.CostAlong(s.Events(), func(x, t float64) float64 { return t }, unit)
		}, 6},
	} {
		held := On(b)
		other := held.Cost(0.5, 1, unit)
		other.Strength = 7
		k := tc.hold(held)
		k.Strength = 2
		u := resolve(t, held, zero)
		if got := u.CostOf(k, zero); math.Abs(got-2*tc.want) > 1e-14 { // rounding of √2²
			t.Errorf("%s: %v, want %v", tc.name, got, 2*tc.want)
		}
		if got := u.Cost(zero); math.Abs(got-2*tc.want-7) > 1e-14 {
			t.Errorf("%s: all cost %v, want %v", tc.name, got, 2*tc.want+7)
		}
	}
}

// Terms are the single costs of which the whole is made.
func TestTerms(t *testing.T) {
	held := On(small(t))
	held.CostLeft(nil, Cosine{1})
	held.Observe(1, 0, 3, 0.5)
	h := constant(held.Block(), 1, 2)
	u := resolve(t, held, h)
	var sum float64
	var values []int
	for e, term := range u.Terms() {
		cost, slope, curvature := term.At(h.Data[e])
		sum += cost
		values = append(values, e)
		if e == 9 && (cost != 2 || slope != -4 || curvature != 4) {
			t.Errorf("observation costs %v, slope %v, curvature %v; want 2, −4, 4", cost, slope, curvature)
		}
	}
	if d := cmp.Diff([]int{0, 4, 8, 12, 16, 9}, values); d != "" || sum != u.Cost(h) {
		t.Errorf("sum %v of all terms, want %v; values (-want +got):\n%s", sum, u.Cost(h), d)
	}
	if got, want := u.Tally(), (Tally{Terms: 6}); got != want {
		t.Errorf("tally %+v, want %+v", got, want)
	}
}

func TestStrengthIsChecked(t *testing.T) {
	for _, bad := range []float64{-1, math.NaN(), math.Inf(1)} {
		cost, soft := On(small(t)), On(small(t))
		cost.Cost(1, 0, Cosine{}).Strength = bad
		soft.Mean(2, 0).Soft(1).Strength = bad
		for name, s := range map[string]*Set{"cost at (x, t) = (0, 1)": cost, "mean of slice 2 at (x, t) = (-1, 1)": soft} {
			if _, err := s.Free(constant(s.Block(), 1, 0)); err == nil || !strings.Contains(err.Error(), name) {
				t.Errorf("strength %v: error %v does not name the %s", bad, err, name)
			}
		}
	}
}

// A resolved problem keeps the strengths it was resolved with.
func TestFreeTakesASnapshot(t *testing.T) {
	held := On(small(t))
	k := held.Observe(1, 0, 3, 1)
	l := held.Mean(2, 0)
	zero := constant(held.Block(), 1, 0)
	u := resolve(t, held, zero)
	k.Strength = 100
	l.Soft(1)
	held.Observe(1, 0, 3, 1)
	if u.Cost(zero) != 4.5 || len(u.HardRows()) != 1 {
		t.Errorf("cost %v and %d hard rows; want 4.5 and 1, as when it was resolved", u.Cost(zero), len(u.HardRows()))
	}
}

func TestMisfitsAreSorted(t *testing.T) {
	b := small(t)
	held := On(b)
	held.Observe(1, 0, 3, 0.5).Strength = 10
	held.Mean(4, 3.125).Soft(0.25)
	held.Cost(0, 2, Cosine{Around: math.Pi})
	held.Cost(2, 2, bent{1, 1})
	h := constant(b, 1, 2)
	m := resolve(t, held, h).Misfits(h)
	want := []Misfit{ // in σ: −4.5 by the mean, 4 by φ³ = 8, −2, and 1 − cos
		{Event: b.At(4, 0), Kind: "mean of slice 4", Asked: 3.125, Got: 2, Sigmas: -4.5, Cost: 10.125},
		{Event: b.At(4, 3), Kind: "cost", Asked: math.NaN(), Got: 2, Sigmas: 4, Cost: 8},
		{Event: b.At(2, 1), Kind: "observation", Asked: 3, Got: 2, Sigmas: -2, Cost: 20},
		{Event: b.At(0, 3), Kind: "cost", Asked: math.Pi, Got: 2, Sigmas: math.Sqrt(2 + 2*math.Cos(2)), Cost: 1 + math.Cos(2)},
	}
	if d := cmp.Diff(want, m, cmpopts.EquateApprox(1e-14, 0), cmpopts.EquateNaNs()); d != "" {
		t.Errorf("misfits (-want +got):\n%s", d)
	}
	if text := m[2].String(); text != "observation at (x, t) = (0, 1), component 0: asked 3, got 2, -2 σ, cost 20" {
		t.Errorf("%q", text)
	}
}

// Around a ring an observation asks for the value less the jump at the site
// itself.
func TestObservationOnARing(t *testing.T) {
	b := block(t, lattice.Axis{Step: 1, Sites: 3}, lattice.Axis{Step: 1, Sites: 3, Periodic: true, Jump: []float64{100}})
	held := On(b)
	held.Observe(1, 4, 103, 2)
	h := constant(b, 1, 1)
	u := resolve(t, held, h)
	if m := u.Misfits(h)[0]; m.Event != b.At(1, 1) || m.Asked != 3 || m.Sigmas != -1 || u.Cost(h) != 0.5 {
		t.Errorf("misfit %v, cost %v; want 3 asked at x = 1, -1 σ, 0.5", m, u.Cost(h))
	}
}
