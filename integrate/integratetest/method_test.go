package integratetest_test

import (
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/integrate/integratetest"
)

// A variant is a method made by hand, good or bad.
type variant struct {
	name  string
	limit float64
	start func(p integrate.Problem) (integrate.Stepper, error)
}

func (v variant) Name() string                                         { return v.name }
func (v variant) Limit() float64                                       { return v.limit }
func (v variant) Start(p integrate.Problem) (integrate.Stepper, error) { return v.start(p) }

// euler is the symplectic Euler method, order 1, and what can be done wrong
// with it.
type euler struct {
	p   integrate.Problem
	acc *action.Accelerator
	n   int
	now field.State
	f   field.Slice

	explicit  bool // the field moves with the old rate: explicit Euler
	frozen    bool // the force is always that of the first slice's time
	looseEnds bool // ends that move are forgotten
	lossless  bool // the force does not see the rate
}

func newEuler(p integrate.Problem, change func(e *euler)) (integrate.Stepper, error) {
	e := &euler{p: p, now: p.Start.Clone(), f: field.NewSlice(p.Start.Field.Components, p.Start.Field.Sites)}
	change(e)
	if err := p.Action.Conservative(); err != nil && !e.lossless {
		return nil, err
	}
	if !p.Second.Empty() {
		return nil, errSecond
	}
	acc, err := p.Action.Accelerator()
	e.acc = acc
	return e, err
}

var errSecond = &refusal{}

type refusal struct{}

func (*refusal) Error() string { return "a second slice is given" }

func (e *euler) Step() {
	clock := e.p.Action.Block().Time
	k, t := clock.Step, clock.At(e.n)
	if e.frozen {
		t = clock.From
	}
	at := e.now
	if e.lossless {
		at.Rate = e.f
		at.Rate.Zero()
	}
	if e.explicit {
		e.acc.At(e.f, at, t)
		e.now.Field.Axpy(k, e.now.Rate)
		e.now.Rate.Axpy(k, e.f)
	} else {
		e.acc.At(e.f, at, t)
		e.now.Rate.Axpy(k, e.f)
		e.now.Field.Axpy(k, e.now.Rate)
	}
	e.n++
	if e.looseEnds {
		return
	}
	for c := range e.f.Components {
		v := e.now.Field.Component(c)
		if f := e.p.Ends.Left; f != nil {
			v[0] = f(c, clock.At(e.n))
		}
		if f := e.p.Ends.Right; f != nil {
			v[len(v)-1] = f(c, clock.At(e.n))
		}
	}
}

func (e *euler) Field() field.Slice    { return e.now.Field }
func (e *euler) State(dst field.State) { dst.CopyFrom(e.now) }
func (e *euler) Memory() []field.Slice { return []field.Slice{e.now.Field, e.now.Rate} }
func (e *euler) Seek(n int)            { e.n = n }

func withEuler(limit float64, change func(e *euler)) integrate.Method {
	return variant{"Euler", limit, func(p integrate.Problem) (integrate.Stepper, error) { return newEuler(p, change) }}
}

// spoilt wraps the steppers of a good method.
func spoilt(m integrate.Method, wrap func(st integrate.Stepper, p integrate.Problem) integrate.Stepper) integrate.Method {
	return variant{m.Name(), m.Limit(), func(p integrate.Problem) (integrate.Stepper, error) {
		st, err := m.Start(p)
		if err != nil {
			return nil, err
		}
		return wrap(st, p), nil
	}}
}

// What the wrapped steppers do wrong.
type (
	forgetful struct{ integrate.Stepper } // Seek does nothing
	wasteful  struct{ integrate.Stepper } // Step allocates
	partial   struct{ integrate.Stepper } // Memory leaves an array out
	late      struct{ integrate.Stepper } // the rate of State is off
	mismatch  struct{ integrate.Stepper } // State shows another field
	meddling  struct {                    // Step writes to the start
		integrate.Stepper
		start field.State
	}
)

var sink []float64

func (forgetful) Seek(int) {}
func (s wasteful) Step() {
	s.Stepper.Step()
	sink = make([]float64, 8)
}
func (s partial) Memory() []field.Slice { return s.Stepper.Memory()[1:] }
func (s late) State(dst field.State) {
	s.Stepper.State(dst)
	dst.Rate.Axpy(0.01, dst.Field)
}
func (s mismatch) State(dst field.State) {
	s.Stepper.State(dst)
	dst.Field.Axpy(1e-9, dst.Rate)
}
func (s meddling) Step() {
	s.Stepper.Step()
	s.start.Rate.Zero()
}

