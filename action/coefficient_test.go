package action_test

import (
	"fmt"
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/action/actiontest"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// tables returns the values of f where each coefficient lives on a block: on
// sites, on space links, on the sites of time links, and at one end.
func tables(b lattice.Block, f func(x, t float64) float64) (sites, links, rho, left action.Table) {
	for n := range b.Slices() {
		t := b.Time.At(n)
		for i := range b.Sites() {
			sites = append(sites, f(b.Space.At(i), t))
		}
		for i := range b.Space.Links() {
			links = append(links, f(b.Space.Between(i), t))
		}
		left = append(left, f(b.Space.At(0), t))
	}
	for n := range b.Time.Links() {
		for i := range b.Sites() {
			rho = append(rho, f(b.Space.At(i), b.Time.At(0)+0.5*b.Time.Step+float64(n)*b.Time.Step))
		}
	}
	return sites, links, rho, left
}

// TestCoefficientKindsAgree states one density in several ways and asks for the
// same numbers from all of them.
func TestCoefficientKindsAgree(t *testing.T) {
	b := block(6, 0.125, 9, 0.25)
	h := field.NewHistory(b, 1)
	scatter(9, 1, h.Data)
	build := func(all func(f func(x, t float64) float64) [5]action.Coefficient, f func(x, t float64) float64) *action.Discrete {
		c := all(f)
		return mustNew(t, b, action.Wave{Potential: action.SineGordon{}, Rho: c[2], Kappa: c[1], Sigma: c[0], Source: c[0], Alpha: c[0], Beta: c[1], LeftFlux: c[3], RightFlux: c[4]})
	}
	same := func(c action.Coefficient) [5]action.Coefficient { return [5]action.Coefficient{c, c, c, c, c} }
	over := func(f func(x, t float64) float64) [5]action.Coefficient { return same(action.Over(f)) }
	along := func(f func(x, t float64) float64) [5]action.Coefficient {
		return same(action.Along(func(x float64) float64 { return f(x, 0) }))
	}
	uniform := func(f func(x, t float64) float64) [5]action.Coefficient { return same(action.Uniform(f(0, 0))) }
	table := func(f func(x, t float64) float64) [5]action.Coefficient {
		sites, links, rho, left := tables(b, f)
		right := make(action.Table, b.Slices())
		for n := range right {
			right[n] = f(b.Space.To(), b.Time.At(n))
		}
		return [5]action.Coefficient{sites, links, rho, left, right}
	}
	row := func(f func(x, t float64) float64) [5]action.Coefficient {
		c := table(f)
		return [5]action.Coefficient{c[0].(action.Table)[:9], c[1].(action.Table)[:8], c[2].(action.Table)[:9], c[3].(action.Table)[:1], c[4].(action.Table)[:1]}
	}
	one := func(of func(func(x, t float64) float64) [5]action.Coefficient) func(func(x, t float64) float64) [5]action.Coefficient {
		return func(f func(x, t float64) float64) [5]action.Coefficient {
			c := of(f)
			// σ is the one that may not be split, so it keeps its kind here.
			return [5]action.Coefficient{c[0], action.PerComponent{c[1]}, action.PerComponent{c[2]}, action.PerComponent{c[3]}, action.PerComponent{c[4]}}
		}
	}
	constant := func(_, _ float64) float64 { return 1.25 }
	alongX := func(x, _ float64) float64 { return 1.5 + math.Sin(x) }
	xt := func(x, t float64) float64 { return 1.5 + math.Sin(x+2*t) }
	for _, c := range []struct {
		name      string
		f         func(x, t float64) float64
		base, and func(func(x, t float64) float64) [5]action.Coefficient
	}{
		{"uniform = along", constant, uniform, along},
		{"uniform = over", constant, uniform, over},
		{"uniform = row", constant, uniform, row},
		{"uniform = table", constant, uniform, table},
		{"uniform = per component", constant, uniform, one(uniform)},
		{"along = over", alongX, along, over},
		{"along = row", alongX, along, row},
		{"along = table", alongX, along, table},
		{"over = table", xt, over, table},
		{"over = per component", xt, over, one(over)},
		{"table = per component", xt, table, one(table)},
		{"row = per component", alongX, row, one(row)},
	} {
		t.Run(c.name, func(t *testing.T) {
			p, q := build(c.base, c.f), build(c.and, c.f)
			if a, b := p.Value(h), q.Value(h); a != b {
				t.Errorf("values %v and %v differ", a, b)
			}
			if d := p.Gradient(nil, h).MaxDifference(q.Gradient(nil, h)); d != 0 {
				t.Errorf("gradients differ by %g", d)
			}
			if d := p.Residual(nil, h).MaxDifference(q.Residual(nil, h)); d != 0 {
				t.Errorf("residuals differ by %g", d)
			}
			a, b := field.NewSlice(1, 9), field.NewSlice(1, 9)
			p.March().Step(a, h.Slice(2), h.Slice(1), 2)
			q.March().Step(b, h.Slice(2), h.Slice(1), 2)
			if d := a.MaxDifference(b); d != 0 {
				t.Errorf("marched slices differ by %g", d)
			}
		})
	}
}

// TestComponentsDoNotMix puts two densities on two components and asks for what
// each gives alone.
func TestComponentsDoNotMix(t *testing.T) {
	b := ring(6, 0.125, 9, 3)
	k0, k1 := action.Uniform(2), action.Along(func(x float64) float64 { return 1.5 + math.Sin(2*math.Pi*x/3) })
	a0, a1 := action.Coefficient(nil), action.Uniform(0.25)
	b.Space.Jump = []float64{1, -2}
	both := mustNew(t, b, action.Wave{
		Potential: action.Each{Potential: action.SineGordon{}, N: 2},
		Kappa:     action.PerComponent{k0, k1}, Alpha: action.PerComponent{a0, a1}, Rho: action.PerComponent{nil, action.Uniform(3)},
	})
	h := field.NewHistory(b, 2)
	scatter(10, 1, h.Data)
	var sum float64
	for c, w := range []action.Wave{{Kappa: k0}, {Kappa: k1, Alpha: a1, Rho: action.Uniform(3)}} {
		w.Potential = action.SineGordon{}
		alone := b
		alone.Space.Jump = b.Space.Jump[c : c+1]
		s := mustNew(t, alone, w)
		part := field.NewHistory(alone, 1)
		for n := range b.Slices() {
			copy(part.Slice(n).Component(0), h.Slice(n).Component(c))
		}
		sum += s.Value(part)
		r, all := s.Residual(nil, part), both.Residual(nil, h)
		for n := range b.Slices() {
			if d := field.SliceOf(all.Slice(n).Component(c)).MaxDifference(r.Slice(n)); d != 0 {
				t.Errorf("residuals of component %d differ by %g at slice %d", c, d, n)
			}
		}
	}
	if v := both.Value(h); math.Abs(v-sum) > 1e-13*math.Abs(sum) { // summed in another order
		t.Errorf("action %.16g of both; want the sum %.16g of each", v, sum)
	}
}

// TestTablesConform runs the conformance suite with every coefficient a table.
func TestTablesConform(t *testing.T) {
	f := func(x, t float64) float64 { return 1.5 + math.Sin(x+2*t) }
	for name, line := range everyLine(0.25, 8, 1.5) {
		b := lattice.Block{Time: lattice.Axis{Step: 0.125, Sites: 5}, Space: line}
		sites, links, rho, _ := tables(b, f)
		for _, order := range everyLinks {
			w := action.Wave{Potential: action.Phi4{}, Links: order, Rho: rho, Kappa: links, Sigma: sites, Source: sites, Alpha: sites, Beta: links}
			if err := actiontest.Density(w, actiontest.Settings{Blocks: []lattice.Block{b}}); err != nil {
				t.Errorf("%s: %v", name, err)
			}
		}
	}
}

// TestVaryingStiffness asks that (κφ_x)_x with a smooth κ(x) have the order of
// the links, and order 2 where κ is a table that wide links must average
// (manufactured solution: κ = 1 + ½ sin x, φ = cos x on a ring).
func TestVaryingStiffness(t *testing.T) {
	kappa := func(x float64) float64 { return 1 + 0.5*math.Sin(x) }
	exact := func(x float64) float64 { return -0.5*math.Cos(x)*math.Sin(x) - kappa(x)*math.Cos(x) }
	for _, links := range everyLinks {
		for _, tabled := range []bool{false, true} {
			var errs []float64
			for _, sites := range []int{20, 40, 80} {
				if tabled {
					sites *= 4 // the h² term is small
				}
				b := ring(3, 0.01, sites, 2*math.Pi)
				w := action.Wave{Links: links, Kappa: action.Along(kappa)}
				if tabled {
					var values action.Table
					for i := range sites {
						values = append(values, kappa(b.Space.Between(i)))
					}
					w.Kappa = values
				}
				a, err := mustNew(t, b, w).Accelerator()
				if err != nil {
					t.Fatal(err)
				}
				st, force := field.NewState(1, sites), field.NewSlice(1, sites)
				for i := range sites {
					st.Field.Data[i] = math.Cos(b.Space.At(i))
				}
				a.At(force, st, 0)
				var off float64
				for i, f := range force.Data {
					off = max(off, math.Abs(f-exact(b.Space.At(i))))
				}
				errs = append(errs, off)
			}
			order := float64(links)
			if tabled {
				order = 2
			}
			// h = 0.3, with a table 0.08: the next term is a few h² of the leading one.
			slopes(t, fmt.Sprintf("links of order %d, table %v", links, tabled), order, 0.15, errs...)
		}
	}
}

// TestForceOfEveryCoefficient asks for ρφ_tt = −σV′ + J − αφ_t of a uniform
// field, term by term at a time between slices.
func TestForceOfEveryCoefficient(t *testing.T) {
	b := block(3, 0.1, 5, 0.5)
	f := func(size float64) func(x, t float64) float64 {
		return func(x, t float64) float64 { return size + x*t }
	}
	rho := func(x float64) float64 { return 2 + x }
	s := mustNew(t, b, action.Wave{Potential: action.SineGordon{}, Rho: action.Along(rho), Sigma: action.Over(f(1)), Source: action.Over(f(-0.5)), Alpha: action.Over(f(0.25))})
	a, err := s.Accelerator()
	if err != nil {
		t.Fatal(err)
	}
	const phi, rate, at = 0.7, -1.5, 0.137
	st, force := field.NewState(1, 5), field.NewSlice(1, 5)
	for i := range 5 {
		st.Field.Data[i], st.Rate.Data[i] = phi, rate
	}
	a.At(force, st, at)
	for i, got := range force.Data {
		x := b.Space.At(i)
		want := (-f(1)(x, at)*math.Sin(phi) + f(-0.5)(x, at) - f(0.25)(x, at)*rate) / rho(x)
		if math.Abs(got-want) > 1e-15 { // a few roundings
			t.Errorf("φ_tt at x = %g is %.16g; want %.16g", x, got, want)
		}
	}
}
