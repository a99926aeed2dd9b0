package track_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/field/track"
	"github.com/tenter-go/tenter/lattice"
)

// gauss adds a Gaussian of unit width to e.
func gauss(e []float64, line lattice.Axis, at, height float64) {
	for i := range e {
		x := line.At(i) - at
		e[i] += height * math.Exp(-x*x/2)
	}
}

// A Gaussian of unit width has the integral √(2π). Its top is found to fourth
// order in the spacing.
func TestPulses(t *testing.T) {
	var worst []float64
	for _, h := range []float64{0.8, 0.4, 0.2} {
		line := lattice.Axis{From: -20, Step: h, Sites: int(40/h+0.5) + 1}
		var off float64
		for n := range 20 {
			at := 0.05*float64(n) + 0.0137
			e := make([]float64, line.Sites)
			gauss(e, line, at-10, 1)
			gauss(e, line, at+3, 2)
			found := track.Pulses(nil, line, e, 1e-9)
			if len(found) != 2 {
				t.Fatalf("found %v; want two pulses", found)
			}
			p := found[1]
			off = max(off, math.Abs(p.X-at-3))
			// The sum over sites of a Gaussian is its integral to e^(−2π²/h²), but for the
			// tails below the floor; the centroid likewise.
			if math.Abs(p.Content-2*math.Sqrt(2*math.Pi)) > 1e-7 || math.Abs(p.Centroid-at-3) > 1e-7 {
				t.Errorf("h = %g: content %.9g, centroid %.9g; want %.9g, %.9g", h, p.Content, p.Centroid, 2*math.Sqrt(2*math.Pi), at+3)
			}
			if math.Abs(p.Height-2) > 2*h*h*h*h {
				t.Errorf("h = %g: height %.9g; want 2", h, p.Height)
			}
		}
		worst = append(worst, off)
	}
	p := math.Log2(worst[1] / worst[2])
	t.Logf("off by %.2g, order %.2f", worst, p)
	if !(p > 3.7 && p < 5.3) || worst[2] > 1e-4 {
		t.Errorf("off by %.2g, order %.2f; want order 4 or, at a symmetric top, 5", worst, p)
	}
}

// Two pulses that pass through each other are seen as one for a while and keep
// their order.
func TestPulsesMerge(t *testing.T) {
	line := lattice.Axis{From: -30, Step: 0.1, Sites: 601}
	train := &track.PulseTrain{Line: line, Floor: 0.01}
	for n := range 101 {
		at := -25 + 0.5*float64(n)
		e := make([]float64, line.Sites)
		gauss(e, line, 0.5*at, 1)
		gauss(e, line, -0.5*at, 1)
		if err := train.Add(at, e); err != nil {
			t.Fatal(err)
		}
	}
	if len(train.Paths()) != 2 || len(train.Seen()) != 2 {
		t.Fatalf("%d paths, %d still seen; want 2 of both", len(train.Paths()), len(train.Seen()))
	}
	for k, want := range []float64{-12.5, 12.5} {
		p := train.Paths()[k]
		if _, x := p.Last(); p.Bounces() != 1 || math.Abs(x-want) > 1e-4 { // see TestPulses
			t.Errorf("path %d: merged %v, ends at %.5f; want once, %.5f", k, p.Merged, x, want)
		}
	}
}

func TestFloorNaN(t *testing.T) {
	train := &track.PulseTrain{Line: lattice.Axis{Step: 1, Sites: 5}, Floor: math.NaN()}
	if err := train.Add(0, make([]float64, 5)); err == nil {
		t.Error("floor NaN: no error")
	}
}

// A pulse at an even end has its top there.
func TestPulseAtMirror(t *testing.T) {
	line := lattice.Axis{Step: 0.1, Sites: 200, Left: lattice.Even}
	e := make([]float64, line.Sites)
	gauss(e, line, 0, 1)
	found := track.Pulses(nil, line, e, 0.01)
	if len(found) != 1 || math.Abs(found[0].X) > 1e-12 { // by symmetry
		t.Errorf("found %v; want one pulse at 0", found)
	}
}
