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
	sub, err := startBetween(p)
	if err != nil {
		return nil, fmt.Errorf("integrate: RK4: %w", err)
	}
	f := p.Start.Field
	r := &rk4{p: p, sub: sub}
	r.stage[0] = p.Start.Clone()
	for m := range r.stage[1:] {
		r.stage[1+m] = field.NewState(f.Components, f.Sites)
	}
	r.hold(r.stage[0], 0)
	if p.Action.Conservative() != nil {
		if err := r.checkDecay(); err != nil {
			return nil, err
		}
	}
	r.block = p.block(8*f.Components, r.part)
	return r, nil
}

// checkDecay returns *Unstable if the step is too long for the fastest decay that
// the losses cause at the start, d = max(α + 4β/h²)/ρ for uniform ones. The
// stability region of the method ends at −2.785 on the real axis. d is found by
// the power method, from the field that alternates from site to site.
func (r *rk4) checkDecay() error {
	const limit, rounds = 2.785, 30
	clock := r.p.Action.Block().Time
	acc, err := r.p.Action.Accelerator()
	if err != nil {
		return err
	}
	v, still := r.stage[0].Clone(), r.stage[0].Clone()
	with, without := v.Rate.Clone(), v.Rate.Clone()
	still.Rate.Zero()
	acc.At(without, still, clock.At(0))
	for c := range v.Rate.Components {
		for i := range v.Rate.Sites {
			v.Rate.Component(c)[i] = float64(1 - 2*(i%2))
		}
	}
	var d float64
	for range rounds {
		acc.At(with, v, clock.At(0))
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

// startBetween returns the sub-steps of a problem for a method that steps inside
// time links.
func startBetween(p Problem) (*action.Substeps, error) {
	if !p.Second.Empty() {
		return nil, fmt.Errorf("a second slice is given; want a start from the field and its rate, or leapfrog")
	}
	return p.Action.Substeps()
}

type rk4 struct {
	p     Problem
	sub   *action.Substeps
	block blocked
	n     int
	stage [4]field.State // the first is the state itself
}

// hold puts held ends in place after part of a step.
func (r *rk4) hold(st field.State, part float64) {
	clock := r.p.Action.Block().Time
	t := clock.At(r.n) + float64(part*clock.Step)
	r.p.place(st.Field, t)
	r.p.placeRate(st.Rate, t)
}

// rk4Parts are the parts of a step between the start and the stages.
var rk4Parts = [5]float64{0, 0.5, 0.5, 1, 1}

func (r *rk4) Step() {
	for m := range r.stage {
		r.substep(m, 0, r.stage[0].Field.Sites)
		if m < 3 {
			r.hold(r.stage[m+1], rk4Parts[m+1])
		}
	}
	r.n++
	r.hold(r.stage[0], 0)
}

// substep makes the stage after stage m, or the end of the step after the last,
// at the sites from lo to hi−1.
func (r *rk4) substep(m, lo, hi int) {
	clock := r.p.Action.Block().Time
	k, st := clock.Step, &r.stage
	t := clock.At(r.n) + float64(rk4Parts[m]*k)
	if m < 3 {
		r.sub.Stage(st[m+1], st[m], st[0], rk4Parts[m+1]*k, t, lo, hi)
		return
	}
	r.sub.Finish(st[0], st[1].Rate, st[2].Rate, st[3], k/6, t, lo, hi)
}

// Advance blocks the stages in time where no end moves.
func (r *rk4) Advance(steps int) {
	if r.sub.Steady() && r.p.keepsEnds() {
		r.block.advance(4 * steps)
		r.n += steps
		return
	}
	for range steps {
		r.Step()
	}
}

// part makes sub-step s of a run, which is the same at all times.
func (r *rk4) part(s, lo, hi int) { r.substep(s%4, lo, hi) }

func (r *rk4) Field() field.Slice    { return r.stage[0].Field }
func (r *rk4) State(dst field.State) { dst.CopyFrom(r.stage[0]) }
func (r *rk4) Memory() []field.Slice { return []field.Slice{r.stage[0].Field, r.stage[0].Rate} }
func (r *rk4) Seek(n int)            { r.n = n }
