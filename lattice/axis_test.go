package lattice_test

import (
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"github.com/tenter-go/tenter/lattice"
)

var (
	nan = math.NaN()
	inf = math.Inf(1)
)

// wantError checks that err is an error that says what, or nil if what is empty.
func wantError(t *testing.T, name string, err error, what string) {
	t.Helper()
	switch {
	case what == "" && err != nil:
		t.Errorf("%s: %v", name, err)
	case what != "" && err == nil:
		t.Errorf("%s: no error, want one that says %q", name, what)
	case what != "" && !strings.Contains(err.Error(), what):
		t.Errorf("%s: error %q does not say %q", name, err, what)
	case what != "" && strings.Contains(err.Error(), "\n"):
		t.Errorf("%s: error %q has more than one line", name, err)
	}
}

func TestAxisCheck(t *testing.T) {
	for _, tt := range []struct {
		name string
		axis lattice.Axis
		want string
	}{
		{"good", lattice.Axis{From: -40, Step: 0.1, Sites: 801}, ""},
		{"two sites", lattice.Axis{Step: 1, Sites: 2, Left: lattice.Odd, Right: lattice.Open}, ""},
		{"ring", lattice.Axis{Step: 0.5, Sites: 16, Periodic: true, Jump: []float64{2 * math.Pi, 0}}, ""},
		{"starts at NaN", lattice.Axis{From: nan, Step: 1, Sites: 3}, "starts at NaN"},
		{"starts at infinity", lattice.Axis{From: -inf, Step: 1, Sites: 3}, "starts at -Inf"},
		{"no step", lattice.Axis{Sites: 3}, "step 0"},
		{"step back", lattice.Axis{Step: -0.5, Sites: 3}, "step -0.5"},
		{"step NaN", lattice.Axis{Step: nan, Sites: 3}, "step NaN"},
		{"endless step", lattice.Axis{Step: inf, Sites: 3}, "step +Inf"},
		{"no sites", lattice.Axis{Step: 1}, "0 sites"},
		{"one site", lattice.Axis{Step: 1, Sites: 1}, "1 sites"},
		{"fewer than none", lattice.Axis{Step: 1, Sites: -7}, "-7 sites"},
		{"unknown left end", lattice.Axis{Step: 1, Sites: 3, Left: 9}, "left end is end(9)"},
		{"unknown right end", lattice.Axis{Step: 1, Sites: 3, Right: 17}, "right end is end(17)"},
		{"ring with an end", lattice.Axis{Step: 1, Sites: 3, Periodic: true, Left: lattice.Held}, "held left"},
		{"ring with another end", lattice.Axis{Step: 1, Sites: 3, Periodic: true, Right: lattice.Open}, "open right"},
		{"jump without a ring", lattice.Axis{Step: 1, Sites: 3, Jump: []float64{6.5}}, "jump [6.5]"},
		{"jump NaN", lattice.Axis{Step: 1, Sites: 3, Periodic: true, Jump: []float64{0, nan}}, "jump of component 1 is NaN"},
		{"jump infinite", lattice.Axis{Step: 1, Sites: 3, Periodic: true, Jump: []float64{inf}}, "jump of component 0 is +Inf"},
		{"step lost beside the start", lattice.Axis{From: 1e17, Step: 1, Sites: 3}, "from 1e+17 in 2 steps of 1"},
		{"step lost beside the finish", lattice.Axis{From: -3e16, Step: 3, Sites: 1 << 60}, "steps of 3"},
		{"finish overflows", lattice.Axis{From: 1e308, Step: 1e308, Sites: 3}, "steps of 1e+308"},
	} {
		wantError(t, tt.name, tt.axis.Check(), tt.want)
	}
}

