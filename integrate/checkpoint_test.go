package integrate_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// driven is a run in which everything depends on the time: a source, an end
// that moves, and for methods that take it a loss.
func driven(t *testing.T, m integrate.Method) (s *action.Discrete, start field.State, set integrate.Settings) {
	w := action.Wave{
		Potential: action.SineGordon{},
		Source:    action.Over(func(x, t float64) float64 { return 0.2 * math.Sin(t-x) }),
	}
	if m.Name() != "Yoshida 4" {
		w.Alpha, w.Beta = action.Uniform(0.1), action.Uniform(0.01)
	}
	line := between(span(-5, 10, 50), lattice.Held, lattice.Free)
	s = discrete(t, span(0.3, 12, 150), line, w)
	kink, err := field.SineGordonKink(field.Moving{Speed: 0.3})
	start = exact(t, kink, err).On(line, 0)
	left := start.Field.At(0, 0)
	set = integrate.Settings{Method: m, Ends: integrate.Ends{Left: func(_ int, t float64) float64 { return left + 0.1*math.Sin(t-0.3) }}}
	return s, start, set
}

var methods = []integrate.Method{integrate.Leapfrog{}, integrate.Yoshida4{}, integrate.RK4{}}

// cancelled runs up to a slice and is then cancelled.
func cancelled(t *testing.T, s *action.Discrete, start field.State, set integrate.Settings, at int) *integrate.Run {
	t.Helper()
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	set.Observers = append(set.Observers, integrate.Watch{Do: func(m *integrate.Moment) error {
		if m.Slice == at {
			cancel()
		}
		return nil
	}})
	run, err := integrate.Evolve(ctx, s, start, set)
	if !errors.Is(err, context.Canceled) {
		t.Fatalf("error %v, want context.Canceled", err)
	}
	if run == nil || run.Slice != at || run.Steps != at || run.Time != s.Block().Time.At(at) {
		t.Fatalf("cancelled at slice %d: %+v", at, run)
	}
	return run
}

func TestResumeGivesSameBits(t *testing.T) {
	for _, m := range methods {
		for _, every := range []int{1, 4} {
			s, start, set := driven(t, m)
			set.Every = every
			whole := evolve(t, s, start, set)
			const at = 75 // between two recorded slices of every 4
			first := cancelled(t, s, start, set, at)
			set.Resume = first.Checkpoint
			second := evolve(t, s, start, set)
			if d := second.Final.Field.MaxDifference(whole.Final.Field) + second.Final.Rate.MaxDifference(whole.Final.Rate); d != 0 {
				t.Errorf("%s: resumed run ends off by %g; want the same bits", m.Name(), d)
			}
			if second.Steps != 150-at || second.Slice != 150 {
				t.Errorf("%s: resumed run of %d steps to slice %d; want %d to 150", m.Name(), second.Steps, second.Slice, 150-at)
			}
			// Both parts hold what the whole run holds, the slice of the cut twice if
			// it is recorded.
			parts := first.History.Data
			rest := second.History.Data
			if at%every == 0 {
				rest = rest[s.Block().Sites():]
			}
			parts = append(append([]float64(nil), parts...), rest...)
			if len(parts) != len(whole.History.Data) {
				t.Fatalf("%s, every %d: %d values in two parts, %d in one", m.Name(), every, len(parts), len(whole.History.Data))
			}
			for i, v := range whole.History.Data {
				if v != parts[i] {
					t.Errorf("%s, every %d: value %d is %v in two parts, %v in one", m.Name(), every, i, parts[i], v)
					break
				}
			}
			if want := s.Block().Time.At((at + every - 1) / every * every); second.History.Block.Time.From != want {
				t.Errorf("%s, every %d: resumed history begins at %v; want %v", m.Name(), every, second.History.Block.Time.From, want)
			}
			// The first part was not changed by the second.
			if first.Checkpoint.Slice != at {
				t.Errorf("%s: checkpoint moved to slice %d", m.Name(), first.Checkpoint.Slice)
			}
		}
	}
}

func TestResumeRefuses(t *testing.T) {
	s, start, set := driven(t, integrate.Leapfrog{})
	good := cancelled(t, s, start, set, 10).Checkpoint
	change := func(f func(c *integrate.Checkpoint)) *integrate.Checkpoint {
		c := &integrate.Checkpoint{Method: good.Method, Slice: good.Slice}
		for _, m := range good.Memory {
			c.Memory = append(c.Memory, m.Clone())
		}
		f(c)
		return c
	}
	for _, tt := range []struct {
		name string
		c    *integrate.Checkpoint
		want string
	}{
		{"another method", change(func(c *integrate.Checkpoint) { c.Method = "RK4" }), `checkpoint of "RK4" for a run with "leapfrog"`},
		{"an array missing", change(func(c *integrate.Checkpoint) { c.Memory = c.Memory[1:] }), "2 arrays; leapfrog has 3"},
		{"another line", change(func(c *integrate.Checkpoint) { c.Memory[1] = field.NewSlice(1, 7) }), "1 components × 7 sites"},
		{"NaN", change(func(c *integrate.Checkpoint) { c.Memory[2].Data[3] = math.NaN() }), "component 0 is NaN at site 3"},
		{"beyond the block", change(func(c *integrate.Checkpoint) { c.Slice = 151 }), "slice 151 of a block of 151"},
		{"before the block", change(func(c *integrate.Checkpoint) { c.Slice = -1 }), "slice -1"},
	} {
		set.Resume = tt.c
		if _, err := integrate.Evolve(context.Background(), s, start, set); err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: error %v does not say %q", tt.name, err, tt.want)
		}
	}
}
