// Delayline launches a fluxon down an invented cryogenic delay line, a long
// Josephson junction with loss, bias and a stretch of weaker coupling, and
// prints when it arrives, how fast it ends up and where its energy went, each
// with an error bar from a refinement study. It then finds a part of the same
// history all at once, from its first two slices, and compares.
//
// The line and its numbers are invented and the model is idealised; for real
// cryogenic or high-current equipment follow the local codes and ask licensed
// people.
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

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/store"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/lattice/refine"
	"gonum.org/v1/gonum/stat"
)

func main() {
	log.SetFlags(0)
	log.SetPrefix("delayline: ")
	var d delayLine
	flag.Float64Var(&d.length, "length", 160, "length of the line, in Josephson lengths")
	flag.Float64Var(&d.loss, "loss", 0.1, "loss α")
	flag.Float64Var(&d.bias, "bias", 0.2, "bias current γ, in critical currents")
	flag.BoolVar(&d.uniform, "uniform", false, "leave out the odd stretch")
	spacing := flag.Float64("spacing", 0.1, "spacing of the coarsest of three lattices")
	quick := flag.Bool("quick", false, "a short line on coarse lattices, to see that it works")
	out := flag.String("out", "delayline-out", "folder for results.json, figures and the history")
	flag.Parse()
	if *quick {
		set := map[string]bool{}
		flag.Visit(func(f *flag.Flag) { set[f.Name] = true })
		if !set["length"] {
			d.length = 60
		}
		if !set["spacing"] {
			*spacing = 0.2
		}
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	if err := run(ctx, d, *spacing, *out); err != nil {
		log.Fatal(err)
	}
}

func run(ctx context.Context, d delayLine, spacing float64, out string) error {
	if err := d.check(); err != nil {
		return err
	}
	if !(spacing > 0 && spacing <= 0.5) {
		return fmt.Errorf("-spacing %g; want a number above 0 and at most 0.5, half the width of a resting fluxon", spacing)
	}
	if err := os.MkdirAll(out, 0o777); err != nil {
		return err
	}
	block, err := d.block(spacing)
	if err != nil {
		return err
	}
	fmt.Printf("An invented cryogenic delay line of %g Josephson lengths: loss %g, bias %g%s.\n", d.length, d.loss, d.bias,
		map[bool]string{true: ", uniform", false: fmt.Sprintf(", κ = %g between x = %g and %g", oddKappa, oddFrom*d.length, oddTo*d.length)}[d.uniform])
	fmt.Printf("A fluxon starts at x = %g with the first-order speed %.6f.\n\n", launchAt*d.length, d.launchSpeed())

	table, flights, err := d.study(ctx, block)
	if err != nil {
		return err
	}
	fmt.Print(table, "\n")
	results := table.Results()
	for k, e := range table.Estimates {
		if e.Name == "energy_residual" { // what the finest lattice has, not its limit 0
			results[k].Value = e.Values[len(e.Values)-1]
			results[k].Error = math.Abs(results[k].Value - e.Value)
		}
	}

	finest := flights[len(flights)-1]
	account(finest.ledger)

	// The same history again, without stepping.
	w, err := d.solveWindow(ctx, flights[0])
	if err != nil {
		return err
	}
	fmt.Printf("\nAll at once, %d slices × %d sites from t = %.4g, two slices pinned, started from the first slice repeated:\n%v\nlargest difference from the evolved history: %.2g\n",
		w.evolved.Block.Slices(), w.evolved.Block.Sites(), w.evolved.Block.Time.From, w.report, w.distance)
	results = append(results, refine.Result{Name: "block_distance", Value: w.distance, Error: math.NaN()})

	if err := draw(d, flights[0], w, out); err != nil {
		return err
	}
	if err := store.WriteHistoryNPZ(filepath.Join(out, "history.npz"), flights[0].run.History); err != nil {
		return err
	}
	if err := store.WriteResults(filepath.Join(out, "results.json"), results); err != nil {
		return err
	}
	fmt.Printf("\nWrote results.json, history.npz and figures to %s.\n", out)
	return nil
}

// study makes the same measurement on three lattices, both steps halved each
// time.
func (d delayLine) study(ctx context.Context, coarsest lattice.Block) (*refine.Table, []*flight, error) {
	var flights []*flight
	table, err := refine.Study{Block: coarsest, Order: 2}.Run(ctx, func(ctx context.Context, b lattice.Block) ([]refine.Quantity, error) {
		f, err := d.fly(ctx, b)
		if err != nil {
			return nil, err
		}
		flights = append(flights, f)
		return f.quantities(), nil
	})
	return table, flights, err
}

// flight is one run of the fluxon down the line.
type flight struct {
	system        *action.Discrete
	run           *integrate.Run
	ledger        *integrate.Ledger
	arrival       float64
	speed, change float64     // between 0.6 and 0.8 of the length, and how much it still changes there
	count         float64     // of fluxons, just before arrival
	entering      field.State // when the fluxon is about to enter the odd stretch
	enteringAt    float64
}

// fly evolves the fluxon on a block until it has passed the arrival station.
func (d delayLine) fly(ctx context.Context, b lattice.Block) (*flight, error) {
	s, err := action.New(b, d.density())
	if err != nil {
		return nil, err
	}
	start, err := d.start(b.Space)
	if err != nil {
		return nil, err
	}
	f := &flight{system: s, ledger: &integrate.Ledger{}}
	site := func(share float64) int { return int(math.Round(share * float64(b.Space.Links()))) }
	level := d.background() + math.Pi

	// Stations every hundredth of the length between 0.6 and 0.8, and the last.
	stations := &integrate.Probe{}
	for share := 60; share <= 80; share++ {
		stations.Sites = append(stations.Sites, site(float64(share)/100))
	}
	stations.Sites = append(stations.Sites, site(arriveAt))

	// The fluxon has passed a site when φ there has fallen to the background.
	arrived := 0 // slice
	watch := integrate.Watch{Do: func(m *integrate.Moment) (err error) {
		phi := m.Field()
		if f.entering.Field.Empty() && phi.At(0, site(oddFrom-0.03)) < level {
			f.entering, f.enteringAt = m.State().Clone(), m.Time
		}
		switch {
		case phi.At(0, site(arriveAt)) > level:
			f.count, err = m.Action.Charge(phi, 0)
		case arrived == 0:
			arrived = m.Slice
		case m.Slice == arrived+3: // room for interpolation
			err = integrate.Stop
		}
		return err
	}}
	every := max(1, b.Slices()/600)
	f.run, err = integrate.Evolve(ctx, s, start, integrate.Settings{Every: every, Observers: []integrate.Observer{f.ledger, stations, watch}})
	if err != nil {
		return nil, err
	}
	f.arrival = stations.Crossing(len(stations.Sites)-1, level)
	if math.IsNaN(f.arrival) {
		return nil, fmt.Errorf("the fluxon did not reach x = %g by t = %.4g; want more bias, less loss, or -uniform", arriveAt*d.length, f.run.Time)
	}
	var xs, ts []float64
	for k := range 21 {
		xs = append(xs, b.Space.At(stations.Sites[k]))
		ts = append(ts, stations.Crossing(k, level))
	}
	f.speed = slope(ts, xs)
	f.change = slope(ts[10:], xs[10:]) - slope(ts[:11], xs[:11])
	return f, nil
}

func (f *flight) quantities() []refine.Quantity {
	return []refine.Quantity{
		{Name: "arrival_time", Value: f.arrival, Unit: "1/ω_p"},
		{Name: "terminal_speed", Value: f.speed, Unit: "c"},
		{Name: "speed_change", Value: f.change, Unit: "c"},
		{Name: "fluxon_count", Value: f.count},
		{Name: "energy_residual", Value: f.ledger.Residual()},
	}
}

// slope is that of the least-squares line through the points (x, y).
func slope(x, y []float64) float64 {
	_, b := stat.LinearRegression(x, y, nil, false)
	return b
}

// account prints where the energy went.
func account(l *integrate.Ledger) {
	a, b := l.Entries[0], l.Entries[len(l.Entries)-1]
	fmt.Printf("Energy on the finest lattice, from t = 0 to %.4g, in units in which a resting fluxon weighs 8:\n", b.Time)
	for _, row := range []struct {
		name  string
		value float64
	}{
		{"of the field at the start", a.Energy.Field()},
		{"+ work of the bias", b.Source},
		{"− heat in the loss", b.Loss},
		{"= of the field at the end", b.Energy.Field()},
	} {
		fmt.Printf("  %-28s %+12.6f\n", row.name, row.value)
	}
}
