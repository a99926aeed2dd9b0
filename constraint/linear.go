package constraint

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A Linear is a linear condition Σ_j a_j φ_j = b on values of the field. It is
// hard, met exactly, unless [Linear.Soft] makes it soft; then it costs
//
//	Strength · (Σ_j a_j φ_j − b)²/2σ².
//
// The methods of [Set] that place one return it; [Set.Free] reads its fields.
// One that was in error is returned as well, but is not part of the set.
type Linear struct {
	Name     string  // how reactions, misfits and errors call it
	Strength float64 // a factor ≥ 0 on the cost of a soft one; 1 unless changed

	terms     []coefficient
	asked     float64 // b
	shift     float64 // what jumps of periodic axes add to Σ a·(stored value)
	sigma     float64 // 0 if hard
	at        lattice.Event
	component int // that the event is of
	held      *held
}

// A coefficient is the coefficient of one stored value.
type coefficient struct {
	place
	site int
	a    float64
}

// Soft makes the condition an observation with the standard deviation sigma > 0,
// in units of Σ a φ. It returns the condition.
func (l *Linear) Soft(sigma float64) *Linear {
	if err := checkSigma(sigma); err != nil {
		if l.held != nil {
			l.held.fail(fmt.Errorf("constraint: %s at %v has the %w", l.Name, l.at, err))
		}
		return l
	}
	l.sigma = sigma
	return l
}

// A Coefficient is one term A·φ of a linear condition, φ being a component of
// the field at an event. On a view of one component, Component is left zero.
type Coefficient struct {
	lattice.Event
	Component int
	A         float64
}

// Linear holds Σ A_j φ_j = b over any events and components. Terms on the same
// value are added up; it is an error if nothing remains.
func (s *Set) Linear(b float64, terms ...Coefficient) *Linear {
	l := newLinear("linear condition", b)
	if len(terms) == 0 {
		s.fail(fmt.Errorf("constraint: %s without terms; want at least one", l.Name))
		return l
	}
	l.at = terms[0].Event
	for _, t := range terms {
		c := t.Component
		if s.component >= 0 {
			if c != 0 && c != s.component {
				s.fail(fmt.Errorf("constraint: %s at %v has a term on component %d in a view of component %d; leave it zero or ask the set itself", l.Name, t.Event, c, s.component))
				return l
			}
			c = s.component
		}
		if !s.has(c, fmt.Sprintf("%s at %v", l.Name, t.Event)) {
			return l
		}
		p, err := s.locate(t.Event)
		if err != nil {
			s.fail(fmt.Errorf("constraint: %s: %w", l.Name, err))
			return l
		}
		if !finite(t.A) {
			s.fail(fmt.Errorf("constraint: %s has the coefficient %v at %v; want a finite number", l.Name, t.A, t.Event))
			return l
		}
		if len(l.terms) == 0 {
			l.component = c
		}
		l.terms = append(l.terms, coefficient{place{p.slice, c}, p.site, t.A})
		l.shift += t.A * s.shift(p, c)
	}
	return s.hold(l)
}

// Mean holds the mean of slice n,
//
//	Σ_i u_i φ_i / Σ_i u_i = value,
//
// with the weights of the trapezoid rule, u_i = ½ at the two ends of an axis that
// is not periodic and 1 elsewhere.
func (s *Set) Mean(n int, value float64) *Linear {
	l := newLinear(fmt.Sprintf("mean of slice %d", n), value)
	if !s.onBlock(n, "mean of slice") {
		return l
	}
	c, ok := s.one(l.Name)
	if !ok {
		return l
	}
	l.at, l.component = s.block.At(n, 0), c
	for i := range s.block.Sites() {
		l.terms = append(l.terms, coefficient{place{n, c}, i, trapezoid(s.block.Space, i) / float64(s.block.Space.Links())})
	}
	return s.hold(l)
}

// EndToEnd holds the difference φ(last site) − φ(first site) = value of slice n:
// the topological charge times the distance of the vacua. Around a periodic axis
// the difference is the jump of the axis, and asking for it is an error.
func (s *Set) EndToEnd(n int, value float64) *Linear {
	l := newLinear(fmt.Sprintf("end-to-end difference of slice %d", n), value)
	if !s.onBlock(n, "end-to-end difference of slice") {
		return l
	}
	if s.block.Space.Periodic {
		s.fail(fmt.Errorf("constraint: %s at %v, on a periodic axis; set the Jump of the axis instead", l.Name, s.block.At(n, 0)))
		return l
	}
	c, ok := s.one(l.Name)
	if !ok {
		return l
	}
	l.at, l.component = s.block.At(n, 0), c
	l.terms = []coefficient{{place{n, c}, 0, -1}, {place{n, c}, s.block.Sites() - 1, 1}}
	return s.hold(l)
}

