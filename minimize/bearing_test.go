package minimize

import (
	"context"
	"fmt"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// bearingLoad is ∫½w|∇v|² − w_l v on (0, 2π) × (0, 20) with w = (1 + ε cos x)³, w_l =
// ε sin x and ε = 0.1, on linear triangles that take w at the mean of their
// vertices: a link along x between sites has w(ends)/2 from the two triangles
// beside it; one along t has vertices in its own column four times and in the
// next columns once each, over six.
func bearingLoad(h float64) action.Wave {
	const eccentricity = 0.1
	w := func(x float64) float64 { return math.Pow(1+eccentricity*math.Cos(x), 3) }
	return action.Wave{
		Kappa:  action.Along(func(x float64) float64 { return (w(x-h/2) + w(x+h/2)) / 2 }),
		Rho:    action.Along(func(x float64) float64 { return (w(x-h) + 4*w(x) + w(x+h)) / 6 }),
		Source: action.Along(func(x float64) float64 { return eccentricity * math.Sin(x) }),
	}
}

// Pressure in a journal bearing, v ≥ 0 [MINPACK-2, Averick, Carter, Moré & Xue
// 1992], with so many points a side, rim included. Problem file JNLBRNG1 prints five
// digits for the first seven; all ten to twelve: independent computation.
func TestJournalBearing(t *testing.T) {
	for _, c := range []struct {
		points          int
		want, tolerance float64
	}{
		{4, -0.2247350054, 2e-10},
		{10, -0.1789618692, 2e-10},
		{23, -0.1800455689, 2e-10},
		{32, -0.1803015398, 2e-10},
		{75, -0.1805484605, 2e-10},
		{100, -0.1805732732, 2e-10},
		{125, -0.1805847574, 2e-10},
		{52, -0.180487995008, 2e-12},
		{102, -0.180574369663, 2e-12},
		{202, -0.180597544848, 2e-12},
	} {
		t.Run(fmt.Sprint(c.points), func(t *testing.T) {
			links := float64(c.points - 1)
			b := lattice.Block{
				Time:  lattice.Axis{Step: 20 / links, Sites: c.points},
				Space: lattice.Axis{Step: 2 * math.Pi / links, Sites: c.points},
			}
			s, held := rimmedOn(t, b, bearingLoad(b.Space.Step))
			held.Bounds(func(float64, float64) float64 { return 0 }, nil)
			found, err := Minimum(context.Background(), s, held, field.NewHistory(b, 1), nil)
			if err != nil {
				t.Fatal(err)
			}
			if d := found.Report.CostAfter - c.want; math.Abs(d) > c.tolerance {
				t.Errorf("energy %.13f, want %.12f", found.Report.CostAfter, c.want)
			}
			// Where the oil cavitates the rim of the wedge pushes up: −∂S/∂φ is
			// the pressure that is missing and must not pull.
			pushed := 0
			for _, r := range found.Reactions {
				if r.Kind == "lower bound" {
					pushed++
					if !(r.Push < 0) {
						t.Errorf("%v; want a push below 0", r)
					}
				}
			}
			if pushed == 0 {
				t.Error("no bound is active")
			}
			// A rim that moved by one event a step would take 33 and more steps on
			// the finest lattice; sweeps bring that below half.
			if n := found.Report.Iterations; n > 14 {
				t.Errorf("%d steps, want at most 14", n)
			}
			t.Logf("%d steps, %d factorisations, %d bounds, %.3f s", found.Report.Iterations, found.Report.Factorisations, pushed, found.Report.Wall.Seconds())
		})
	}
}
