package integrate_test

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"math"
	"runtime"
	"strings"
	"testing"
	"time"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

func TestRecordsEverySlice(t *testing.T) {
	s, start, set := driven(t, integrate.Leapfrog{})
	whole := evolve(t, s, start, set)
	if whole.History.Block.Slices() != 151 || whole.Steps != 150 || whole.Slice != 150 || whole.Time != s.Block().Time.To() || whole.Stopped != nil {
		t.Fatalf("whole run: %d slices recorded, %d steps to slice %d at %v", whole.History.Block.Slices(), whole.Steps, whole.Slice, whole.Time)
	}
	if d := whole.History.Slice(150).MaxDifference(whole.Final.Field); d != 0 {
		t.Errorf("the last recorded slice differs from the final state by %g", d)
	}
	for _, tt := range []struct{ every, slices int }{{0, 151}, {1, 151}, {2, 76}, {7, 22}, {150, 2}, {200, 1}, {-1, 0}, {-5, 0}} {
		set.Every = tt.every
		run := evolve(t, s, start, set)
		clock := run.History.Block.Time
		if clock.Sites != tt.slices || len(run.History.Data) != tt.slices*s.Block().Sites() {
			t.Errorf("every %d: %d slices, %d values; want %d slices", tt.every, clock.Sites, len(run.History.Data), tt.slices)
			continue
		}
		for n := range clock.Sites {
			at := n * max(tt.every, 1)
			if d := run.History.Slice(n).MaxDifference(whole.History.Slice(at)); d != 0 {
				t.Errorf("every %d: slice %d differs from slice %d of the whole by %g", tt.every, n, at, d)
			}
			// From + n·(every·k) against From + (n·every)·k: rounding
			if math.Abs(clock.At(n)-s.Block().Time.At(at)) > 1e-12 {
				t.Errorf("every %d: slice %d at t = %v; want %v", tt.every, n, clock.At(n), s.Block().Time.At(at))
			}
		}
		if d := run.Final.Field.MaxDifference(whole.Final.Field); d != 0 {
			t.Errorf("every %d: the end differs by %g", tt.every, d)
		}
	}
}

// Observers see the first slice, every stride-th and the last, with a state
// whose field is the field.
func TestObservers(t *testing.T) {
	s, start, set := driven(t, integrate.Leapfrog{})
	seen := map[int][]int{}
	for _, every := range []int{0, 1, 40, 1000} {
		set.Observers = append(set.Observers, integrate.Watch{Every: every, Do: func(m *integrate.Moment) error {
			seen[every] = append(seen[every], m.Slice)
			if m.Field().MaxDifference(m.State().Field) != 0 || m.Time != s.Block().Time.At(m.Slice) || m.First != 0 || m.Last != 150 || m.Action != s {
				return fmt.Errorf("moment %+v", m)
			}
			return nil
		}})
	}
	evolve(t, s, start, set)
	for every, want := range map[int]string{40: "[0 40 80 120 150]", 1000: "[0 150]"} {
		if got := fmt.Sprint(seen[every]); got != want {
			t.Errorf("every %d: called at %s; want %s", every, got, want)
		}
	}
	for _, every := range []int{0, 1} {
		if n := len(seen[every]); n != 151 {
			t.Errorf("every %d: called %d times; want 151", every, n)
		}
	}
}

func TestStopAndObserverErrors(t *testing.T) {
	s, start, set := driven(t, integrate.RK4{})
	broken := errors.New("disk full")
	for _, give := range []error{fmt.Errorf("front has passed: %w", integrate.Stop), broken} {
		set.Observers = []integrate.Observer{integrate.Watch{Every: 10, Do: func(m *integrate.Moment) error {
			if m.Slice >= 30 {
				return give
			}
			return nil
		}}}
		run, err := integrate.Evolve(context.Background(), s, start, set)
		if run == nil || run.Slice != 30 || run.History.Block.Slices() != 31 {
			t.Fatalf("%v: run %+v; want it up to slice 30", give, run)
		}
		if give == broken {
			if !errors.Is(err, broken) || run.Stopped != nil || !strings.Contains(err.Error(), "integrate.Watch at t = 2.6999") {
				t.Errorf("error %v, stopped %v; want the observer's error with its time", err, run.Stopped)
			}
		} else if err != nil || run.Stopped != give {
			t.Errorf("error %v, stopped %v; want the reason as Stopped only", err, run.Stopped)
		}
	}
}

