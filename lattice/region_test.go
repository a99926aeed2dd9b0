package lattice_test

import (
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/lattice"
)

func TestRegionWeights(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 0.5, Sites: 5}, Space: lattice.Axis{Step: 0.25, Sites: 9}}
	whole, err := lattice.NewRegion(b, nil)
	if err != nil {
		t.Fatal(err)
	}
	// On a whole block with free ends the weights are products of those of the
	// axes.
	for n := range b.Slices() {
		for i := range b.Sites() {
			if got, want := whole.Event(n, i), b.Time.Weight(n)*b.Space.Weight(i); got != want {
				t.Errorf("event (%d, %d) has the weight %v, want %v", n, i, got, want)
			}
		}
	}
	// An L: the events' weights add up to the number of cells (each cell has
	// four quarters), the links' to two a cell.
	l, err := lattice.NewRegion(b, func(e lattice.Event) bool { return e.T < 1 || e.X < 0.5 })
	if err != nil {
		t.Fatal(err)
	}
	var cells, events, links float64
	for n := range b.Slices() {
		for i := range b.Sites() {
			if l.Cell(n, i) {
				cells++
			}
			events += l.Event(n, i)
			links += l.TimeLink(n, i) + l.SpaceLink(n, i)
		}
	}
	if want := 2*8.0 + 2*2; cells != want || events != want || links != 2*want {
		t.Errorf("L of %v cells, %v of events, %v of links; want %v, %v, %v", cells, events, links, want, want, 2*want)
	}
	if got := l.Event(2, 2); got != 0.75 {
		t.Errorf("re-entrant corner has the weight %v, want 0.75", got)
	}
	if got := l.Event(4, 5); got != 0 || l.Inside(4, 5) {
		t.Errorf("event outside has the weight %v and Inside %v, want 0 and false", got, l.Inside(4, 5))
	}
	if !l.Inside(4, 2) || !l.Inside(0, 8) {
		t.Error("an event on the rim is not in the region")
	}
}

func TestRegionOnARing(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 1, Sites: 4, Periodic: true}, Space: lattice.Axis{Step: 1, Sites: 6, Periodic: true}}
	r, err := lattice.NewRegion(b, func(e lattice.Event) bool { return e.X < 5 })
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		i    int
		want float64
	}{{0, 0.5}, {1, 1}, {5, 0.5}} {
		if got := r.Event(0, c.i); got != c.want {
			t.Errorf("site %d has the weight %v, want %v", c.i, got, c.want)
		}
	}
	if r.SpaceLink(2, 5) != 0 || r.TimeLink(3, 0) != 0.5 {
		t.Errorf("links beside the missing column weigh %v and %v, want 0 and 0.5", r.SpaceLink(2, 5), r.TimeLink(3, 0))
	}
}

func TestRegionErrors(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 1, Sites: 3}, Space: lattice.Axis{Step: 1, Sites: 3}}
	if _, err := lattice.NewRegion(b, func(lattice.Event) bool { return false }); err == nil || !strings.Contains(err.Error(), "without a cell") {
		t.Errorf("empty region: %v", err)
	}
	b.Space.Step = math.NaN()
	if _, err := lattice.NewRegion(b, func(lattice.Event) bool { return true }); err == nil || !strings.Contains(err.Error(), "NaN") {
		t.Errorf("region of a bad block: %v", err)
	}
}
