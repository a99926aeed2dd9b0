package actiontest

import (
	"math"
	"sync"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// differ notes the places where a result is not the one given before. loose
// allows for the last bits, which vector code may round differently in a short
// slice.
func (c *sample) differ(f *findings, kind string, given, got result, loose float64, why string) {
	names, want := given.rows()
	_, rows := got.rows()
	for k, row := range rows {
		var scale float64
		for _, v := range want[k] {
			scale = max(scale, math.Abs(v))
		}
		for i, v := range row {
			w := want[k][i]
			if v == w || math.Abs(v-w) <= loose*scale {
				continue
			}
			f.add(kind+names[k], math.Abs(v-w), "%s at %s is %.12g, but %.12g %s", names[k], c.place(i), w, v, why)
		}
	}
}

// overwriting asks for the same bits when dst held another number.
func (c *sample) overwriting(f *findings, given result) {
	const stale = 1e3
	c.differ(f, "overwriting", given, c.evaluate(c.p, stale), 0, "when dst held 1000 before the call; want dst overwritten")
}

// memory asks for the same bits after a call with another field.
func (c *sample) memory(f *findings, s Settings, given result) {
	other := newSample(c.p, c.at.T+1, c.at.X, 1)
	r := s.random()
	for a := range other.phi.Components {
		s.draw(r, other.phi.Component(a))
	}
	other.evaluate(c.p, 0)
	c.differ(f, "memory", given, c.evaluate(c.p, 0), 0, "after a call with another field; want nothing kept between calls")
}

// layouts evaluates short parts of the sample that lie inside of longer slices,
// and watches what is around them.
func (c *sample) layouts(f *findings, given result) {
	const rim = 3
	n := c.phi.Components
	from := 0
	for length := 1; length <= 7 && from+length <= c.phi.Sites; length++ {
		part := c.part(from, from+length)
		want := result{
			value:     given.value[from : from+length],
			slope:     given.slope.Part(from, from+length),
			curvature: given.curvature.Part(from, from+length),
		}
		from += length - 1 // the last site again, now as the first

		phi, phiAll := inside(n, length, rim)
		phi.CopyFrom(part.phi)
		x, xAll := inside(1, length, rim)
		copy(x.Component(0), part.at.X)
		value, valueAll := inside(1, length, rim)
		slope, slopeAll := inside(n, length, rim)
		curvature, curvatureAll := inside(n*n, length, rim)
		before := [...][]float64{append([]float64(nil), phiAll.Data...), append([]float64(nil), xAll.Data...)}

		at := action.Sites{T: part.at.T, X: x.Component(0)}
		c.p.Value(value.Component(0), phi, at)
		c.p.Slope(slope, phi, at)
		c.p.Curvature(curvature, phi, at)

		got := result{value: value.Component(0), slope: slope, curvature: curvature}
		part.differ(f, "layout", want, got, 1e-12, "in a short slice of a longer row; want a site to depend on itself alone")
		for _, w := range []struct {
			name string
			all  field.Slice
		}{{"Value", valueAll}, {"Slope", slopeAll}, {"Curvature", curvatureAll}} {
			if outside(w.all, rim) {
				f.add("outside "+w.name, 1, "%s writes outside of a dst of %d sites with the stride %d at %s", w.name, length, w.all.Stride, part.place(0))
			}
		}
		for k, all := range [...]field.Slice{phiAll, xAll} {
			for i, v := range all.Data {
				if v != before[k][i] {
					name := [...]string{"φ", "the positions"}[k]
					f.add("changes "+name, 1, "a method changes %s of a slice of %d sites at %s; want only dst changed", name, length, part.place(0))
					break
				}
			}
		}
	}
}

// mark stands around slices that a method must not write to.
const mark = -12345.678

// inside returns a slice of so many sites in the middle of a longer one, which
// is full of marks.
func inside(components, sites, rim int) (middle, all field.Slice) {
	all = field.NewSlice(components, sites+2*rim)
	for i := range all.Data {
		all.Data[i] = mark
	}
	return all.Part(rim, rim+sites), all
}

// outside reports whether a mark in the rim is gone.
func outside(all field.Slice, rim int) bool {
	for c := range all.Components {
		row := all.Component(c)
		for i := range rim {
			if row[i] != mark || row[len(row)-1-i] != mark {
				return true
			}
		}
	}
	return false
}

// company evaluates two fields in several goroutines at once.
func (c *sample) company(f *findings, given result) {
	half := c.phi.Sites / 2
	if half == 0 {
		return
	}
	parts := [2]*sample{c.part(0, half), c.part(half, c.phi.Sites)}
	want := [2]result{parts[0].evaluate(c.p, 0), parts[1].evaluate(c.p, 0)}
	const calls = 8
	var got [2][calls]result
	var wait sync.WaitGroup
	for k, part := range parts {
		wait.Add(1)
		go func() {
			defer wait.Done()
			for m := range calls {
				got[k][m] = part.evaluate(c.p, 0)
			}
		}()
	}
	wait.Wait()
	for k, part := range parts {
		for _, r := range got[k] {
			part.differ(f, "company", want[k], r, 0, "when another goroutine calls as well; want it safe for several at once")
		}
	}
}
