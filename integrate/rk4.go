package integrate

import (
	"fmt"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// RK4 is the classical Runge–Kutta method of fourth order on (φ, φ_t) [Hairer,
// Nørsett & Wanner 1993, Solving Ordinary Differential Equations I, §II.1]. It
// takes losses of every kind and is not symplectic. At a held end that moves the
// loss β sees the central difference of the end's values, of second order.
type RK4 struct{}

var _ Method = RK4{}

// Name returns "RK4".
func (RK4) Name() string { return "RK4" }

// Limit returns 2√2, where the stability region meets the imaginary axis.
func (RK4) Limit() float64 { return 2.8284271247461903 }

// Start implements Method. Coefficients must be known between slices. A step too
// long for the losses is refused with [*Unstable], whose ω is then their rate of
// decay.
func (RK4) Start(p Problem) (Stepper, error) {
	acc, err := startBetween(p)
	if err != nil {
		return nil, fmt.Errorf("integrate: RK4: %w", err)
	}
	f := p.Start.Field
	r := &rk4{p: p, acc: acc, now: p.Start.Clone(), stage: field.NewState(f.Components, f.Sites)}
	for i := range r.slope {
		r.slope[i] = field.NewState(f.Components, f.Sites)
	}
	r.hold(r.now, 0)
	if p.Action.Conservative() != nil {
		if err := r.checkDecay(); err != nil {
			return nil, err
		}
	}
	return r, nil
}

// checkDecay returns *Unstable if the step is too long for the fastest decay that
// the losses cause at the start, d = max(α + 4β/h²)/ρ for uniform ones. The
// stability region of the method ends at −2.785 on the real axis. d is found by
// the power method, from the field that alternates from site to site.
func (r *rk4) checkDecay() error {
	const limit, rounds = 2.785, 30
	clock := r.p.Action.Block().Time
	with, without := r.slope[0].Rate, r.slope[1].Rate
	v, still := r.stage, r.slope[2]
	v.Field.CopyFrom(r.now.Field)
	still.Field.CopyFrom(r.now.Field)
	still.Rate.Zero()
	r.acc.At(without, still, clock.At(0))
	for c := range v.Rate.Components {
		for i := range v.Rate.Sites {
			v.Rate.Component(c)[i] = float64(1 - 2*(i%2))
		}
	}
	var d float64
	for range rounds {
		r.acc.At(with, v, clock.At(0))
		with.Axpy(-1, without)
		if d = with.MaxAbs() / v.Rate.MaxAbs(); d == 0 {
			return nil
		}
		v.Rate.Zero()
		v.Rate.Axpy(-1/with.MaxAbs(), with)
	}
	if clock.Step*d > limit {
		return fmt.Errorf("the losses decay too fast: %w", &Unstable{Method: "RK4", Step: clock.Step, Omega: d, Limit: limit, Largest: limit / d})
	}
	return nil
}

// startBetween returns the accelerator of a problem for a method that steps
// inside time links.
func startBetween(p Problem) (*action.Accelerator, error) {
	if !p.Second.Empty() {
		return nil, fmt.Errorf("a second slice is given; want a start from the field and its rate, or leapfrog")
	}
	return p.Action.Accelerator()
}

type rk4 struct {
	p     Problem
	acc   *action.Accelerator
	n     int
	now   field.State
	stage field.State
	slope [4]field.State // (φ_t, φ_tt) at each stage
}

// hold puts held ends in place after part of a step.
func (r *rk4) hold(st field.State, part float64) {
	clock := r.p.Action.Block().Time
	t := clock.At(r.n) + part*clock.Step
	r.p.place(st.Field, t)
	r.p.placeRate(st.Rate, t)
}

func (r *rk4) Step() {
	clock := r.p.Action.Block().Time
	t, k := clock.At(r.n), clock.Step
	parts := [4]float64{0, 0.5, 0.5, 1}
	at := r.now
	for m, part := range parts {
		if m > 0 {
			r.stage.CopyFrom(r.now)
			r.stage.Field.Axpy(part*k, r.slope[m-1].Field)
			r.stage.Rate.Axpy(part*k, r.slope[m-1].Rate)
			r.hold(r.stage, part)
			at = r.stage
		}
		r.slope[m].Field.CopyFrom(at.Rate)
		r.acc.At(r.slope[m].Rate, at, t+part*k)
	}
	for m, w := range [4]float64{1. / 6, 1. / 3, 1. / 3, 1. / 6} {
		r.now.Field.Axpy(w*k, r.slope[m].Field)
		r.now.Rate.Axpy(w*k, r.slope[m].Rate)
	}
	r.n++
	r.hold(r.now, 0)
}

func (r *rk4) Field() field.Slice    { return r.now.Field }
func (r *rk4) State(dst field.State) { dst.CopyFrom(r.now) }
func (r *rk4) Memory() []field.Slice { return []field.Slice{r.now.Field, r.now.Rate} }
func (r *rk4) Seek(n int)            { r.n = n }
