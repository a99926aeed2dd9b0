package action

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/lattice"
)

// A Coefficient is a number given at every place of a block where it lives:
// on sites, on space links or on time links. It is one of [Uniform], [Along],
// [Over], [Table] and [PerComponent].
type Coefficient interface {
	// sample writes the values of component c at the positions xs. The time is
	// t; row is its place in a Table.
	sample(dst []float64, c int, xs []float64, row int, t float64)

	// uniform returns the value if it is the same everywhere, and steady
	// reports whether it is the same at all times.
	uniform(c int) (value float64, ok bool)
	steady() bool

	// table reports whether the values exist at the rows of the block only, and
	// fits whether they do so for rows × columns places.
	table() bool
	fits(components, rows, columns int) error
}

// Uniform is the same number at every event.
type Uniform float64

// Along is a function of position, the same at all times.
type Along func(x float64) float64

// Over is a function of position and time.
type Over func(x, t float64) float64

// Table holds the values themselves, row-major, time before space. It has one
// row for every time at which the coefficient lives, or a single row that holds
// at all times. A row has one value for every site or, for κ and β, for every
// space link. ρ has its rows on the time links.
//
// A table of κ is averaged to the sites where links of fourth and sixth order
// need it there, which limits their order to two where κ varies; a function
// does not.
type Table []float64

// PerComponent gives each component a coefficient of its own; a nil entry
// stands for the default.
type PerComponent []Coefficient

func (u Uniform) sample(dst []float64, _ int, _ []float64, _ int, _ float64) {
	for i := range dst {
		dst[i] = float64(u)
	}
}
func (u Uniform) uniform(int) (float64, bool) { return float64(u), true }
func (u Uniform) steady() bool                { return true }
func (u Uniform) table() bool                 { return false }
func (u Uniform) fits(int, int, int) error    { return nil }
func (f Along) uniform(int) (float64, bool)   { return 0, false }
func (f Along) steady() bool                  { return true }
func (f Along) table() bool                   { return false }
func (f Over) uniform(int) (float64, bool)    { return 0, false }
func (f Over) steady() bool                   { return false }
func (f Over) table() bool                    { return false }
func (tb Table) uniform(int) (float64, bool)  { return 0, false }
func (tb Table) table() bool                  { return true }
func (p PerComponent) sample(dst []float64, c int, xs []float64, row int, t float64) {
	p[c].sample(dst, c, xs, row, t)
}
func (p PerComponent) uniform(c int) (float64, bool) { return p[c].uniform(c) }

func (f Along) sample(dst []float64, _ int, xs []float64, _ int, _ float64) {
	for i := range dst {
		dst[i] = f(xs[i])
	}
}

func (f Along) fits(int, int, int) error {
	if f == nil {
		return fmt.Errorf("is a nil Along; want a function")
	}
	return nil
}

func (f Over) sample(dst []float64, _ int, xs []float64, _ int, t float64) {
	for i := range dst {
		dst[i] = f(xs[i], t)
	}
}

func (f Over) fits(int, int, int) error {
	if f == nil {
		return fmt.Errorf("is a nil Over; want a function")
	}
	return nil
}

func (tb Table) sample(dst []float64, _ int, _ []float64, row int, _ float64) {
	if len(tb) == len(dst) {
		row = 0
	}
	copy(dst, tb[row*len(dst):])
}

// steady is false for a single row too: which it is shows only where the number
// of places is known. See newTrack.
func (tb Table) steady() bool { return false }

func (tb Table) fits(_, rows, columns int) error {
	if len(tb) != columns && len(tb) != rows*columns {
		return fmt.Errorf("is a table of %d values; want %d for one row or %d × %d for the whole block", len(tb), columns, rows, columns)
	}
	return nil
}

func (p PerComponent) steady() bool {
	for _, c := range p {
		if !c.steady() {
			return false
		}
	}
	return true
}