func TestEnd(t *testing.T) {
	type facts struct {
		Name    string
		Unknown bool
		Weight  float64
	}
	want := map[lattice.End]facts{
		lattice.Free: {"free", true, 0.5},
		lattice.Held: {"held", false, 1},
		lattice.Open: {"open", true, 0.5},
		lattice.Even: {"even", true, 0.5},
		lattice.Odd:  {"odd", false, 1},
	}
	for end, w := range want {
		left := lattice.Axis{Step: 1, Sites: 3, Left: end}
		right := lattice.Axis{Step: 1, Sites: 3, Right: end}
		for i, got := range []float64{left.Weight(0), right.Weight(2)} {
			if diff := cmp.Diff(w, facts{end.String(), end.Unknown(), got}); diff != "" {
				t.Errorf("end %v, side %d (-want +got):\n%s", end, i, diff)
			}
		}
		if left.Weight(1) != 1 || right.Weight(1) != 1 || left.Weight(2) != 0.5 {
			t.Errorf("a %v end changes the weight of another site", end)
		}
	}
}

// The weights are those of the trapezoid rule: they add up to the length, and
// on a ring every site has a whole cell.
func TestWeightsAddUpToLength(t *testing.T) {
	for _, a := range []lattice.Axis{
		{Step: 0.25, Sites: 9},
		{Step: 0.25, Sites: 9, Periodic: true},
		{Step: 0.25, Sites: 2, Left: lattice.Even, Right: lattice.Open},
	} {
		var sum float64
		for i := range a.Sites {
			sum += a.Weight(i) * a.Step
		}
		if sum != a.Length() {
			t.Errorf("weights of %+v add up to %v, want the length %v", a, sum, a.Length())
		}
	}
}

func TestAxisPositions(t *testing.T) {
	line := lattice.Axis{From: -1, Step: 0.5, Sites: 4}
	if diff := cmp.Diff([]float64{7, -1, -0.5, 0, 0.5}, line.Positions([]float64{7})); diff != "" {
		t.Errorf("positions (-want +got):\n%s", diff)
	}
	ring := line
	ring.Periodic = true
	for _, tt := range []struct {
		name      string
		got, want float64
	}{
		{"At beyond the end", line.At(-3), -2.5},
		{"Between", line.Between(1), -0.25},
		{"To", line.To(), 0.5},
		{"length of the line", line.Length(), 1.5},
		{"length of the ring", ring.Length(), 2},
		{"links of the line", float64(line.Links()), 3},
		{"links of the ring", float64(ring.Links()), 4},
		{"jump unless set", ring.JumpOf(2), 0},
		{"jump", lattice.Axis{Jump: []float64{1, 2}}.JumpOf(1), 2},
	} {
		if tt.got != tt.want {
			t.Errorf("%s: %v, want %v", tt.name, tt.got, tt.want)
		}
	}
}

func TestAxisIndex(t *testing.T) {
	line := lattice.Axis{From: -2, Step: 0.5, Sites: 9}
	ring := lattice.Axis{From: -2, Step: 0.5, Sites: 8, Periodic: true}
	for _, tt := range []struct {
		name string
		axis lattice.Axis
		x    float64
		want int
		err  string
	}{
		{"first", line, -2, 0, ""},
		{"last", line, 2, 8, ""},
		{"within OnSite", line, 0.5 + 0.9e-9*0.5, 5, ""},
		{"just beyond OnSite", line, 0.5 + 1.1e-9*0.5, 0, "is 1.1e-09 steps from the nearest site, 0.5"},
		{"between sites", line, 0.6, 0, "position 0.6 is 0.2 steps from the nearest site, 0.5"},
		{"off the left end", line, -2.5, 0, "position -2.5 is off the axis, which runs from -2 to 2"},
		{"off the right end", line, 17, 0, "position 17 is off the axis"},
		{"NaN", line, nan, 0, "position NaN"},
		{"infinite", line, -inf, 0, "position -Inf"},
		{"once around", ring, 2, 0, ""},
		{"twice around", ring, 6.5, 1, ""},
		{"around to the left", ring, -2.5, 7, ""},
		{"between sites of a ring", ring, 2.25, 0, "position 2.25 is 0.5 steps"},
	} {
		got, err := tt.axis.Index(tt.x)
		wantError(t, tt.name, err, tt.err)
		if err == nil && got != tt.want {
			t.Errorf("%s: site %d, want %d", tt.name, got, tt.want)
		}
	}
}

