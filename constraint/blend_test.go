package constraint

import (
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// everyKind holds one condition of every kind with numbers that depend on v.
func everyKind(t *testing.T, v float64) *Set {
	s := On(small(t))
	s.Slice(0, field.SliceOf([]float64{v, 2, 3 * v, 4}))
	s.Rate(2, field.SliceOf([]float64{v, v, 0, 1}))
	s.Bound(2, 2, v-1, math.Inf(1))
	s.Observe(1, 0, v, 1+v/4).Strength = 1 + v
	s.CostRight(func(x, t float64) float64 { return v * t }, Cosine{v})
	s.CostSlice(4, nil, RapiniPapoular{1 + v, v})
	s.Cost(2, 2, bent{1, 1})
	s.Mean(2, v)
	s.Linear(3*v, Coefficient{at(2, 1), 0, 1 + v}, Coefficient{at(2, 0), 0, 2}).Soft(1 + v)
	return s
}

// Every number here is linear in v, so the blend of the sets of v = 0 and v = 2 is
// the set of v = 2s; the costs are those of that set, and resolve alike.
func TestBlend(t *testing.T) {
	for _, s := range []float64{0, 0.25, 0.5, 1, 1.25} {
		got, err := Blend(everyKind(t, 0), everyKind(t, 2), s)
		if err != nil {
			t.Fatal(err)
		}
		start := constant(got.Block(), 1, 0.3)
		u, want := resolve(t, got, start), resolve(t, everyKind(t, 2*s), start)
		if d := cmp.Diff(adjusted(want, start), adjusted(u, start), cmpopts.EquateApprox(0, 1e-15)); d != "" {
			t.Errorf("s = %v: pins and rates (-want +got):\n%s", s, d)
		}
		rows := cmpopts.IgnoreUnexported(Row{})
		near := cmpopts.EquateApprox(1e-14, 1e-14)
		if d := cmp.Diff(want.HardRows(), u.HardRows(), rows, near); d != "" {
			t.Errorf("s = %v: hard rows (-want +got):\n%s", s, d)
		}
		if d := cmp.Diff(want.SoftRows(), u.SoftRows(), rows, near); d != "" {
			t.Errorf("s = %v: soft rows (-want +got):\n%s", s, d)
		}
		if d := cmp.Diff(want.limits.low, u.limits.low, near); d != "" {
			t.Errorf("s = %v: bounds (-want +got):\n%s", s, d)
		}
		if d := cmp.Diff(want.Misfits(start), u.Misfits(start), near, cmpopts.EquateNaNs()); d != "" {
			t.Errorf("s = %v: misfits (-want +got):\n%s", s, d)
		}
		if a, b := want.Cost(start), u.Cost(start); math.Abs(a-b) > 1e-13*a {
			t.Errorf("s = %v: cost %v, want %v", s, b, a)
		}
	}
}

// Penalties of two types are mixed.
func TestBlendMixesPenalties(t *testing.T) {
	a, b := On(small(t)), On(small(t))
	a.CostSlice(1, func(x, t float64) float64 { return 2 }, Cosine{1})
	b.CostSlice(1, func(x, t float64) float64 { return 3 }, bent{1, 1})
	m, err := Blend(a, b, 0.25)
	if err != nil {
		t.Fatal(err)
	}
	h := constant(a.Block(), 1, 0.5)
	want := 3 * (0.75*2*(1-math.Cos(0.5)) + 0.25*3*0.125) // a length of 3
	if got := resolve(t, m, h).Cost(h); math.Abs(got-want) > 1e-15*4 {
		t.Errorf("cost %v, want %v", got, want)
	}
	if m, err = Blend(a, b, 0); err != nil {
		t.Fatal(err)
	}
	if got, want := resolve(t, m, h).Cost(h), resolve(t, a, h).Cost(h); got != want {
		t.Errorf("cost %v at s = 0, want that of the first set, %v", got, want)
	}
}

func TestBlendDifferences(t *testing.T) {
	row := field.SliceOf([]float64{1, 2, 3, 4})
	event := func(s *Set) { s.Event(1, 0, 1) }
	for _, tc := range []struct {
		name string
		a, b func(*Set)
		says []string
	}{
		{"a pin more", func(s *Set) { s.Event(2, 2, 1); event(s) }, func(s *Set) { s.Event(2, 2, 1) }, []string{"the pin of component 0 at (x, t) = (0, 1)", "in the first set", "not in the second"}},
		{"another pin", func(s *Set) { event(s); s.Event(1, 1, 1) }, func(s *Set) { event(s); s.Event(0.5, 1, 1) }, []string{"(1, 0.5)", "in the second set"}},
		{"another rate", func(s *Set) { s.Rate(1, row) }, func(s *Set) { s.Rate(2, row) }, []string{"rate", "(-1, 1)"}},
		{"a rate more", func(s *Set) { event(s) }, func(s *Set) { event(s); s.Rate(2, row) }, []string{"rate", "(-1, 1.5)", "in the second set"}},
		{"a bound from above", func(s *Set) { s.Bound(1, 0, 0, 1) }, func(s *Set) { s.Bound(1, 0, 0, math.Inf(1)) }, []string{"upper bound", "(0, 1)", "in the first set"}},
		{"an observation elsewhere", func(s *Set) { s.Observe(1, 0, 1, 1) }, func(s *Set) { s.Observe(1, 1, 1, 1) }, []string{"observation", "(0, 1)"}},
		{"a longer wall", func(s *Set) { s.CostPart(1, 0, 2, nil, Cosine{}) }, func(s *Set) { s.CostPart(1, 0, 3, nil, Cosine{}) }, []string{"(1, 0.5)", "in the second set"}},
		{"a cost more", func(s *Set) { event(s); s.CostSlice(1, nil, Cosine{}) }, event, []string{"cost of slice 1", "(-1, 0.5)", "in the first set"}},
		{"a mean more", func(s *Set) { s.Mean(1, 1); s.Mean(2, 1) }, func(s *Set) { s.Mean(1, 1) }, []string{"mean of slice 2", "(-1, 1)", "in the first set"}},
		{"another mean", func(s *Set) { s.Mean(1, 1) }, func(s *Set) { s.Mean(2, 1) }, []string{"mean of slice 1", "(-1, 0.5)"}},
		{"hard and soft", func(s *Set) { s.Mean(1, 1) }, func(s *Set) { s.Mean(1, 1).Soft(1) }, []string{"softness of the mean of slice 1", "in the second set"}},
		{"components", func(s *Set) { s.Component(1).Event(1, 0, 1) }, event, []string{"on 2 and on 1 components"}},
		{"regions", func(s *Set) { event(s); s.Within(stem(t)) }, event, []string{"two regions"}},
		{"a set in error", func(s *Set) { s.Event(9, 9, 9) }, event, []string{"in error", "(9, 9)"}},
	} {
		a, b := On(small(t)), On(small(t))
		tc.a(a)
		tc.b(b)
		m, err := Blend(a, b, 0.5)
		if err == nil || m != nil {
			t.Errorf("%s: no error", tc.name)
			continue
		}
		for _, word := range tc.says {
			if !strings.Contains(err.Error(), word) {
				t.Errorf("%s: %q does not say %q", tc.name, err, word)
			}
		}
	}
}

// Regions are the same if their cells are.
func TestBlendWithinARegion(t *testing.T) {
	a, b := On(small(t)), On(small(t))
	a.Within(stem(t))
	b.Within(stem(t))
	m, err := Blend(a, b, 0.5)
	if err != nil {
		t.Fatal(err)
	}
	if u := resolve(t, m, constant(a.Block(), 1, 0)); u.N != 16 {
		t.Errorf("%d unknowns, want the 16 events of the region", u.N)
	}
	other, err := lattice.NewRegion(small(t), func(e lattice.Event) bool { return e.T < 1 })
	if err != nil {
		t.Fatal(err)
	}
	c := On(small(t))
	c.Within(other)
	if _, err := Blend(a, c, 0.5); err == nil || !strings.Contains(err.Error(), "two regions") {
		t.Errorf("error %v, want one of two regions", err)
	}
}

// Going on beyond the sets ends where a number loses its sense.
func TestBlendBeyond(t *testing.T) {
	a, b := On(small(t)), On(small(t))
	a.Observe(1, 0, 1, 3)
	b.Observe(1, 0, 1, 1)
	if _, err := Blend(a, b, 1.5); err == nil || !strings.Contains(err.Error(), "observation at (x, t) = (0, 1)") || !strings.Contains(err.Error(), "deviation 0") {
		t.Errorf("error %v, want one of the standard deviation 0", err)
	}
	a, b = On(small(t)), On(small(t))
	a.Bound(1, 0, 0, 3)
	b.Bound(1, 0, 2, 3)
	var c *Crossing
	if _, err := Blend(a, b, 2); !errors.As(err, &c) || c.Low != 4 || c.High != 3 {
		t.Errorf("error %v, want a *Crossing of 4 and 3", err)
	}
	if _, err := Blend(a, b, math.NaN()); err == nil {
		t.Error("no error for the share NaN")
	}
	if _, err := Blend(a, nil, 0); err == nil {
		t.Error("no error for no set")
	}
}
