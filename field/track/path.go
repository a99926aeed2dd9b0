package track

import (
	"fmt"
	"math"
)

// A Path is one kink or pulse through time. Kinks[n] is what was found at
// Times[n]; there are gaps where it had merged with another. On a ring places
// are counted on, beyond the ends of the line, so that there are no jumps.
//
// Left and Right of a pulse are zero.
type Path struct {
	Times  []float64
	Kinks  []Kink
	Merged []float64 // times of the slices at which it was first missed, merged with another
	Ended  bool      // neither seen nor merged: it has left the line or was lost
}

// Bounces returns how often the path has merged with another, whether or not it
// came back from the last time.
func (p *Path) Bounces() int { return len(p.Merged) }

// Last returns the last time and place at which the path was seen.
func (p *Path) Last() (t, x float64) {
	n := len(p.Times) - 1
	return p.Times[n], p.Kinks[n].X
}

// Speed fits a straight line to the places at the times from ≤ t ≤ to.
func (p *Path) Speed(from, to float64) (Line, error) {
	var ts, xs []float64
	for n, t := range p.Times {
		if from <= t && t <= to {
			ts = append(ts, t)
			xs = append(xs, p.Kinks[n].X)
		}
	}
	l, err := Fit(ts, xs)
	if err != nil {
		return Line{}, fmt.Errorf("track: path between t = %g and %g: %w", from, to, err)
	}
	return l, nil
}

// A Line is the straight line x = At + Speed·(t − Time) through observed places,
// Time being the mean of their times.
type Line struct {
	Speed, SpeedError float64 // slope and its standard error
	At, AtError       float64
	Time              float64
	Scatter           float64 // root of the mean square of the residuals
	Count             int
}

// X returns the place on the line at time t.
func (l Line) X(t float64) float64 { return l.At + l.Speed*(t-l.Time) }

// Fit returns the least-squares line through the points (t, x),
//
//	Speed = Σ(t − t̄)(x − x̄)/Σ(t − t̄)²,  SpeedError² = s²/Σ(t − t̄)²,  AtError² = s²/n,
//
// with s² = Σ residual²/(n − 2). The standard errors hold for independent
// residuals. Those of a wobbling kink are not: take whole periods of the wobble,
// and the error as its order of magnitude. Fewer than three points, or no two at
// different times, are an error. [Bevington & Robinson 2003, Data Reduction and
// Error Analysis for the Physical Sciences, ch. 6]
func Fit(t, x []float64) (Line, error) {
	if len(t) != len(x) {
		panic(fmt.Sprintf("track: %d times and %d places", len(t), len(x)))
	}
	n := float64(len(t))
	if n < 3 {
		return Line{}, fmt.Errorf("line through %d points; want at least 3", len(t))
	}
	l := Line{Count: len(t)}
	for k := range t {
		l.Time += t[k] / n
		l.At += x[k] / n
	}
	var stt, stx, rest float64
	for k := range t {
		d := t[k] - l.Time
		stt += d * d
		stx += d * (x[k] - l.At)
	}
	if !(stt > 0) {
		return Line{}, fmt.Errorf("line through %d points at the time %g; want different times", len(t), l.Time)
	}
	l.Speed = stx / stt
	for k := range t {
		r := x[k] - l.X(t[k])
		rest += r * r
	}
	l.Scatter = math.Sqrt(rest / n)
	variance := rest / (n - 2)
	l.SpeedError, l.AtError = math.Sqrt(variance/stt), math.Sqrt(variance/n)
	return l, nil
}
