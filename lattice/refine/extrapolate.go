package refine

import (
	"fmt"
	"math"
)

// Safety is the factor on the error bar [Roache 1994, J. Fluids Eng. 116, 405].
const Safety = 1.25

// Noise is the relative size below which differences between levels count as
// rounding: 2⁻⁴⁶ ≈ 1.4e-14, or 64 units in the last place.
const Noise = 1.0 / (1 << 46)

// slowest and fastest bound the observed order that is believed when no order
// is given: below, the extrapolation is a multiple of what was measured; above,
// the last difference is small by chance or convergence is not a power of h.
const slowest, fastest = 0.5, 8.0

// Status says whether an error bar stands behind an estimate.
type Status uint8

// The statuses. Asymptotic and Exact come with an error bar, the others with a
// reason.
const (
	TooFewLevels    Status = iota // fewer than three
	Asymptotic                    // the differences shrink like a power of h
	Exact                         // equal at every level, to rounding
	AtRounding                    // the last difference is rounding, earlier ones are not
	NotFinite                     // a level gave NaN or an infinity
	ChangingSign                  // the last two differences point in opposite directions
	NotShrinking                  // the last difference is as large as the one before, or nearly
	UnexpectedOrder               // the order is not the expected one, or not steady
)

// String returns the status in words.
func (s Status) String() string {
	words := [...]string{
		TooFewLevels:    "too few levels",
		Asymptotic:      "asymptotic",
		Exact:           "exact at every level",
		AtRounding:      "differences at rounding level",
		NotFinite:       "not finite",
		ChangingSign:    "differences change sign",
		NotShrinking:    "differences do not shrink",
		UnexpectedOrder: "unexpected order",
	}
	if int(s) < len(words) {
		return words[s]
	}
	return fmt.Sprintf("status(%d)", uint8(s))
}

// Bounded reports whether the status comes with an error bar.
func (s Status) Bounded() bool { return s == Asymptotic || s == Exact }

// An Estimate is what the levels say of one quantity.
type Estimate struct {
	Name, Unit string

	Values []float64 // at every level, coarse to fine
	Value  float64   // the best value: extrapolated if Asymptotic, else the finest
	Error  float64   // the error bar; NaN unless Status.Bounded
	Order  float64   // observed order p; NaN where there is none to see
	Status Status
	Reason string // why there is no error bar; empty if there is one
}

// Extrapolate returns the estimate of a quantity from its values on levels that
// are each factor times finer than the one before, coarse to fine. Order is the
// expected order, 0 if unknown. See the package comment for the formulas. It
// panics unless factor > 1 and order ≥ 0 are finite.
func Extrapolate(values []float64, factor, order float64) Estimate {
	if !(factor > 1) || math.IsInf(factor, 0) {
		panic(fmt.Sprintf("refine: extrapolation over levels finer by %v", factor))
	}
	if !(order >= 0) || math.IsInf(order, 0) {
		panic(fmt.Sprintf("refine: extrapolation with the order %v", order))
	}
	e := Estimate{
		Values: append([]float64(nil), values...),
		Value:  math.NaN(),
		Error:  math.NaN(),
		Order:  math.NaN(),
	}
	if n := len(values); n > 0 {
		e.Value = values[n-1]
	}
	e.judge(factor, order)
	return e
}

// judge fills in everything but Values, and Value where it is not extrapolated.
func (e *Estimate) judge(factor, order float64) {
	v := e.Values
	var largest float64
	for level, x := range v {
		if math.IsNaN(x - x) {
			e.fail(NotFinite, "level %d gave %v", level, x)
			return
		}
		largest = max(largest, math.Abs(x))
	}
	if len(v) < 3 {
		e.fail(TooFewLevels, "%d levels; an error bar needs three", len(v))
		return
	}
	noise := Noise * largest

	var spread float64
	for _, x := range v {
		spread = max(spread, math.Abs(x-v[len(v)-1]))
	}
	if spread <= noise {
		e.Status, e.Error = Exact, spread
		return
	}

	last := newTriple(v[len(v)-3:], factor)
	e.Order = last.order
	if status, reason := last.refuse(order, noise); status != Asymptotic {
		e.fail(status, "%s", reason)
		return
	}
	best := last.limit(last.order)
	bar := max(noise, math.Abs(last.fine-best))
	if order > 0 {
		best = last.limit(order)
		bar = max(bar, math.Abs(last.fine-best))
	}
	if len(v) > 3 {
		before := newTriple(v[len(v)-4:len(v)-1], factor)
		switch status, _ := before.refuse(order, noise); {
		case status != Asymptotic:
			bar = max(bar, math.Abs(last.d2))
		case order > 0:
			bar = max(bar, math.Abs(best-before.limit(order)))
		case math.Abs(last.order-before.order) > 1:
			e.fail(UnexpectedOrder, "observed order goes from %.2f to %.2f between the last two triples of levels", before.order, last.order)
			return
		default:
			bar = max(bar, math.Abs(best-before.limit(before.order)))
		}
	}
	e.Status, e.Value, e.Error = Asymptotic, best, Safety*bar
}

func (e *Estimate) fail(s Status, format string, args ...any) {
	e.Status, e.Reason = s, fmt.Sprintf(format, args...)
}

// A triple is three neighbouring levels.
type triple struct {
	d1, d2 float64 // Δ₁ and Δ₂
	fine   float64
	factor float64
	order  float64 // NaN if Δ₁Δ₂ ≤ 0
}

func newTriple(v []float64, factor float64) triple {
	t := triple{d1: v[1] - v[0], d2: v[2] - v[1], fine: v[2], factor: factor, order: math.NaN()}
	if ratio := t.d1 / t.d2; ratio > 0 && !math.IsInf(ratio, 0) {
		t.order = math.Log(ratio) / math.Log(factor)
	}
	return t
}

// limit returns the value extrapolated with the order p.
func (t triple) limit(p float64) float64 {
	return t.fine + t.d2/math.Expm1(p*math.Log(t.factor))
}

// refuse returns Asymptotic, or why the triple cannot be extrapolated.
func (t triple) refuse(expected, noise float64) (Status, string) {
	a1, a2 := math.Abs(t.d1), math.Abs(t.d2)
	numbers := fmt.Sprintf("%.3g, then %.3g", t.d1, t.d2)
	switch {
	case a2 <= noise && a1 <= noise:
		return AtRounding, fmt.Sprintf("the last two differences are rounding: %s", numbers)
	case a2 <= noise:
		return AtRounding, fmt.Sprintf("the last difference is rounding, so that no order can be told: %s", numbers)
	case a2 >= a1:
		return NotShrinking, fmt.Sprintf("differences do not shrink: %s", numbers)
	case t.d1*t.d2 < 0 || math.IsNaN(t.order):
		return ChangingSign, fmt.Sprintf("differences change sign: %s", numbers)
	case expected > 0 && math.Abs(t.order-expected) > max(0.5, expected/4):
		return UnexpectedOrder, fmt.Sprintf("observed order %.2f, expected %g", t.order, expected)
	case expected == 0 && t.order < slowest:
		return NotShrinking, fmt.Sprintf("differences hardly shrink: %s, order %.2f", numbers, t.order)
	case expected == 0 && t.order > fastest:
		return UnexpectedOrder, fmt.Sprintf("observed order %.2f; above %g the last difference is small by chance or convergence is no power of h", t.order, fastest)
	}
	return Asymptotic, ""
}