func (p PerComponent) table() bool {
	for _, c := range p {
		if c.table() {
			return true
		}
	}
	return false
}

func (p PerComponent) fits(components, rows, columns int) error {
	if len(p) != components {
		return fmt.Errorf("has %d entries; want one for each of %d components", len(p), components)
	}
	for c, q := range p {
		if _, nested := q.(PerComponent); nested {
			return fmt.Errorf("of component %d is itself a PerComponent; want one level", c)
		}
		if err := q.fits(components, rows, columns); err != nil {
			return fmt.Errorf("of component %d %w", c, err)
		}
	}
	return nil
}

// withDefault replaces nil by the default value, on either level.
func withDefault(c Coefficient, value float64) Coefficient {
	if c == nil {
		return Uniform(value)
	}
	if p, ok := c.(PerComponent); ok {
		full := make(PerComponent, len(p))
		for i, q := range p {
			full[i] = withDefault(q, value)
		}
		return full
	}
	return c
}

// A track is a coefficient on the places where it lives, with the rows that do
// not depend on time sampled once.
type track struct {
	coef   Coefficient
	xs     []float64
	time   lattice.Axis // times of its rows
	fixed  [][]float64  // one row a component, nil if the values depend on time
	flat   bool         // every component uniform
	values []float64    // the value of each component, if flat
}

// newTrack checks the coefficient against the block and samples it.
func newTrack(name string, c Coefficient, def float64, components int, xs []float64, clock lattice.Axis) (*track, error) {
	c = withDefault(c, def)
	if err := c.fits(components, clock.Sites, len(xs)); err != nil {
		return nil, fmt.Errorf("action: %s %w", name, err)
	}
	tr := &track{coef: c, xs: xs, time: clock, flat: true, values: make([]float64, components)}
	for k := range components {
		v, ok := c.uniform(k)
		tr.flat = tr.flat && ok
		tr.values[k] = v
	}
	single, ok := c.(Table)
	if c.steady() || ok && len(single) == len(xs) {
		tr.fixed = make([][]float64, components)
		for k := range components {
			tr.fixed[k] = make([]float64, len(xs))
			c.sample(tr.fixed[k], k, xs, 0, clock.From)
		}
	}
	return tr, nil
}

// row returns the values of component c at time t, which is row n of the block.
// They stand in buf if they depend on time.
func (tr *track) row(buf []float64, c, n int, t float64) []float64 {
	if tr.fixed != nil {
		return tr.fixed[c]
	}
	buf = buf[:len(tr.xs)]
	tr.coef.sample(buf, c, tr.xs, n, t)
	return buf
}

// check names the first value that is not finite or that fails ok, on all rows
// of tables and on up to 64 rows of functions of time, evenly spread.
func (tr *track) check(name, want string, ok func(float64) bool) error {
	buf := make([]float64, len(tr.xs))
	rows := tr.time.Sites
	if !tr.coef.table() {
		rows = min(rows, 64)
	}
	for k := range rows {
		n := k
		if rows < tr.time.Sites {
			n = k * (tr.time.Sites - 1) / (rows - 1)
		}
		for c := range tr.values {
			for i, v := range tr.row(buf, c, n, tr.time.At(n)) {
				if math.IsNaN(v-v) || !ok(v) {
					e := lattice.Event{T: tr.time.At(n), X: tr.xs[i]}
					return fmt.Errorf("action: %s of component %d is %v at %v; want a finite number%s", name, c, v, e, want)
				}
			}
		}
		if tr.fixed != nil {
			break
		}
	}
	return nil
}

// zero reports whether the coefficient is zero at all events for certain.
func (tr *track) zero() bool {
	if !tr.flat {
		return false
	}
	for _, v := range tr.values {
		if v != 0 {
			return false
		}
	}
	return true
}

// onlyAtRows reports whether the values are known at the slices of the block
// and not between them.
func (tr *track) onlyAtRows() bool { return tr.fixed == nil && tr.coef.table() }
