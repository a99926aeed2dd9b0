package minimize

import (
	"context"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// The response of a least-residual history to one of its observations is the
// change that another solve with that observation moved finds; the problem is
// linear, so the step may be large.
func TestResponseToAnObservationOfAResidual(t *testing.T) {
	b := lattice.Block{Time: lattice.Axis{Step: 0.3, Sites: 6}, Space: lattice.Axis{Step: 0.4, Sites: 5}}
	s, err := action.New(b, action.Wave{Potential: action.Mass(1), Alpha: action.Uniform(0.2)})
	if err != nil {
		t.Fatal(err)
	}
	solve := func(last float64) (*constraint.Set, *Found) {
		held := constraint.On(b)
		for i := range 5 {
			held.Observe(0, b.Space.At(i), math.Sin(float64(i)), 0.1)
			held.Observe(0.9, b.Space.At(i), math.Cos(float64(i)), 0.3)
		}
		held.Observe(1.5, 0.8, last, 0.05)
		found, err := LeastResidual(context.Background(), s, held, field.NewHistory(b, 1), &Settings{Flatness: 1e-12})
		if err != nil {
			t.Fatal(err)
		}
		return held, found
	}
	held, found := solve(0.4)
	_, moved := solve(1.4)
	r, err := NewResponse(s, held, found, nil)
	if err != nil {
		t.Fatal(err)
	}
	in, err := r.Of(Change{Part: ObservedValue, Event: lattice.Event{T: 1.5, X: 0.8}})
	if err != nil {
		t.Fatal(err)
	}
	for e, v := range in[0].History.Data {
		// The normal equations behind the two solves, of a condition number
		// near 1e5, squared, times rounding.
		if got := moved.History.Data[e] - found.History.Data[e]; math.Abs(got-v) > 1e-7 {
			t.Fatalf("value %d moves by %g, response %g", e, got, v)
		}
	}
	if in[0].History.MaxAbs() < 0.1 {
		t.Errorf("response is %g at most; want the history to follow", in[0].History.MaxAbs())
	}
}
