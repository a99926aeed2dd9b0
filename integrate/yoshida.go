package integrate

import (
	"fmt"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
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
	acc, err := startBetween(p)
	if err != nil {
		return nil, fmt.Errorf("integrate: Yoshida 4: %w", err)
	}
	f := p.Start.Field
	y := &yoshida{p: p, acc: acc, now: p.Start.Clone(), kick: field.NewSlice(f.Components, f.Sites)}
	clock := p.Action.Block().Time
	y.p.place(y.now.Field, clock.At(y.n))
	y.p.placeRate(y.now.Rate, clock.At(y.n))
	return y, nil
}

type yoshida struct {
	p    Problem
	acc  *action.Accelerator
	n    int
	now  field.State
	kick field.Slice
}

func (y *yoshida) Step() {
	clock := y.p.Action.Block().Time
	start, k := clock.At(y.n), clock.Step
	var part float64 // of the step that the field has drifted
	drift := func(w float64) {
		y.now.Field.Axpy(w*k, y.now.Rate)
		part += w
		y.p.place(y.now.Field, start+part*k)
	}
	for m, w := range [3]float64{yoshidaOuter, yoshidaInner, yoshidaOuter} {
		before := 0.5 * w
		if m > 0 {
			before = 0.5 * (yoshidaOuter + yoshidaInner)
		}
		drift(before)
		y.acc.At(y.kick, y.now, start+part*k)
		y.now.Rate.Axpy(w*k, y.kick)
	}
	drift(0.5 * yoshidaOuter)
	y.n++
	y.p.place(y.now.Field, clock.At(y.n))
	y.p.placeRate(y.now.Rate, clock.At(y.n))
}

func (y *yoshida) Field() field.Slice    { return y.now.Field }
func (y *yoshida) State(dst field.State) { dst.CopyFrom(y.now) }
func (y *yoshida) Memory() []field.Slice { return []field.Slice{y.now.Field, y.now.Rate} }
func (y *yoshida) Seek(n int)            { y.n = n }
