package integrate

import (
	"fmt"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/internal/kernel"
)

// Yoshida4 is the fourth-order symplectic method made of three leapfrog steps
// of the lengths w₁k, w₀k, w₁k, w₁ = 1/(2 − 2^⅓), w₀ = 1 − 2w₁ [Yoshida 1990,
// Phys. Lett. A 150, 262, eq. 2.11]. It refuses losses and open ends, whose
// backward substep would amplify.
type Yoshida4 struct{}

var _ Method = Yoshida4{}

const (
	yoshidaOuter = 1.3512071919596578 // w₁
	yoshidaInner = 1 - 2*yoshidaOuter // w₀
)

// Name returns "Yoshida 4".
func (Yoshida4) Name() string { return "Yoshida 4" }

// Limit returns 1.573, the stability limit of the composition on a linear
// oscillator.
func (Yoshida4) Limit() float64 { return 1.573 }

// Start implements Method. Coefficients must be known between slices.
func (Yoshida4) Start(p Problem) (Stepper, error) {
	if err := p.Action.Conservative(); err != nil {
		return nil, fmt.Errorf("integrate: Yoshida 4 steps backward in time inside each step: %w", err)
	}
	sub, err := startBetween(p)
	if err != nil {
		return nil, fmt.Errorf("integrate: Yoshida 4: %w", err)
	}
	f := p.Start.Field
	y := &yoshida{p: p, sub: sub, now: p.Start.Clone(), other: field.NewSlice(f.Components, f.Sites)}
	clock := p.Action.Block().Time
	y.p.place(y.now.Field, clock.At(y.n))
	y.p.placeRate(y.now.Rate, clock.At(y.n))
	y.block = p.block(3*f.Components, y.part)
	return y, nil
}

type yoshida struct {
	p     Problem
	sub   *action.Substeps
	block blocked
	n     int
	now   field.State
	other field.Slice // the field goes to and fro between it and now
}

// A step is a drift and three pairs of kick and drift, of these parts of k. The
// last drift of a step and the first of the next are not made one: the bits of a
// run must not depend on where somebody looks.
var (
	yoshidaKicks  = [4]float64{0, yoshidaOuter, yoshidaInner, yoshidaOuter}
	yoshidaDrifts = [4]float64{0.5 * yoshidaOuter, 0.5 * (yoshidaOuter + yoshidaInner), 0.5 * (yoshidaOuter + yoshidaInner), 0.5 * yoshidaOuter}
)

func (y *yoshida) Step() {
	clock := y.p.Action.Block().Time
	start, k := clock.At(y.n), clock.Step
	from, to := y.now.Field, y.other
	var part float64 // of the step that the field has drifted
	for m := range yoshidaKicks {
		y.drift(to, from, m, start+float64(part*k), 0, from.Sites)
		part += yoshidaDrifts[m]
		y.p.place(to, start+float64(part*k))
		from, to = to, from
	}
	y.n++
	y.p.place(y.now.Field, clock.At(y.n))
	y.p.placeRate(y.now.Rate, clock.At(y.n))
}

// drift makes sub-step m at time t at the sites from lo to hi−1.
func (y *yoshida) drift(to, from field.Slice, m int, t float64, lo, hi int) {
	k := y.p.Action.Block().Time.Step
	if m > 0 {
		y.sub.KickDrift(to, from, y.now.Rate, yoshidaKicks[m]*k, yoshidaDrifts[m]*k, t, lo, hi)
		return
	}
	for c := range from.Components {
		kernel.AddScaled(to.Component(c)[lo:hi], from.Component(c)[lo:hi], yoshidaDrifts[m]*k, y.now.Rate.Component(c)[lo:hi])
	}
}

// Advance blocks the sub-steps in time where no end moves.
func (y *yoshida) Advance(steps int) {
	if y.sub.Steady() && y.p.keepsEnds() {
		y.block.advance(4 * steps)
		y.n += steps
		return
	}
	for range steps {
		y.Step()
	}
}

// part makes sub-step s of a run at the sites from lo to hi−1.
func (y *yoshida) part(s, lo, hi int) {
	from, to := y.now.Field, y.other
	if s%2 == 1 {
		from, to = to, from
	}
	y.drift(to, from, s%4, 0, lo, hi) // the same at all times
}

func (y *yoshida) Field() field.Slice    { return y.now.Field }
func (y *yoshida) State(dst field.State) { dst.CopyFrom(y.now) }
func (y *yoshida) Memory() []field.Slice { return []field.Slice{y.now.Field, y.now.Rate} }
func (y *yoshida) Seek(n int)            { y.n = n }
