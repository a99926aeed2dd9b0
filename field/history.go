package field

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/lattice"
)

// A History is the field on every event of a block: slices × components ×
// sites, row-major, so that component c of event (n, i) is
//
//	Data[(n*Components+c)*Sites+i],  Sites = Block.Sites().
//
// That number is also the index of the value wherever the library treats a
// history as one long vector.
type History struct {
	Block      lattice.Block
	Components int
	Data       []float64
}

// NewHistory returns a history of zeros. It panics unless components is
// positive.
func NewHistory(b lattice.Block, components int) *History {
	if components < 1 {
		panic(fmt.Sprintf("field: history of %d components", components))
	}
	return &History{Block: b, Components: components, Data: make([]float64, b.Slices()*components*b.Sites())}
}

// Repeat returns the history that shows the slice s at every time of b.
func Repeat(b lattice.Block, s Slice) *History {
	if s.Sites != b.Sites() {
		panic(fmt.Sprintf("field: slice of %d sites on a block of %d", s.Sites, b.Sites()))
	}
	h := NewHistory(b, s.Components)
	for n := range b.Slices() {
		h.Slice(n).CopyFrom(s)
	}
	return h
}

// Slice returns slice n. It shares memory with h.
func (h *History) Slice(n int) Slice {
	sites := h.Block.Sites()
	size := h.Components * sites
	return Slice{Data: h.Data[n*size : (n+1)*size : (n+1)*size], Components: h.Components, Sites: sites, Stride: sites}
}

// Index returns the place of component c of event (n, i) in Data.
func (h *History) Index(n, c, i int) int { return (n*h.Components+c)*h.Block.Sites() + i }

// Place is the inverse of Index.
func (h *History) Place(index int) (n, c, i int) {
	sites := h.Block.Sites()
	row := index / sites
	return row / h.Components, row % h.Components, index % sites
}

// At returns component c of event (n, i).
func (h *History) At(n, c, i int) float64 { return h.Data[h.Index(n, c, i)] }

// Set sets component c of event (n, i).
func (h *History) Set(n, c, i int, v float64) { h.Data[h.Index(n, c, i)] = v }

// TimeSeries appends component c of site i at every slice to dst and returns
// it.
func (h *History) TimeSeries(dst []float64, c, i int) []float64 {
	for n := range h.Block.Slices() {
		dst = append(dst, h.At(n, c, i))
	}
	return dst
}

// Clone returns a copy with memory of its own.
func (h *History) Clone() *History {
	d := *h
	d.Data = append([]float64(nil), h.Data...)
	return &d
}

// Window returns a copy of the slices n0 ≤ n < n1 and sites i0 ≤ i < i1, on the
// block that Block.Window gives.
func (h *History) Window(n0, n1, i0, i1 int) (*History, error) {
	b, err := h.Block.Window(n0, n1, i0, i1)
	if err != nil {
		return nil, err
	}
	w := NewHistory(b, h.Components)
	for n := range b.Slices() {
		w.Slice(n).CopyFrom(h.Slice(n0+n).Part(i0, i1))
	}
	return w, nil
}

// Check returns an error if the data does not fit the block or a value is not
// finite; the error names the event.
func (h *History) Check() error {
	if h == nil {
		return fmt.Errorf("field: no history")
	}
	if want := h.Block.Slices() * h.Components * h.Block.Sites(); h.Components < 1 || len(h.Data) != want {
		return fmt.Errorf("field: history of %d values for %d slices × %d components × %d sites", len(h.Data), h.Block.Slices(), h.Components, h.Block.Sites())
	}
	for k, x := range h.Data {
		if math.IsNaN(x - x) {
			n, c, i := h.Place(k)
			return fmt.Errorf("field: component %d is %v at %v; want a finite number", c, x, h.Block.At(n, i))
		}
	}
	return nil
}

// SameShape reports whether h and g have equally many slices, components and
// sites.
func (h *History) SameShape(g *History) bool {
	return h.Components == g.Components && h.Block.Slices() == g.Block.Slices() && h.Block.Sites() == g.Block.Sites()
}

// MaxAbs returns the largest |value|; NaN if any value is NaN.
func (h *History) MaxAbs() float64 { return h.whole().MaxAbs() }

// MaxDifference returns the largest |h − g|; NaN if any value is NaN. It panics
// unless the shapes are equal.
func (h *History) MaxDifference(g *History) float64 {
	if !h.SameShape(g) {
		panic("field: histories of different shapes")
	}
	return h.whole().MaxDifference(g.whole())
}

// Norm returns the square root of Σ_c Σ_n w_n Σ_i u_i φ²hk, the L² norm over the
// block with the cell weights of its axes.
func (h *History) Norm() float64 {
	b := h.Block
	var sum float64
	for n := range b.Slices() {
		s := h.Slice(n)
		sum += b.Time.Weight(n) * s.squares(b.Space)
	}
	return math.Sqrt(sum * b.Time.Step)
}

// Norm returns the square root of Σ_c Σ_i u_i φ²h with the cell weights and the
// step of the axis. It panics unless the slice lies on the axis.
func (s Slice) Norm(line lattice.Axis) float64 { return math.Sqrt(s.squares(line)) }

func (s Slice) squares(line lattice.Axis) float64 {
	s.mustLieOn(line)
	var sum float64
	for c := range s.Components {
		for i, x := range s.Component(c) {
			sum += line.Weight(i) * x * x
		}
	}
	return sum * line.Step
}

func (h *History) whole() Slice { return SliceOf(h.Data) }