func TestProgress(t *testing.T) {
	s, start, set := driven(t, integrate.Leapfrog{})
	var out bytes.Buffer
	set.Observers = []integrate.Observer{&integrate.Progress{W: &out, Interval: time.Nanosecond, Every: 50}}
	evolve(t, s, start, set)
	lines := strings.Split(strings.TrimSpace(out.String()), "\n")
	if len(lines) != 3 || !strings.Contains(lines[0], " 33.3 %") || !strings.Contains(lines[2], "100.0 %") || !strings.HasSuffix(lines[2], "0s to go") {
		t.Errorf("wrote %q; want three lines, at 33, 67 and 100 %%", out.String())
	}
	out.Reset()
	set.Observers = []integrate.Observer{&integrate.Progress{W: &out, Interval: time.Hour}}
	evolve(t, s, start, set)
	if n := strings.Count(out.String(), "\n"); n != 1 {
		t.Errorf("wrote %q; want the last line only", out.String())
	}
}

func TestMeanRateNeedsTwoSlices(t *testing.T) {
	s, start, set := driven(t, integrate.Leapfrog{})
	late := &integrate.MeanRate{From: s.Block().Time.To()}
	account := &integrate.Ledger{Every: 1000}
	set.Observers = []integrate.Observer{late, integrate.Watch{Do: func(m *integrate.Moment) error {
		if m.Slice == 0 {
			if r := account.Residual(); !math.IsNaN(r) {
				t.Errorf("residual of an empty account is %v; want NaN", r)
			}
		}
		return nil
	}}}
	evolve(t, s, start, set)
	if v := late.Value(); !math.IsNaN(v) {
		t.Errorf("mean rate of one slice is %v; want NaN", v)
	}
}

// The start is the caller's and stays as it was.
func TestStartIsLeftAlone(t *testing.T) {
	for _, m := range methods {
		s, start, set := driven(t, m)
		before := start.Clone()
		evolve(t, s, start, set)
		if start.Field.MaxDifference(before.Field)+start.Rate.MaxDifference(before.Rate) != 0 {
			t.Errorf("%s changed its start", m.Name())
		}
	}
}

// The same bits on one core and on two.
func TestSameBitsForAnyGOMAXPROCS(t *testing.T) {
	for _, m := range methods {
		s, start, set := driven(t, m)
		two := evolve(t, s, start, set)
		before := runtime.GOMAXPROCS(1)
		one := evolve(t, s, start, set)
		runtime.GOMAXPROCS(before)
		for i, v := range two.History.Data {
			if math.Float64bits(v) != math.Float64bits(one.History.Data[i]) {
				t.Errorf("%s: value %d is %v on one core, %v on %d", m.Name(), i, one.History.Data[i], v, before)
				break
			}
		}
	}
}

