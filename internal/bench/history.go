package main

import (
	"context"
	"fmt"
	"math"
	"time"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"github.com/tenter-go/tenter/minimize"
)

// historyCases are whole histories beside the bars that they are to meet, as
// no peer solves them.
func historyCases() []bench {
	bar := func(v float64) func() (float64, error) { return func() (float64, error) { return v, nil } }
	return []bench{
		{"collision-1024", "the bar, seconds; max|r| ≤ 1e-10 or failed", millionEvents, bar(120)},
		{"twotime-20", "the bar, max|r| over 20 time units", func() (float64, error) { return twoTimes(20) }, bar(1e-9)},
		{"twotime-40", "the bar, max|r| over 40 time units", func() (float64, error) { return twoTimes(40) }, bar(1e-9)},
		{"forward-257", "the bar, forward error over max|φ|", forward, bar(1e-9)},
	}
}

// collide puts a sine-Gordon collision on a block.
func collide(clock, line lattice.Axis) (*action.Discrete, *constraint.Set, field.Profile, error) {
	b, err := lattice.NewBlock(clock, line)
	if err != nil {
		return nil, nil, nil, err
	}
	s, err := action.New(b, action.Wave{Potential: action.SineGordon{}})
	if err != nil {
		return nil, nil, nil, err
	}
	f, err := field.SineGordonKinkAntikink(field.Collision{Speed: 0.4})
	return s, constraint.On(b), f, err
}

// millionEvents returns the seconds in which growing windows find 1024² events from
// a Cauchy pair, without a march.
func millionEvents() (float64, error) {
	clock := lattice.Axis{From: -512 * 0.08, Step: 0.08, Sites: 1024}
	line := lattice.Axis{From: -51.15, Step: 0.1, Sites: 1024}
	s, held, f, err := collide(clock, line)
	if err != nil {
		return 0, err
	}
	first := f.On(line, clock.From).Field
	held.Slice(0, first)
	held.Slice(1, f.On(line, clock.At(1)).Field)
	began := time.Now()
	found, err := minimize.LeastResidual(context.Background(), s, held, field.Repeat(s.Block(), first), &minimize.Settings{Strategy: minimize.Windows})
	if err == nil && !(found.Report.After.Max <= 1e-10) {
		err = fmt.Errorf("max|r| %.3g", found.Report.After.Max)
	}
	return time.Since(began).Seconds(), err
}

// twoTimes returns the largest residual of a history between two slices.
func twoTimes(span float64) (float64, error) {
	clock := lattice.Axis{From: -span / 2, Step: 0.1, Sites: int(math.Round(span/0.1)) + 1}
	line := lattice.Axis{From: -16, Step: 0.2, Sites: 161, Left: lattice.Held, Right: lattice.Held}
	s, held, f, err := collide(clock, line)
	if err != nil {
		return 0, err
	}
	first := f.On(line, -span/2).Field
	held.Slice(0, first)
	held.Slice(clock.Sites-1, f.On(line, span/2).Field)
	held.Left(func(t float64) float64 { v, _ := f(-16, t); return v })
	held.Right(func(t float64) float64 { v, _ := f(16, t); return v })
	start, err := minimize.Straight(held, field.Repeat(s.Block(), first))
	if err != nil {
		return 0, err
	}
	found, err := minimize.LeastResidual(context.Background(), s, held, start, &minimize.Settings{Strategy: minimize.Shooting})
	if err != nil {
		return 0, err
	}
	return s.Residual(nil, found.History).MaxAbs(), nil
}

// forward returns how far a wave that is found all at once lies from the march,
// over its largest value.
func forward() (float64, error) {
	b, err := lattice.NewBlock(lattice.Axis{Step: 0.08, Sites: 257}, lattice.Axis{From: -12.8, Step: 0.1, Sites: 257})
	if err != nil {
		return 0, err
	}
	s, err := action.New(b, action.Wave{})
	if err != nil {
		return 0, err
	}
	bump := field.Profile(func(x, t float64) (float64, float64) { return math.Exp(-x * x), x * math.Exp(-x*x) })
	want := field.NewHistory(b, 1)
	start := bump.On(b.Space, 0)
	want.Slice(0).CopyFrom(start.Field)
	m := s.March()
	m.Start(want.Slice(1), start, 0)
	for n := 1; n < b.Slices()-1; n++ {
		m.Step(want.Slice(n+1), want.Slice(n), want.Slice(n-1), n)
	}
	held := constraint.On(b)
	held.Slice(0, want.Slice(0))
	held.Slice(1, want.Slice(1))
	found, err := minimize.LeastResidual(context.Background(), s, held, field.Repeat(b, want.Slice(0)), &minimize.Settings{Strategy: minimize.BlockWide})
	if err != nil {
		return 0, err
	}
	return found.History.MaxDifference(want) / want.MaxAbs(), nil
}
