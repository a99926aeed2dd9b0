package integratetest

import (
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// steady is a sine-Gordon ring without sources, a large and a small wave on it,
// with the step kω = x.
func (e *examiner) steady(subject string, sites, steps int, x float64) (integrate.Problem, bool) {
	line := lattice.Axis{Step: 0.5, Sites: sites, Periodic: true}
	start := field.NewState(1, sites)
	for i := range sites {
		theta := 2 * math.Pi * float64(i) / float64(sites)
		start.Field.Data[i] = 1.5*math.Cos(theta) + 0.3*math.Sin(2*theta)
		start.Rate.Data[i] = 0.4 * math.Sin(theta)
	}
	b := lattice.Block{Time: lattice.Axis{Step: 1, Sites: steps + 1}, Space: line}
	wave := action.Wave{Potential: action.SineGordon{}}
	s, err := action.New(b, wave)
	if err == nil {
		omega, _ := s.MaxFrequency(start.Field)
		b.Time.Step = x / omega
		s, err = action.New(b, wave)
	}
	if err != nil {
		e.fault(subject, "%v", err)
		return integrate.Problem{}, false
	}
	return integrate.Problem{Action: s, Start: start}, true
}

// reversible steps forward, reverses the rate and steps back.
func (e *examiner) reversible() {
	const subject, steps = "reversibility", 60
	p, ok := e.steady(subject, 12, steps, e.reach(0.5))
	if !ok {
		return
	}
	end, ok := e.run(subject, p, p.Start, steps)
	if !ok {
		return
	}
	reverse(end)
	back, ok := e.run(subject, p, end, steps)
	if !ok {
		return
	}
	reverse(back)
	off := math.Max(back.Field.MaxDifference(p.Start.Field), back.Rate.MaxDifference(p.Start.Rate))
	// Rounding of 120 steps, 1e-14, times the growth of a perturbation in the
	// ten or so units of time, e¹⁰ at the very most.
	if !(off <= 1e-10) {
		e.fault(subject, "%d steps there and back at kω = %.3g miss the start by %.3g; want rounding", steps, e.reach(0.5), off)
	}
}

func reverse(st field.State) {
	for i := range st.Rate.Data {
		st.Rate.Data[i] = -st.Rate.Data[i]
	}
}

// run returns the state after so many steps from start.
func (e *examiner) run(subject string, p integrate.Problem, start field.State, steps int) (field.State, bool) {
	p.Start = start.Clone()
	st := e.start(subject, p)
	if st == nil {
		return field.State{}, false
	}
	for range steps {
		st.Step()
	}
	end := field.NewState(start.Field.Components, start.Field.Sites)
	st.State(end)
	return end, true
}

// symplectic takes the derivative J of the map of one step (φ, φ_t) → (φ, φ_t)
// on a ring of equal masses by differences, and holds JᵀΩJ against Ω.
func (e *examiner) symplectic() {
	const subject, sites = "symplecticity", 5
	p, ok := e.steady(subject, sites, 2, e.reach(0.5))
	if !ok {
		return
	}
	const n = 2 * sites
	var jacobian [n][n]float64 // [column][row]
	at := func(st field.State, k int) *float64 {
		if k < sites {
			return &st.Field.Data[k]
		}
		return &st.Rate.Data[k-sites]
	}
	// Central differences with two steps, extrapolated: the truncation is of
	// order d⁴ = 1e-12, the rounding 1e-16/d.
	const d = 1e-3
	for k := range n {
		for _, part := range [...]struct{ step, weight float64 }{{d, 4. / 3}, {2 * d, -1. / 3}} {
			for _, side := range [2]float64{1, -1} {
				start := p.Start.Clone()
				*at(start, k) += side * part.step
				end, ok := e.run(subject, p, start, 1)
				if !ok {
					return
				}
				for r := range n {
					jacobian[k][r] += side * part.weight * *at(end, r) / (2 * part.step)
				}
			}
		}
	}
	var worst float64
	for a := range n {
		for b := range n {
			var form, want float64
			for i := range sites {
				form += jacobian[a][i]*jacobian[b][i+sites] - jacobian[a][i+sites]*jacobian[b][i]
			}
			switch b - a {
			case sites:
				want = 1
			case -sites:
				want = -1
			}
			worst = worse(worst, math.Abs(form-want))
		}
	}
	// Each entry is good to 1e-11, and the form sums 2·5 products of size 10.
	if !(worst <= 1e-9) {
		e.fault(subject, "one step at kω = %.3g changes dφ∧dφ_t by %.3g; want rounding", e.reach(0.5), worst)
	}
}

// drift fits a line to the energy of a long run.
func (e *examiner) drift() {
	const subject, steps, stride = "energy", 40_000, 10
	p, ok := e.steady(subject, 16, steps, e.reach(0.5))
	if !ok {
		return
	}
	st := e.start(subject, p)
	if st == nil {
		return
	}
	var energies []float64
	state := field.NewState(1, 16)
	for n := 1; n <= steps; n++ {
		st.Step()
		if n%stride == 0 {
			st.State(state)
			energies = append(energies, p.Action.Energy(state, p.Action.Block().Time.At(n)).Total())
		}
	}
	trend, spread := trendOf(energies)
	// A drift makes the ratio one; an oscillation without drift leaves a few
	// hundredths.
	if !(math.Abs(trend) <= 0.3*spread) {
		e.fault(subject, "drifts by %.3g over %d steps at kω = %.3g, peak to peak %.3g; want a bounded oscillation", trend, steps, e.reach(0.5), spread)
	}
}

// trendOf returns slope × span of the line fitted to equidistant values, and
// their peak to peak.
func trendOf(v []float64) (trend, spread float64) {
	n := float64(len(v))
	lo, hi := math.Inf(1), math.Inf(-1)
	var sxy, sxx float64
	for i, y := range v {
		x := float64(i) - (n-1)/2
		sxy += x * y
		sxx += x * x
		lo, hi = math.Min(lo, y), math.Max(hi, y)
	}
	return sxy / sxx * (n - 1), hi - lo
}
