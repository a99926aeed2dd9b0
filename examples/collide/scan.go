package main

import (
	"context"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"

	"github.com/tenter-go/tenter/field/store"
	"github.com/tenter-go/tenter/field/track"
	"github.com/tenter-go/tenter/integrate/sweep"
	"github.com/tenter-go/tenter/lattice/refine"
)

// speedRange is the value of -scan, from:to:n.
type speedRange struct {
	from, to float64
	n        int
}

func (r *speedRange) String() string {
	if r.n == 0 {
		return ""
	}
	return fmt.Sprintf("%g:%g:%d", r.from, r.to, r.n)
}

// Set reads from:to:n.
func (r *speedRange) Set(s string) error {
	parts := strings.Split(s, ":")
	if len(parts) == 3 {
		from, err1 := strconv.ParseFloat(parts[0], 64)
		to, err2 := strconv.ParseFloat(parts[1], 64)
		n, err3 := strconv.Atoi(parts[2])
		if err1 == nil && err2 == nil && err3 == nil && 0 < from && from < to && to < 1 && n >= 2 {
			*r = speedRange{from, to, n}
			return nil
		}
	}
	return fmt.Errorf("want from:to:n with 0 < from < to < 1 and n ≥ 2, as in 0.18:0.27:2000")
}

func (r *speedRange) at(k int) float64 {
	return r.from + (r.to-r.from)*float64(k)/float64(r.n-1)
}

// spaced is the distance between neighbours.
func (r *speedRange) spaced() float64 { return (r.to - r.from) / float64(r.n-1) }

// lastUnits is the time before the watch time over which a scan takes the exit
// speed.
const lastUnits = 50

// scan runs the pair at every speed of the range. Its rows, in a file of their
// own, are kept if it is stopped, and a scan goes on from them.
func (j job) scan(ctx context.Context) (store.Table, error) {
	if !(j.watch > lastUnits) {
		return store.Table{}, fmt.Errorf("-watch %g; want more than %d, the time over which a scan takes the exit speed", j.watch, lastUnits)
	}
	s := sweep.Sweep{
		Parameters: []string{"speed", "eta", "half_separation", "watch", "spacing", "step"},
		Results:    []string{"bounces", "exit_speed", "exit_speed_error", "escaped"},
		File:       filepath.Join(j.out, fmt.Sprintf("scan-%s-%s.csv", j.potential, j.order)),
		Progress:   os.Stderr,
	}
	for k := range j.speeds.n {
		s.Points = append(s.Points, []float64{j.speeds.at(k), j.eta, j.pair.separation, j.watch, j.spacing, j.step})
	}
	return s.Run(ctx, func(ctx context.Context, p []float64) ([]float64, error) {
		f, err := collision{
			pair: j.pair, speed: p[0], spacing: j.spacing, step: j.step,
			until: j.watch, window: lastUnits, stop: stop{capture: true},
		}.run(ctx)
		if err != nil {
			return nil, err
		}
		row := []float64{float64(len(f.met)), f.exitSpeed(), 0, 0}
		if f.outcome == track.Escape {
			row[2], row[3] = f.exit.SpeedError, 1
		}
		return row, nil
	})
}

// interval is a two-bounce window: speeds in a row with exactly two collisions
// before the watch time. Its edges lie half way between the last speed outside
// and the first inside, and are not seen at the ends of a scan.
type interval struct {
	low, high       float64
	lowSeen, hiSeen bool
	centre, exit    float64 // the speed nearest to the middle, and its exit speed
}

// end says in words how the pair ends in the middle of the window.
func (w interval) end() string {
	if w.exit == 0 {
		return fmt.Sprintf("not parted yet at %.6f", w.centre)
	}
	return fmt.Sprintf("exit speed %.5f at %.6f", w.exit, w.centre)
}

// windows returns the two-bounce windows of a scan.
func (j job) windows(t store.Table) []interval {
	speed, _ := t.Column("speed")
	bounces, _ := t.Column("bounces")
	exit, _ := t.Column("exit_speed")
	half := 0.5 * j.speeds.spaced()
	var ws []interval
	for a := 0; a < len(speed); a++ {
		if bounces[a] != 2 {
			continue
		}
		b := a
		for b+1 < len(speed) && bounces[b+1] == 2 {
			b++
		}
		m := (a + b) / 2
		ws = append(ws, interval{
			low: speed[a] - half, high: speed[b] + half,
			lowSeen: a > 0, hiSeen: b+1 < len(speed),
			centre: speed[m], exit: exit[m],
		})
		a = b
	}
	return ws
}

// windowResults lists the windows. The error bar of an edge is half the distance
// between speeds; that of the lattice comes on top.
func (j job) windowResults(ws []interval) []refine.Result {
	results := []refine.Result{{Name: "two_bounce_windows", Value: float64(len(ws)), Error: math.NaN()}}
	bar := func(seen bool) float64 {
		if seen {
			return 0.5 * j.speeds.spaced()
		}
		return math.NaN()
	}
	for k, w := range ws {
		name := fmt.Sprintf("window_%d_", k+1)
		results = append(results,
			refine.Result{Name: name + "low", Value: w.low, Error: bar(w.lowSeen), Unit: "c"},
			refine.Result{Name: name + "high", Value: w.high, Error: bar(w.hiSeen), Unit: "c"},
			refine.Result{Name: name + "centre", Value: w.centre, Error: bar(w.lowSeen && w.hiSeen), Unit: "c"},
			refine.Result{Name: name + "exit_speed", Value: w.exit, Error: math.NaN(), Unit: "c"},
		)
	}
	return results
}

// widest returns the number of the widest window, or −1.
func widest(ws []interval) int {
	best := -1
	for k, w := range ws {
		if best < 0 || w.high-w.low > ws[best].high-ws[best].low {
			best = k
		}
	}
	return best
}
