package integrate

import (
	"math"

	"github.com/tenter-go/tenter/internal/kernel"
)

// MeanRate is an observer of the mean of φ_t over time and sites, which for the
// phase of a Josephson junction is its voltage. The mean over time is taken from
// the first slice observed at or after From to the last, by the difference of
// the fields, so that it is exact for any Every.
type MeanRate struct {
	Every     int     // steps between calls; 0 means 1
	From      float64 // transients before this time are left out
	Component int

	started    bool
	start, end float64 // times
	first, now float64 // means over the sites
}

// Stride returns Every.
func (r *MeanRate) Stride() int { return r.Every }

// Observe notes the mean of the field.
func (r *MeanRate) Observe(m *Moment) error {
	if m.Time < r.From {
		return nil
	}
	line, v := m.Action.Block().Space, m.Field().Component(r.Component)
	last := len(v) - 1
	left, right := line.Weight(0), line.Weight(last)
	sum := kernel.Sum(v[1:last]) + (float64(left*v[0]) + float64(right*v[last]))
	r.now, r.end = sum/(float64(last-1)+left+right), m.Time
	if !r.started {
		r.started, r.first, r.start = true, r.now, m.Time
	}
	return nil
}

// Value returns the mean, or NaN if fewer than two slices were observed.
func (r *MeanRate) Value() float64 {
	if !(r.end > r.start) {
		return math.NaN()
	}
	return (r.now - r.first) / (r.end - r.start)
}
