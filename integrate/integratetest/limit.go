package integratetest

import (
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// limit runs the fastest oscillation of a linear massive ring, whose sites
// alternate, ω² = 4/h² + m², on both sides of the claimed limit.
func (e *examiner) limit() {
	const steps = 4000
	limit := e.m.Limit()
	if math.IsInf(limit, 1) {
		// Methods without a limit stay bounded far above that of leapfrog.
		for _, x := range []float64{0.5, 2, 20} {
			if g := e.growth(x, steps); !(g < 1e3) {
				e.fault("limit", "is infinite, but at kω = %g an oscillation grew by %.3g in %d steps", x, g, steps)
			}
		}
		return
	}
	for _, share := range []float64{0.25, 0.5, 0.75, 0.99} {
		// A bounded oscillation may still be √(1/(1 − share²)) = 7 larger than
		// its start; growth by one part in 500 a step exceeds 1e3.
		if g := e.growth(share*limit, steps); !(g < 1e3) {
			e.fault("limit", "%g: at kω = %.4g, %g of it, an oscillation grew by %.3g in %d steps", limit, share*limit, share, g, steps)
		}
	}
	if g := e.growth(1.01*limit, steps); g < 1e3 {
		e.fault("limit", "%g is too low: at kω = %.4g an oscillation grew by %.3g only in %d steps", limit, 1.01*limit, g, steps)
	}
}

// growth returns by how much the oscillation has grown at most.
func (e *examiner) growth(x float64, steps int) float64 {
	const mass, sites = 1.0, 8
	line := lattice.Axis{Step: 1, Sites: sites, Periodic: true}
	omega := math.Sqrt(4 + mass*mass)
	s, err := action.New(lattice.Block{Time: lattice.Axis{Step: x / omega, Sites: steps + 1}, Space: line}, action.Wave{Potential: action.Mass(mass)})
	if err != nil {
		e.fault("limit", "%v", err)
		return 1
	}
	start := field.NewState(1, sites)
	for i := range sites {
		start.Field.Data[i] = float64(1 - 2*(i%2))
	}
	st := e.start("limit", integrate.Problem{Action: s, Start: start})
	if st == nil {
		return 1
	}
	var most float64
	for range steps {
		st.Step()
		most = worse(most, st.Field().MaxAbs())
		if most > 1e12 {
			break
		}
	}
	return most
}
