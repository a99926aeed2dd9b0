package actiontest

import (
	"fmt"
	"math"
	"strings"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// Potential tests a potential and returns what is wrong with it, or nil:
//
//   - Slope is the derivative of Value, and Curvature its second derivative, in
//     every component, at random values of φ and the given positions and times;
//     Curvature is symmetric; all are finite; CurvatureAlong, if there is one, is
//     the derivative of Curvature;
//   - every method overwrites all of dst, writes nowhere else, and leaves φ and
//     the positions alone;
//   - a site does not depend on its neighbours, on the length of the slice or on
//     how it lies in memory, nor a call on those before it or beside it in
//     another goroutine.
//
// Errors name the derivative, its components, φ, x and t, what the potential
// gives and what it should give.
func Potential(p action.Potential, s Settings) error {
	if p == nil {
		return fmt.Errorf("actiontest: potential is nil")
	}
	s, err := s.fill(3)
	if err != nil {
		return err
	}
	if n := p.Components(); n < 1 {
		return fmt.Errorf("actiontest: Components() is %d; want at least 1", n)
	}
	var found findings
	r := s.random()
	for _, t := range s.T {
		const each = 12 // values of φ at every position
		c := newSample(p, t, s.X, each)
		for a := range c.phi.Components {
			s.draw(r, c.phi.Component(a))
		}
		given := c.evaluate(p, math.NaN())
		if !c.finite(&found, given) {
			continue
		}
		c.slopes(&found, s, given)
		c.curvatures(&found, s, given)
		c.symmetry(&found, given)
		c.thirds(&found, s)
		c.overwriting(&found, given)
		c.memory(&found, s, given)
		c.layouts(&found, given)
		c.company(&found, given)
	}
	return found.err()
}

// A sample is a slice of values of φ at which a potential is tested.
type sample struct {
	p   action.Potential
	phi field.Slice
	at  action.Sites
}

func newSample(p action.Potential, t float64, xs []float64, each int) *sample {
	c := &sample{p: p, phi: field.NewSlice(p.Components(), each*len(xs)), at: action.Sites{T: t}}
	for range each {
		c.at.X = append(c.at.X, xs...)
	}
	return c
}

// part returns the sites from ≤ i < to of the sample.
func (c *sample) part(from, to int) *sample {
	return &sample{p: c.p, phi: c.phi.Part(from, to), at: action.Sites{T: c.at.T, X: c.at.X[from:to]}}
}

// A result is what the three methods of a potential give.
type result struct {
	value            []float64
	slope, curvature field.Slice
}

// evaluate calls the methods of p with dst full of the number stale.
func (c *sample) evaluate(p action.Potential, stale float64) result {
	n, sites := c.phi.Components, c.phi.Sites
	r := result{value: make([]float64, sites), slope: field.NewSlice(n, sites), curvature: field.NewSlice(n*n, sites)}
	for _, dst := range [][]float64{r.value, r.slope.Data, r.curvature.Data} {
		for i := range dst {
			dst[i] = stale
		}
	}
	p.Value(r.value, c.phi, c.at)
	p.Slope(r.slope, c.phi, c.at)
	p.Curvature(r.curvature, c.phi, c.at)
	return r
}

// rows returns the numbers of a result with their names, a row a component.
func (r result) rows() (names []string, rows [][]float64) {
	names, rows = append(names, "value V"), append(rows, r.value)
	n := r.slope.Components
	for a := range n {
		names, rows = append(names, slopeName(n, a)), append(rows, r.slope.Component(a))
	}
	for a := range n {
		for b := range n {
			names, rows = append(names, curvatureName(n, a, b)), append(rows, r.curvature.Component(a*n+b))
		}
	}
	return names, rows
}

func slopeName(n, a int) string {
	if n == 1 {
		return "slope V′"
	}
	return fmt.Sprintf("slope ∂V/∂φ_%d", a)
}

func curvatureName(n, a, b int) string {
	if n == 1 {
		return "curvature V″"
	}
	return fmt.Sprintf("curvature ∂²V/∂φ_%d∂φ_%d", a, b)
}

// place says where site i of a sample is.
func (c *sample) place(i int) string {
	var phi []string
	for a := range c.phi.Components {
		phi = append(phi, fmt.Sprintf("%.6g", c.phi.At(a, i)))
	}
	v := strings.Join(phi, ", ")
	if len(phi) > 1 {
		v = "(" + v + ")"
	}
	return fmt.Sprintf("φ = %s, x = %g, t = %g", v, c.at.X[i], c.at.T)
}

func (c *sample) finite(f *findings, given result) bool {
	ok := true
	names, rows := given.rows()
	for k, row := range rows {
		for i, v := range row {
			if math.IsNaN(v - v) {
				ok = false
				f.add("finite "+names[k], 1, "%s at %s is %v (dst held NaN before the call); want a finite number", names[k], c.place(i), v)
			}
		}
	}
	return ok
}

func (c *sample) slopes(f *findings, s Settings, given result) {
	n := c.phi.Components
	for a := range n {
		q := slopeOf(c.phi.Sites, s.Step, func(dst []float64, eps float64) { c.shifted(dst, a, eps, a, 0) })
		row := given.slope.Component(a)
		j := newJudge(s, q, row)
		for i, v := range row {
			if size, text := j.verdict(i, v); size > 0 {
				f.add(slopeName(n, a), size, "%s at %s %s of Value", slopeName(n, a), c.place(i), text)
			}
		}
	}
}

func (c *sample) curvatures(f *findings, s Settings, given result) {
	n := c.phi.Components
	for a := range n {
		for b := range n {
			q := crossOf(c.phi.Sites, s.Step, func(dst []float64, u, v float64) { c.shifted(dst, a, u, b, v) })
			row := given.curvature.Component(a*n + b)
			j := newJudge(s, q, row)
			name := curvatureName(n, a, b)
			for i, v := range row {
				if size, text := j.verdict(i, v); size > 0 {
					f.add(name, size, "%s at %s %s of Value", name, c.place(i), text)
				}
			}
		}
	}
}

// shifted writes V with component a moved by u and component b by v.
func (c *sample) shifted(dst []float64, a int, u float64, b int, v float64) {
	phi := c.phi.Clone()
	for i := range phi.Sites {
		phi.Component(a)[i] += u
		phi.Component(b)[i] += v
	}
	c.p.Value(dst, phi, c.at)
}

func (c *sample) symmetry(f *findings, given result) {
	n := c.phi.Components
	for a := range n {
		for b := range a {
			up, low := given.curvature.Component(b*n+a), given.curvature.Component(a*n+b)
			for i, v := range up {
				// Both are the same number computed twice; a few roundings are allowed.
				if d := math.Abs(v - low[i]); d > 1e-12*max(math.Abs(v), math.Abs(low[i])) {
					f.add(fmt.Sprintf("symmetry %d %d", a, b), d, "%s at %s is %.12g and %s is %.12g; want a symmetric matrix",
						curvatureName(n, b, a), c.place(i), v, curvatureName(n, a, b), low[i])
				}
			}
		}
	}
}
