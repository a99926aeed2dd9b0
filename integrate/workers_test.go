package integrate_test

import (
	"context"
	"errors"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// longRun is a line long enough for many workers.
func longRun(t *testing.T, potential action.Potential, steps int) (*action.Discrete, field.State) {
	t.Helper()
	const sites = 8*32768 + 5
	line := lattice.Axis{From: -0.05 * sites, Step: 0.1, Sites: sites, Left: lattice.Held, Right: lattice.Open}
	s := discrete(t, lattice.Axis{Step: 0.05, Sites: steps + 1}, line, action.Wave{Potential: potential})
	start := field.NewState(1, sites)
	for i := range sites {
		start.Field.Data[i] = math.Tanh(math.Sin(0.003 * float64(i)))
	}
	return s, start
}

// The number of workers, and who looks when, changes no bit of what is recorded,
// observed or kept.
func TestWorkersAndLooksChangeNothing(t *testing.T) {
	const steps, every, last = 150, 40, 110
	s, start := longRun(t, action.Phi4{}, steps)
	run := func(workers, stride int) (*integrate.Run, []float64) {
		probe := &integrate.Probe{Every: 22, Sites: []int{0, 1, 77, 131072, 262148}}
		stop := integrate.Watch{Every: stride, Do: func(m *integrate.Moment) error {
			if m.Slice == last {
				return integrate.Stop
			}
			return nil
		}}
		ends := integrate.Ends{Left: func(_ int, t float64) float64 { return 0.3 * math.Sin(t) }}
		r, err := integrate.Evolve(context.Background(), s, start, integrate.Settings{
			Every: every, Workers: workers, Ends: ends, Observers: []integrate.Observer{probe, stop},
		})
		if err != nil || !errors.Is(r.Stopped, integrate.Stop) || r.Slice != last {
			t.Fatalf("ended at slice %d, %v, %v; want slice %d and a stop", r.Slice, r.Stopped, err, last)
		}
		var seen []float64
		for _, v := range probe.Values {
			seen = append(seen, v...)
		}
		return r, append(seen, probe.Times...)
	}
	want, wantSeen := run(1, 1)
	if n := want.History.Block.Slices(); n != 3 {
		t.Fatalf("%d slices recorded; want 3", n)
	}
	for workers := 2; workers <= 8; workers++ {
		got, seen := run(workers, []int{5, 10, 11, 22, 55, 110}[workers%6])
		same := func(what string, a, b []float64) {
			t.Helper()
			if len(a) != len(b) {
				t.Fatalf("%d workers: %d values of %s; want %d", workers, len(a), what, len(b))
			}
			for i, v := range a {
				if math.Float64bits(v) != math.Float64bits(b[i]) {
					t.Fatalf("%d workers: value %d of %s is %v; want %v", workers, i, what, v, b[i])
				}
			}
		}
		same("the history", got.History.Data, want.History.Data)
		same("the probe", seen, wantSeen)
		same("the field at the end", got.Final.Field.Data, want.Final.Field.Data)
		same("the rate at the end", got.Final.Rate.Data, want.Final.Rate.Data)
		for k, m := range got.Checkpoint.Memory {
			same("the checkpoint", m.Data, want.Checkpoint.Memory[k].Data)
		}
	}
}

// A field that blows up between two looks of a blocked run is caught at the event
// where a run that looks at every slice catches it.
func TestBlowUpOfBlockedRun(t *testing.T) {
	line := lattice.Axis{Step: 0.1, Sites: 5000}
	s := discrete(t, lattice.Axis{Step: 0.05, Sites: 2000}, line, action.Wave{Potential: action.Polynomial{0, 0, 0, 0, -1}})
	start := field.NewState(1, line.Sites)
	for i := range line.Sites {
		start.Field.Data[i] = 0.2 * math.Exp(-1e-4*math.Pow(float64(i-4100), 2))
	}
	catch := func(every int) *integrate.BlowUp {
		_, err := integrate.Evolve(context.Background(), s, start, integrate.Settings{Every: every})
		var e *integrate.BlowUp
		if !errors.As(err, &e) {
			t.Fatalf("recording every %d slices: %v; want a blow-up", every, err)
		}
		return e
	}
	want, got := catch(1), catch(-1)
	if got.Event != want.Event || got.Slice != want.Slice || got.LastSlice != want.LastSlice {
		t.Errorf("blow-up at %v, slice %d, last good slice %d; want %v, %d, %d", got.Event, got.Slice, got.LastSlice, want.Event, want.Slice, want.LastSlice)
	}
	if d := got.Last.Field.MaxDifference(want.Last.Field); d != 0 {
		t.Errorf("the last state differs by %v", d)
	}
}
