package sweep_test

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"path/filepath"
	"strings"
	"sync/atomic"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/tenter-go/tenter/field/store"
	"github.com/tenter-go/tenter/integrate/sweep"
)

// grid is a × b for a = 0 … 9 and b = 3, whose product is measured.
func grid(file string, workers int) sweep.Sweep {
	s := sweep.Sweep{Parameters: []string{"a", "b"}, Results: []string{"product"}, File: file, Workers: workers}
	for k := range 10 {
		s.Points = append(s.Points, []float64{float64(k), 3})
	}
	return s
}

func product(_ context.Context, p []float64) ([]float64, error) { return []float64{p[0] * p[1]}, nil }

func want(points int) store.Table {
	t := store.Table{Header: []string{"a", "b", "product"}}
	for k := range points {
		t.Rows = append(t.Rows, []float64{float64(k), 3, float64(3 * k)})
	}
	return t
}

func TestSameForAnyWorkers(t *testing.T) {
	for _, workers := range []int{0, 1, 3, 20} {
		got, err := grid("", workers).Run(context.Background(), product)
		if err != nil {
			t.Fatal(err)
		}
		if d := cmp.Diff(want(10), got); d != "" {
			t.Errorf("%d workers: (-want +got)\n%s", workers, d)
		}
	}
}

// A sweep that fails half way leaves its rows in the file; the next measures only
// the others, and the file is that of a sweep in one go.
func TestGoesOn(t *testing.T) {
	file := filepath.Join(t.TempDir(), "sweep.csv")
	broken := errors.New("broken")
	got, err := grid(file, 1).Run(context.Background(), func(ctx context.Context, p []float64) ([]float64, error) {
		if p[0] == 4 {
			return nil, broken
		}
		return product(ctx, p)
	})
	if !errors.Is(err, broken) || !strings.Contains(fmt.Sprint(err), "[4 3]") {
		t.Errorf("error %v; want one that wraps the measure's and names the point", err)
	}
	if d := cmp.Diff(want(4), got); d != "" {
		t.Errorf("rows before the failure: (-want +got)\n%s", d)
	}
	var calls atomic.Int32
	var progress bytes.Buffer
	s := grid(file, 2)
	s.Progress = &progress
	if _, err = s.Run(context.Background(), func(ctx context.Context, p []float64) ([]float64, error) {
		calls.Add(1)
		return product(ctx, p)
	}); err != nil {
		t.Fatal(err)
	}
	if calls.Load() != 6 {
		t.Errorf("%d measurements after 4 of 10 were done; want 6", calls.Load())
	}
	stored, err := store.ReadTable(file)
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(want(10), stored); d != "" {
		t.Errorf("file: (-want +got)\n%s", d)
	}
	if !strings.Contains(progress.String(), "10 of 10") {
		t.Errorf("progress %q does not end with 10 of 10", progress.String())
	}
}

// Another value of a parameter is another point, though all else be equal.
func TestOtherParametersAreMeasuredAgain(t *testing.T) {
	file := filepath.Join(t.TempDir(), "sweep.csv")
	if _, err := grid(file, 1).Run(context.Background(), product); err != nil {
		t.Fatal(err)
	}
	s := grid(file, 1)
	for _, p := range s.Points {
		p[1] = 4
	}
	got, err := s.Run(context.Background(), product)
	if err != nil {
		t.Fatal(err)
	}
	if got.Rows[5][2] != 20 {
		t.Errorf("5 × 4 from a file of 5 × 3 is %g; want 20", got.Rows[5][2])
	}
}

func TestCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	got, err := grid("", 1).Run(ctx, func(ctx context.Context, p []float64) ([]float64, error) {
		if p[0] == 2 {
			cancel()
		}
		return product(ctx, p)
	})
	if !errors.Is(err, context.Canceled) {
		t.Errorf("error %v; want the context's", err)
	}
	if n := len(got.Rows); n < 3 || n == 10 {
		t.Errorf("%d rows after cancelling at the third of 10; want those done", n)
	}
}

func TestRefusals(t *testing.T) {
	s := grid("", 1)
	s.Points[7] = []float64{1}
	if _, err := s.Run(context.Background(), product); err == nil || !strings.Contains(err.Error(), "point 7") {
		t.Errorf("point with one value of two: error %v does not name it", err)
	}
	file := filepath.Join(t.TempDir(), "sweep.csv")
	if err := store.WriteTable(file, store.Table{Header: []string{"other"}}); err != nil {
		t.Fatal(err)
	}
	if _, err := grid(file, 1).Run(context.Background(), product); err == nil || !strings.Contains(err.Error(), "[other]") {
		t.Errorf("file of other columns: error %v does not name them", err)
	}
	if _, err := grid("", 1).Run(context.Background(), func(context.Context, []float64) ([]float64, error) { return nil, nil }); err == nil {
		t.Error("measure of no results: no error")
	}
}
