package minimize

import (
	"context"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/lattice/refine"
)

// atRefinement checks the limits of a study against exact values, {value,
// tolerance}, which must also lie within the error bars.
func atRefinement(t *testing.T, study refine.Study, measure refine.Measure, exact map[string][2]float64) {
	t.Helper()
	table, err := study.Run(context.Background(), measure)
	if err != nil {
		t.Fatal(err)
	}
	t.Log("\n" + table.String())
	for name, want := range exact {
		e, ok := table.Get(name)
		if !ok || !e.Status.Bounded() {
			t.Errorf("%s has no error bar: %s", name, e.Reason)
			continue
		}
		d := e.Value - want[0]
		t.Logf("%s off by %.2g", name, d)
		if math.Abs(d) > min(e.Error, want[1]) {
			t.Errorf("%s is %.10g ± %.2g, off by %.2g; want %.10g within %g", name, e.Value, e.Error, d, want[0], want[1])
		}
	}
}

// The positive solution of Δu + 50(u − u³) = 0 on the unit square, zero on its
// rim, is the minimum of ∫½|∇u|² + 50·¼(1 − u²)². Energy and value at the centre:
// independent computation (Chebyshev collocation).
func TestAllenCahnSquare(t *testing.T) {
	measure := func(ctx context.Context, b lattice.Block) ([]refine.Quantity, error) {
		s, held := rimmedOn(t, b, action.Wave{Potential: action.Phi4{}, Sigma: action.Uniform(50)})
		start := field.NewHistory(b, 1)
		for k := range start.Data {
			start.Data[k] = 0.5
		}
		found, err := Minimum(ctx, s, held, start, nil)
		if err != nil {
			return nil, err
		}
		mid := b.Sites() / 2
		return []refine.Quantity{
			{Name: "energy", Value: found.Report.CostAfter},
			{Name: "centre", Value: found.History.At(mid, 0, mid)},
		}, nil
	}
	study := refine.Study{Block: unitSquare(15, 15), Levels: 4, Order: 2}
	// Order h⁴ remains: extrapolated from the three coarser levels the energy is off
	// by 3.5e-6, a sixteenth of which the finest one leaves.
	atRefinement(t, study, measure,
		map[string][2]float64{"energy": {10.1691156358, 1e-6}, "centre": {0.9320341481, 1e-6}})
}

// Enneper's surface over (−½, ½)², x = u + uv² − u³/3, y = −v − u²v + v³/3,
// height u² − v², is minimal [Nitsche 1989, Minimal Surfaces vol. 1, chapter
// II]; its area from Green's formula with 30 digits: independent computation.
func TestEnneperSurface(t *testing.T) {
	measure := func(ctx context.Context, b lattice.Block) ([]refine.Quantity, error) {
		whole, err := lattice.NewRegion(b, nil)
		if err != nil {
			return nil, err
		}
		s, err := action.NewCells(whole, film{})
		if err != nil {
			return nil, err
		}
		rim := field.NewHistory(b, 1)
		held := constraint.On(b)
		for n := range b.Slices() {
			for i := range b.Sites() {
				if e := b.At(n, i); n == 0 || n == b.Slices()-1 || i == 0 || i == b.Sites()-1 {
					rim.Set(n, 0, i, enneper(e.X, e.T))
					held.Event(e.T, e.X, rim.At(n, 0, i))
				}
			}
		}
		found, err := Minimum(ctx, s, held, rim, nil)
		if err != nil {
			return nil, err
		}
		var off float64
		for n := range b.Slices() {
			for i := range b.Sites() {
				e := b.At(n, i)
				off = max(off, math.Abs(found.History.At(n, 0, i)-enneper(e.X, e.T)))
			}
		}
		return []refine.Quantity{{Name: "area", Value: found.Report.CostAfter}, {Name: "distance", Value: off}}, nil
	}
	side := lattice.Axis{From: -0.5, Step: 1. / 8, Sites: 9}
	study := refine.Study{Block: lattice.Block{Time: side, Space: side}, Levels: 4, Order: 2}
	// Likewise: the area from the three coarser levels is off by 2.3e-7. The largest
	// distance is taken where it is largest, at another place on each level.
	atRefinement(t, study, measure,
		map[string][2]float64{"area": {1.4213618730196667, 1e-7}, "distance": {0, 1e-6}})
}

// film is the area √(1 + φ_t² + φ_x²) of a graph.
type film struct{}

func (film) Components() int { return 1 }

func (film) Value(j action.Jet) float64 {
	return math.Sqrt(1 + j.Rate[0]*j.Rate[0] + j.Tilt[0]*j.Tilt[0])
}

func (f film) Slope(dst []float64, j action.Jet) {
	w := f.Value(j)
	copy(dst, []float64{0, j.Rate[0] / w, j.Tilt[0] / w})
}

func (f film) Curvature(dst []float64, j action.Jet) {
	w, p, q := f.Value(j), j.Rate[0], j.Tilt[0]
	w3 := w * w * w
	copy(dst, []float64{0, 0, 0, 0, (1 + q*q) / w3, -p * q / w3, 0, -p * q / w3, (1 + p*p) / w3})
}

// enneper is the height of Enneper's surface over (x, y), u and v by Newton's
// method.
func enneper(x, y float64) float64 {
	u, v := x, -y
	for range 50 {
		f, g := u+u*v*v-u*u*u/3-x, -v-u*u*v+v*v*v/3-y
		a, b := 1+v*v-u*u, 2*u*v // ∂(f, g)/∂(u, v) = (a, b; −b, −1 − u² + v²)
		c, d := -b, -1-u*u+v*v
		det := a*d - b*c
		du, dv := (f*d-g*b)/det, (a*g-c*f)/det
		u, v = u-du, v-dv
		if math.Abs(du)+math.Abs(dv) < 1e-16 {
			break
		}
	}
	return u*u - v*v
}
