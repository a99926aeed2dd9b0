package actiontest

import (
	"math"

	"github.com/tenter-go/tenter/field"
)

// steps marches the history from its first two slices, ends without an equation
// as they are, and asks that the residual vanish. Steps start from the random
// slices each time, so that an unstable step does not matter.
func (e *examination) steps() {
	b := e.Block()
	for n := 1; n < b.Slices()-1; n++ {
		h := e.h.Clone()
		next := h.Slice(n + 1)
		e.spoil(next)
		e.march.Step(next, h.Slice(n), h.Slice(n-1), n)
		e.keptEnds("march", next, n+1)
		r := e.Residual(nil, h).Slice(n)
		// The terms that cancel are no larger than the residual of a history that
		// was not marched, or ρφ/k² of the slices.
		scale := max(e.Residual(nil, e.h).Slice(n).MaxAbs(), h.MaxAbs()/(b.Time.Step*b.Time.Step))
		for c := range r.Components {
			for i, v := range r.Component(c) {
				if !(math.Abs(v) <= rounding*scale) {
					e.found.add("march", math.Abs(v), "march, component %d at %v, leaves the residual %.3g of terms of the size %.3g; want it to vanish", c, b.At(n, i), v, scale)
				}
			}
		}
	}
}

// spoil sets the values that a march has to write to something else.
func (e *examination) spoil(s field.Slice) {
	for c := range s.Components {
		row := s.Component(c)
		for i := range row {
			if !e.heldSite(i) {
				row[i] = math.NaN()
			}
		}
	}
}

func (e *examination) heldSite(i int) bool {
	return i == 0 && e.HeldLeft() || i == e.Block().Sites()-1 && e.HeldRight()
}

// keptEnds asks that a march has left held ends alone.
func (e *examination) keptEnds(kind string, next field.Slice, n int) {
	for c := range next.Components {
		for i, v := range next.Component(c) {
			if want := e.h.At(n, c, i); e.heldSite(i) && v != want {
				e.found.add(kind+" ends", math.Abs(v-want), "%s changes component %d of the held end at %v from %.12g to %.12g; want it left alone", kind, c, e.Block().At(n, i), want, v)
			}
		}
	}
}

// start asks that the slice before the start that its rate implies leads to the
// same next slice.
func (e *examination) start() {
	const n = 1
	k := e.Block().Time.Step
	st := field.State{Field: e.h.Slice(n), Rate: e.h.Slice(n - 1).Clone()}
	next := e.h.Slice(n + 1).Clone()
	e.spoil(next)
	e.march.Start(next, st, n)
	e.keptEnds("start", next, n+1)
	before := next.Clone()
	before.Axpy(-2*k, st.Rate)
	again := next.Clone()
	e.spoil(again)
	e.march.Step(again, st.Field, before, n)
	e.near("start", next, again, n+1, "the slice that Step gives from φ(n−1) = φ(n+1) − 2kφ_t")
}

// near holds one slice against another.
func (e *examination) near(kind string, got, want field.Slice, n int, of string) {
	scale := max(want.MaxAbs(), e.h.MaxAbs())
	for c := range got.Components {
		w := want.Component(c)
		for i, v := range got.Component(c) {
			if off := math.Abs(v - w[i]); !(off <= rounding*scale) {
				e.found.add(kind, off, "%s, component %d at %v, is %.12g; want %.12g, %s", kind, c, e.Block().At(n, i), v, w[i], of)
			}
		}
	}
}

// tangent holds the tangent of the march against its differences.
func (e *examination) tangent() {
	const n = 1
	now, before, next := e.h.Slice(n), e.h.Slice(n-1), e.h.Slice(n+1)
	d := e.direction()
	given := d.Slice(n + 1).Clone()
	e.march.Tangent(given, d.Slice(n), d.Slice(n-1), now, n)
	size := given.Components * given.Sites
	out := next.Clone()
	q := slopeOf(size, e.s.Step, func(dst []float64, eps float64) {
		for c := range out.Components {
			for i := range out.Sites {
				if e.heldSite(i) {
					out.Component(c)[i] = next.At(c, i) + eps*d.At(n+1, c, i)
				}
			}
		}
		a, b := now.Clone(), before.Clone()
		a.Axpy(eps, d.Slice(n))
		b.Axpy(eps, d.Slice(n-1))
		e.march.Step(out, a, b, n)
		copy(dst, out.Data)
	})
	j := newJudge(e.s, q, given.Data)
	for k, v := range given.Data {
		if size, text := j.verdict(k, v); size > 0 {
			e.found.add("tangent", size, "tangent, component %d at %v, %s of Step", k/given.Sites, e.Block().At(n+1, k%given.Sites), text)
		}
	}
}
