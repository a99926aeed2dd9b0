package action_test

import (
	"math"
	"slices"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// TestMatrixPattern asks that the places of a matrix depend neither on the
// history nor on whether its memory is new, and that no column stands twice in
// a row.
func TestMatrixPattern(t *testing.T) {
	for _, b := range []struct {
		name  string
		sites int
		ring  bool
	}{{"line", 9, false}, {"ring", 9, true}, {"ring narrower than the links", 4, true}} {
		blk := block(5, 0.1, b.sites, 0.5)
		blk.Space.Periodic = b.ring
		s := mustNew(t, blk, action.Wave{Links: action.Sixth, Alpha: action.Uniform(1), Beta: action.Uniform(1),
			Potential: action.Sum{action.Each{Potential: action.Phi4{}, N: 2}, action.Bilinear{{0, 1}, {1, 0}}}})
		zero, rough := field.NewHistory(blk, 2), field.NewHistory(blk, 2)
		scatter(15, 1, rough.Data)
		for name, f := range map[string]func(*action.Matrix, *field.History) *action.Matrix{"second variation": s.SecondVariationMatrix, "Jacobian": s.ResidualJacobian} {
			fresh := f(nil, zero)
			want := f(nil, rough)
			again := f(f(nil, zero), rough)
			if !slices.Equal(fresh.Start, want.Start) || !slices.Equal(fresh.Column, want.Column) {
				t.Errorf("%s on a %s: the pattern depends on the history", name, b.name)
			}
			if !slices.Equal(again.Start, want.Start) || !slices.Equal(again.Column, want.Column) || !slices.Equal(again.Value, want.Value) {
				t.Errorf("%s on a %s: a matrix in used memory differs from one in new memory", name, b.name)
			}
			for r := range want.Rows() {
				columns, _ := want.Row(r)
				sorted := slices.Clone(columns)
				slices.Sort(sorted)
				if len(slices.Compact(sorted)) != len(columns) {
					t.Errorf("%s on a %s: row %d has a column twice: %v", name, b.name, r, columns)
				}
			}
		}
	}
}

// TestMatrixTimesVector asks that y·(Mx) = (Mᵀy)·x and that a small product be
// that by hand.
func TestMatrixTimesVector(t *testing.T) {
	m := &action.Matrix{Start: []int{0, 2, 2, 3}, Column: []int{2, 0, 1}, Value: []float64{3, -1, 2}}
	dst := make([]float64, 3)
	if m.MulVec(dst, []float64{1, 10, 100}); !slices.Equal(dst, []float64{299, 0, 20}) {
		t.Errorf("M·x = %v; want [299 0 20]", dst)
	}
	if m.MulTransVec(dst, []float64{1, 10, 100}); !slices.Equal(dst, []float64{-1, 200, 3}) {
		t.Errorf("Mᵀ·x = %v; want [-1 200 3]", dst)
	}
	b := block(5, 0.1, 9, 0.5)
	s := mustNew(t, b, action.Wave{Potential: action.SineGordon{}, Links: action.Fourth, Beta: action.Uniform(0.5)})
	h, x, y := field.NewHistory(b, 1), field.NewHistory(b, 1), field.NewHistory(b, 1)
	for k, v := range []*field.History{h, x, y} {
		scatter(uint64(16+k), 1, v.Data)
	}
	j := s.ResidualJacobian(nil, h)
	forth, back := make([]float64, len(x.Data)), make([]float64, len(x.Data))
	j.MulVec(forth, x.Data)
	j.MulTransVec(back, y.Data)
	var a, c float64
	for k := range forth {
		a += y.Data[k] * forth[k]
		c += back[k] * x.Data[k]
	}
	if math.Abs(a-c) > 1e-12*math.Abs(a) { // two hundred roundings
		t.Errorf("y·Mx = %.16g, Mᵀy·x = %.16g", a, c)
	}
}
