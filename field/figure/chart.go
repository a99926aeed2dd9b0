package figure

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/vg/draw"
)

// A chart is curves on white: what profiles and series share.
type chart struct {
	what           string
	title          string
	xLabel, yLabel string
	low, high      float64
	curves         []Curve
	first          int // number of the first curve among the line styles
}

func (ch chart) draw(c draw.Canvas) error {
	if len(ch.curves) == 0 {
		return fmt.Errorf("%s without curves", ch.what)
	}
	s, err := ch.layout(nil)
	if err != nil {
		return fmt.Errorf("%s: %w", ch.what, err)
	}
	if _, err := s.draw(c); err != nil {
		return fmt.Errorf("%s: %w", ch.what, err)
	}
	return nil
}

// layout returns the sheet of the chart, whose axes have room for its curves and
// for others that are not drawn.
func (ch chart) layout(others []Curve) (s sheet, err error) {
	s = sheet{title: ch.title, xLabel: ch.xLabel, yLabel: ch.yLabel}
	x := [2]float64{math.Inf(1), math.Inf(-1)}
	y := x
	cover := func(curve Curve) {
		for k := range curve.X {
			if finite(curve.X[k]) && finite(curve.Y[k]) {
				x[0], x[1] = min(x[0], curve.X[k]), max(x[1], curve.X[k])
				y[0], y[1] = min(y[0], curve.Y[k]), max(y[1], curve.Y[k])
			}
		}
	}
	for _, curve := range others {
		cover(curve)
	}
	for i, curve := range ch.curves {
		if err := curve.check(i); err != nil {
			return s, err
		}
		cover(curve)
		s.plotters = append(s.plotters, stroke{curve: curve, style: onWhite(ch.first + i)})
		if curve.Label != "" {
			s.entries = append(s.entries, lineEntry(curve.Label, onWhite(ch.first+i)))
		}
	}
	if s.x[0], s.x[1], err = spread(x[0], x[1]); err != nil {
		return s, fmt.Errorf("horizontal: %w", err)
	}
	if s.y[0], s.y[1], err = spread(y[0], y[1]); err != nil {
		return s, fmt.Errorf("vertical: %w", err)
	}
	room := 0.05 * (s.y[1] - s.y[0]) // so that no line runs on the frame
	s.y[0], s.y[1] = s.y[0]-room, s.y[1]+room
	if ch.low != 0 || ch.high != 0 {
		if !(ch.high-ch.low > tooClose*max(math.Abs(ch.low), math.Abs(ch.high))) || !(ch.high-ch.low < tooWide) {
			return s, fmt.Errorf("vertical axis from %v to %v; want finite numbers, the lower first and well apart", ch.low, ch.high)
		}
		s.y = [2]float64{ch.low, ch.high}
	}
	return s, nil
}
