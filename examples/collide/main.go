// Collide lets a kink and an antikink of a named potential run into each other.
// They part again, or are captured, or meet several times and part after all, and
// which of these it is changes with the speed in a way that has been studied since
// [Campbell, Schonfeld & Wingate 1983, Physica D 9, 1].
//
//	collide -speed 0.3                 one collision, with error bars
//	collide -scan 0.18:0.27:2000       the speed after against the speed before
//	collide -critical -watch 400       above which speed they meet only once
//
// # What the figures mean
//
// The pair starts at ±10 (±15 for the slow antikink and kink of φ⁶) as the sum of
// the two solutions, each with the speed given towards the other, in units in
// which waves travel at the speed 1. Times count from there. It is even about
// x = 0, so the half line x ≥ 0 with an even end is evolved, with sixth-order
// links and Yoshida's fourth-order method.
//
// A collision is a merger of the tracked pair: φ(0, t) leaves the vacuum between
// the two for the one beyond, that is, passes the value at the centre of a kink.
// For φ⁴, kink first, φ(0, t) falls below 0. The results are
//
//	bounces         the number of collisions until the watch time
//	outcome         1 if the pair has escaped by then, 0 if not: captured, or on
//	                its way back, or too close to call
//	exit_speed      slope of the least-squares line through the outermost place
//	                at which φ passes the centre of a kink, over the last 60 units
//	                of time before T = 10/v + 150 (half the separation over v, and
//	                150), in a scan over the last 50 before the watch time; 0
//	                without an escape
//	critical_speed  upper edge of the speeds at which there is a second collision
//	                before the watch time. It rises with that time: pairs that
//	                seem to have parted may come back
//	two-bounce      speeds in a row with exactly two collisions before the watch
//	window          time
//
// Error bars come from three lattices, each twice as fine as the one before; those
// of the edges of windows are the distance between the speeds of the scan.
//
// The equations are idealised: no loss, no noise, no impurities.
package main

import (
	"context"
	"flag"
	"fmt"
	"log"
	"math"
	"os"
	"os/signal"
	"path/filepath"

	"github.com/tenter-go/tenter/field/store"
	"github.com/tenter-go/tenter/field/track"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/lattice/refine"
)

// job is what is asked for.
type job struct {
	pair             *pair
	potential, order string
	eta              float64
	speed            float64
	speeds           speedRange
	critical         bool
	watch            float64
	spacing, step    float64
	out              string
}

