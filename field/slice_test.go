package field_test

import (
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

func TestSliceViews(t *testing.T) {
	s := field.SliceOf([]float64{0, 1, 2, 3}, []float64{10, 11, 12, 13})
	part := s.Part(1, 3)
	part.Component(1)[0] = -11
	if got := s.At(1, 1); got != -11 {
		t.Errorf("a write to a part did not reach the slice: got %v, want -11", got)
	}
	if diff := cmp.Diff([]float64{-11, 12}, part.Component(1)); diff != "" {
		t.Errorf("component 1 of the part (-want +got):\n%s", diff)
	}

	copied := part.Clone()
	copied.Component(0)[0] = 99
	if got := s.At(0, 1); got != 1 {
		t.Errorf("a write to a clone reached the slice: got %v, want 1", got)
	}

	row := []float64{1, 2, 3}
	one := field.SliceOf(row)
	one.Data[0] = 7
	if row[0] != 7 {
		t.Error("a slice of one row does not share its memory")
	}
}

func TestSliceArithmetic(t *testing.T) {
	s := field.SliceOf([]float64{1, 2}, []float64{3, 4})
	s.Axpy(-2, field.SliceOf([]float64{1, 0}, []float64{0, 1}))
	want := []float64{-1, 2, 3, 2}
	if diff := cmp.Diff(want, s.Data); diff != "" {
		t.Errorf("Axpy (-want +got):\n%s", diff)
	}
	s.Part(0, 1).Zero()
	if diff := cmp.Diff([]float64{0, 2, 0, 2}, s.Data); diff != "" {
		t.Errorf("Zero of a part (-want +got):\n%s", diff)
	}
}

// A NaN must survive every norm: a blow-up may not hide behind a maximum.
func TestNormsKeepNaN(t *testing.T) {
	for i := range 3 {
		row := []float64{1, 2, 3}
		row[i] = math.NaN()
		s := field.SliceOf(row)
		zero := field.NewSlice(1, 3)
		line := lattice.Axis{Step: 1, Sites: 3}
		h := field.Repeat(lattice.Block{Time: lattice.Axis{Step: 1, Sites: 2}, Space: line}, s)
		for name, got := range map[string]float64{
			"Slice.MaxAbs":          s.MaxAbs(),
			"Slice.MaxDifference":   zero.MaxDifference(s),
			"Slice.Norm":            s.Norm(line),
			"History.MaxAbs":        h.MaxAbs(),
			"History.MaxDifference": h.MaxDifference(h),
			"History.Norm":          h.Norm(),
		} {
			if !math.IsNaN(got) {
				t.Errorf("%s with a NaN at site %d = %v, want NaN", name, i, got)
			}
		}
	}
}

// The L² norm of the constant 3 over a length L is 3√L with either kind of axis,
// because the weights of the sites add up to the length.
func TestNormOfConstant(t *testing.T) {
	for _, line := range []lattice.Axis{
		{From: -1, Step: 0.25, Sites: 9},
		{From: -1, Step: 0.25, Sites: 8, Periodic: true},
	} {
		s := field.NewSlice(1, line.Sites)
		for i := range s.Data {
			s.Data[i] = 3
		}
		if got, want := s.Norm(line), 3*math.Sqrt2; math.Abs(got-want) > 1e-15*8 { // rounding of a sum of nine terms
			t.Errorf("norm over a length of 2 is %v, want 3√2 = %v", got, want)
		}
		b := lattice.Block{Time: lattice.Axis{Step: 0.5, Sites: 9}, Space: line}
		if got, want := field.Repeat(b, s).Norm(), 3*math.Sqrt(8); math.Abs(got-want) > 1e-14 {
			t.Errorf("norm over 2 × 4 is %v, want 3√8 = %v", got, want)
		}
	}
}

func TestCheckNamesTheCulprit(t *testing.T) {
	withNaN := field.NewSlice(2, 5)
	withNaN.Component(1)[3] = math.NaN()
	infinite := field.NewSlice(1, 5)
	infinite.Data[4] = math.Inf(-1)

	block := lattice.Block{Time: lattice.Axis{Step: 0.5, Sites: 4}, Space: lattice.Axis{From: -2, Step: 1, Sites: 5}}
	badEvent := field.NewHistory(block, 2)
	badEvent.Set(3, 1, 4, math.NaN())
	short := field.NewHistory(block, 1)
	short.Data = short.Data[:19]

	for _, tt := range []struct {
		name string
		err  error
		want []string
	}{
		{"NaN in a slice", withNaN.Check(), []string{"component 1", "NaN", "site 3"}},
		{"infinity in a slice", infinite.Check(), []string{"component 0", "-Inf", "site 4"}},
		{"data too short", field.Slice{Data: make([]float64, 5), Components: 2, Sites: 3, Stride: 3}.Check(), []string{"2 components × 3 sites", "5 values"}},
		{"overlapping components", field.Slice{Data: make([]float64, 9), Components: 2, Sites: 3, Stride: 2}.Check(), []string{"stride 2"}},
		{"no slice", field.Slice{}.Check(), []string{"0 components"}},
		{"bad rate", field.State{Field: field.NewSlice(1, 5), Rate: infinite}.Check(), []string{"rate", "site 4"}},
		{"bad field", field.State{Field: infinite, Rate: field.NewSlice(1, 5)}.Check(), []string{"-Inf", "site 4"}},
		{"rate of another shape", field.State{Field: field.NewSlice(1, 5), Rate: field.NewSlice(1, 4)}.Check(), []string{"1 components × 5", "1 × 4"}},
		{"NaN in a history", badEvent.Check(), []string{"component 1", "NaN", "(x, t) = (2, 1.5)"}},
		{"history too short", short.Check(), []string{"19 values", "4 slices × 1 components × 5 sites"}},
		{"no history", (*field.History)(nil).Check(), []string{"no history"}},
	} {
		if tt.err == nil {
			t.Errorf("%s: no error", tt.name)
			continue
		}
		for _, w := range tt.want {
			if !strings.Contains(tt.err.Error(), w) {
				t.Errorf("%s: error %q does not name %q", tt.name, tt.err, w)
			}
		}
	}
	if err := field.NewState(2, 3).Check(); err != nil {
		t.Errorf("state of zeros: %v", err)
	}
	if err := field.NewHistory(block, 3).Check(); err != nil {
		t.Errorf("history of zeros: %v", err)
	}
}

func TestSlipsPanic(t *testing.T) {
	s := field.NewSlice(2, 5)
	line := lattice.Axis{Step: 1, Sites: 4}
	block := lattice.Block{Time: line, Space: line}
	for name, slip := range map[string]func(){
		"slice of no sites":             func() { field.NewSlice(1, 0) },
		"no rows":                       func() { field.SliceOf() },
		"rows of two lengths":           func() { field.SliceOf([]float64{1, 2}, []float64{1}) },
		"part beyond the end":           func() { s.Part(3, 6) },
		"empty part":                    func() { s.Part(3, 3) },
		"component beyond the last":     func() { s.Component(2) },
		"component beyond one row":      func() { field.SliceOf(make([]float64, 3, 9)).Component(1) },
		"copy of another shape":         func() { s.CopyFrom(field.NewSlice(1, 5)) },
		"sum of another shape":          func() { s.Axpy(1, field.NewSlice(2, 4)) },
		"norm on another axis":          func() { s.Norm(line) },
		"history of no components":      func() { field.NewHistory(block, 0) },
		"repeat of another size":        func() { field.Repeat(block, s) },
		"difference of another shape":   func() { field.NewHistory(block, 1).MaxDifference(field.NewHistory(block, 2)) },
		"superposition of nothing real": func() { field.Superpose(0, nil) },
		"resampling on another axis":    func() { s.Resample(line, line, field.Linear) },
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if recover() == nil {
					t.Error("no panic")
				}
			}()
			slip()
		})
	}
}
