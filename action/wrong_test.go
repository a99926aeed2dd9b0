package action_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// TestNewNamesTheCulprit hands New wrong densities; each error must say what is
// wrong, and where if it is at a place.
func TestNewNamesTheCulprit(t *testing.T) {
	line := block(5, 0.1, 9, 0.5)
	ringBlock := ring(5, 0.1, 9, 4.5)
	long := block(500, 0.125, 9, 0.5)
	ends := func(left, right lattice.End) lattice.Block {
		b := line
		b.Space.Left, b.Space.Right = left, right
		return b
	}
	jump := ringBlock
	jump.Space.Jump = []float64{1, 2}
	nan := math.NaN()
	u := func(v float64) action.Coefficient { return action.Uniform(v) }
	hole := action.Over(func(x, t float64) float64 {
		if x == 2 && math.Abs(t-0.2) < 1e-9 {
			return nan
		}
		return 1
	})
	late := make(action.Table, 500*9) // a bad value in one row of many
	for i := range late {
		late[i] = 1
	}
	late[333*9+4] = nan
	atSite := action.Along(func(x float64) float64 { // bad on a site, not on links
		if x == 2 {
			return -1
		}
		return 1
	})
	for _, c := range []struct {
		name string
		b    lattice.Block
		d    action.Density
		says []string
	}{
		{"no density", line, nil, []string{"density is nil"}},
		{"one slice", block(1, 0.1, 9, 0.5), action.Wave{}, []string{"time axis", "1 sites"}},
		{"no spacing", block(5, 0.1, 9, 0), action.Wave{}, []string{"space axis", "step 0"}},
		{"NaN κ", line, action.Wave{Kappa: u(nan)}, []string{"κ", "NaN", "(0.25, 0)"}},
		{"NaN at a place", line, action.Wave{Sigma: hole}, []string{"σ", "NaN", "(x, t) = (2, 0.2)"}},
		{"NaN late in a table", long, action.Wave{Source: late}, []string{"source", "NaN", "(x, t) = (2, 41.625)"}},
		{"infinite source", line, action.Wave{Source: u(math.Inf(1))}, []string{"source", "+Inf"}},
		{"ρ = 0", line, action.Wave{Rho: u(0)}, []string{"ρ", "is 0", "> 0"}},
		{"negative ρ of a component", line, action.Wave{Components: 2, Rho: action.PerComponent{nil, u(-2)}}, []string{"ρ of component 1 is -2"}},
		{"negative κ", line, action.Wave{Kappa: u(-1)}, []string{"κ", "-1", "≥ 0"}},
		{"negative κ on a site", line, action.Wave{Links: action.Fourth, Kappa: atSite}, []string{"κ", "-1", "(2, 0)"}},
		{"negative α", line, action.Wave{Alpha: u(-0.1)}, []string{"α", "-0.1", "≥ 0"}},
		{"negative β", line, action.Wave{Beta: u(-0.1)}, []string{"β", "-0.1", "≥ 0"}},
		{"σ per component", line, action.Wave{Components: 2, Sigma: action.PerComponent{u(1), u(2)}}, []string{"σ", "per component"}},
		{"short table", line, action.Wave{Source: make(action.Table, 7)}, []string{"source", "7 values", "9", "5 × 9"}},
		{"table of sites for links", line, action.Wave{Kappa: make(action.Table, 9)}, []string{"κ", "9 values", "8"}},
		{"table of slices for time links", line, action.Wave{Rho: make(action.Table, 45)}, []string{"ρ", "45 values", "4 × 9"}},
		{"nil function of x", line, action.Wave{Source: action.Along(nil)}, []string{"source", "nil Along"}},
		{"nil function of x and t", line, action.Wave{Alpha: action.Over(nil)}, []string{"α", "nil Over"}},
		{"too few entries", line, action.Wave{Components: 3, Kappa: action.PerComponent{u(1), u(1)}}, []string{"κ", "2 entries", "3 components"}},
		{"nested entries", line, action.Wave{Kappa: action.PerComponent{action.PerComponent{u(1)}}}, []string{"κ", "component 0", "one level"}},
		{"flux at a held end", ends(lattice.Held, lattice.Free), action.Wave{LeftFlux: u(1)}, []string{"left flux", "held end", "x = 0"}},
		{"flux at an open end", ends(lattice.Free, lattice.Open), action.Wave{RightFlux: u(1)}, []string{"right flux", "open end", "x = 4"}},
		{"flux on a ring", ringBlock, action.Wave{RightFlux: u(1)}, []string{"right flux", "periodic"}},
		{"α and Euclidean", line, action.Wave{Signature: action.Euclidean, Alpha: u(1)}, []string{"loss α", "Euclidean"}},
		{"β and Euclidean", line, action.Wave{Signature: action.Euclidean, Beta: u(1)}, []string{"loss β", "Euclidean"}},
		{"open and Euclidean", ends(lattice.Open, lattice.Free), action.Wave{Signature: action.Euclidean}, []string{"open left end", "Euclidean"}},
		{"unknown signature", line, action.Wave{Signature: 7}, []string{"signature 7"}},
		{"unknown links", line, action.Wave{Links: 3}, []string{"links of order 3", "2, 4 or 6"}},
		{"negative links", line, action.Wave{Links: -2}, []string{"links of order -2"}},
		{"too few sites", block(5, 0.1, 3, 0.5), action.Wave{Links: action.Sixth}, []string{"order 6", "3 sites", "at least 4"}},
		{"components do not fit", line, action.Wave{Potential: action.Phi4{}, Components: 2}, []string{"potential of 1 components", "density of 2"}},
		{"negative components", line, action.Wave{Components: -1}, []string{"density of -1"}},
		{"jump for too many", jump, action.Wave{}, []string{"jump for 2 components", "has 1"}},
		{"Scalar without D2", line, action.Wave{Potential: action.Scalar{V: math.Cosh, D1: math.Sinh}}, []string{"Scalar", "nil function"}},
		{"nil Auto", line, action.Wave{Potential: action.Auto(nil)}, []string{"nil Auto"}},
		{"empty polynomial", line, action.Wave{Potential: action.Polynomial{}}, []string{"polynomial of no coefficients"}},
		{"NaN in a polynomial", line, action.Wave{Potential: action.Polynomial{0, 1, nan}}, []string{"c[2] = NaN"}},
		{"infinite mass", line, action.Wave{Potential: action.Mass(math.Inf(1))}, []string{"mass +Inf"}},
		{"NaN η", line, action.Wave{Potential: action.DoubleSineGordon{Eta: nan}}, []string{"η = NaN"}},
		{"not symmetric", line, action.Wave{Potential: action.Bilinear{{1, 2}, {3, 1}}}, []string{"M[0][1] = 2", "M[1][0] = 3", "symmetric"}},
		{"not square", line, action.Wave{Potential: action.Bilinear{{1, 2}, {2}}}, []string{"row 1", "1 numbers", "want 2"}},
		{"NaN in a coupling", line, action.Wave{Potential: action.Bilinear{{1, 2}, {2, nan}}}, []string{"M[1][1] = NaN"}},
		{"empty coupling", line, action.Wave{Potential: action.Bilinear{}}, []string{"0 components"}},
		{"empty sum", line, action.Wave{Potential: action.Sum{}}, []string{"sum of no potentials"}},
		{"nil term", line, action.Wave{Potential: action.Sum{action.Phi4{}, nil}}, []string{"potential is nil"}},
		{"terms do not fit", line, action.Wave{Potential: action.Sum{action.Phi4{}, action.Bilinear{{1, 0}, {0, 1}}}}, []string{"term 1", "2 components", "has 1"}},
		{"each on none", line, action.Wave{Potential: action.Each{Potential: action.Phi4{}}}, []string{"Each on 0 components"}},
		{"each of two", line, action.Wave{Potential: action.Each{Potential: action.Bilinear{{1, 0}, {0, 1}}, N: 2}}, []string{"Each of a potential of 2 components"}},
		{"each of nil", line, action.Wave{Potential: action.Each{N: 2}}, []string{"potential is nil"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			s, err := action.New(c.b, c.d)
			if err == nil {
				t.Fatalf("no error; density %+v", s.Density())
			}
			for _, want := range c.says {
				if !strings.Contains(err.Error(), want) {
					t.Errorf("error %q does not say %q", err, want)
				}
			}
		})
	}
}

