package integrate_test

import (
	"math"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/integrate"
)

// energyOfCollision evolves a φ⁴ kink and antikink of v = 0.3 between free ends
// and returns the trend of the energy (slope of a fitted line × span) and its
// peak to peak over the last 80 % of the steps, and the largest |E − E(0)| of
// all, looking at every stride-th slice.
func energyOfCollision(t *testing.T, k float64, steps, stride int) (trend, spread, drift float64) {
	t.Helper()
	line := span(-40, 80, 400)
	s := discrete(t, span(0, k*float64(steps), steps), line, action.Wave{Potential: action.Phi4{}})
	ledger := &integrate.Ledger{Every: stride}
	evolve(t, s, phi4Pair(t, 0.3).On(line, 0), integrate.Settings{Every: -1, Observers: []integrate.Observer{ledger}})
	var times, energies []float64
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, e := range ledger.Entries[len(ledger.Entries)/5:] {
		times = append(times, e.Time)
		energies = append(energies, e.Energy.Total())
		lo, hi = min(lo, e.Energy.Total()), max(hi, e.Energy.Total())
	}
	trend = fittedSlope(times, energies) * (times[len(times)-1] - times[0])
	return trend, hi - lo, ledger.Drift()
}

// wantBoundedEnergy demands what is known of leapfrog: its energy oscillates by
// O(k²) around a value that it keeps [Hairer, Lubich & Wanner 2003, Acta
// Numerica 12, 399], so that there is no trend beside the oscillation and the
// deviation falls to a quarter at half the step. Both runs look at the same
// spacing of times: the largest deviation is a spike of the width 0.5.
func wantBoundedEnergy(t *testing.T, k float64, steps, half int) {
	t.Helper()
	trend, spread, drift := energyOfCollision(t, k, steps, 1)
	_, _, finer := energyOfCollision(t, k/2, half, 2)
	t.Logf("k = %g, %d steps: slope × span %.3g, %.3f of the peak to peak %.3g", k, steps, trend, math.Abs(trend)/spread, spread)
	t.Logf("max|E − E(0)| %.4g, at half the step %.4g: ratio %.3f", drift, finer, drift/finer)
	if !(math.Abs(trend) <= 0.15*spread) {
		t.Errorf("trend of the energy %.3g; want at most 0.15 of the peak to peak %.3g", trend, spread)
	}
	// Terms of k⁴ are (kω)²/12 of those of k² for the waves that hold the energy,
	// and on long runs the two histories part: their maxima are two samples.
	if r := drift / finer; !(math.Abs(r-4) <= 0.6) {
		t.Errorf("max|E − E(0)| fell by %.3f on halving the step; want 4 ± 0.6", r)
	}
}

// One collision and the escape.
func TestEnergyOfLeapfrog(t *testing.T) {
	wantBoundedEnergy(t, 0.1, 1000, 2000)
}
