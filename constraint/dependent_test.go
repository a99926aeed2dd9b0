package constraint

import (
	"errors"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

func at(t, x float64) lattice.Event { return lattice.Event{T: t, X: x} }

func TestContradictions(t *testing.T) {
	for _, tc := range []struct {
		name          string
		hold          func(*Set)
		asked, forced float64
		says          []string
	}{
		{"all pinned", func(s *Set) {
			s.Slice(3, field.SliceOf([]float64{1, 2, 3, 4}))
			s.Mean(3, 2)
		}, 2, 2.5, []string{"mean of slice 3 at (x, t) = (-1, 1.5)", "forced to be 2.5 by values that are held"}},
		{"tied away", func(s *Set) {
			s.Rate(1, field.SliceOf([]float64{0, 4, 0, 0}))
			s.Linear(3, Coefficient{at(1, 0), 0, 1}, Coefficient{at(0, 0), 0, -1})
		}, 3, 4, []string{"linear condition at (x, t) = (0, 1)"}},
		{"asked twice", func(s *Set) {
			s.Mean(3, 2)
			s.Mean(3, 5)
		}, 5, 2, []string{"forced to be 2 by mean of slice 3 at (x, t) = (-1, 1.5)"}},
		{"sum of two", func(s *Set) {
			s.EndToEnd(0, 1).Name = "charge"
			s.Linear(2, Coefficient{at(0, 2), 0, 1}, Coefficient{at(1, 1), 0, 1})
			s.Mean(4, 0)
			s.Linear(8, Coefficient{at(0, -1), 0, 2}, Coefficient{at(1, 1), 0, 2})
		}, 8, 2, []string{"by charge at (x, t) = (-1, 0), linear condition at (x, t) = (2, 0);"}},
	} {
		t.Run(tc.name, func(t *testing.T) {
			s := On(small(t))
			tc.hold(s)
			_, err := s.Free(constant(s.Block(), 1, 0))
			var c *Contradiction
			if !errors.As(err, &c) {
				t.Fatalf("error %v, want a *Contradiction", err)
			}
			// quotients of whole numbers below 10
			if d := max(c.Asked-tc.asked, tc.asked-c.Asked, c.Forced-tc.forced, tc.forced-c.Forced); d > 1e-14 {
				t.Errorf("asked %v, forced %v; want %v, %v", c.Asked, c.Forced, tc.asked, tc.forced)
			}
			for _, word := range tc.says {
				if !strings.Contains(err.Error(), word) {
					t.Errorf("%q does not say %q", err, word)
				}
			}
		})
	}
}

func TestRedundantLinearConditions(t *testing.T) {
	s := On(small(t))
	s.Slice(3, field.SliceOf([]float64{1, 2, 3, 4}))
	s.Mean(3, 2.5)
	s.EndToEnd(0, 1)
	s.Linear(2, Coefficient{at(0, 2), 0, 1}, Coefficient{at(1, 1), 0, 1})
	s.Linear(3, Coefficient{at(0, -1), 0, 3}, Coefficient{at(1, 1), 0, 3})
	s.EndToEnd(0, 7).Soft(1) // costs, forces nothing
	u := resolve(t, s, constant(s.Block(), 1, 0))
	if len(u.HardRows()) != 2 || u.Redundant != 2 || len(u.Repeats) != 2 {
		t.Fatalf("%d rows, %d redundant: %q; want 2 and 2", len(u.HardRows()), u.Redundant, u.Repeats)
	}
	for i, word := range []string{"mean of slice 3", "linear condition at (x, t) = (-1, 0), which follows from end-to-end difference of slice 0 at (x, t) = (-1, 0), linear condition at (x, t) = (2, 0)"} {
		if !strings.Contains(u.Repeats[i], word) {
			t.Errorf("%q does not say %q", u.Repeats[i], word)
		}
	}
}

// More rows with common unknowns than are orthogonalised: equal ones are found
// still.
func TestManyLinearConditions(t *testing.T) {
	b := block(t, lattice.Axis{Step: 1, Sites: 3}, lattice.Axis{Step: 1, Sites: 500})
	s := On(b)
	for i := range 499 {
		s.Linear(1, Coefficient{b.At(1, i), 0, 1}, Coefficient{b.At(1, i+1), 0, 1})
	}
	twice := s.Linear(3, Coefficient{b.At(1, 7), 0, 3}, Coefficient{b.At(1, 8), 0, 3})
	u := resolve(t, s, field.NewHistory(b, 1))
	if len(u.HardRows()) != 499 || len(u.Repeats) != 1 {
		t.Errorf("%d rows, repeats %q; want 499 and one", len(u.HardRows()), u.Repeats)
	}
	twice.asked = 4
	var c *Contradiction
	if _, err := s.Free(field.NewHistory(b, 1)); !errors.As(err, &c) || c.Event != b.At(1, 7) {
		t.Errorf("error %v, want a *Contradiction at x = 7", err)
	}
}