// TestFitsNamesTheCulprit hands an action data of the wrong shape or with a NaN
// in it.
func TestFitsNamesTheCulprit(t *testing.T) {
	b := block(5, 0.1, 9, 0.5)
	s := mustNew(t, b, action.Wave{})
	bad := field.NewHistory(b, 1)
	bad.Set(2, 0, 4, math.NaN())
	nan := field.NewState(1, 9)
	nan.Rate.Data[3] = math.Inf(-1)
	for _, c := range []struct {
		name string
		err  error
		says string
	}{
		{"NaN", s.Fits(bad), "NaN at (x, t) = (2, 0.2)"},
		{"components", s.Fits(field.NewHistory(b, 2)), "5 slices × 2 components × 9 sites"},
		{"slices", s.Fits(field.NewHistory(block(6, 0.1, 9, 0.5), 1)), "6 slices"},
		{"no history", s.Fits(nil), "no history"},
		{"infinite rate", s.FitsState(nan), "-Inf at site 3"},
		{"sites", s.FitsState(field.NewState(1, 8)), "1 components × 8 sites"},
	} {
		if c.err == nil || !strings.Contains(c.err.Error(), c.says) {
			t.Errorf("%s: error %v does not say %q", c.name, c.err, c.says)
		}
	}
	if err := s.Fits(field.NewHistory(b, 1)); err != nil {
		t.Error(err)
	}
	if err := s.FitsState(field.NewState(1, 9)); err != nil {
		t.Error(err)
	}
}