// Between holds the value of the field at time t and position x, which need not
// be on the lattice: the interpolant, linear or cubic along both axes as
// field.History.Resample makes it, takes the value. The error names the event if
// it leaves the block.
func (s *Set) Between(t, x, value float64, kind field.Interpolation) *Linear {
	l := newLinear("value between sites", value)
	l.at = lattice.Event{T: t, X: x}
	times, err := interpolate(s.block.Time, t, kind)
	if err != nil {
		s.fail(fmt.Errorf("constraint: %s at %v: time: %w", l.Name, l.at, err))
		return l
	}
	sites, err := interpolate(s.block.Space, x, kind)
	if err != nil {
		s.fail(fmt.Errorf("constraint: %s at %v: space: %w", l.Name, l.at, err))
		return l
	}
	c, ok := s.one(l.Name)
	if !ok {
		return l
	}
	l.component = c
	for _, p := range times {
		for _, q := range sites {
			s.addTerm(l, p.site, q.site, p.weight*q.weight)
		}
	}
	return s.hold(l)
}

// A weighted site of an axis; on a periodic one it may lie beyond the ends.
type weighted struct {
	site   int
	weight float64
}

// interpolate returns the sites and weights that give the value at x.
func interpolate(a lattice.Axis, x float64, kind field.Interpolation) ([]weighted, error) {
	switch {
	case kind > field.Cubic:
		return nil, fmt.Errorf("%v; want Linear or Cubic", kind)
	case !finite(x):
		return nil, fmt.Errorf("position %v; want a finite number", x)
	case kind == field.Cubic && a.Sites < 4 && !a.Periodic:
		return nil, fmt.Errorf("cubic interpolation on an axis of %d sites; want at least 4", a.Sites)
	}
	u := (x - a.From) / a.Step
	nearest := math.Round(u)
	if off := math.Abs(x - (a.From + nearest*a.Step)); off <= lattice.OnSite*a.Step && (a.Periodic || nearest >= 0 && nearest < float64(a.Sites)) {
		return []weighted{{int(nearest), 1}}, nil
	}
	if !a.Periodic && (x < a.From || x > a.To()) {
		return nil, fmt.Errorf("position %g is off the axis; want one from %g to %g", x, a.From, a.To())
	}
	left, points := int(math.Floor(u)), 2
	if kind == field.Cubic {
		left, points = left-1, 4
	}
	if !a.Periodic {
		left = min(max(left, 0), a.Sites-points)
	}
	p := u - float64(left) // Lagrange's polynomials on 0, 1 … points−1
	stencil := make([]weighted, points)
	for j := range stencil {
		w := 1.0
		for k := range points {
			if k != j {
				w *= (p - float64(k)) / float64(j-k)
			}
		}
		stencil[j] = weighted{left + j, w}
	}
	return stencil, nil
}

func newLinear(name string, b float64) *Linear { return &Linear{Name: name, Strength: 1, asked: b} }

// addTerm adds a·φ(n, i) to a condition on one component; slice and site may lie
// beyond periodic axes.
func (s *Set) addTerm(l *Linear, n, i int, a float64) {
	n, turns := wrap(s.block.Time, n)
	i, laps := wrap(s.block.Space, i)
	c := l.component
	l.terms = append(l.terms, coefficient{place{n, c}, i, a})
	l.shift += a * s.shift(spot{laps: [2]float64{turns, laps}}, c)
}

// hold puts a finished condition into the set, its terms in the order of the
// history.
func (s *Set) hold(l *Linear) *Linear {
	if !finite(l.asked) {
		s.fail(fmt.Errorf("constraint: %s at %v is asked to be %v; want a finite number", l.Name, l.at, l.asked))
		return l
	}
	slices.SortFunc(l.terms, func(a, b coefficient) int {
		return cmp.Or(cmp.Compare(a.slice, b.slice), cmp.Compare(a.component, b.component), cmp.Compare(a.site, b.site))
	})
	merged := l.terms[:0]
	for _, t := range l.terms {
		if k := len(merged) - 1; k >= 0 && merged[k].place == t.place && merged[k].site == t.site {
			merged[k].a += t.a
			continue
		}
		merged = append(merged, t)
	}
	l.terms = slices.DeleteFunc(merged, func(t coefficient) bool { return t.a == 0 })
	if len(l.terms) == 0 {
		s.fail(fmt.Errorf("constraint: %s at %v has no coefficient other than zero; want at least one", l.Name, l.at))
		return l
	}
	l.held = s.held
	s.linears = append(s.linears, l)
	return l
}
