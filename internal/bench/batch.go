package main

import (
	"context"
	"math"
	"sync"
	"sync/atomic"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/lattice"
)

// batch returns the time of 1 000 collisions of a kink and an antikink at
// different speeds, shared among workers, per site and step.
func batch(workers int) (float64, error) {
	const runs, sites, steps = 1000, 2048, 4000
	b := lattice.Block{
		Time:  lattice.Axis{Step: 0.05, Sites: steps + 1},
		Space: lattice.Axis{From: -102.35, Step: 0.1, Sites: sites},
	}
	s, err := action.New(b, action.Wave{Potential: action.Phi4{}})
	if err != nil {
		return 0, err
	}
	var next atomic.Int64
	var wg sync.WaitGroup
	failed := make(chan error, workers)
	begun := elapsed()
	for range workers {
		wg.Go(func() {
			for k := next.Add(1); k <= runs; k = next.Add(1) {
				start := collision(b.Space, 0.1+0.8*float64(k)/runs)
				if _, err := integrate.Evolve(context.Background(), s, start, integrate.Settings{Every: -1, Workers: 1}); err != nil {
					failed <- err
					return
				}
			}
		})
	}
	wg.Wait()
	select {
	case err = <-failed:
	default:
	}
	return perSite(elapsed()-begun, runs*sites, steps), err
}

// collision is a kink and an antikink that approach each other from ±10.
func collision(line lattice.Axis, speed float64) field.State {
	gamma := 1 / math.Sqrt(1-speed*speed)
	st := field.NewState(1, line.Sites)
	for i := range line.Sites {
		for _, way := range []float64{-1, 1} {
			z := gamma * (line.At(i) - 10*way) / math.Sqrt2
			sech := 1 / math.Cosh(z)
			st.Field.Data[i] -= way * math.Tanh(z)
			st.Rate.Data[i] -= gamma * speed / math.Sqrt2 * sech * sech
		}
		st.Field.Data[i]--
	}
	return st
}
