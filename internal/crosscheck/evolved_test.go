package crosscheck

import (
	"context"
	"fmt"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// catalogue is every density of the catalogue, with a start that moves between
// its vacua and the jump of a ring.
var catalogue = []struct {
	name  string
	v     action.Potential
	scale float64 // of the start
	jump  float64
}{
	{"massless", nil, 1, 0.7},
	{"mass", action.Mass(1.3), 1, 0},
	{"polynomial", action.Polynomial{0.1, -0.2, 0.5, 0.1, 0.25, 0, 0.05}, 1, 0},
	{"φ⁴", action.Phi4{}, 1, 0},
	{"φ⁶", action.Phi6{}, 1, 0},
	{"sine-Gordon", action.SineGordon{}, 3, 2 * math.Pi},
	{"double sine-Gordon", action.DoubleSineGordon{Eta: 0.5}, 6, 4 * math.Pi},
}

// lines returns a line with each kind of end, named, and a ring.
func lines(jump float64) map[string]lattice.Axis {
	all := map[string]lattice.Axis{}
	line := lattice.Axis{From: -4, Step: 0.1, Sites: 81}
	for _, end := range []lattice.End{lattice.Free, lattice.Held, lattice.Open, lattice.Even, lattice.Odd} {
		line.Left, line.Right = end, end
		all[end.String()] = line
	}
	line.Left = lattice.Free
	all["free to odd"] = line
	line.Right, line.Periodic, line.Sites = lattice.Free, true, 80
	if jump != 0 {
		line.Jump = []float64{jump}
	}
	all["ring"] = line
	return all
}

// start returns Cauchy data that are large, in motion and uneven.
func start(line lattice.Axis, scale, jump float64) field.State {
	st := field.NewState(1, line.Sites)
	for i := range line.Sites {
		x := line.At(i)
		st.Field.Data[i] = scale * (math.Tanh(x+0.5) + 0.2*math.Cos(2*x))
		st.Rate.Data[i] = scale * 0.5 * math.Exp(-x*x)
		if line.Periodic {
			theta := 2 * math.Pi * x / line.Length()
			st.Field.Data[i] = jump*theta/(2*math.Pi) + scale*(0.4*math.Sin(theta)+0.2*math.Cos(2*theta))
		}
	}
	if line.Left == lattice.Held || line.Left == lattice.Odd {
		st.Rate.Data[0] = 0
	}
	if line.Right == lattice.Held || line.Right == lattice.Odd {
		st.Rate.Data[line.Sites-1] = 0
	}
	return st
}

// uneven returns the density with coefficients and sources that vary.
func uneven(w action.Wave, line lattice.Axis) action.Wave {
	w.Rho = action.Along(func(x float64) float64 { return 1.3 + 0.2*math.Sin(x) })
	w.Kappa = action.Over(func(x, t float64) float64 { return 1 + 0.2*math.Cos(x+t) })
	w.Sigma = action.Over(func(x, t float64) float64 { return 1 + 0.3*math.Cos(2*x-t) })
	w.Source = action.Over(func(x, t float64) float64 { return 0.2 * math.Sin(x+2*t) })
	if !line.Periodic && line.Left == lattice.Free {
		w.LeftFlux = action.Over(func(_, t float64) float64 { return 0.3 * math.Sin(t) })
	}
	return w
}

// evolved runs leapfrog at 0.6 of the limit of its links for ρ = κ = 1
// and returns its history, with the largest of |ρ(h/k)Δ_tφ|, |κ(k/h)Δ_xφ|
// and |hkV′| over the block for ρ = κ = 1.
func evolved(t *testing.T, line lattice.Axis, w action.Wave, scale, jump float64) (s *action.Discrete, h *field.History, largest float64) {
	t.Helper()
	k := 0.6 * 2 * line.Step / math.Sqrt(max(w.Links, action.Nearest).Mu())
	b := lattice.Block{Time: lattice.Axis{From: 0.5, Step: k, Sites: 201}, Space: line}
	s, err := action.New(b, w)
	if err != nil {
		t.Fatal(err)
	}
	run, err := integrate.Evolve(context.Background(), s, start(line, scale, jump), integrate.Settings{})
	if err != nil {
		t.Fatal(err)
	}
	h = run.History
	slope := field.NewSlice(1, line.Sites)
	for n := range b.Slices() {
		phi := h.Slice(n)
		row := phi.Component(0)
		for i := 1; i < len(row); i++ {
			largest = max(largest, k/line.Step*math.Abs(row[i]-row[i-1]))
		}
		if n > 0 {
			largest = max(largest, line.Step/k*phi.MaxDifference(h.Slice(n-1)))
		}
		s.Density().Potential.Slope(slope, phi, action.Sites{T: b.Time.At(n), X: line.Positions(nil)})
		largest = max(largest, line.Step*k*slope.MaxAbs())
	}
	return s, h, largest
}

// interior returns the largest |g| at the interior slices, held ends left out.
func interior(s *action.Discrete, g *field.History) float64 {
	var worst float64
	from, to := 0, g.Block.Sites()
	if s.HeldLeft() {
		from++
	}
	if s.HeldRight() {
		to--
	}
	for n := 1; n < g.Block.Slices()-1; n++ {
		worst = max(worst, g.Slice(n).Part(from, to).MaxAbs())
	}
	return worst
}

// The histories of Evolve are those that make the action stationary: ∂S/∂φ
// vanishes at every interior event, to rounding, for every density of the
// catalogue, order of links and kind of end that has a Lagrangian.
func TestEvolvedHistoriesAreStationary(t *testing.T) {
	var worst float64
	for _, d := range catalogue {
		for name, line := range lines(d.jump) {
			if line.Left == lattice.Open {
				continue
			}
			for _, links := range []action.Links{action.Nearest, action.Fourth, action.Sixth} {
				for _, varied := range []bool{false, true} {
					w := action.Wave{Potential: d.v, Links: links}
					if varied {
						w = uneven(w, line)
					}
					s, h, largest := evolved(t, line, w, d.scale, d.jump)
					share := interior(s, s.Gradient(nil, h)) / largest
					worst = max(worst, share)
					// Each of the five to eleven products in a row is rounded once, 1e-16
					// of the largest; differences of neighbours multiply that by h/k or
					// φ/Δφ, some tens to thousands.
					if !(share <= 1e-11) {
						t.Errorf("%s, %s ends, links %d, varied %v: |∂S/∂φ| is %.3g of the largest term; want 1e-11", d.name, name, links, varied, share)
					}
				}
			}
		}
	}
	t.Logf("largest |∂S/∂φ| %.3g of the largest term", worst)
}

// Losses and open ends have no action; the residual of the field equation
// vanishes instead.
func TestEvolvedHistoriesHaveNoResidual(t *testing.T) {
	var worst float64
	for _, d := range catalogue {
		for name, line := range lines(d.jump) {
			for _, links := range []action.Links{action.Nearest, action.Fourth, action.Sixth} {
				for what, loss := range map[string]action.Wave{
					"no loss": {},
					"α":       {Alpha: action.Along(func(x float64) float64 { return 0.2 + 0.1*math.Sin(x) })},
					"β":       {Beta: action.Uniform(0.05)},
					"α and β": {Alpha: action.Uniform(0.2), Beta: action.Along(func(x float64) float64 { return 0.05 + 0.02*math.Sin(x) })},
				} {
					for _, varied := range []bool{false, true} {
						w := loss
						w.Potential, w.Links = d.v, links
						if varied {
							w = uneven(w, line)
						}
						s, h, largest := evolved(t, line, w, d.scale, d.jump)
						hk := h.Block.Space.Step * h.Block.Time.Step
						share := interior(s, s.Residual(nil, h)) * hk / largest
						worst = max(worst, share)
						if !(share <= 1e-11) { // as above; the residual is per hk
							t.Errorf("%s, %s ends, links %d, %s, varied %v: residual %.3g of the largest term; want 1e-11", d.name, name, links, what, varied, share)
						}
					}
				}
			}
		}
	}
	t.Logf("largest residual %.3g of the largest term", worst)
}

// Two coupled components, one of them lossy, on a ring with a jump of one.
func TestEvolvedComponentsHaveNoResidual(t *testing.T) {
	line := lattice.Axis{Step: 0.1, Sites: 80, Periodic: true, Jump: []float64{2 * math.Pi}}
	w := action.Wave{
		Potential: action.Sum{action.Each{Potential: action.SineGordon{}, N: 2}, action.Bilinear{{0, 0.3}, {0.3, 0}}},
		Alpha:     action.PerComponent{nil, action.Uniform(0.2)},
		Beta:      action.PerComponent{action.Uniform(0.02), nil},
		Links:     action.Fourth,
	}
	s, err := action.New(lattice.Block{Time: lattice.Axis{Step: 0.04, Sites: 201}, Space: line}, w)
	if err != nil {
		t.Fatal(err)
	}
	one, two := start(line, 1, 2*math.Pi), start(line, 0.5, 0)
	both := field.State{
		Field: field.SliceOf(one.Field.Data, two.Field.Data),
		Rate:  field.SliceOf(one.Rate.Data, two.Rate.Data),
	}
	run, err := integrate.Evolve(context.Background(), s, both, integrate.Settings{})
	if err != nil {
		t.Fatal(err)
	}
	r := interior(s, s.Residual(nil, run.History))
	t.Logf("two components: residual %.3g per hk", r)
	// Rounding of φ/k² with φ = 10 and k = 0.04.
	if !(r <= 1e-11) {
		t.Errorf("residual %.3g; want rounding", r)
	}
}

// A held end that follows a function is left out of the equation, and its
// neighbours still obey theirs.
func TestDrivenEndsHaveNoResidual(t *testing.T) {
	for _, links := range []action.Links{action.Nearest, action.Fourth, action.Sixth} {
		for _, beta := range []float64{0, 0.05} {
			line := lattice.Axis{From: -4, Step: 0.1, Sites: 81, Left: lattice.Held, Right: lattice.Held}
			w := action.Wave{Potential: action.SineGordon{}, Links: links}
			if beta > 0 {
				w.Beta = action.Uniform(beta)
			}
			s, err := action.New(lattice.Block{Time: lattice.Axis{Step: 0.05, Sites: 201}, Space: line}, w)
			if err != nil {
				t.Fatal(err)
			}
			st := field.NewState(1, line.Sites)
			ends := integrate.Ends{Left: func(_ int, t float64) float64 { return 3 * math.Sin(t) }}
			run, err := integrate.Evolve(context.Background(), s, st, integrate.Settings{Ends: ends})
			if err != nil {
				t.Fatal(err)
			}
			r := interior(s, s.Residual(nil, run.History))
			if !(r <= 1e-11) { // rounding of φ/k² with φ = 3 and k = 0.05
				t.Errorf("%s: residual %.3g; want rounding", fmt.Sprintf("links %d, β = %g", links, beta), r)
			}
			if got := run.History.At(200, 0, 0); got != 3*math.Sin(s.Block().Time.At(200)) {
				t.Errorf("left end is %v at the last slice", got)
			}
		}
	}
}
