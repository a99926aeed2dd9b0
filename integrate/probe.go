package integrate

import (
	"fmt"
	"math"
)

// A Probe is an observer that keeps the time series of one component at chosen
// sites.
type Probe struct {
	Every     int // steps between readings; 0 means 1
	Component int
	Sites     []int

	Times  []float64
	Values [][]float64 // Values[k] belongs to Sites[k]
}

// Stride returns Every.
func (p *Probe) Stride() int { return p.Every }

// Observe takes a reading at every site.
func (p *Probe) Observe(m *Moment) error {
	v := m.Field().Component(p.Component)
	if p.Values == nil {
		p.Values = make([][]float64, len(p.Sites))
	}
	for k, i := range p.Sites {
		if i < 0 || i >= len(v) {
			return fmt.Errorf("probe at site %d of %d", i, len(v))
		}
		p.Values[k] = append(p.Values[k], v[i])
	}
	p.Times = append(p.Times, m.Time)
	return nil
}

// Crossing returns the time at which the reading of site number k of Sites
// first passes the level, or NaN if it never does. Between readings the field
// is the cubic through the four nearest, whose error is of fourth order in the
// interval.
func (p *Probe) Crossing(k int, level float64) float64 {
	v := p.Values[k]
	for n := 1; n < len(v); n++ {
		if (v[n-1] < level) == (v[n] < level) {
			continue
		}
		first := min(max(n-2, 0), max(len(v)-4, 0))
		last := min(first+4, len(v))
		t, y := p.Times[first:last], v[first:last]
		lo, hi := p.Times[n-1], p.Times[n]
		below := v[n-1] < level
		for range 60 { // bisection to rounding
			mid := 0.5 * (lo + hi)
			if (lagrange(t, y, mid) < level) == below {
				lo = mid
			} else {
				hi = mid
			}
		}
		return 0.5 * (lo + hi)
	}
	return math.NaN()
}

// lagrange returns the polynomial through the points (t, y) at s.
func lagrange(t, y []float64, s float64) float64 {
	var sum float64
	for a := range t {
		w := y[a]
		for b := range t {
			if b != a {
				w *= (s - t[b]) / (t[a] - t[b])
			}
		}
		sum += w
	}
	return sum
}
