package main

import (
	"fmt"
	"math"
	"path/filepath"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/field/figure"
	"github.com/tenter-go/tenter/field/store"
)

// drawOne writes the figures of one collision.
func (j job) drawOne(c collision, f *flight) error {
	if err := j.drawMap(c, f, "map.png"); err != nil {
		return err
	}
	fig := figure.Series{
		Curves: []figure.Curve{
			{X: c.probe.Times, Y: c.probe.Values[0], Label: "φ(0, t)"},
			{X: []float64{0, c.until}, Y: []float64{c.centre(), c.centre()}, Label: "centre of a kink"},
		},
		Title:  fmt.Sprintf("%s at v = %.5g: the field in the middle", c.title, c.speed),
		TLabel: "t", ValueLabel: "φ(0, t)",
	}
	return j.save(fig, "middle.png")
}

// centre returns the value at the centre of the kink at the start.
func (p *pair) centre() float64 {
	k := min(p.vacua.Near(p.inner), p.vacua.Near(p.outer))
	if p.vacua.Centres != nil {
		return p.vacua.Centres[k]
	}
	return 0.5 * (p.vacua.Values[k] + p.vacua.Values[k+1])
}

// drawMap writes the space-time map of a collision, both halves of the line, with
// the places that were followed. The outer vacuum is in the middle of the colours.
func (j job) drawMap(c collision, f *flight, name string) error {
	const most = 40
	h := unfold(f.history, min(most, f.history.Block.Space.To()))
	centres := figure.Curve{Label: "centres of the kinks"}
	for _, side := range []float64{1, -1} {
		last := math.Inf(1)
		for n, t := range f.path.Times {
			if t-last > 1.5*look || t < last { // merged in between, or the other side
				centres.X, centres.Y = append(centres.X, math.NaN()), append(centres.Y, math.NaN())
			}
			centres.X, centres.Y = append(centres.X, side*f.path.Kinks[n].X), append(centres.Y, t)
			last = t
		}
	}
	return j.save(figure.Map{
		History: h, Title: fmt.Sprintf("%s at v = %.5g, an idealised model", c.title, c.speed),
		Diverging: true, Centre: c.outer,
		Curves: []figure.Curve{centres},
	}, name)
}

// unfold returns a history on the half line as one on the whole, up to reach on
// both sides.
func unfold(h *field.History, reach float64) *field.History {
	n := int(reach / h.Block.Space.Step)
	b := h.Block
	b.Space.From, b.Space.Sites, b.Space.Left = -float64(n)*b.Space.Step, 2*n+1, b.Space.Right
	g := field.NewHistory(b, 1)
	for s := range b.Slices() {
		from, to := h.Slice(s).Component(0), g.Slice(s).Component(0)
		for i := range n + 1 {
			to[n+i], to[n-i] = from[i], from[i]
		}
	}
	return g
}

// drawScan writes the speed after, and the number of collisions, against the
// speed before.
func (j job) drawScan(t store.Table) error {
	v, _ := t.Column("speed")
	exit, _ := t.Column("exit_speed")
	bounces, _ := t.Column("bounces")
	highest := 0.01
	for _, e := range exit {
		highest = max(highest, e)
	}
	err := j.save(figure.Profile{
		Curves: withWindows(figure.Curve{X: v, Y: exit, Label: "exit speed, 0 if captured"}, bounces, -0.05*highest, -0.03*highest),
		Title:  fmt.Sprintf("%s: speed after the last collision, t = %g", j.pair.title, j.watch),
		XLabel: "initial speed (c)", ValueLabel: "exit speed (c)",
		Low: -0.1 * highest, High: 1.1 * highest,
	}, "scan.png")
	if err != nil {
		return err
	}
	const most = 6 // captured pairs meet until they are called captured
	count := make([]float64, len(bounces))
	for k, b := range bounces {
		count[k] = min(b, most)
	}
	return j.save(figure.Profile{
		Curves: withWindows(figure.Curve{X: v, Y: count, Label: fmt.Sprintf("collisions, %d standing for more", most)}, bounces, 0.3, 0.44),
		Title:  fmt.Sprintf("%s: collisions until t = %g", j.pair.title, j.watch),
		XLabel: "initial speed (c)", ValueLabel: "collisions", Low: 0, High: most + 0.5,
	}, "bounces.png")
}

// withWindows returns a curve over the speeds and, if there are any with two
// collisions, a short upright line at each. They are shorter than a dash, and so
// are drawn whole.
func withWindows(c figure.Curve, bounces []float64, low, high float64) []figure.Curve {
	ticks := figure.Curve{Label: "two-bounce windows"}
	for k, b := range bounces {
		if v := c.X[k]; b == 2 {
			ticks.X = append(ticks.X, v, v, math.NaN())
			ticks.Y = append(ticks.Y, low, high, math.NaN())
		}
	}
	if len(ticks.X) == 0 {
		return []figure.Curve{c}
	}
	return []figure.Curve{c, ticks}
}

func (j job) save(f interface{ Save(string) error }, name string) error {
	if err := f.Save(filepath.Join(j.out, name)); err != nil {
		return fmt.Errorf("%s: %w", name, err)
	}
	return nil
}