func TestEvolveRefuses(t *testing.T) {
	line := span(0, 4, 20)
	clock := span(0, 1, 10)
	plain := discrete(t, clock, line, action.Wave{})
	held := discrete(t, clock, between(line, lattice.Held, lattice.Free), action.Wave{})
	good := field.NewState(1, line.Sites)
	spoilt := func(f func(st *field.State)) field.State {
		st := good.Clone()
		f(&st)
		return st
	}
	zero := func(int, float64) float64 { return 0 }
	rows := make(action.Table, 11*21)
	short := good.Field.Clone().Part(0, 20)
	for _, tt := range []struct {
		name  string
		s     *action.Discrete
		start field.State
		set   integrate.Settings
		want  string
	}{
		{"no action", nil, good, integrate.Settings{}, "action is nil"},
		{"no start", plain, field.State{}, integrate.Settings{}, "start: field: slice of 0 components × 0 sites"},
		{"NaN in the field", plain, spoilt(func(st *field.State) { st.Field.Data[7] = math.NaN() }), integrate.Settings{}, "start: field: component 0 is NaN at site 7"},
		{"infinite rate", plain, spoilt(func(st *field.State) { st.Rate.Data[2] = math.Inf(1) }), integrate.Settings{}, "start: rate: field: component 0 is +Inf at site 2"},
		{"rate of another shape", plain, spoilt(func(st *field.State) { st.Rate = field.NewSlice(1, 3) }), integrate.Settings{}, "a rate of 1 × 3"},
		{"another line", plain, field.NewState(1, 30), integrate.Settings{}, "state of 1 components × 30 sites; the block has 1 × 21"},
		{"more components", plain, field.NewState(2, 21), integrate.Settings{}, "state of 2 components"},
		{"Euclidean", discrete(t, clock, line, action.Wave{Signature: action.Euclidean}), good, integrate.Settings{}, "Euclidean"},
		{"step above the limit", discrete(t, span(0, 10, 10), line, action.Wave{}), good, integrate.Settings{}, "time step 1 is above the stability limit of leapfrog"},
		{"short second slice", plain, good, integrate.Settings{Second: short}, "second slice of 1 components × 20 sites after a start of 1 × 21"},
		{"NaN in the second slice", plain, good, integrate.Settings{Second: spoilt(func(st *field.State) { st.Field.Data[4] = math.NaN() }).Field}, "second slice: field: component 0 is NaN at site 4"},
		{"second slice for RK4", plain, good, integrate.Settings{Method: integrate.RK4{}, Second: good.Field}, "RK4: a second slice is given"},
		{"second slice for Yoshida", plain, good, integrate.Settings{Method: integrate.Yoshida4{}, Second: good.Field}, "Yoshida 4: a second slice is given"},
		{"second slice that moves a held end", held, good, integrate.Settings{Second: spoilt(func(st *field.State) { st.Field.Data[0] = 1 }).Field}, "second slice: held left end is 1"},
		{"nil observer", plain, good, integrate.Settings{Observers: []integrate.Observer{&integrate.Ledger{}, nil}}, "observer 1 is nil"},
		{"value at a free end", plain, good, integrate.Settings{Ends: integrate.Ends{Left: zero}}, "not held"},
		{"value at the other, free end", held, good, integrate.Settings{Ends: integrate.Ends{Right: zero}}, "not held"},
		{"losses for Yoshida", discrete(t, clock, line, action.Wave{Alpha: action.Uniform(1)}), good, integrate.Settings{Method: integrate.Yoshida4{}}, "Yoshida 4 steps backward in time inside each step: action: loss α"},
		{"open end for Yoshida", discrete(t, clock, between(line, lattice.Free, lattice.Open), action.Wave{}), good, integrate.Settings{Method: integrate.Yoshida4{}}, "open right end"},
		{"table for RK4", discrete(t, clock, line, action.Wave{Source: rows}), good, integrate.Settings{Method: integrate.RK4{}}, "RK4: action: the table of source"},
	} {
		run, err := integrate.Evolve(context.Background(), tt.s, tt.start, tt.set)
		switch {
		case err == nil || run != nil:
			t.Errorf("%s: run %v, error %v; want an error alone", tt.name, run, err)
		case !strings.Contains(err.Error(), tt.want):
			t.Errorf("%s: error %q does not say %q", tt.name, err, tt.want)
		case strings.Contains(err.Error(), "\n"):
			t.Errorf("%s: error %q has more than one line", tt.name, err)
		}
	}
}
