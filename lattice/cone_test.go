package lattice_test

import (
	"math"
	"testing"

	"github.com/google/go-cmp/cmp"

	"github.com/tenter-go/tenter/lattice"
)

func TestConeErrors(t *testing.T) {
	line := lattice.Axis{From: -1, Step: 0.5, Sites: 5}
	apex := lattice.Event{T: 1, X: 0.5}
	for _, c := range []struct {
		speed float64
		want  string
	}{{0, "speed 0;"}, {-2, "speed -2"}, {nan, "speed NaN"}, {inf, "speed +Inf"}} {
		_, err := lattice.NewCone(line, apex, c.speed)
		wantError(t, "constant", err, c.want)
		_, err = lattice.NewConeVarying(line, apex, func(x float64) float64 {
			if x == 0.25 { // the middle of a link
				return c.speed
			}
			return 1
		})
		wantError(t, "varying", err, c.want[:len(c.want)-1])
		wantError(t, "varying", err, "x = 0.25")
	}
	for name, build := range map[string]func(lattice.Axis, lattice.Event) error{
		"constant": func(a lattice.Axis, e lattice.Event) error { _, err := lattice.NewCone(a, e, 1); return err },
		"varying": func(a lattice.Axis, e lattice.Event) error {
			_, err := lattice.NewConeVarying(a, e, func(float64) float64 { return 1 })
			return err
		},
	} {
		wantError(t, name, build(line, lattice.Event{T: nan}), "(x, t) = (0, NaN)")
		wantError(t, name, build(line, lattice.Event{X: inf}), "(x, t) = (+Inf, 0)")
		wantError(t, name, build(lattice.Axis{Step: -1, Sites: 3}, apex), "light cone: lattice: axis has the step -1")
	}
}

func TestConeSides(t *testing.T) {
	line := lattice.Axis{From: -10, Step: 0.5, Sites: 41}
	ring := lattice.Axis{From: -10, Step: 0.5, Sites: 40, Periodic: true}
	apex := lattice.Event{T: 3, X: 9}
	two := func(float64) float64 { return 2 }
	for _, tt := range []struct {
		name string
		line lattice.Axis
		e    lattice.Event
		want lattice.Side
	}{
		{"apex", line, apex, lattice.Future},
		{"straight up", line, lattice.Event{T: 3.1, X: 9}, lattice.Future},
		{"straight down", line, lattice.Event{T: 2.9, X: 9}, lattice.Past},
		{"beside", line, lattice.Event{T: 3, X: 8.9}, lattice.Outside},
		{"on the future surface", line, lattice.Event{T: 5, X: 5}, lattice.Future},
		{"on the past surface", line, lattice.Event{T: 1, X: 5}, lattice.Past},
		{"just outside", line, lattice.Event{T: 4.999, X: 5}, lattice.Outside},
		{"rounding from the surface", line, lattice.Event{T: 3 + (9-8.7)/2, X: 8.7}, lattice.Future},
		{"the long way on a line", line, lattice.Event{T: 4, X: -9}, lattice.Outside},
		{"the short way on a ring", ring, lattice.Event{T: 4, X: -9}, lattice.Future},
		{"the short way on a ring, past", ring, lattice.Event{T: 2, X: -9}, lattice.Past},
		{"not yet on a ring", ring, lattice.Event{T: 3.99, X: -9}, lattice.Outside},
		{"once around a ring", ring, lattice.Event{T: 3, X: 29}, lattice.Future},
	} {
		constant, err := lattice.NewCone(tt.line, apex, 2)
		if err != nil {
			t.Fatal(err)
		}
		varying, err := lattice.NewConeVarying(tt.line, apex, two)
		if err != nil {
			t.Fatal(err)
		}
		for kind, c := range map[string]*lattice.Cone{"constant": constant, "varying": varying} {
			if got := c.Side(tt.e); got != tt.want {
				t.Errorf("%s, %s speed: side %d, want %d", tt.name, kind, got, tt.want)
			}
			if c.Apex() != apex {
				t.Errorf("apex %v, want %v", c.Apex(), apex)
			}
		}
	}
}

// For c(x) = 1 + x²/4 a signal needs 2 atan(x/2) from 0 to x (elementary
// integral). Link by link with Simpson's rule the order is 4 at sites.
func TestConeVaryingOrder(t *testing.T) {
	c := func(x float64) float64 { return 1 + x*x/4 }
	var errors []float64
	for _, step := range []float64{0.5, 0.25, 0.125} {
		line := lattice.Axis{From: -4, Step: step, Sites: int(8/step) + 1}
		cone, err := lattice.NewConeVarying(line, lattice.Event{}, c)
		if err != nil {
			t.Fatal(err)
		}
		errors = append(errors, math.Abs(cone.Delay(1)-2*math.Atan(0.5)))
	}
	for j := range 2 {
		if p := math.Log2(errors[j] / errors[j+1]); math.Abs(p-4) > 0.2 { // next term of the error is h⁶, 1/16 of this one's change
			t.Errorf("errors %.3g: order %.2f, want 4", errors, p)
		}
	}
}

// Two media: speed 1 left of 0, 2 right of 0, and the front has a kink there.
func TestConeFront(t *testing.T) {
	line := lattice.Axis{From: -4, Step: 1, Sites: 9}
	cone, err := lattice.NewConeVarying(line, lattice.Event{T: 10, X: -2}, func(x float64) float64 {
		if x < 0 {
			return 1
		}
		return 2
	})
	if err != nil {
		t.Fatal(err)
	}
	xs := []float64{4, -4, -2, -1}
	x, future, past := cone.Front(xs)
	if diff := cmp.Diff([]float64{-4, -2, -1, 4}, x); diff != "" {
		t.Errorf("positions (-want +got):\n%s", diff)
	}
	if xs[0] != 4 {
		t.Error("Front sorted the caller's positions in place")
	}
	// The link [−1, 0] sees the speed at 0 in one of Simpson's three points: its
	// delay is (1 + 4 + ½)/6 instead of 1.
	last := 1 + 5.5/6 + 2
	for i, want := range []float64{2, 0, 1, last} {
		if math.Abs(future[i]-10-want) > 1e-14 || math.Abs(10-past[i]-want) > 1e-14 { // rounding at 10
			t.Errorf("front at x = %g: %v and %v, want 10 ± %v", x[i], future[i], past[i], want)
		}
	}
}

// A speed known only on [From, From+Length) is not asked for elsewhere.
func TestConeStaysOnTheRing(t *testing.T) {
	ring := lattice.Axis{From: 0, Step: 0.25, Sites: 8, Periodic: true}
	cone, err := lattice.NewConeVarying(ring, lattice.Event{}, func(x float64) float64 {
		if x < 0 || x >= 2 {
			t.Errorf("speed asked for at x = %g", x)
		}
		return 1
	})
	if err != nil {
		t.Fatal(err)
	}
	for _, tt := range []struct{ x, want float64 }{{0.5, 0.5}, {1.5, 0.5}, {-0.25, 0.25}, {2, 0}, {5.1, 0.9}} {
		if got := cone.Delay(tt.x); math.Abs(got-tt.want) > 1e-14 {
			t.Errorf("delay to %g: %v, want %v", tt.x, got, tt.want)
		}
	}
}
