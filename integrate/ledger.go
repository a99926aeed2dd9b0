package integrate

import (
	"math"

	"github.com/tenter-go/tenter/action"
)

// A Ledger is an observer that keeps the account of the energy of the field: how
// much there is, how much came from sources and how much went into losses and
// through the ends. Works are integrals of the powers by the trapezoidal rule
// over the observed slices.
type Ledger struct {
	Every int // steps between entries; 0 means 1

	Entries []Entry
	power   action.Power
}

// An Entry is the account at one slice. Works count from the first entry and
// are positive where energy entered the field.
type Entry struct {
	Time     float64
	Energy   action.Energy
	Momentum float64
	Source   float64 // work of sources and bias
	Loss     float64 // work of α and β, ≤ 0
	Ends     float64 // work through the ends: prescribed flux and open ends
}

// Stride returns Every.
func (l *Ledger) Stride() int { return l.Every }

// Observe adds an entry.
func (l *Ledger) Observe(m *Moment) error {
	st := m.State()
	e := Entry{Time: m.Time, Energy: m.Action.Energy(st, m.Time), Momentum: m.Action.Momentum(st, m.Time)}
	p := m.Action.Power(st, m.Time)
	if len(l.Entries) > 0 {
		last := l.Entries[len(l.Entries)-1]
		half := 0.5 * (m.Time - last.Time)
		e.Source = last.Source + half*(p.Source+l.power.Source)
		e.Loss = last.Loss + half*(p.Loss+l.power.Loss)
		e.Ends = last.Ends + half*(p.Left+p.Right+l.power.Left+l.power.Right)
	}
	l.power = p
	l.Entries = append(l.Entries, e)
	return nil
}

// Residual returns |W − ΔE| / max(|W_source|, |W_loss|, |W_ends|, |E(0)|) of the last entry,
// W the sum of the works and E the energy of the field: the share of the
// account that does not balance. It is NaN before the second entry.
func (l *Ledger) Residual() float64 {
	if len(l.Entries) < 2 {
		return math.NaN()
	}
	a, b := l.Entries[0], l.Entries[len(l.Entries)-1]
	scale := max(math.Abs(b.Source), math.Abs(b.Loss), math.Abs(b.Ends), math.Abs(a.Energy.Field()))
	return math.Abs(b.Source+b.Loss+b.Ends-(b.Energy.Field()-a.Energy.Field())) / scale
}

// Drift returns the largest |E − E(0)| of the conserved energy Total, over all
// entries.
func (l *Ledger) Drift() float64 {
	var d float64
	for _, e := range l.Entries {
		d = max(d, math.Abs(e.Energy.Total()-l.Entries[0].Energy.Total()))
	}
	return d
}