func TestMethodFindsFaults(t *testing.T) {
	good := func(*euler) {}
	leap := integrate.Leapfrog{}
	for _, tt := range []struct {
		name   string
		method integrate.Method
		claims integratetest.Claims
		want   []string // said by the error; none means nil
	}{
		{"symplectic Euler as what it is", withEuler(2, good), integratetest.Claims{Order: 1, Symplectic: true}, nil},
		{"first order claimed as second", withEuler(2, good), integratetest.Claims{}, []string{"order of the field 1.0", "want 2"}},
		{"RK4 claimed as fifth", integrate.RK4{}, integratetest.Claims{Order: 5}, []string{"order of the field 4", "want 5"}},
		{"Yoshida claimed as sixth", integrate.Yoshida4{}, integratetest.Claims{Order: 6}, []string{"order of the field 4", "want 6"}},
		{"not reversible", withEuler(2, good), integratetest.Claims{Order: 1, Reversible: true}, []string{"reversibility: 60 steps there and back"}},
		{
			"RK4 claimed reversible and symplectic", integrate.RK4{}, integratetest.Claims{Order: 4, Reversible: true, Symplectic: true},
			[]string{"reversibility:", "symplecticity: one step", "energy: drifts by -"},
		},
		{"explicit Euler", withEuler(2, func(e *euler) { e.explicit = true }), integratetest.Claims{Order: 1}, []string{"limit: 2: at kω = 0.5, 0.25 of it, an oscillation grew"}},
		{"limit too high", variant{"leapfrog", 2.1, leap.Start}, integratetest.Claims{}, []string{"limit: 2.1: at kω = 2.079, 0.99 of it"}},
		{"limit too low", variant{"leapfrog", 1.9, leap.Start}, integratetest.Claims{}, []string{"limit: 1.9 is too low"}},
		{"no limit", variant{"leapfrog", math.Inf(1), leap.Start}, integratetest.Claims{}, []string{"limit: is infinite, but at kω = 20"}},
		{"limit not a number", variant{"leapfrog", math.NaN(), leap.Start}, integratetest.Claims{}, []string{"limit: is NaN"}},
		{"no name", variant{"", 2, leap.Start}, integratetest.Claims{}, []string{"name: is empty"}},
		{"negative order", leap, integratetest.Claims{Order: -1}, []string{"order -1"}},
		{"force of a wrong time", withEuler(2, func(e *euler) { e.frozen = true }), integratetest.Claims{Order: 1}, []string{"inhomogeneous line: order of the field 0.0"}},
		{"ends that move forgotten", withEuler(2, func(e *euler) { e.looseEnds = true }), integratetest.Claims{Order: 1}, []string{"held end at site 0 is 0.2142"}},
		{"losses accepted and forgotten", withEuler(2, func(e *euler) { e.lossless = true }), integratetest.Claims{Order: 1}, []string{"losses α and β: order of the field", "open ends: order of the field"}},
		{"losses claimed and refused", integrate.Yoshida4{}, integratetest.Claims{Order: 4, Losses: true}, []string{"losses α and β: refused", "open ends: refused"}},
		{"pair claimed and refused", integrate.RK4{}, integratetest.Claims{Order: 4, Pair: true}, []string{"a given second slice: refused"}},
		{"tables claimed and refused", integrate.RK4{}, integratetest.Claims{Order: 4, Tables: true}, []string{"a table of σ at the slices: refused"}},
		{"pair accepted and forgotten", variant{"leapfrog", 2, func(p integrate.Problem) (integrate.Stepper, error) {
			p.Second = field.Slice{}
			return leap.Start(p)
		}}, integratetest.Claims{}, []string{"a given second slice: the second slice is off by"}},
		{"Seek forgotten", spoilt(leap, func(st integrate.Stepper, _ integrate.Problem) integrate.Stepper { return forgetful{st} }), integratetest.Claims{}, []string{"inhomogeneous line: restarted at slice 37 by Memory and Seek, the state differs at slice 38"}},
		{"memory left out", spoilt(integrate.RK4{}, func(st integrate.Stepper, _ integrate.Problem) integrate.Stepper { return partial{st} }), integratetest.Claims{Order: 4}, []string{"the field differs at slice 37"}},
		{"allocations", spoilt(leap, func(st integrate.Stepper, _ integrate.Problem) integrate.Stepper { return wasteful{st} }), integratetest.Claims{}, []string{"a Step makes 1 allocations"}},
		{"wrong rate", spoilt(leap, func(st integrate.Stepper, _ integrate.Problem) integrate.Stepper { return late{st} }), integratetest.Claims{}, []string{"order of the rate", "state at the start is off by 0 in the field and 0.01"}},
		{"State beside Field", spoilt(leap, func(st integrate.Stepper, _ integrate.Problem) integrate.Stepper { return mismatch{st} }), integratetest.Claims{}, []string{"State and Field differ by"}},
		{"start written to", spoilt(leap, func(st integrate.Stepper, p integrate.Problem) integrate.Stepper { return meddling{st, p.Start} }), integratetest.Claims{}, []string{"the start of the problem was changed"}},
		{"refuses all", variant{"idle", 2, func(integrate.Problem) (integrate.Stepper, error) { return nil, errSecond }}, integratetest.Claims{}, []string{"φ⁴ on a driven, inhomogeneous line: refused", "limit: refused"}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			err := integratetest.Method(tt.method, tt.claims)
			if (err == nil) != (tt.want == nil) {
				t.Fatalf("error %v; want one: %v", err, tt.want != nil)
			}
			for _, want := range tt.want {
				if !strings.Contains(err.Error(), want) {
					t.Errorf("error does not say %q:\n%v", want, err)
				}
			}
		})
	}
	if err := integratetest.Method(nil, integratetest.Claims{}); err == nil || !strings.Contains(err.Error(), "nil") {
		t.Errorf("nil method: error %v", err)
	}
}
