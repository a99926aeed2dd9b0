// Alignment finds how the director of a nematic liquid crystal lies in an invented
// channel with one stem and two arms whose end walls ask for different angles.
// Each wall may be overruled at the cost of Rapini and Papoular, the side walls
// ask for nothing. It prints where the mismatch settles, which wall yields and how
// each wall is felt in every arm, with error bars from a refinement study, and how
// that changes with the anchoring strength of one wall.
//
// The channel and its numbers are invented and the model is idealised: two
// dimensions, one elastic constant, and an angle instead of a director, so that
// there are no defects and θ and θ + π are different states.
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
	log.SetPrefix("alignment: ")
	c := channel{
		stem:  arm{length: 2, strength: 4, easy: 0},
		left:  arm{length: 2, strength: 2, easy: 40},
		right: arm{length: 3, strength: 1, easy: 80},
	}
	for _, p := range c.parts() {
		flag.Float64Var(&p.strength, p.name, p.strength, "anchoring strength W of the "+p.wall()+", in K/width")
		flag.Float64Var(&p.easy, p.name+"-angle", p.easy, "angle that the "+p.wall()+" asks for, in degrees from the x axis")
		flag.Float64Var(&p.length, p.name+"-length", p.length, "length of the "+p.String()+" beyond the junction, in widths; 0 leaves it out")
	}
	across := flag.Int("across", 8, "cells across the channel on the coarsest of four lattices")
	quick := flag.Bool("quick", false, "coarse lattices and a short sweep, to see that it works")
	out := flag.String("out", "alignment-out", "folder for results.json, the sweep and figures")
	flag.Parse()
	set := map[string]bool{}
	flag.Visit(func(f *flag.Flag) { set[f.Name] = true })
	steps := 25
	if *quick {
		steps = 5
		if !set["across"] {
			*across = 4
		}
	}
	for _, a := range []*arm{&c.stem, &c.left, &c.right} {
		a.easy = radians(a.easy)
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	if err := run(ctx, &c, *across, steps, *out); err != nil {
		log.Fatal(err)
	}
}

func run(ctx context.Context, c *channel, across, steps int, out string) error {
	if err := c.check(across); err != nil {
		return err
	}
	if err := os.MkdirAll(out, 0o777); err != nil {
		return err
	}
	fmt.Println("An invented channel of width 1, one elastic constant K, free side walls; the end walls ask for:")
	for _, p := range c.parts() {
		fmt.Printf("  %-6s length %-4g W = %-5g easy angle %g°\n", p.name, p.length, p.strength, degrees(p.easy))
	}
	fmt.Println()

	table, finest, err := c.study(ctx, across)
	if err != nil {
		return err
	}
	fmt.Print(table, "\n")
	fmt.Println(finest.report)
	fmt.Println()
	tell(c, table)

	swept, err := c.sweep(ctx, 2*across, steps)
	if err != nil {
		return err
	}
	fmt.Print("\n", swept)

	if err := draw(finest, swept, out); err != nil {
		return err
	}
	if err := swept.write(filepath.Join(out, "sweep.csv")); err != nil {
		return err
	}
	if err := store.WriteResults(filepath.Join(out, "results.json"), table.Results()); err != nil {
		return err
	}
	fmt.Printf("\nWrote results.json, sweep.csv and figures to %s.\n", out)
	return nil
}

// study measures on four lattices, all of which have the corners of the channel on
// sites. At an inner corner of 270° the angle goes like r^⅔, which brings the order
// of every quantity that feels it down to 4⁄3.
func (c *channel) study(ctx context.Context, across int) (table *refine.Table, finest *alignment, err error) {
	coarsest, err := c.block(across)
	if err != nil {
		return nil, nil, err
	}
	study := refine.Study{Block: coarsest, Levels: 4, Order: 4. / 3}
	if c.stem.length == 0 { // no corner
		study.Order = 2
	}
	table, err = study.Run(ctx, func(ctx context.Context, b lattice.Block) ([]refine.Quantity, error) {
		a, err := c.settle(ctx, b, nil)
		if err != nil {
			return nil, err
		}
		turns, err := a.turned(ctx)
		if err != nil {
			return nil, err
		}
		finest = a
		return a.quantities(turns)
	})
	return table, finest, err
}

// tell says in words what the study found.
func tell(c *channel, table *refine.Table) {
	number := func(name string) string {
		e, _ := table.Get(name)
		if !e.Status.Bounded() {
			return fmt.Sprintf("%.4g (no error bar)", e.Value)
		}
		return e.Result().String()[len(name)+3:]
	}
	value := func(name string) float64 { e, _ := table.Get(name); return e.Value }

	parts := c.parts()
	fmt.Println("Where the mismatch settles, elastic energy:")
	for _, piece := range append([]string{"junction"}, names(parts)...) {
		fmt.Printf("  %-9s %s\n", piece, number("elastic_"+piece))
	}
	fmt.Println("Which wall yields, θ − easy, its cost and the torque on it:")
	most := parts[0]
	for _, p := range parts {
		fmt.Printf("  %-10s %s, %s, %s\n", p.wall(), number("deviation_"+p.name), number("cost_"+p.name), number("torque_"+p.name))
		if math.Abs(value("deviation_"+p.name)) > math.Abs(value("deviation_"+most.name)) {
			most = p
		}
	}
	fmt.Printf("  The %s yields most.\n", most.wall())
	fmt.Println("How a wall is felt in the middle of each arm, change of θ by change of its easy angle:")
	for _, wall := range parts {
		fmt.Printf("  %-10s", wall.wall())
		for _, p := range parts {
			fmt.Printf(" in the %v %s;", p, number("felt_"+wall.name+"_in_"+p.name))
		}
		fmt.Println()
	}
}

func names(parts []part) []string {
	var ns []string
	for _, p := range parts {
		ns = append(ns, p.name)
	}
	return ns
}
