package action_test

import (
	"fmt"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// TestMarchAllocatesNothing counts the allocations of a step, a tangent step and
// an acceleration for densities that take every path through them.
func TestMarchAllocatesNothing(t *testing.T) {
	wave := action.Over(func(x, t float64) float64 { return 1.5 + math.Sin(x+t) })
	line := lattice.Axis{Step: 0.25, Sites: 64}
	open := line
	open.Left, open.Right = lattice.Open, lattice.Held
	around := line
	around.Periodic = true
	for _, c := range []struct {
		name string
		line lattice.Axis
		w    action.Wave
	}{
		{"φ⁴", line, action.Wave{Potential: action.Phi4{}}},
		{"sine-Gordon", line, action.Wave{Potential: action.SineGordon{}, Source: action.Uniform(0.3)}},
		{"sixth order", around, action.Wave{Potential: action.SineGordon{}, Links: action.Sixth}},
		{"losses", line, action.Wave{Potential: action.SineGordon{}, Alpha: action.Uniform(0.1), Beta: action.Uniform(0.1)}},
		{"losses on a ring", around, action.Wave{Potential: action.SineGordon{}, Alpha: action.Uniform(0.1), Beta: action.Uniform(0.1)}},
		{"open", open, action.Wave{Potential: action.Mass(1), Kappa: wave}},
		{"varying", line, action.Wave{Potential: action.SineGordon{}, Kappa: wave, Sigma: wave, Source: wave, Alpha: wave, LeftFlux: wave}},
		{"coupled", around, action.Wave{Potential: action.Sum{action.Each{Potential: action.SineGordon{}, N: 2}, action.Bilinear{{1, -1}, {-1, 1}}}}},
		{"from a formula", line, action.Wave{Potential: action.Scalar{V: math.Cosh, D1: math.Sinh, D2: math.Cosh}}},
	} {
		s := mustNew(t, lattice.Block{Time: lattice.Axis{Step: 0.1, Sites: 5}, Space: c.line}, c.w)
		a, err := s.Accelerator()
		if err != nil {
			t.Fatal(err)
		}
		m := s.March()
		now, before, next := field.NewSlice(s.Components(), 64), field.NewSlice(s.Components(), 64), field.NewSlice(s.Components(), 64)
		scatter(11, 1, now.Data)
		st := field.State{Field: now, Rate: before}
		for name, f := range map[string]func(){
			"Step":        func() { m.Step(next, now, before, 2) },
			"Tangent":     func() { m.Tangent(next, now, before, now, 2) },
			"Start":       func() { m.Start(next, st, 2) },
			"Accelerator": func() { a.At(next, st, 0.2) },
		} {
			if n := testing.AllocsPerRun(50, f); n != 0 {
				t.Errorf("%s, %s: %g allocations a call; want 0", c.name, name, n)
			}
		}
	}
}

// TestMarchRunsBackwards asks that leapfrog come back to its start when the last
// two slices are exchanged (Störmer's method is its own inverse).
func TestMarchRunsBackwards(t *testing.T) {
	for _, links := range everyLinks {
		b := ring(200, 0.1, 40, 10)
		b.Space.Jump = []float64{2 * math.Pi}
		s := mustNew(t, b, action.Wave{Potential: action.SineGordon{}, Links: links})
		start := field.NewState(1, 40)
		for i := range 40 {
			start.Field.Data[i] = 4 * math.Atan(math.Exp(b.Space.At(i)-5))
		}
		scatter(12, 0.1, start.Rate.Data)
		there := marchFrom(s, start)
		back := field.NewHistory(b, 1)
		back.Slice(0).CopyFrom(there.Slice(199))
		back.Slice(1).CopyFrom(there.Slice(198))
		march(s, back)
		// 200 steps add 2·200 roundings of numbers below 8, which grow at most
		// linearly in the number of steps.
		if d := back.Slice(199).MaxDifference(there.Slice(0)); !(d <= 200*200*8*0x1p-53) {
			t.Errorf("links of order %d: back at the start the field is off by %g", links, d)
		}
	}
}

// TestMarchOfPlainLines holds the loops for plain lines against the general ones
// that a coefficient given as a function takes. The sums are associated in
// another way, so that the last bits may differ.
func TestMarchOfPlainLines(t *testing.T) {
	one := action.Along(func(float64) float64 { return 1.5 })
	for name, line := range everyLine(0.25, 33, 1.5) {
		for _, source := range []action.Coefficient{nil, action.Uniform(0.3)} {
			b := lattice.Block{Time: lattice.Axis{Step: 0.1, Sites: 4}, Space: line}
			plain := mustNew(t, b, action.Wave{Potential: action.Phi4{}, Kappa: action.Uniform(1.5), Rho: action.Uniform(1.5), Sigma: action.Uniform(1.5), Source: source})
			general := mustNew(t, b, action.Wave{Potential: action.Phi4{}, Kappa: one, Rho: one, Sigma: one, Source: source})
			h := field.NewHistory(b, 1)
			scatter(13, 1, h.Data)
			p, g := h.Clone(), h.Clone()
			march(plain, p)
			march(general, g)
			if d := p.MaxDifference(g); !(d <= 1e-14) { // some ten roundings of numbers about 3
				t.Errorf("%s: plain and general march differ by %g", name, d)
			}
		}
	}
}

// BenchmarkMarch reports the time a site and step of the march.
func BenchmarkMarch(b *testing.B) {
	const sites = 4096
	for _, c := range []named{{"φ⁴", action.Phi4{}}, {"sine-Gordon", action.SineGordon{}}} {
		for _, v := range []struct {
			name string
			w    action.Wave
		}{
			{"nearest", action.Wave{}},
			{"sixth", action.Wave{Links: action.Sixth}},
			{"damped", action.Wave{Alpha: action.Uniform(0.1)}},
			{"viscous", action.Wave{Beta: action.Uniform(0.1)}},
			{"varying κ", action.Wave{Kappa: action.Along(math.Cosh)}},
		} {
			b.Run(fmt.Sprintf("%s/%s", c.name, v.name), func(b *testing.B) {
				v.w.Potential = c.p
				line := lattice.Axis{Step: 0.1, Sites: sites}
				if v.name == "varying κ" {
					line.Step = 1e-4 // κ near 1
				}
				s := mustNew(b, lattice.Block{Time: lattice.Axis{Step: 0.5 * line.Step, Sites: 3}, Space: line}, v.w)
				m := s.March()
				before, now, next := field.NewSlice(1, sites), field.NewSlice(1, sites), field.NewSlice(1, sites)
				scatter(14, 0.5, now.Data)
				before.CopyFrom(now)
				b.ReportAllocs()
				for b.Loop() {
					m.Step(next, now, before, 1)
					before, now, next = now, next, before
				}
				b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/sites, "ns/site")
				if now.Check() != nil {
					b.Fatal("the march has blown up")
				}
			})
		}
	}
}
