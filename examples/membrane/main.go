// Membrane stretches an invented membrane over a square frame, loads it, and
// lowers it onto a dome. It lets the free membrane relax in a time of its own,
// as frames of an animation, and finds where it touches the dome, how hard the
// dome must push, and how much of each figure is lattice artefact.
//
// Both axes of the block are lengths here, and the action is the energy
// ∫ ½|∇u|² + pu of small deflections u under the pressure p. The membrane and
// its numbers are invented and the model is idealised.
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
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/figure"
	"github.com/tenter-go/tenter/field/store"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/lattice/refine"
	"github.com/tenter-go/tenter/minimize"
)

// A membrane is stretched over the unit square with unit tension; its rim lies
// at u = 0 and the pressure pushes it down.
type membrane struct {
	pressure float64
	top      float64 // of the dome, below the rim
	bend     float64 // curvature of the dome
}

// dome is the height of the obstacle at (x, y).
func (m membrane) dome(x, y float64) float64 {
	x, y = x-0.5, y-0.5
	return m.top - 0.5*m.bend*(x*x+y*y)
}

func main() {
	log.SetFlags(0)
	log.SetPrefix("membrane: ")
	m := membrane{}
	flag.Float64Var(&m.pressure, "pressure", 4, "pressure, in tension per length")
	flag.Float64Var(&m.top, "top", -0.12, "height of the dome's top, below the rim at 0")
	flag.Float64Var(&m.bend, "bend", 1, "curvature of the dome")
	links := flag.Int("links", 32, "links a side of the coarsest of four lattices")
	quick := flag.Bool("quick", false, "coarse lattices, to see that it works")
	out := flag.String("out", "membrane-out", "folder for results.json and figures")
	flag.Parse()
	if *quick {
		*links = 8
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	if err := run(ctx, m, *links, *out); err != nil {
		log.Fatal(err)
	}
}

func run(ctx context.Context, m membrane, links int, out string) error {
	switch {
	case !(m.top < 0):
		return fmt.Errorf("-top %g; want a number below the rim at 0", m.top)
	case !(m.bend >= 0) || math.IsInf(m.bend, 0):
		return fmt.Errorf("-bend %g; want a finite number ≥ 0", m.bend)
	case !(m.pressure > 0) || math.IsInf(m.pressure, 0):
		return fmt.Errorf("-pressure %g; want a finite number above 0", m.pressure)
	case links < 4 || links%2 != 0 || links > 512:
		return fmt.Errorf("-links %d; want an even number from 4 to 512", links)
	}
	if err := os.MkdirAll(out, 0o777); err != nil {
		return err
	}
	fmt.Printf("An invented membrane on a unit square: pressure %g, a dome of curvature %g with its top at %g.\n\n", m.pressure, m.bend, m.top)

	side := lattice.Axis{Step: 1 / float64(links), Sites: links + 1}
	block, err := lattice.NewBlock(side, side)
	if err != nil {
		return err
	}
	var resting *minimize.Found // on the finest lattice
	table, err := refine.Study{Block: block, Levels: 4, Order: 2}.Run(ctx, func(ctx context.Context, b lattice.Block) ([]refine.Quantity, error) {
		free, err := m.settle(ctx, b, false)
		if err != nil {
			return nil, fmt.Errorf("free membrane: %w", err)
		}
		if resting, err = m.settle(ctx, b, true); err != nil {
			return nil, fmt.Errorf("membrane on the dome: %w", err)
		}
		return append(m.measureFree(free), m.measure(resting)...), nil
	})
	if err != nil {
		return err
	}
	fmt.Print(table, "\n", resting.Report, "\n\n")

	// The way to the shape without the dome, in a relaxation time.
	relaxed, err := m.relax(ctx, block)
	if err != nil {
		return err
	}
	fmt.Printf("Relaxation on %d × %d events: %d frames up to τ = %.3g.\n", block.Slices(), block.Sites(), len(relaxed.Frames), relaxed.Tau)
	if err := draw(m, resting, relaxed, out); err != nil {
		return err
	}
	if err := store.WriteResults(filepath.Join(out, "results.json"), table.Results()); err != nil {
		return err
	}
	fmt.Printf("Wrote results.json and figures to %s.\n", out)
	return nil
}

// system returns the energy of the membrane on a block and its rim.
func (m membrane) system(b lattice.Block) (*action.Discrete, *constraint.Set, error) {
	s, err := action.New(b, action.Wave{Signature: action.Euclidean, Source: action.Uniform(-m.pressure)})
	if err != nil {
		return nil, nil, err
	}
	rim := constraint.On(b)
	flat := field.NewSlice(1, b.Sites())
	rim.Slice(0, flat)
	rim.Slice(b.Slices()-1, flat)
	zero := func(float64) float64 { return 0 }
	rim.Left(zero)
	rim.Right(zero)
	return s, rim, nil
}

// settle finds the shape of least energy, on the dome or without it.
func (m membrane) settle(ctx context.Context, b lattice.Block, dome bool) (*minimize.Found, error) {
	s, held, err := m.system(b)
	if err != nil {
		return nil, err
	}
	if dome {
		held.Bounds(func(x, t float64) float64 { return min(0, m.dome(x, t)) }, nil)
	}
	return minimize.Minimum(ctx, s, held, field.NewHistory(b, 1), nil)
}

// measureFree returns what is known without the dome: the centre of a membrane
// under unit pressure sags by 0.0736713532815.
func (m membrane) measureFree(found *minimize.Found) []refine.Quantity {
	h := found.History
	n, i := h.Block.Slices()/2, h.Block.Sites()/2
	return []refine.Quantity{{Name: "free_sag", Value: -h.At(n, 0, i) / m.pressure, Unit: "per pressure"}}
}

// measure returns the energy on the dome, the push of the dome and the area of
// contact. The area is a count of cells and converges irregularly.
func (m membrane) measure(found *minimize.Found) []refine.Quantity {
	h := found.History
	cell := h.Block.Time.Step * h.Block.Space.Step
	var push, area float64
	for _, r := range found.Reactions {
		if r.Kind == "lower bound" {
			push += math.Abs(r.Push)
			area += cell
		}
	}
	return []refine.Quantity{
		{Name: "energy", Value: found.Report.CostAfter, Unit: "tension·length"},
		{Name: "dome_push", Value: push, Unit: "tension·length"},
		{Name: "contact_area", Value: area, Unit: "length²"},
	}
}

// relax lets the membrane move from flat to its shape without the dome.
func (m membrane) relax(ctx context.Context, b lattice.Block) (*minimize.Relaxed, error) {
	s, rim, err := m.system(b)
	if err != nil {
		return nil, err
	}
	// The slowest mode decays like exp(−2π²τ).
	const until = 0.3
	return minimize.Relax(ctx, s, rim, field.NewHistory(b, 1), &minimize.RelaxSettings{
		Implicit: true, Step: until / 120, Until: until, Every: 2, Keep: true,
	})
}

// draw writes the figures.
func draw(m membrane, resting *minimize.Found, relaxed *minimize.Relaxed, out string) error {
	h := resting.History
	b := h.Block
	square := figure.Page{Width: 140, Height: 120}
	contact := figure.Curve{Label: "rim of the contact"}
	contact.X, contact.Y = m.rim(h)
	low := h.Clone().MaxAbs()
	shape := figure.Map{
		History: h, Title: "An invented membrane on a dome", XLabel: "x", TLabel: "y", ValueLabel: "deflection u",
		Low: -low, High: 0, Page: square,
	}
	if len(contact.X) > 0 {
		shape.Curves = append(shape.Curves, contact)
	}
	if err := shape.Save(filepath.Join(out, "shape.png")); err != nil {
		return err
	}
	n := b.Slices() / 2
	xs := b.Space.Positions(nil)
	dome := make([]float64, len(xs))
	for i, x := range xs {
		dome[i] = m.dome(x, 0.5)
	}
	free := relaxed.History.Slice(relaxed.History.Block.Slices() / 2).Component(0)
	section := figure.Profile{
		Title: "Section through the middle", ValueLabel: "deflection u",
		Curves: []figure.Curve{
			{X: xs, Y: h.Slice(n).Component(0), Label: "membrane"},
			{X: xs, Y: dome, Label: "dome"},
			{X: relaxed.History.Block.Space.Positions(nil), Y: free, Label: "without the dome"},
		},
	}
	if err := section.Save(filepath.Join(out, "section.png")); err != nil {
		return err
	}
	film := figure.Animation{
		Title: "An invented membrane gives way", XLabel: "x", TLabel: "y", ValueLabel: "deflection u", Page: square,
	}
	for _, f := range relaxed.Frames {
		film.Frames = append(film.Frames, figure.Frame{History: f.History, Caption: fmt.Sprintf("τ = %.3f", f.Tau)})
	}
	return film.Save(filepath.Join(out, "relaxation.gif"))
}

// rim returns the curve around the events that touch the dome: the ends of the
// contact in each row, up on the right and down on the left.
func (m membrane) rim(h *field.History) (x, y []float64) {
	b := h.Block
	var left, right, rows []float64
	for n := range b.Slices() {
		first, last := -1, -1
		for i, u := range h.Slice(n).Component(0) {
			if e := b.At(n, i); u <= m.dome(e.X, e.T)+1e-12 && i > 0 && i < b.Sites()-1 {
				if first < 0 {
					first = i
				}
				last = i
			}
		}
		if first >= 0 {
			left, right, rows = append(left, b.Space.At(first)), append(right, b.Space.At(last)), append(rows, b.Time.At(n))
		}
	}
	for k := range rows {
		x, y = append(x, right[k]), append(y, rows[k])
	}
	for k := len(rows) - 1; k >= 0; k-- {
		x, y = append(x, left[k]), append(y, rows[k])
	}
	if len(x) > 0 {
		x, y = append(x, x[0]), append(y, y[0])
	}
	return x, y
}