// Index undoes At on every axis, also where one step is only a few million times
// the rounding of a position.
func TestIndexUndoesAt(t *testing.T) {
	for _, a := range []lattice.Axis{
		{From: -40, Step: 0.1, Sites: 801},
		{From: 1. / 3, Step: 1. / 7, Sites: 1001, Periodic: true},
		{From: -1e6, Step: 1e-3, Sites: 2_000_000_001},
		{From: 1e7, Step: 1e-4, Sites: 1_000_001},
	} {
		for i := 0; i < a.Sites; i += 1 + a.Sites/997 {
			got, err := a.Index(a.At(i))
			if err != nil || got != i {
				t.Errorf("Index(At(%d)) on %+v = %d, %v", i, a, got, err)
				break
			}
		}
	}
}

func TestNearest(t *testing.T) {
	line := lattice.Axis{Step: 0.5, Sites: 5}
	ring := lattice.Axis{Step: 0.5, Sites: 5, Periodic: true}
	for _, tt := range []struct {
		axis lattice.Axis
		x    float64
		site int
		off  float64
	}{
		{line, 0.625, 1, 0.25},
		{line, 5, 4, 6},
		{line, -1, 0, 2},
		{ring, 2.375, 0, 0.25},
		{ring, -0.625, 4, 0.25},
	} {
		site, off := tt.axis.Nearest(tt.x)
		if site != tt.site || off != tt.off {
			t.Errorf("nearest to %v, periodic %v: site %d, %v steps; want %d, %v", tt.x, tt.axis.Periodic, site, off, tt.site, tt.off)
		}
	}
	wantPanic(t, "Nearest(NaN)", func() { line.Nearest(nan) })
}

func wantPanic(t *testing.T, name string, slip func()) {
	t.Helper()
	defer func() {
		if recover() == nil {
			t.Errorf("%s: no panic", name)
		}
	}()
	slip()
}

func TestRefineAndCoarsen(t *testing.T) {
	for _, a := range []lattice.Axis{
		{From: -1, Step: 0.75, Sites: 5, Left: lattice.Held, Right: lattice.Open},
		{From: -1, Step: 0.75, Sites: 5, Periodic: true, Jump: []float64{1}},
	} {
		for _, factor := range []int{1, 2, 3, 8} {
			fine := a.Refine(factor)
			if math.Abs(fine.Length()-a.Length()) > 1e-15*a.Length()*2 {
				t.Errorf("refining by %d changes the length from %v to %v", factor, a.Length(), fine.Length())
			}
			for i := range a.Sites {
				// factor·(step/factor) is a rounding or two away from the step.
				if math.Abs(fine.At(factor*i)-a.At(i)) > 2e-15 {
					t.Errorf("site %d moved to %v, want %v", i, fine.At(factor*i), a.At(i))
				}
			}
			back, err := fine.Coarsen(factor)
			if err != nil {
				t.Fatal(err)
			}
			back.Step = a.Step // up to rounding, tested above
			if diff := cmp.Diff(a, back); diff != "" {
				t.Errorf("refined and coarsened by %d (-want +got):\n%s", factor, diff)
			}
		}
	}
	line := lattice.Axis{Step: 1, Sites: 7}
	ring := lattice.Axis{Step: 1, Sites: 6, Periodic: true}
	for _, tt := range []struct {
		name   string
		axis   lattice.Axis
		factor int
		want   string
	}{
		{"no divisor", line, 4, "6 links by 4"},
		{"zero", line, 0, "6 links by 0"},
		{"negative", line, -2, "6 links by -2"},
		{"down to two sites", line, 6, ""},
		{"ring down to one site", ring, 6, "1 sites"},
		{"ring down to two", ring, 3, ""},
	} {
		got, err := tt.axis.Coarsen(tt.factor)
		wantError(t, tt.name, err, tt.want)
		if err != nil && got.Sites != 0 {
			t.Errorf("%s: axis %+v beside an error", tt.name, got)
		}
	}
	wantPanic(t, "Refine(0)", func() { line.Refine(0) })
}
