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

// metastable is V = ½φ² − ½φ³ + (α/8)φ⁴, whose false vacuum is 0.
func metastable(alpha float64) action.Wave {
	return action.Wave{Potential: action.Polynomial{0, 0, 0.5, -0.5, alpha / 8}, Signature: action.Euclidean}
}

var bell = field.Lump{Inside: 1.6, Radius: 1.5, Wall: 1.5}

// quarterBounce finds the bounce on a quarter of the plane, whose free sides are
// the axes of symmetry, and returns four times its action and its core value.
func quarterBounce(t *testing.T, alpha, size, h float64) (value, core float64) {
	t.Helper()
	n := int(math.Round(size/h)) + 1
	a := lattice.Axis{Step: h, Sites: n}
	s := newAction(t, a, a, metastable(alpha))
	held := constraint.On(s.Block())
	held.Slice(n-1, field.NewSlice(1, n))
	held.Right(zero)
	found, err := Saddle(context.Background(), s, held, profile(field.NewLump(bell)).Over(s.Block()), nil)
	if err != nil {
		t.Fatalf("α = %g, h = %g: %v", alpha, h, err)
	}
	i := found.Report.Inertia
	if i.Index != 1 || !i.Known || i.ZeroModesHeld != 0 || len(i.Negative) != 1 {
		t.Errorf("α = %g, h = %g: %v", alpha, h, i)
	}
	return 4 * found.Report.CostAfter, found.History.At(0, 0, 0)
}

// bounces are O(2) bounces of metastable: action and core value. Independent
// computation: shooting of the radial equation at a tolerance of 1e-13. On a quarter
// of the given size the tail e^−r, counted from a wall at 3.3 for α = 0.9, adds e^−24
// to the action.
var bounces = []struct{ alpha, size, action, core float64 }{
	{0, 12, 3.4447969612, 1.5946376021},
	{0.2, 12, 3.912753026, 1.6859713563},
	{0.5, 12, 5.0556831819, 1.8752356443},
	{0.9, 16, 11.882165308, 2.2863675948},
}

// checkBounces finds the bounces at the spacings h, h/2 and h/4. Errors are
// ah² + bh⁴ + …: the order of the action must be 2 to within the b term, and with
// both terms extrapolated away what is left must be a fifth or less of the step
// that this makes, which falls by 16 a level.
func checkBounces(t *testing.T, h, slack float64) {
	for _, c := range bounces {
		var value, core [3]float64
		for k := range value {
			value[k], core[k] = quarterBounce(t, c.alpha, c.size, math.Ldexp(h, -k))
		}
		if order := math.Log2((value[1] - c.action) / (value[2] - c.action)); math.Abs(order-2) > slack {
			t.Errorf("α = %g: order %.3f of the action, want 2", c.alpha, order)
		}
		for name, v := range map[string]struct {
			got  [3]float64
			want float64
		}{"action": {value, c.action}, "core value": {core, c.core}} {
			first, second := (4*v.got[1]-v.got[0])/3, (4*v.got[2]-v.got[1])/3
			last := (16*second - first) / 15
			if miss, step := math.Abs(last-v.want), math.Abs(last-second); miss > step/5 {
				t.Errorf("α = %g: %s %.10f, want %.10f: off by %.2g after a step of %.2g", c.alpha, name, last, v.want, miss, step)
			}
			t.Logf("α = %g: %s %.10f, off by %.2g", c.alpha, name, last, last-v.want)
		}
	}
}

func TestBounce(t *testing.T) { checkBounces(t, 0.4, 0.02) } // b/a·h² = 0.012 at h = 0.2

// On a whole box the two translations are zero modes. The lattice gives them tiny
// eigenvalues whose signs depend on where the centre lies: on a site, in the middle
// of a link or of a cell the raw index reads 1, 2 or 3. With the shifts held it is 1
// everywhere, also where the centre is at no symmetric place and the lattice pulls.
func TestIndexOfABounceOnABox(t *testing.T) {
	for _, tc := range []struct {
		h    float64
		x, t float64 // centre, in steps from a site
		raw  int     // 0: no stationary point there
	}{
		{0.7, 0, 0, 1}, {0.7, 0.5, 0, 2}, {0.7, 0.5, 0.5, 3}, {0.7, 0.3, 0.15, 0},
		{1, 0, 0, 1}, {1, 0.5, 0, 2}, {1, 0.5, 0.5, 3},
	} {
		n := 2*int(10/tc.h) + 1
		a := lattice.Axis{From: -tc.h * float64(n/2), Step: tc.h, Sites: n}
		s := newAction(t, a, a, metastable(0))
		held := allAround(s.Block())
		lump := bell
		lump.X, lump.T = tc.x*tc.h, tc.t*tc.h
		start := profile(field.NewLump(lump)).Over(s.Block())
		for e := range start.Data { // as the conditions have it
			if m, _, i := start.Place(e); m%(n-1) == 0 || i%(n-1) == 0 {
				start.Data[e] = 0
			}
		}
		found, err := Saddle(context.Background(), s, held, start, &Settings{Shifts: InTime | InSpace})
		if err != nil {
			t.Errorf("%+v: %v", tc, err)
			continue
		}
		i := found.Report.Inertia
		if i.Index != 1 || !i.Known || i.ZeroModesHeld != 2 || len(i.Negative) != 1 {
			t.Errorf("%+v: with the shifts held %v, negative %v", tc, i, i.Negative)
		}
		slopes := []*field.History{start.TimeSlope(), start.SpaceSlope()}
		for k, z := range slopes {
			var along, size float64
			for e, v := range found.History.Data {
				along += z.Data[e] * (v - start.Data[e])
				size += math.Abs(z.Data[e] * (v - start.Data[e]))
			}
			if math.Abs(along) > 1e-13*size { // rounding of some steps; the rim is fixed
				t.Errorf("%+v: moved by %.3g along shift %d", tc, along/size, k)
			}
		}
		same, err := Saddle(context.Background(), s, held, start, &Settings{ZeroModes: slopes})
		if err != nil || same.History.MaxDifference(found.History) != 0 {
			t.Errorf("%+v: the slopes given as zero modes make a difference, %v", tc, err)
		}
		if tc.raw == 0 {
			// The action differs by 4e-4 between a site and the middle of a cell,
			// 0.5 away, and a shift of unit norm is one of 0.5.
			if i.Force < 1e-4 || i.Force > 1e-3 {
				t.Errorf("%+v: force %.2g", tc, i.Force)
			}
			continue
		}
		raw, err := Stationary(context.Background(), s, held, found.History, nil)
		if err != nil {
			t.Errorf("%+v: %v", tc, err)
			continue
		}
		if j := raw.Report.Inertia; j.Index != tc.raw || !j.Known {
			t.Errorf("%+v: raw %v, want index %d", tc, j, tc.raw)
		}
	}
}
