// Package sweep makes one measurement at every point of a grid of parameters, on
// several cores, and keeps what it has in a file from which a sweep that was
// stopped goes on.
//
// The points are the rows of a table of parameters, and each measurement adds its
// results to the row. They share nothing: the outcome is the same for any number
// of workers, and for a sweep done in one go or in several.
package sweep

import (
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"math"
	"runtime"
	"slices"
	"sync"
	"time"

	"github.com/tenter-go/tenter/field/store"
)

// A Measure returns the results at one point, in the order of Sweep.Results. It
// is called from several goroutines.
type Measure func(ctx context.Context, parameters []float64) ([]float64, error)

// A Sweep is a grid of parameters and what is to be measured on it.
type Sweep struct {
	Parameters []string    // names, different from each other and from those of the results
	Points     [][]float64 // the values of the parameters at each point
	Results    []string

	Workers int // 0 means GOMAXPROCS

	// File, if not empty, is a CSV file of the rows that are done, in the order of
	// Points, replaced as a whole every few seconds and at the end. A row of it
	// whose parameters are those of a point, bit for bit, is not measured again:
	// everything on which the results depend belongs in the parameters.
	File string

	// Progress, if not nil, gets a line that is written over itself.
	Progress io.Writer
}

// saveEvery is the time between writes of the file, and tellEvery that between
// lines of progress.
const (
	saveEvery = 5 * time.Second
	tellEvery = 2 * time.Second
)

// Run measures at every point and returns the table of parameters and results, a
// row for each point in their order. If the context is done or a measurement
// fails, no further one is begun and the error comes with the table of the rows
// that are done.
func (s Sweep) Run(ctx context.Context, measure Measure) (store.Table, error) {
	rows, err := s.begin()
	if err != nil {
		return store.Table{}, err
	}
	var todo []int
	for k, r := range rows {
		if r == nil {
			todo = append(todo, k)
		}
	}
	ctx, cancel := context.WithCancelCause(ctx)
	defer cancel(nil)
	next := make(chan int)
	type done struct {
		point int
		row   []float64
	}
	finished := make(chan done)
	var group sync.WaitGroup
	for range min(s.workers(), len(todo)) {
		group.Go(func() {
			for k := range next {
				row, err := s.measure(ctx, measure, k)
				if err != nil {
					cancel(fmt.Errorf("point %d, %v = %v: %w", k, s.Parameters, s.Points[k], err))
					return
				}
				finished <- done{k, row}
			}
		})
	}
	go func() {
		defer close(finished)
		defer group.Wait()
		defer close(next)
		for _, k := range todo {
			select {
			case next <- k:
			case <-ctx.Done():
				return
			}
		}
	}()

	teller := newTeller(s.Progress, len(rows)-len(todo), len(rows))
	saved := time.Now()
	for d := range finished {
		rows[d.point] = d.row
		teller.tell()
		if time.Since(saved) > saveEvery {
			if err := s.save(rows); err != nil {
				cancel(err)
			}
			saved = time.Now()
		}
	}
	teller.end()
	if err := context.Cause(ctx); err != nil {
		err = fmt.Errorf("sweep: %w", err)
		return s.table(rows), errors.Join(err, s.save(rows))
	}
	return s.table(rows), s.save(rows)
}

func (s Sweep) workers() int {
	if s.Workers > 0 {
		return s.Workers
	}
	return runtime.GOMAXPROCS(0)
}

func (s Sweep) measure(ctx context.Context, measure Measure, k int) ([]float64, error) {
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	results, err := measure(ctx, s.Points[k])
	if err != nil {
		return nil, err
	}
	if len(results) != len(s.Results) {
		return nil, fmt.Errorf("%d results; want %d: %v", len(results), len(s.Results), s.Results)
	}
	return slices.Concat(s.Points[k], results), nil
}

// begin checks the sweep and returns a row for each point that the file has.
func (s Sweep) begin() ([][]float64, error) {
	for k, p := range s.Points {
		if len(p) != len(s.Parameters) {
			return nil, fmt.Errorf("sweep: point %d has %d values; want %d: %v", k, len(p), len(s.Parameters), s.Parameters)
		}
	}
	rows := make([][]float64, len(s.Points))
	if s.File == "" {
		return rows, nil
	}
	have, err := store.ReadTable(s.File)
	if errors.Is(err, fs.ErrNotExist) {
		return rows, nil
	}
	if err != nil {
		return nil, err
	}
	if !slices.Equal(have.Header, s.header()) {
		return nil, fmt.Errorf("sweep: %s has the columns %v; want %v, or no file", s.File, have.Header, s.header())
	}
	old := map[string][]float64{}
	for _, r := range have.Rows {
		old[bits(r[:len(s.Parameters)])] = r
	}
	for k, p := range s.Points {
		rows[k] = old[bits(p)]
	}
	return rows, nil
}

func bits(p []float64) string {
	var b []byte
	for _, v := range p {
		b = fmt.Appendf(b, "%x ", math.Float64bits(v))
	}
	return string(b)
}

func (s Sweep) header() []string { return slices.Concat(s.Parameters, s.Results) }

// table returns the rows that are done.
func (s Sweep) table(rows [][]float64) store.Table {
	t := store.Table{Header: s.header()}
	for _, r := range rows {
		if r != nil {
			t.Rows = append(t.Rows, r)
		}
	}
	return t
}

func (s Sweep) save(rows [][]float64) error {
	if s.File == "" {
		return nil
	}
	return store.WriteTable(s.File, s.table(rows))
}
