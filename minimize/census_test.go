package minimize

import (
	"context"
	"errors"
	"iter"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// allenCahn is u″ + u − u³ = 0 on (0, L) with natural ends, on links of length h.
// The histories are narrow rings of two slices, bound so strongly that they are
// equal.
func allenCahn(t *testing.T, long, h float64) *action.Discrete {
	clock := lattice.Axis{Step: 0.25, Sites: 2, Periodic: true}
	line := lattice.Axis{Step: h, Sites: int(long/h+0.5) + 1}
	return newAction(t, clock, line, action.Wave{Potential: action.Phi4{}, Signature: action.Euclidean})
}

// waves yields half waves of every kind that fits, of either sign, and some random
// superpositions of them.
func waves(b lattice.Block, most int) iter.Seq[*field.History] {
	return func(yield func(*field.History) bool) {
		long := b.Space.Length()
		random := rand.New(rand.NewPCG(1, 2))
		for k := range 2*(most+1) + 8 {
			h := field.NewHistory(b, 1)
			for e := range h.Data {
				_, _, i := h.Place(e)
				if k < 2*(most+1) {
					h.Data[e] = 0.9 * float64(1-k%2*2) * math.Cos(float64(k/2)*math.Pi*b.Space.At(i)/long)
				}
			}
			if k >= 2*(most+1) {
				for m := range most + 2 {
					a := 1.5 * (2*random.Float64() - 1)
					for e := range h.Data {
						_, _, i := h.Place(e)
						h.Data[e] += a * math.Cos(float64(m)*math.Pi*b.Space.At(i)/long)
					}
				}
			}
			if !yield(h) {
				return
			}
		}
		yield(field.NewHistory(b, 1))
	}
}

func byResidual(s *action.Discrete) Solve {
	return func(ctx context.Context, start *field.History) (*Found, error) {
		// as many steps as it takes towards φ = 0, where the default, in terms of the
		// solution, would ask for nothing less than zero
		return LeastResidual(ctx, s, nil, start, &Settings{Tolerance: 1e-10})
	}
}

// The Allen–Cahn equation on an interval of length L with natural ends has the
// constants ±1 and 0 and, for each n ≥ 1 with nπ < L, the states ±uₙ of n half
// waves, and no others; uₙ has n unstable directions and 0 as many as there are
// n ≥ 0 with nπ < L [Chafee & Infante 1974, Appl. Anal. 4, 17]. For L = 8 these are
// seven. The energies are E(u₁) = 0.9426708779339267 for L = 8 and, since u₂ is u₁ of
// L = 4 beside its mirror image, E(u₂) = 2 · 0.9005075227916559 (independent
// computation: elliptic functions, 30 digits), and L/4 for 0.
func TestCensusOfAllenCahn(t *testing.T) {
	const long = 8
	want := map[int]float64{1: 0.9426708779339267, 2: 2 * 0.9005075227916559}
	errs := map[int][]float64{}
	for _, h := range []float64{0.4, 0.2, 0.1} {
		s := allenCahn(t, long, h)
		set := &CensusSettings{Of: s, Most: 1e-8, Distance: 1e-3} // states are of order 1 apart
		c, err := TakeCensus(context.Background(), byResidual(s), waves(s.Block(), 2), set)
		if err != nil {
			t.Fatal(err)
		}
		if len(c.Residents) != 7 || c.Starts != 15 {
			t.Fatalf("h = %g: %v", h, c)
		}
		hits := len(c.Failed)
		for k, r := range c.Residents {
			// by action: ±1, ±u₁, ±u₂, 0
			n := []int{0, 0, 1, 1, 2, 2, 3}[k]
			if r.Index != n || !r.Known {
				t.Errorf("h = %g: %v; want the index %d", h, r, n)
			}
			u := r.Found.History
			e := r.Action / s.Block().Time.Length()
			switch n {
			case 0:
				if d := math.Abs(u.At(0, 0, 0)) - 1; math.Abs(d) > 1e-8 || math.Abs(e) > 1e-12 { // the tolerance of the residual over V″ = 2
					t.Errorf("h = %g: constant off by %.3g, energy %.3g", h, d, e)
				}
			case 3:
				if u.MaxAbs() > 1e-8 || math.Abs(e-long/4) > 1e-12 {
					t.Errorf("h = %g: zero is %.3g, energy %.3g", h, u.MaxAbs(), e)
				}
			default:
				if k%2 == 0 {
					errs[n] = append(errs[n], e-want[n])
				}
				if d := r.Action - c.Residents[k^1].Action; math.Abs(d) > 1e-8 { // ± by symmetry, to the tolerance
					t.Errorf("h = %g: actions of ±u%d differ by %.3g", h, n, d)
				}
			}
			hits += r.Hits
			if r.Hits != len(r.Starts) {
				t.Errorf("%v", r)
			}
		}
		if hits != c.Starts {
			t.Errorf("h = %g: %d hits and failures from %d starts", h, hits, c.Starts)
		}

		// Up to the sign there are four.
		set.Symmetries = []func(*field.History) *field.History{func(h *field.History) *field.History {
			g := h.Clone()
			for e := range g.Data {
				g.Data[e] = -g.Data[e]
			}
			return g
		}}
		c, err = TakeCensus(context.Background(), byResidual(s), waves(s.Block(), 2), set)
		if err != nil || len(c.Residents) != 4 {
			t.Errorf("h = %g, up to a sign: %v, %v", h, c, err)
		}
	}
	// Newton's method counts the index itself and finds them from the same starts.
	s := allenCahn(t, long, 0.2)
	c, err := TakeCensus(context.Background(), func(ctx context.Context, start *field.History) (*Found, error) {
		return Stationary(ctx, s, nil, start, &Settings{Tolerance: 1e-10})
	}, waves(s.Block(), 2), &CensusSettings{Distance: 1e-3})
	if err != nil || len(c.Residents) != 7 {
		t.Fatalf("%v: %v", err, c)
	}
	for k, r := range c.Residents {
		if n := []int{0, 0, 1, 1, 2, 2, 3}[k]; r.Index != n || !r.Known {
			t.Errorf("by Newton's method: %v; want the index %d", r, n)
		}
	}
	for n, e := range errs {
		if order := math.Log2(e[1] / e[2]); !(math.Abs(order-2) < 0.05) { // h⁴ beside h² at h = 0.2
			t.Errorf("energy of %d half waves: errors %.4g, order %.3f; want 2", n, e, order)
		}
		if rest := (4*e[2] - e[1]) / 3; math.Abs(rest) > 2e-5 { // h⁴/80 at h = 0.2
			t.Errorf("energy of %d half waves: extrapolated value off by %.3g", n, rest)
		}
	}
}

// The census has the same bits for any number of workers.
func TestCensusDoesNotDependOnWorkers(t *testing.T) {
	s := allenCahn(t, 8, 0.4)
	var first *Census
	for _, workers := range []int{1, 2, 7} {
		c, err := TakeCensus(context.Background(), byResidual(s), waves(s.Block(), 2), &CensusSettings{Of: s, Workers: workers, Distance: 1e-3})
		if err != nil {
			t.Fatal(err)
		}
		if first == nil {
			first = c
			continue
		}
		if len(c.Residents) != len(first.Residents) || c.Starts != first.Starts || len(c.Failed) != len(first.Failed) {
			t.Fatalf("%d workers: %v\nand %v", workers, c, first)
		}
		for k, r := range c.Residents {
			q := first.Residents[k]
			if r.Action != q.Action || r.Index != q.Index || !slices.Equal(r.Starts, q.Starts) || !slices.Equal(r.Found.History.Data, q.Found.History.Data) {
				t.Errorf("%d workers: %v, want %v", workers, r, q)
			}
		}
	}
}

// Failures are listed, and a census that is broken off has what was finished.
func TestCensusStops(t *testing.T) {
	s := allenCahn(t, 8, 0.4)
	odd := errors.New("an odd start")
	number := 0
	solve := func(ctx context.Context, start *field.History) (*Found, error) {
		number++
		if number == 3 {
			return nil, odd
		}
		return LeastResidual(ctx, s, nil, start, nil)
	}
	var lines strings.Builder
	c, err := TakeCensus(context.Background(), solve, waves(s.Block(), 2), &CensusSettings{Workers: 1, Progress: &lines})
	if err != nil || len(c.Failed) != 1 || c.Failed[0].Start != 2 || !errors.Is(c.Failed[0].Err, odd) {
		t.Errorf("%v: %v", err, c)
	}
	if n := strings.Count(lines.String(), "\n"); n != c.Starts || !strings.Contains(lines.String(), "start 2: an odd start") {
		t.Errorf("%s", lines.String())
	}
	if c.Residents[0].Known || !strings.Contains(c.String(), "index unknown") {
		t.Errorf("%v", c)
	}

	ctx, cancel := context.WithCancel(context.Background())
	number = 0
	c, err = TakeCensus(ctx, func(ctx context.Context, start *field.History) (*Found, error) {
		if number++; number == 4 {
			cancel()
			return nil, ctx.Err()
		}
		return LeastResidual(ctx, s, nil, start, nil)
	}, waves(s.Block(), 2), &CensusSettings{Workers: 1})
	if !errors.Is(err, context.Canceled) || c.Starts != 3 || len(c.Failed) != 0 {
		t.Errorf("%v: %v", err, c)
	}

	// No residual but zero itself is that small.
	c, err = TakeCensus(context.Background(), byResidual(s), waves(s.Block(), 2), &CensusSettings{Most: 1e-300})
	var high *HighResidual
	if err != nil || len(c.Failed) == 0 || !errors.As(c.Failed[0].Err, &high) || high.Most != 1e-300 {
		t.Errorf("%v: %v", err, c)
	}
}

func TestWrongCensus(t *testing.T) {
	s := allenCahn(t, 8, 0.4)
	starts := waves(s.Block(), 2)
	for _, tc := range []struct {
		name   string
		solve  Solve
		starts iter.Seq[*field.History]
		set    *CensusSettings
		says   string
	}{
		{"no solve", nil, starts, nil, "without a solve"},
		{"no starts", byResidual(s), nil, nil, "without starts"},
		{"negative distance", byResidual(s), starts, &CensusSettings{Distance: -1}, "distance -1"},
		{"negative workers", byResidual(s), starts, &CensusSettings{Workers: -1}, "-1 workers"},
	} {
		if c, err := TakeCensus(context.Background(), tc.solve, tc.starts, tc.set); err == nil || c != nil || !strings.Contains(err.Error(), tc.says) {
			t.Errorf("%s: %v, %v", tc.name, c, err)
		}
	}
}
