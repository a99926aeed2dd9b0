package lattice_test

import (
	"math"
	"testing"

	"github.com/google/go-cmp/cmp"

	"github.com/tenter-go/tenter/lattice"
)

func TestNewBlock(t *testing.T) {
	good := lattice.Axis{Step: 0.5, Sites: 3}
	for _, tt := range []struct {
		name        string
		clock, line lattice.Axis
		want        string
	}{
		{"good", good, good, ""},
		{"period", lattice.Axis{Step: 0.5, Sites: 3, Periodic: true}, good, ""},
		{"bad clock", lattice.Axis{Step: -3, Sites: 3}, good, "time axis: lattice: axis has the step -3"},
		{"bad line", good, lattice.Axis{Step: 1, Sites: 1}, "space axis: lattice: axis has 1 sites"},
		{"held start", lattice.Axis{Step: 1, Sites: 3, Left: lattice.Held}, good, "held start"},
		{"open finish", lattice.Axis{Step: 1, Sites: 3, Right: lattice.Open}, good, "open finish"},
		{"too many events", lattice.Axis{Step: 1, Sites: 1 << 40}, lattice.Axis{Step: 1, Sites: 1 << 40}, "1099511627776 slices"},
	} {
		got, err := lattice.NewBlock(tt.clock, tt.line)
		wantError(t, tt.name, err, tt.want)
		want := lattice.Block{Time: tt.clock, Space: tt.line}
		if tt.want != "" {
			want = lattice.Block{}
		}
		if diff := cmp.Diff(want, got); diff != "" {
			t.Errorf("%s: block (-want +got):\n%s", tt.name, diff)
		}
	}
}

func TestBlockIndex(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{From: 1, Step: 0.08, Sites: 26}, Space: lattice.Axis{From: -40, Step: 0.1, Sites: 801}}
	if b.Slices() != 26 || b.Sites() != 801 {
		t.Errorf("%d slices of %d sites, want 26 of 801", b.Slices(), b.Sites())
	}
	for n := 0; n < b.Slices(); n += 5 {
		for i := 0; i < b.Sites(); i += 7 {
			gn, gi, err := b.Index(b.At(n, i))
			if err != nil || gn != n || gi != i {
				t.Fatalf("Index(At(%d, %d)) = %d, %d, %v", n, i, gn, gi, err)
			}
		}
	}
	for _, tt := range []struct {
		name  string
		event lattice.Event
		want  string
	}{
		{"too late", lattice.Event{T: 3.08, X: 0}, "event (x, t) = (0, 3.08): time: lattice: position 3.08 is off the axis"},
		{"between slices", lattice.Event{T: 1.02, X: 0}, "time: lattice: position 1.02 is 0.25 steps"},
		{"off the line", lattice.Event{T: 1, X: -41}, "space: lattice: position -41 is off the axis"},
		{"time NaN", lattice.Event{T: nan, X: 0}, "time: lattice: position NaN"},
	} {
		_, _, err := b.Index(tt.event)
		wantError(t, tt.name, err, tt.want)
	}
}

func TestCourant(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 0.25, Sites: 3}, Space: lattice.Axis{Step: 0.5, Sites: 3}}
	if got := b.Courant(1.5); got != 0.75 {
		t.Errorf("Courant number of c = 1.5, k = 0.25, h = 0.5 is %v, want ck/h = 0.75", got)
	}
	if got := b.Refine(4).Courant(1.5); got != 0.75 {
		t.Errorf("refining both axes changes the Courant number to %v", got)
	}
}

func TestBlockCoarsen(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 1, Sites: 7}, Space: lattice.Axis{Step: 1, Sites: 5}}
	fine := b.Refine(3)
	back, err := fine.Coarsen(3)
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(b, back); diff != "" { // 3·(1/3) is 1 in float64
		t.Errorf("refined and coarsened (-want +got):\n%s", diff)
	}
	_, err = b.Coarsen(4)
	wantError(t, "slices", err, "time axis: lattice: cannot coarsen 6 links by 4")
	_, err = b.Coarsen(3)
	wantError(t, "sites", err, "space axis: lattice: cannot coarsen 4 links by 3")
}

func TestWindow(t *testing.T) {
	b := lattice.Block{
		Time:  lattice.Axis{From: 2, Step: 0.5, Sites: 5},
		Space: lattice.Axis{From: -1, Step: 0.25, Sites: 9, Left: lattice.Held, Right: lattice.Open},
	}
	ring := b
	ring.Space.Left, ring.Space.Right = lattice.Free, lattice.Free
	ring.Space.Periodic, ring.Space.Jump = true, []float64{2 * math.Pi}
	for _, tt := range []struct {
		name           string
		of             lattice.Block
		n0, n1, i0, i1 int
		want           lattice.Block
		err            string
	}{
		{"all", b, 0, 5, 0, 9, b, ""},
		{"all of a ring", ring, 0, 5, 0, 9, ring, ""},
		{"left part", b, 1, 3, 0, 4, lattice.Block{Time: lattice.Axis{From: 2.5, Step: 0.5, Sites: 2}, Space: lattice.Axis{From: -1, Step: 0.25, Sites: 4, Left: lattice.Held}}, ""},
		{"right part", b, 0, 5, 6, 9, lattice.Block{Time: b.Time, Space: lattice.Axis{From: 0.5, Step: 0.25, Sites: 3, Right: lattice.Open}}, ""},
		{"cut ring", ring, 0, 5, 0, 8, lattice.Block{Time: b.Time, Space: lattice.Axis{From: -1, Step: 0.25, Sites: 8}}, ""},
		{"before the start", b, -1, 3, 0, 9, lattice.Block{}, "slices: lattice: part [-1, 3)"},
		{"beyond the end", b, 0, 5, 4, 10, lattice.Block{}, "sites: lattice: part [4, 10) of an axis of 9 sites"},
		{"one slice", b, 2, 3, 0, 9, lattice.Block{}, "part [2, 3)"},
		{"back to front", b, 0, 5, 6, 2, lattice.Block{}, "part [6, 2)"},
	} {
		got, err := tt.of.Window(tt.n0, tt.n1, tt.i0, tt.i1)
		wantError(t, tt.name, err, tt.err)
		if diff := cmp.Diff(tt.want, got); diff != "" {
			t.Errorf("%s (-want +got):\n%s", tt.name, diff)
		}
	}
}
