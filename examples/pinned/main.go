// Pinned finds the history of a fluxon that was launched down a long Josephson line
// in a known way and read at four events, once wrongly. No history meets all of
// that, so the field equation has to give way. The program says where it does, how
// hard each condition pushes, which of them should be given up, and on what the
// wrong reading bears, inside and outside of its light cone. Figures have an error
// bar from a refinement study.
//
// The record is invented and the model is idealised.
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
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/lattice/refine"
)

func main() {
	log.SetFlags(0)
	log.SetPrefix("pinned: ")
	var w watch
	flag.Float64Var(&w.misread, "misread", 0.8, "by how much one reading is off, in rad")
	flag.Float64Var(&w.noise, "noise", 0.1, "strength q of the noise that the field equation is allowed")
	spacing := flag.Float64("spacing", 0.2, "spacing of the coarsest of three lattices; 0.4 or a fraction of it")
	quick := flag.Bool("quick", false, "coarse lattices, to see that it works")
	out := flag.String("out", "pinned-out", "folder for results.json and figures")
	flag.Parse()
	if *quick {
		set := map[string]bool{}
		flag.Visit(func(f *flag.Flag) { set[f.Name] = true })
		if !set["spacing"] {
			*spacing = 0.4
		}
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	if err := run(ctx, w, *spacing, *out); err != nil {
		log.Fatal(err)
	}
}

func run(ctx context.Context, w watch, spacing float64, out string) error {
	switch {
	case !(spacing > 0 && spacing <= 0.4):
		return fmt.Errorf("-spacing %g; want a number above 0 and at most 0.4", spacing)
	case !(w.noise > 0) || math.IsInf(w.noise, 0):
		return fmt.Errorf("-noise %g; want a finite number above 0", w.noise)
	case !(math.Abs(w.misread) <= 2):
		return fmt.Errorf("-misread %g; want at most 2 either way, or the fluxon has to be torn off its path", w.misread)
	}
	if err := os.MkdirAll(out, 0o777); err != nil {
		return err
	}
	block, err := w.block(spacing)
	if err != nil {
		return err
	}
	wrong := w.readings()[suspect]
	fmt.Printf("An invented record: a fluxon starts at x = %g with the speed %g, both known (two slices are pinned),\n", launchAt, speed)
	fmt.Printf("and four pickups are read as it goes by. The reading φ = %.2f at t = %g, x = %g is off by %g.\n\n", wrong.phi, wrong.T, wrong.X, w.misread)

	table, accounts, err := w.study(ctx, block)
	if err != nil {
		return err
	}
	fmt.Print(table, "\n")

	a := accounts[len(accounts)-1]
	fmt.Printf("On the finest lattice:\n%v\n\n", a.found.Report)
	fmt.Println("Readings, the hardest-working first; push is ∂cost/∂φ there, per rad:")
	for _, r := range a.pushes() {
		fmt.Printf("  t = %.4g, x = %.4g, φ = %.2f: push %+.2f\n", r.Event.T, r.Event.X, r.Value, r.Push)
	}
	fmt.Printf("\n%v\n\n", a.verdict)
	best, err := a.first()
	if err != nil {
		return err
	}
	if best.Values == 1 {
		fmt.Printf("With noise of the strength %g the %s at t = %.4g is %.1f standard deviations off what all else tells,\n", w.noise, best.Kind, best.Event.T, math.Sqrt(2*best.Saving))
		fmt.Printf("which is φ = %.2f there.\n", a.value(best)+best.Move)
	}
	fmt.Printf("The value of the wrong reading bears on the whole history, seen from its light cone: %v.\n", a.shares)
	fmt.Printf("It changes the noise in the past of every reading, and that acts on all of its own future.\n")

	if err := draw(w, a, out); err != nil {
		return err
	}
	if err := store.WriteResults(filepath.Join(out, "results.json"), table.Results()); err != nil {
		return err
	}
	fmt.Printf("\nWrote results.json and figures to %s.\n", out)
	return nil
}

// study settles the record on three lattices, both steps halved each time.
func (w watch) study(ctx context.Context, coarsest lattice.Block) (*refine.Table, []*account, error) {
	var accounts []*account
	table, err := refine.Study{Block: coarsest}.Run(ctx, func(ctx context.Context, b lattice.Block) ([]refine.Quantity, error) {
		a, err := w.settle(ctx, b)
		if err != nil {
			return nil, err
		}
		best, err := a.first()
		if err != nil {
			return nil, err
		}
		accounts = append(accounts, a)
		relaxed := math.NaN()
		if !math.IsNaN(best.Confirmed) {
			relaxed = a.verdict.Cost - best.Confirmed
		}
		return []refine.Quantity{
			{Name: "cost", Value: a.found.Report.CostAfter},
			{Name: "largest_reaction", Value: math.Abs(a.pushes()[0].Push), Unit: "1/rad"},
			{Name: "outside_share", Value: a.shares.Outside},
			{Name: "relaxed_cost", Value: relaxed},
			{Name: "correction", Value: best.Move, Unit: "rad"},
		}, nil
	})
	return table, accounts, err
}
