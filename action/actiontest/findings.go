package actiontest

import (
	"errors"
	"fmt"
	"math"
)

// findings collects what is wrong, the worst place of each kind.
type findings struct {
	list  []finding
	where string // said after each finding
}

type finding struct {
	kind string
	size float64
	text string
	more int
}

// add notes a finding of some kind and size. A NaN counts as the largest.
func (f *findings) add(kind string, size float64, format string, args ...any) {
	if math.IsNaN(size) {
		size = math.Inf(1)
	}
	kind += f.where
	for i := range f.list {
		old := &f.list[i]
		if old.kind != kind {
			continue
		}
		old.more++
		if size > old.size {
			old.size, old.text = size, fmt.Sprintf(format, args...)+f.where
		}
		return
	}
	f.list = append(f.list, finding{kind: kind, size: size, text: fmt.Sprintf(format, args...) + f.where})
}

// err returns the findings as one joined error, or nil.
func (f *findings) err() error {
	all := make([]error, len(f.list))
	for i, v := range f.list {
		var more string
		if v.more > 0 {
			more = fmt.Sprintf(" (the worst of %d such places)", v.more+1)
		}
		all[i] = fmt.Errorf("actiontest: %s%s", v.text, more)
	}
	return errors.Join(all...)
}

// A judge holds values against their derivatives by differences.
type judge struct {
	tolerance float64
	scale     float64 // largest derivative of the kind
	q         quotient
}

// newJudge returns a judge of derivatives that are given and that q measures.
func newJudge(s Settings, q quotient, given ...[]float64) judge {
	j := judge{tolerance: s.Tolerance, q: q}
	for _, v := range append(given, q.value) {
		for _, x := range v {
			if a := math.Abs(x); a > j.scale && !math.IsInf(a, 0) { // false for NaN
				j.scale = a
			}
		}
	}
	return j
}

// verdict judges the value got of entry k. It returns its error in units of
// what is allowed, or 0, and what to say about it.
func (j judge) verdict(k int, got float64) (size float64, text string) {
	want, spread := j.q.value[k], j.q.spread[k]
	allowed := j.tolerance*j.scale + j.q.rounding
	if off := math.Abs(got - want); !(off <= allowed) {
		size = off / allowed
		text = fmt.Sprintf("is %.12g; want %.12g ± %.1g by differences", got, want, max(spread, j.q.rounding))
	}
	if !(spread <= allowed) {
		size = spread / allowed
		text = fmt.Sprintf("cannot be judged: differences give %.12g but do not settle better than ± %.1g; is it smooth there, or is Step too long?", want, spread)
	}
	if math.IsNaN(size) {
		size = math.Inf(1)
	}
	return size, text
}
