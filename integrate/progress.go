package integrate

import (
	"fmt"
	"io"
	"time"
)

// Progress is an observer that writes the share done and the time remaining to
// W, at most once per Interval, and a last line at the end.
type Progress struct {
	W        io.Writer
	Interval time.Duration // 0 means two seconds
	Every    int           // steps between looks at the watch; 0 means 100

	begun, told time.Time
}

// Stride returns Every.
func (p *Progress) Stride() int {
	if p.Every == 0 {
		return 100
	}
	return p.Every
}

// Observe writes a line if it is time to.
func (p *Progress) Observe(m *Moment) error {
	now := time.Now()
	if p.begun.IsZero() {
		p.begun, p.told = now, now
		return nil
	}
	interval := p.Interval
	if interval == 0 {
		interval = 2 * time.Second
	}
	if m.Slice != m.Last && now.Sub(p.told) < interval {
		return nil
	}
	p.told = now
	done := float64(m.Slice-m.First) / float64(m.Last-m.First)
	spent := now.Sub(p.begun)
	left := time.Duration(float64(spent) * (1 - done) / done)
	_, err := fmt.Fprintf(p.W, "t = %-10.4g %5.1f %%  %v gone, %v to go\n", m.Time, 100*done, spent.Round(time.Second/10), left.Round(time.Second/10))
	return err
}
