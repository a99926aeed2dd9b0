package field

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/internal/kernel"
)

// A Slice is the field on the sites of one time: Components × Sites values.
// Component c of site i is Data[c*Stride+i].
type Slice struct {
	Data       []float64
	Components int
	Sites      int
	Stride     int
}

// NewSlice returns a slice of zeros. It panics unless both numbers are
// positive.
func NewSlice(components, sites int) Slice {
	if components < 1 || sites < 1 {
		panic(fmt.Sprintf("field: slice of %d components × %d sites", components, sites))
	}
	return Slice{Data: make([]float64, components*sites), Components: components, Sites: sites, Stride: sites}
}

// SliceOf returns a slice whose components are the given rows. One row is used
// in place and shares its memory; several are copied. It panics unless the rows
// have equal lengths above zero.
func SliceOf(rows ...[]float64) Slice {
	if len(rows) == 1 && len(rows[0]) > 0 {
		n := len(rows[0])
		return Slice{Data: rows[0][:n:n], Components: 1, Sites: n, Stride: n}
	}
	if len(rows) == 0 || len(rows[0]) == 0 {
		panic("field: slice of no values")
	}
	s := NewSlice(len(rows), len(rows[0]))
	for c, row := range rows {
		if len(row) != s.Sites {
			panic(fmt.Sprintf("field: component %d has %d sites, component 0 has %d", c, len(row), s.Sites))
		}
		copy(s.Component(c), row)
	}
	return s
}

// Component returns the values of component c. They share memory with s.
func (s Slice) Component(c int) []float64 {
	return s.Data[c*s.Stride : c*s.Stride+s.Sites : c*s.Stride+s.Sites]
}

// At returns component c at site i.
func (s Slice) At(c, i int) float64 { return s.Component(c)[i] }

// Part returns the sites from ≤ i < to of every component. It shares memory
// with s. It panics unless 0 ≤ from < to ≤ Sites.
func (s Slice) Part(from, to int) Slice {
	if from < 0 || to > s.Sites || from >= to {
		panic(fmt.Sprintf("field: part [%d, %d) of %d sites", from, to, s.Sites))
	}
	end := (s.Components-1)*s.Stride + to
	return Slice{Data: s.Data[from:end:end], Components: s.Components, Sites: to - from, Stride: s.Stride}
}

// Clone returns a copy with memory of its own.
func (s Slice) Clone() Slice {
	d := NewSlice(s.Components, s.Sites)
	d.CopyFrom(s)
	return d
}

// CopyFrom copies the values of src. It panics unless the shapes are equal.
func (s Slice) CopyFrom(src Slice) {
	mustMatch(s, src)
	for c := range s.Components {
		copy(s.Component(c), src.Component(c))
	}
}

// Zero sets every value to zero.
func (s Slice) Zero() {
	for c := range s.Components {
		clear(s.Component(c))
	}
}

// Axpy adds a·x to s. It panics unless the shapes are equal.
func (s Slice) Axpy(a float64, x Slice) {
	mustMatch(s, x)
	for c := range s.Components {
		d := s.Component(c)
		kernel.AddScaled(d, d, a, x.Component(c))
	}
}

// Empty reports whether s is the zero Slice.
func (s Slice) Empty() bool { return s.Data == nil }

// SameShape reports whether s and t have equally many components and sites.
func (s Slice) SameShape(t Slice) bool {
	return s.Components == t.Components && s.Sites == t.Sites
}

// Check returns an error that names the first value that is not finite, or a
// shape that does not fit its data.
func (s Slice) Check() error {
	if s.Components < 1 || s.Sites < 1 || s.Stride < s.Sites && s.Components > 1 || len(s.Data) < (s.Components-1)*s.Stride+s.Sites {
		return fmt.Errorf("field: slice of %d components × %d sites with the stride %d on %d values", s.Components, s.Sites, s.Stride, len(s.Data))
	}
	if c, i, ok := s.FirstNotFinite(); ok {
		return fmt.Errorf("field: component %d is %v at site %d; want a finite number", c, s.At(c, i), i)
	}
	return nil
}

// FirstNotFinite returns where the first NaN or infinite value is, if any.
func (s Slice) FirstNotFinite() (component, site int, found bool) {
	for c := range s.Components {
		v := s.Component(c)
		if kernel.Finite(v) {
			continue
		}
		for i, x := range v {
			if math.IsNaN(x - x) { // true for NaN and ±Inf
				return c, i, true
			}
		}
	}
	return 0, 0, false
}

// MaxAbs returns the largest |value|; NaN if any value is NaN.
func (s Slice) MaxAbs() float64 {
	var m float64
	for c := range s.Components {
		for _, x := range s.Component(c) {
			m = max(m, math.Abs(x))
		}
	}
	return m
}

// MaxDifference returns the largest |s − t|; NaN if any value is NaN. It panics
// unless the shapes are equal.
func (s Slice) MaxDifference(t Slice) float64 {
	mustMatch(s, t)
	var m float64
	for c := range s.Components {
		a, b := s.Component(c), t.Component(c)
		for i, x := range a {
			m = max(m, math.Abs(x-b[i]))
		}
	}
	return m
}

func mustMatch(s, t Slice) {
	if !s.SameShape(t) {
		panic(fmt.Sprintf("field: %d components × %d sites against %d × %d", s.Components, s.Sites, t.Components, t.Sites))
	}
}