// TestWrongShapesPanic hands histories of another block to every method that
// takes one.
func TestWrongShapesPanic(t *testing.T) {
	b := block(5, 0.1, 9, 0.5)
	s := mustNew(t, b, action.Wave{})
	euclid := mustNew(t, b, action.Wave{Signature: action.Euclidean})
	good, bad := field.NewHistory(b, 1), field.NewHistory(block(5, 0.1, 8, 0.5), 1)
	m := s.SecondVariationMatrix(nil, good)
	for name, f := range map[string]func(){
		"Value":                 func() { s.Value(bad) },
		"Gradient":              func() { s.Gradient(nil, bad) },
		"Gradient dst":          func() { s.Gradient(bad, good) },
		"SecondVariation":       func() { s.SecondVariation(nil, bad, good) },
		"direction":             func() { s.SecondVariation(nil, good, bad) },
		"SecondVariationMatrix": func() { s.SecondVariationMatrix(nil, bad) },
		"Residual":              func() { s.Residual(nil, bad) },
		"ResidualJacobian":      func() { s.ResidualJacobian(nil, bad) },
		"EnergyDensity":         func() { s.EnergyDensity(make([]float64, 8), field.NewState(1, 9), 0) },
		"EnergyFlux":            func() { s.EnergyFlux(make([]float64, 9), field.NewState(1, 9), 0) },
		"MulVec":                func() { m.MulVec(make([]float64, 45), make([]float64, 44)) },
		"MulTransVec":           func() { m.MulTransVec(make([]float64, 44), make([]float64, 45)) },
		"March":                 func() { euclid.March() },
	} {
		func() {
			defer func() {
				v := recover()
				if text, ok := v.(string); !ok || !strings.Contains(text, "action: ") {
					t.Errorf("%s: recovered %v; want a panic of this package", name, v)
				}
			}()
			f()
		}()
	}
}

func TestConservative(t *testing.T) {
	open := block(5, 0.1, 9, 0.5)
	open.Space.Right = lattice.Open
	plain := block(5, 0.1, 9, 0.5)
	for _, c := range []struct {
		b    lattice.Block
		w    action.Wave
		part string
	}{
		{plain, action.Wave{Source: action.Uniform(1), LeftFlux: action.Uniform(1)}, ""},
		{plain, action.Wave{Alpha: action.Uniform(0)}, ""},
		{plain, action.Wave{Alpha: action.Uniform(1)}, "loss α"},
		{plain, action.Wave{Beta: action.Along(math.Abs)}, "loss β"},
		{open, action.Wave{}, "open right end"},
	} {
		err := mustNew(t, c.b, c.w).Conservative()
		var no *action.NoActionError
		if c.part == "" && err != nil || c.part != "" && (!errors.As(err, &no) || no.Part != c.part) {
			t.Errorf("%+v: %v; want %q named", c.w, err, c.part)
		}
	}
}

// TestBetweenSlices asks that coefficients known at slices alone be refused by
// name where the force is wanted between them.
func TestBetweenSlices(t *testing.T) {
	b := block(5, 0.1, 9, 0.5)
	over := action.Over(func(x, t float64) float64 { return 1 + x*t })
	for _, c := range []struct {
		name string
		w    action.Wave
		says string
	}{
		{"functions", action.Wave{Kappa: over, Source: over, Alpha: over}, ""},
		{"single rows", action.Wave{Source: make(action.Table, 9)}, ""},
		{"ρ(t)", action.Wave{Rho: over}, "ρ varies in time"},
		{"table", action.Wave{Source: make(action.Table, 45)}, "table of source"},
		{"table of a component", action.Wave{Components: 2, Alpha: action.PerComponent{nil, make(action.Table, 45)}}, "table of α"},
	} {
		s := mustNew(t, b, c.w)
		_, err := s.Accelerator()
		if c.says == "" && err != nil || c.says != "" && (err == nil || !strings.Contains(err.Error(), c.says)) {
			t.Errorf("%s: error %v; want it to say %q", c.name, err, c.says)
		}
	}
	if _, err := mustNew(t, b, action.Wave{Signature: action.Euclidean}).Accelerator(); err == nil || !strings.Contains(err.Error(), "Euclidean") {
		t.Errorf("Euclidean: error %v", err)
	}
}
