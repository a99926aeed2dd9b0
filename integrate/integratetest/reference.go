package integratetest

import (
	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// A reference solves a trial far more accurately than any method under test:
// the modified midpoint rule with 2, 4, …, 16 substeps, extrapolated in their
// squares by Aitken and Neville, order 16 [Hairer, Nørsett & Wanner 1993,
// Solving Ordinary Differential Equations I, §II.9].
type reference struct {
	tr    trial
	from  float64 // start of the trial
	acc   *action.Accelerator
	now   field.State
	t     float64
	old   field.State
	mid   field.State
	slope field.State
	table [columns]field.State
}

const columns = 8

func newReference(tr trial) (*reference, error) {
	s, err := action.New(tr.block(1), tr.wave)
	if err != nil {
		return nil, err
	}
	acc, err := s.Accelerator()
	if err != nil {
		return nil, err
	}
	c := s.Components()
	r := &reference{tr: tr, acc: acc, from: s.Block().Time.From, t: s.Block().Time.From, now: tr.state(c)}
	empty := func() field.State { return field.NewState(c, tr.line.Sites) }
	r.old, r.mid, r.slope = empty(), empty(), empty()
	for j := range r.table {
		r.table[j] = empty()
	}
	return r, nil
}

// advance goes to time t in steps of at most 0.05.
func (r *reference) advance(t float64) {
	steps := int((t-r.t)/0.05) + 1
	begin := r.t
	for n := range steps {
		next := begin + (t-begin)*float64(n+1)/float64(steps)
		r.step(next - r.t)
		r.t = next
	}
}

func (r *reference) step(length float64) {
	for j := range r.table {
		r.midpoint(r.table[j], length, 2*(j+1))
		// The column is overwritten from the right, so that entry j−k of the
		// table holds T(j, k) afterwards.
		for k := j - 1; k >= 0; k-- {
			ratio := float64(j+1) / float64(k+1)
			a := 1 / (ratio*ratio - 1)
			for _, part := range [][2]field.Slice{{r.table[k].Field, r.table[k+1].Field}, {r.table[k].Rate, r.table[k+1].Rate}} {
				low, high := part[0], part[1]
				for i, v := range high.Data {
					low.Data[i] = v + a*(v-low.Data[i])
				}
			}
		}
	}
	r.now.CopyFrom(r.table[0])
}

// midpoint writes the modified midpoint rule with n substeps to dst.
func (r *reference) midpoint(dst field.State, length float64, n int) {
	h := length / float64(n)
	r.old.CopyFrom(r.now)
	r.mid.CopyFrom(r.now)
	r.add(r.mid, h, r.now, r.t)
	r.hold(r.mid, r.t+h)
	for m := 1; m < n; m++ {
		t := r.t + float64(m)*h
		r.add(r.old, 2*h, r.mid, t)
		r.hold(r.old, t+h)
		r.old, r.mid = r.mid, r.old
	}
	dst.CopyFrom(r.mid)
}

// add adds h·(φ_t, φ_tt) of the state at to dst.
func (r *reference) add(dst field.State, h float64, at field.State, t float64) {
	r.acc.At(r.slope.Rate, at, t)
	dst.Field.Axpy(h, at.Rate)
	dst.Rate.Axpy(h, r.slope.Rate)
}

// hold puts the ends that move in place.
func (r *reference) hold(st field.State, t float64) {
	for k, f := range r.tr.ends {
		if f == nil {
			continue
		}
		i := k * (st.Field.Sites - 1)
		for c := range st.Field.Components {
			st.Field.Component(c)[i], st.Rate.Component(c)[i] = f(t - r.from)
		}
	}
}