func main() {
	log.SetFlags(0)
	log.SetPrefix("collide: ")
	var j job
	flag.StringVar(&j.potential, "potential", "phi4", "phi4, phi6, sinegordon or doublesinegordon")
	flag.StringVar(&j.order, "order", "kink-antikink", "kink-antikink or antikink-kink, from left to right")
	flag.Float64Var(&j.eta, "eta", 2, "η of the double sine-Gordon potential (1 − cos φ) + η(1 − cos ½φ)")
	flag.Float64Var(&j.speed, "speed", 0, "run one collision at this `speed`; 0.3 if nothing else is asked for")
	flag.Var(&j.speeds, "scan", "run `from:to:n` speeds")
	flag.BoolVar(&j.critical, "critical", false, "find the critical speed")
	flag.Float64Var(&j.watch, "watch", 0, "watch `time` of -scan (500 unless given) and -critical (400)")
	flag.Float64Var(&j.spacing, "spacing", 0.2, "spacing of the coarsest lattice, which is that of a scan")
	flag.Float64Var(&j.step, "step", 0, "its time step; a quarter of the spacing unless given, in a scan an eighth")
	quick := flag.Bool("quick", false, "one collision on coarse lattices, to see that it works")
	flag.StringVar(&j.out, "out", "collide-out", "folder for results.json, tables and figures")
	flag.Parse()
	if *quick {
		set := map[string]bool{}
		flag.Visit(func(f *flag.Flag) { set[f.Name] = true })
		if !set["spacing"] {
			j.spacing = 0.4
		}
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	if err := j.run(ctx); err != nil {
		log.Fatal(err)
	}
}

func (j job) run(ctx context.Context) error {
	if err := j.complete(); err != nil {
		return err
	}
	if err := os.MkdirAll(j.out, 0o777); err != nil {
		return err
	}
	fmt.Printf("%s, half separation %g; an idealised model.\n", j.pair.title, j.pair.separation)
	var results []refine.Result
	for _, part := range []struct {
		asked bool
		do    func(context.Context) ([]refine.Result, error)
	}{
		{j.speed != 0, j.one},
		{j.speeds.n > 0, j.campaign},
		{j.critical, j.threshold},
	} {
		if !part.asked {
			continue
		}
		more, err := part.do(ctx)
		if err != nil {
			return err
		}
		results = append(results, more...)
	}
	if err := store.WriteResults(filepath.Join(j.out, "results.json"), results); err != nil {
		return err
	}
	fmt.Printf("\nWrote results.json to %s.\n", j.out)
	return nil
}

// complete checks the job and fills in what was left out.
func (j *job) complete() (err error) {
	if j.pair, err = newPair(j.potential, j.order, j.eta); err != nil {
		return err
	}
	if j.speed == 0 && j.speeds.n == 0 && !j.critical {
		j.speed = 0.3
	}
	switch {
	case !(j.speed >= 0 && j.speed < 1):
		return fmt.Errorf("-speed %g; want a number between 0 and 1, in units of the wave speed", j.speed)
	case !(j.spacing > 0 && j.spacing <= 0.5):
		return fmt.Errorf("-spacing %g; want a number above 0 and at most 0.5, half the width of a kink", j.spacing)
	case !(j.step >= 0 && j.step <= 0.6*j.spacing):
		return fmt.Errorf("-step %g; want a number above 0 and at most 0.6 of the spacing, for the method to be stable", j.step)
	case !(j.watch >= 0) || math.IsInf(j.watch, 0):
		return fmt.Errorf("-watch %g; want a finite time", j.watch)
	}
	return nil
}

// stepOr returns the time step, or the given share of the spacing if none was
// asked for.
func (j job) stepOr(share float64) float64 {
	if j.step > 0 {
		return j.step
	}
	return share * j.spacing
}

// one runs a collision on three lattices.
func (j job) one(ctx context.Context) ([]refine.Result, error) {
	const window = 60
	j.step = j.stepOr(1. / 4)
	c := collision{pair: j.pair, speed: j.speed, until: j.pair.separation/j.speed + 150, window: window}
	steps := int(math.Ceil(c.until / j.step))
	block, err := lattice.NewBlock(
		lattice.Axis{Step: c.until / float64(steps), Sites: steps + 1},
		lattice.Axis{Step: j.spacing, Sites: int(c.until/j.spacing) + 2, Left: lattice.Even},
	)
	if err != nil {
		return nil, err
	}
	var last *flight
	// Time is of order 4 and space of order 6; either may lead.
	table, err := refine.Study{Block: block}.Run(ctx, func(ctx context.Context, b lattice.Block) ([]refine.Quantity, error) {
		c := c
		c.spacing, c.step = b.Space.Step, b.Time.Step
		last, err = c.run(ctx)
		if err != nil {
			return nil, err
		}
		escaped := 0.0
		if last.outcome == track.Escape {
			escaped = 1
		}
		return []refine.Quantity{
			{Name: "exit_speed", Value: last.exitSpeed(), Unit: "c"},
			{Name: "bounces", Value: float64(len(last.met))},
			{Name: "outcome", Value: escaped, Unit: "1 escape, 0 capture"},
		}, nil
	})
	if err != nil {
		return nil, err
	}
	fmt.Printf("\nSpeed %g, until t = %.5g:\n%v", j.speed, c.until, table)
	fmt.Printf("%v after %d collisions, the first at t ≈ %.2f; standard error of the slope %.1g\n", last.outcome, len(last.met), first(last.met), last.exit.SpeedError)
	results := table.Results()
	for k, e := range table.Estimates {
		if e.Status == refine.Exact {
			results[k].Error = 0 // counts, equal on all lattices
		}
	}

	c.spacing, c.step, c.picture = j.spacing, j.step, 0.4
	c.probe = &integrate.Probe{Every: max(1, int(0.1/j.step)), Sites: []int{0}}
	seen, err := c.run(ctx)
	if err != nil {
		return nil, err
	}
	return results, j.drawOne(c, seen)
}

func first(t []float64) float64 {
	if len(t) == 0 {
		return math.NaN()
	}
	return t[0]
}

// campaign scans the speeds.
func (j job) campaign(ctx context.Context) ([]refine.Result, error) {
	if j.watch == 0 {
		j.watch = 500
	}
	// One lattice must do, so its error in time is brought below that in space.
	j.step = j.stepOr(1. / 8)
	table, err := j.scan(ctx)
	if err != nil {
		return nil, err
	}
	ws := j.windows(table)
	fmt.Printf("\n%d speeds from %g to %g, watched until t = %g; %d two-bounce windows:\n", j.speeds.n, j.speeds.from, j.speeds.to, j.watch, len(ws))
	for _, w := range ws {
		fmt.Printf("  %.6f to %.6f   %s\n", w.low, w.high, w.end())
	}
	if err := j.drawScan(table); err != nil {
		return nil, err
	}
	shown := 0.5 * (j.speeds.from + j.speeds.to)
	if k := widest(ws); k >= 0 {
		shown = ws[k].centre
	}
	c := collision{pair: j.pair, speed: shown, spacing: j.spacing, step: j.step, until: j.pair.separation/shown + 100, window: lastUnits, picture: 0.4}
	seen, err := c.run(ctx)
	if err != nil {
		return nil, err
	}
	return j.windowResults(ws), j.drawMap(c, seen, "scan-map.png")
}

// threshold finds the critical speed.
func (j job) threshold(ctx context.Context) ([]refine.Result, error) {
	if j.watch == 0 {
		j.watch = 400
	}
	j.step = j.stepOr(1. / 4)
	fmt.Printf("\nCritical speed, watched until t = %g:\n", j.watch)
	s := &critical{pair: j.pair, watch: j.watch, tell: func(format string, args ...any) { fmt.Printf(format, args...) }}
	table, err := s.study(ctx, j.spacing, j.step)
	if err != nil {
		return nil, err
	}
	fmt.Print(table)
	return table.Results(), nil
}
