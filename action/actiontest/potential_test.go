package actiontest

import (
	"math"
	"strings"
	"sync"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// coupled is a right potential of two components that varies in x and t,
// V = ½φ₀²φ₁² + x·t·φ₀. Its fields break it in one way each.
type coupled struct {
	slope, curvature, asymmetry float64 // factors of a wrong derivative; 0 means right
	neighbour                   bool    // Value looks at the site beside
	flat                        bool    // Slope takes dst for packed rows
	beyond                      bool    // Slope writes one site too many
	shifts                      bool    // Value changes φ
	infinite                    bool    // Value is 1/0 where φ₀ > 2
	kink                        bool    // V has a kink at φ₀ = 0

	memory *counter
}

type counter struct {
	sync.Mutex
	calls int
}

func (coupled) Components() int { return 2 }

func (p coupled) Value(dst []float64, phi field.Slice, at action.Sites) {
	a, b := phi.Component(0), phi.Component(1)
	for i := range dst {
		dst[i] = 0.5*a[i]*a[i]*b[i]*b[i] + at.X[i]*at.T*a[i]
		if p.neighbour && i > 0 {
			dst[i] += 1e-6 * a[i-1]
		}
		if p.infinite && a[i] > 2 {
			dst[i] = math.Inf(1)
		}
		if p.kink {
			dst[i] += math.Abs(a[i])
		}
		if p.shifts {
			a[i] += 1e-9
		}
	}
}

func (p coupled) Slope(dst, phi field.Slice, at action.Sites) {
	a, b := phi.Component(0), phi.Component(1)
	first, second := dst.Component(0), dst.Component(1)
	if p.flat {
		second = dst.Data[phi.Sites : 2*phi.Sites]
	}
	for i := range a {
		first[i] = a[i]*b[i]*b[i] + at.X[i]*at.T
		second[i] = a[i]*a[i]*b[i] + p.slope*b[i]
		if p.kink {
			first[i] += math.Copysign(1, a[i])
		}
	}
	if p.beyond && len(dst.Data) > dst.Stride && phi.Sites < dst.Stride {
		dst.Data[phi.Sites] = 0
	}
}

func (p coupled) Curvature(dst, phi field.Slice, _ action.Sites) {
	a, b := phi.Component(0), phi.Component(1)
	aa, ab, ba, bb := dst.Component(0), dst.Component(1), dst.Component(2), dst.Component(3)
	var drift float64
	if p.memory != nil {
		p.memory.Lock()
		defer p.memory.Unlock()
		p.memory.calls++
		drift = 1e-12 * float64(p.memory.calls)
	}
	for i := range a {
		aa[i] = b[i]*b[i] + drift
		ab[i] = 2*a[i]*b[i] + p.asymmetry
		ba[i] = 2 * a[i] * b[i]
		bb[i] = a[i]*a[i] + p.curvature
	}
}

// accumulating adds to dst instead of overwriting it.
type accumulating struct{ action.Mass }

func (p accumulating) Slope(dst, phi field.Slice, _ action.Sites) {
	for i, v := range phi.Component(0) {
		dst.Component(0)[i] += v
	}
}

// lazy leaves dst as it is where V′ is zero, as it would be in zeroed memory.
type lazy struct{ action.Mass }

func (p lazy) Slope(dst, phi field.Slice, _ action.Sites) {
	for i, v := range phi.Component(0) {
		if v > 0 {
			dst.Component(0)[i] = v
		}
	}
}

func TestPotentialAcceptsARightOne(t *testing.T) {
	if err := Potential(coupled{}, Settings{}); err != nil {
		t.Error(err)
	}
}

// TestPotentialFindsAndLocates breaks a right potential in one way at a time;
// the error must name the method, its component and the place.
func TestPotentialFindsAndLocates(t *testing.T) {
	for _, c := range []struct {
		name string
		p    action.Potential
		says []string // all of them
		not  string   // and not this one
	}{
		{"slope off by 1e-4", coupled{slope: 1e-4}, []string{"slope ∂V/∂φ_1 at φ = (", "x = ", "t = ", "want"}, "∂φ_0 at"},
		{"curvature off by 1e-4", coupled{curvature: 1e-4}, []string{"curvature ∂²V/∂φ_1∂φ_1 at φ = (", "by differences of Value"}, "slope"},
		{"curvature not symmetric", coupled{asymmetry: 1e-9}, []string{"∂²V/∂φ_0∂φ_1", "∂²V/∂φ_1∂φ_0", "symmetric"}, "slope"},
		{"state between calls", coupled{memory: &counter{}}, []string{"curvature ∂²V/∂φ_0∂φ_0", "nothing kept between calls"}, "slope"},
		{"neighbour", coupled{neighbour: true}, []string{"value V at", "depend on itself alone"}, "curvature ∂²V/∂φ_1∂φ_1"},
		{"packed rows taken for granted", coupled{flat: true}, []string{"slope ∂V/∂φ_1", "in a short slice of a longer row"}, "curvature"},
		{"writes too far", coupled{beyond: true}, []string{"Slope writes outside of a dst of 1 sites"}, "Curvature writes"},
		{"changes φ", coupled{shifts: true}, []string{"changes φ"}, "positions"},
		{"infinite", coupled{infinite: true}, []string{"value V at φ = (2", "+Inf", "finite"}, "slope"},
		{"kink", coupled{kink: true}, []string{"∂V/∂φ_0", "do not settle"}, "symmetric"},
		{"accumulates", accumulating{1}, []string{"slope V′", "NaN", "dst"}, "curvature"},
		{"overwrites in part", lazy{1}, []string{"slope V′ at φ = -", "NaN"}, "curvature"},
		{"adds to what is there", addsToDst{}, []string{"dst held 1000", "want dst overwritten"}, "slope"},
		{"inherits V‴", steeper{}, []string{"CurvatureAlong", "derivative of curvature V″ at φ = ", "inherits"}, "slope"},
		{"nil", nil, []string{"potential is nil"}, "slope"},
		{"no components", action.Sum{}, []string{"Components() is 0"}, "slope"},
	} {
		t.Run(c.name, func(t *testing.T) {
			err := Potential(c.p, Settings{})
			if err == nil {
				t.Fatal("no error")
			}
			for _, want := range c.says {
				if !strings.Contains(err.Error(), want) {
					t.Errorf("error does not say %q:\n%v", want, err)
				}
			}
			if strings.Contains(err.Error(), c.not) {
				t.Errorf("error says %q, which is right:\n%v", c.not, err)
			}
		})
	}
}

// steeper is V = ½φ⁴ − ½φ², with V‴ of the φ⁴ that it embeds.
type steeper struct{ action.Phi4 }

func (steeper) Value(dst []float64, phi field.Slice, _ action.Sites) {
	for i, p := range phi.Component(0) {
		dst[i] = 0.5*p*p*p*p - 0.5*p*p
	}
}

func (steeper) Slope(dst, phi field.Slice, _ action.Sites) {
	for i, p := range phi.Component(0) {
		dst.Component(0)[i] = 2*p*p*p - p
	}
}

func (steeper) Curvature(dst, phi field.Slice, _ action.Sites) {
	for i, p := range phi.Component(0) {
		dst.Component(0)[i] = 6*p*p - 1
	}
}

// addsToDst overwrites a NaN, and adds to any other number.
type addsToDst struct{ action.Mass }

func (p addsToDst) Curvature(dst, phi field.Slice, at action.Sites) {
	row := dst.Component(0)
	for i, v := range row {
		if math.IsNaN(v) {
			v = 0
		}
		row[i] = v + float64(p.Mass*p.Mass)
	}
}

func TestSettingsNamesTheCulprit(t *testing.T) {
	for _, c := range []struct {
		s    Settings
		says string
	}{
		{Settings{Low: 1, High: -1}, "φ from 1 to -1"},
		{Settings{Low: math.NaN(), High: 1}, "φ from NaN"},
		{Settings{X: []float64{}}, "0 positions"},
		{Settings{Step: -1}, "step -1"},
		{Settings{Tolerance: 2}, "tolerance 2"},
	} {
		for name, err := range map[string]error{"Potential": Potential(coupled{}, c.s), "Density": Density(action.Wave{}, c.s)} {
			if err == nil || !strings.Contains(err.Error(), c.says) {
				t.Errorf("%s with %+v: error %v; want it to say %q", name, c.s, err, c.says)
			}
		}
	}
}
