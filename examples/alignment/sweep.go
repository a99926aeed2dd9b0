package main

import (
	"context"
	"fmt"
	"math"
	"strings"
	"text/tabwriter"

	"github.com/tenter-go/tenter/field/store"
)

// swept is what a sweep over the anchoring strength of one wall found; the other
// walls keep theirs.
type swept struct {
	wall  part
	parts []part
	table store.Table
}

// The strengths of a sweep run from weak to strong by decades, in K/width.
const weakest, strongest = -2.0, 2.0

// sweep varies the anchoring of the last wall, the right one if it exists, in so
// many steps, on a lattice with so many cells across.
func (c *channel) sweep(ctx context.Context, across, steps int) (*swept, error) {
	b, err := c.block(across)
	if err != nil {
		return nil, err
	}
	varied := *c
	parts := varied.parts()
	last := len(parts) - 1
	s := &swept{wall: parts[last], parts: parts}
	s.table.Header = []string{"W_" + s.wall.name}
	for _, kind := range []string{"deviation_", "cost_"} {
		for _, p := range parts {
			s.table.Header = append(s.table.Header, kind+p.name)
		}
	}
	for _, wall := range parts {
		for _, p := range parts {
			s.table.Header = append(s.table.Header, "felt_"+wall.name+"_in_"+p.name)
		}
	}
	var a *alignment
	for k := range steps {
		parts[last].strength = math.Pow(10, weakest+(strongest-weakest)*float64(k)/float64(steps-1))
		if a, err = varied.settle(ctx, b, a); err != nil {
			return nil, fmt.Errorf("sweep at W = %g: %w", parts[last].strength, err)
		}
		turns, err := a.turned(ctx)
		if err != nil {
			return nil, fmt.Errorf("sweep at W = %g: %w", parts[last].strength, err)
		}
		row := []float64{parts[last].strength}
		for _, p := range parts {
			row = append(row, degrees(a.deviation(p)))
		}
		row = append(row, a.costs...)
		for _, t := range turns {
			for _, p := range parts {
				row = append(row, t.felt[p.name])
			}
		}
		s.table.Rows = append(s.table.Rows, row)
	}
	return s, nil
}

func (s *swept) write(path string) error { return store.WriteTable(path, s.table) }

// String returns the deviations and the influence of the varied wall.
func (s *swept) String() string {
	var text strings.Builder
	fmt.Fprintf(&text, "As the anchoring of the %s varies, θ − easy at each wall in degrees, and how that wall is felt:\n", s.wall.wall())
	columns := []string{"W_" + s.wall.name}
	for _, p := range s.parts {
		columns = append(columns, "deviation_"+p.name)
	}
	for _, p := range s.parts {
		columns = append(columns, "felt_"+s.wall.name+"_in_"+p.name)
	}
	w := tabwriter.NewWriter(&text, 0, 0, 2, ' ', tabwriter.AlignRight)
	fmt.Fprintln(w, strings.Join(columns, "\t")+"\t")
	for k := range s.table.Rows {
		for _, name := range columns {
			values, _ := s.table.Column(name)
			fmt.Fprintf(w, "%.4g\t", values[k])
		}
		fmt.Fprintln(w)
	}
	w.Flush()
	if turned, _ := s.table.Column("deviation_" + s.wall.name); math.Abs(turned[0]) > 45 {
		fmt.Fprintf(&text, "Where the %s has yielded by more than 45° its torque falls as it is turned further away, and it is felt the other way.\n", s.wall.wall())
	}
	return text.String()
}
