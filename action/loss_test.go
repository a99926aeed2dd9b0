package action_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// TestDampedModes marches damped standing waves from rest and compares them with
// the telegrapher's solution of the lattice equation in continuous time,
//
//	φ = e^(−Γt/2)(cos Ωt + (Γ/2Ω) sin Ωt)·X(x),  Ω² = ω² − Γ²/4,
//
// ω² = symbol/h² + m² of the links, Γ = α + β·(nearest-neighbour symbol)/h² (the
// damped oscillator of any textbook, mode by mode). X is a cosine on a ring and
// between mirrors, a sine between held ends. The order in k is 2.
func TestDampedModes(t *testing.T) {
	const m, length = 0.8, 8.0
	ringCos := func(x float64) float64 { return math.Cos(2 * math.Pi * 3 * x / length) }
	freeCos := func(x float64) float64 { return math.Cos(math.Pi * 3 * x / length) }
	heldSin := func(x float64) float64 { return math.Sin(math.Pi * 3 * x / length) }
	for _, c := range []struct {
		name  string
		line  lattice.Axis
		mode  func(x float64) float64
		theta float64 // q·h
	}{
		{"ring", lattice.Axis{Step: length / 32, Sites: 32, Periodic: true}, ringCos, 2 * math.Pi * 3 / 32},
		{"free", lattice.Axis{Step: length / 32, Sites: 33}, freeCos, math.Pi * 3 / 32},
		{"even", lattice.Axis{Step: length / 32, Sites: 33, Left: lattice.Even, Right: lattice.Even}, freeCos, math.Pi * 3 / 32},
		{"held", lattice.Axis{Step: length / 32, Sites: 33, Left: lattice.Held, Right: lattice.Held}, heldSin, math.Pi * 3 / 32},
		{"odd", lattice.Axis{Step: length / 32, Sites: 33, Left: lattice.Odd, Right: lattice.Odd}, heldSin, math.Pi * 3 / 32},
	} {
		for _, loss := range []struct {
			name        string
			alpha, beta float64
		}{{"α", 0.3, 0}, {"β", 0, 0.2}, {"α and β", 0.3, 0.2}} {
			for _, links := range everyLinks {
				var errs []float64
				for _, steps := range []int{60, 120, 240} {
					b := lattice.Block{Time: lattice.Axis{Step: 6 / float64(steps), Sites: steps + 1}, Space: c.line}
					s := mustNew(t, b, action.Wave{Potential: action.Mass(m), Links: links, Alpha: action.Uniform(loss.alpha), Beta: action.Uniform(loss.beta)})
					start := field.NewSlice(1, c.line.Sites)
					for i := range start.Data {
						start.Data[i] = c.mode(c.line.At(i))
					}
					h := marchFrom(s, field.AtRest(start))
					hh := c.line.Step * c.line.Step
					gamma := loss.alpha + loss.beta*symbol(action.Nearest, c.theta)/hh
					omega := math.Sqrt(symbol(links, c.theta)/hh + m*m - gamma*gamma/4)
					sin, cos := math.Sincos(6 * omega)
					amplitude := math.Exp(-gamma*3) * (cos + gamma/(2*omega)*sin)
					var off float64
					for i, x := range h.Slice(steps).Data {
						off = max(off, math.Abs(x-amplitude*start.Data[i]))
					}
					errs = append(errs, off)
				}
				// ωk ≤ 0.3: the k⁴ term is below 4 % of the k² one.
				slopes(t, loss.name+" "+c.name, 2, 0.06, errs...)
			}
		}
	}
}

// TestLossAroundTime asks for the residual −αφ_t of a field that grows evenly on
// a block that is periodic in time with a jump, at every slice.
func TestLossAroundTime(t *testing.T) {
	b := block(8, 0.25, 5, 0.5)
	b.Time.Periodic, b.Time.Jump = true, []float64{3}
	s := mustNew(t, b, action.Wave{Alpha: action.Uniform(0.5)})
	h := field.NewHistory(b, 1)
	for n := range 8 {
		for i := range 5 {
			h.Set(n, 0, i, 1.5*b.Time.At(n))
		}
	}
	for k, r := range s.Residual(nil, h).Data {
		n, _, i := h.Place(k)
		// Sums of a few numbers about 3/k².
		if want := -0.5 * 1.5 * b.Space.Weight(i); math.Abs(r-want) > 1e-13 {
			t.Errorf("residual at slice %d, site %d is %g; want %g", n, i, r, want)
		}
	}
}

// TestOpenEndReflection asks that what an open end sends back of a smooth pulse
// vanish with order 2 in h at a fixed Courant number.
func TestOpenEndReflection(t *testing.T) {
	for _, links := range everyLinks {
		var errs []float64
		for _, h := range []float64{0.1, 0.05, 0.025} {
			sites := int(16/h) + 1
			b := block(int(20/(0.5*h))+1, 0.5*h, sites, h)
			b.Space.Right = lattice.Open
			s := mustNew(t, b, action.Wave{Links: links})
			st := field.NewState(1, sites)
			for i := range sites { // exp(−(x − 8 − t)²) moves right
				x := b.Space.At(i) - 8
				st.Field.Data[i] = math.Exp(-x * x)
				st.Rate.Data[i] = 2 * x * st.Field.Data[i]
			}
			hist := marchFrom(s, st)
			// At t = 14 the reflection is back at x ≈ 10; the left half is quiet but for
			// what the lattice disperses, which never comes back from the end.
			n, err := b.Time.Index(14)
			if err != nil {
				t.Fatal(err)
			}
			errs = append(errs, hist.Slice(n).Part(sites/2, sites).MaxAbs())
		}
		t.Logf("links of order %d: reflected part of the pulse %.3g at h = 0.1, width 1", links, errs[0])
		// (qh)² with q up to 3: the next term is a tenth at h = 0.1.
		slopes(t, "reflection", 2, 0.15, errs...)
	}
}
