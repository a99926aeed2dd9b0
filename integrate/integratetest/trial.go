package integratetest

import (
	"fmt"
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// A trial is a run that every method is put through, on a fixed line and over a
// fixed time, with any number of steps.
type trial struct {
	name    string
	line    lattice.Axis
	wave    action.Wave
	start   field.Profile
	ends    [2]func(t float64) (value, rate float64) // of held ends; nil keeps them
	may     bool                                     // the method may refuse it
	sampled bool                                     // σ is handed over as a table of the slices
}

// length is the time over which trials run.
const length = 3.0

// trials returns the runs by which the order is measured.
func trials(c Claims) []trial {
	line := lattice.Axis{From: -2.5, Step: 0.5, Sites: 11}
	wide := func(end lattice.End) lattice.Axis {
		a := line
		a.Left, a.Right = end, end
		return a
	}
	ring := line
	ring.Sites, ring.Periodic, ring.Jump = 10, true, []float64{2 * math.Pi, 0}
	hump := func(x, t float64) (value, rate float64) {
		return 0.8 + 0.9*math.Exp(-x*x), 0.5 * x * math.Exp(-x*x)
	}
	breathing := action.Over(func(x, t float64) float64 { return 1 + 0.5*math.Sin(1.5*t+x) })
	return []trial{
		{
			name: "φ⁴ on a driven, inhomogeneous line", line: line, start: hump,
			wave: action.Wave{
				Potential: action.Phi4{},
				Rho:       action.Along(func(x float64) float64 { return 1.2 + 0.2*math.Cos(x) }),
				Kappa:     action.Along(func(x float64) float64 { return 1 + 0.3*math.Sin(x) }),
				Source:    action.Over(func(x, t float64) float64 { return 0.4 * math.Sin(2*t+x) }),
			},
		},
		{
			name: "two components on a ring, links of fourth order", line: ring,
			wave: action.Wave{Potential: action.Each{Potential: action.SineGordon{}, N: 2}, Links: action.Fourth},
			start: func(x, t float64) (value, rate float64) {
				return math.Pi + 2*math.Pi*x/5 + 0.3*math.Sin(2*math.Pi*x/5), 0.4 * math.Cos(2*math.Pi*x/5)
			},
		},
		{
			name: "sine-Gordon between held ends that move", line: wide(lattice.Held),
			wave: action.Wave{Potential: action.SineGordon{}},
			ends: [2]func(t float64) (value, rate float64){
				func(t float64) (value, rate float64) { return math.Sin(1.5 * t), 1.5 * math.Cos(1.5*t) },
				func(t float64) (value, rate float64) { return 0.5 * t * t, t },
			},
			start: func(x, t float64) (value, rate float64) {
				// it meets the left end's value and rate at t = 0
				return 0.4 * (x + 2.5) * (2.5 - x), 1.5 * (2.5 - x) / 5
			},
		},
		{
			name: "φ⁴ between held ends that stay", line: wide(lattice.Held), start: hump,
			wave: action.Wave{Potential: action.Phi4{}},
		},
		{
			name: "losses α and β", line: line, start: hump, may: !c.Losses,
			wave: action.Wave{Potential: action.Phi4{}, Alpha: action.Uniform(0.3), Beta: action.Uniform(0.2)},
		},
		{
			name: "open ends", line: wide(lattice.Open), start: hump, may: !c.Losses,
			wave: action.Wave{Potential: action.Phi4{}},
		},
		{
			name: "a table of σ at the slices", line: line, start: hump, may: !c.Tables, sampled: true,
			wave: action.Wave{Potential: action.Phi4{}, Sigma: breathing},
		},
	}
}

func (tr trial) block(steps int) lattice.Block {
	clock := lattice.Axis{From: 0.25, Step: length / float64(steps), Sites: steps + 1}
	return lattice.Block{Time: clock, Space: tr.line}
}

// problem returns the trial as a method gets it.
func (tr trial) problem(steps int) (integrate.Problem, error) {
	b := tr.block(steps)
	wave := tr.wave
	if tr.sampled {
		var values action.Table
		for n := range b.Slices() {
			for i := range b.Sites() {
				values = append(values, tr.wave.Sigma.(action.Over)(b.Space.At(i), b.Time.At(n)))
			}
		}
		wave.Sigma = values
	}
	s, err := action.New(b, wave)
	if err != nil {
		return integrate.Problem{}, fmt.Errorf("integratetest: trial of %s: %w", tr.name, err)
	}
	p := integrate.Problem{Action: s, Start: tr.state(s.Components())}
	for k, f := range tr.ends {
		if f == nil {
			continue
		}
		from := b.Time.From
		value := func(_ int, t float64) float64 {
			v, _ := f(t - from)
			return v
		}
		if k == 0 {
			p.Ends.Left = value
		} else {
			p.Ends.Right = value
		}
	}
	return p, nil
}

// state returns the start; the components differ by a factor.
func (tr trial) state(components int) field.State {
	one := tr.start.On(tr.line, 0)
	st := field.NewState(components, tr.line.Sites)
	for c := range components {
		scale := 1 / float64(1+c)
		for i, v := range one.Field.Component(0) {
			st.Field.Component(c)[i] = scale * v
			st.Rate.Component(c)[i] = scale * one.Rate.Component(0)[i]
		}
	}
	for k, f := range tr.ends {
		if f != nil {
			i := k * (tr.line.Sites - 1)
			for c := range components {
				st.Field.Component(c)[i], st.Rate.Component(c)[i] = f(0)
			}
		}
	}
	if f := tr.ends; f[0] == nil && tr.line.Left == lattice.Held {
		for c := range components {
			r := st.Rate.Component(c)
			r[0], r[len(r)-1] = 0, 0
		}
	}
	return st
}
