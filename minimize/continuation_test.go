package minimize

import (
	"context"
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// exponential is V = −eᵘ of the Bratu problem −Δu = λeᵘ.
var exponential = action.Scalar{
	V:  func(u float64) float64 { return -math.Exp(u) },
	D1: func(u float64) float64 { return -math.Exp(u) },
	D2: func(u float64) float64 { return -math.Exp(u) },
}

// bratuSquare is −Δu = λeᵘ on the unit square with u = 0 around it, on n × n links.
func bratuSquare(n int) (Family, *field.History) {
	clock, line := square(n, lattice.Held, lattice.Held)
	b := lattice.Block{Time: clock, Space: line}
	return func(lambda float64) (Functional, *constraint.Set, error) {
		s, err := action.New(b, action.Wave{Potential: exponential, Sigma: action.Uniform(lambda), Signature: action.Euclidean})
		return s, frame(b), err
	}, field.NewHistory(b, 1)
}

// bratuLine is −u″ = λeᵘ on (0, 1), u = 0 at both ends, on n links. The histories
// are narrow rings of two slices, which are equal at small indices.
func bratuLine(n int) (Family, *field.History) {
	b := lattice.Block{
		Time:  lattice.Axis{Step: 0.01, Sites: 2, Periodic: true},
		Space: lattice.Axis{Step: 1 / float64(n), Sites: n + 1, Left: lattice.Held, Right: lattice.Held},
	}
	return func(lambda float64) (Functional, *constraint.Set, error) {
		s, err := action.New(b, action.Wave{Potential: exponential, Sigma: action.Uniform(lambda), Signature: action.Euclidean})
		return s, nil, err
	}, field.NewHistory(b, 1)
}

func follow(t *testing.T, f Family, p float64, start *field.History, set *ContinuationSettings) *Branch {
	t.Helper()
	b, err := Continue(context.Background(), f, p, start, set)
	if err != nil {
		t.Fatalf("%v\n%v", err, b)
	}
	return b
}

// The fold of the Bratu problem on the unit square is at λ = 6.808124423, where
// u(½, ½) = 1.391661206 (quoted in several public collections of test problems;
// confirmed by an independent Chebyshev computation, 24 points a side). At λ = 4
// the centre is 0.395526017857 on the lower branch, 3.4549390761 on the upper; at
// λ = 1 0.078101022698 and 6.563218 (independent computation: Chebyshev). The
// lower branch is a minimum, the upper a saddle of index 1.
func TestBratuOnTheSquare(t *testing.T) {
	want := map[string]float64{"fold": 6.808124423, "lower": 0.395526017857, "upper": 3.4549390761}
	errs := map[string][]float64{}
	for _, n := range []int{16, 32, 64} {
		f, start := bratuSquare(n)
		b := follow(t, f, 0, start, &ContinuationSettings{Step: 0.5, Scale: 5, At: []float64{4}, Low: 0, High: 8, Stop: func(p Point) bool {
			return p.Kind == Asked && p.Index == 1
		}})
		folds, asked := b.Of(Fold), b.Of(Asked)
		if len(folds) != 1 || len(asked) != 2 || len(b.Of(Branching)) != 0 {
			t.Fatalf("n = %d: %d folds, %d branch points, %d points at λ = 4", n, len(folds), len(b.Of(Branching)), len(asked))
		}
		centre := func(p Point) float64 { return p.History.At(n/2, 0, n/2) }
		for name, v := range map[string]float64{"fold": folds[0].Parameter, "lower": centre(asked[0]), "upper": centre(asked[1])} {
			errs[name] = append(errs[name], v-want[name])
		}
		for _, p := range b.Points {
			if p.Kind == Fold {
				continue
			}
			if upper := p.Arc > folds[0].Arc; !p.Known || upper && p.Index != 1 || !upper && p.Index != 0 || upper == (p.Slope > 0) {
				t.Errorf("n = %d: %v, slope %.3g", n, p, p.Slope)
			}
		}
		if null := folds[0].Null; null == nil || math.Abs(null.At(n/2, 0, n/2)-1) > 1e-12 { // largest at the centre, by symmetry
			t.Errorf("n = %d: null vector of the fold %v", n, null)
		}
	}
	for name, e := range errs {
		// the next term, h⁴, is a quarter of the h² term over h² at most
		if order := math.Log2(e[1] / e[2]); math.Abs(order-2) > 0.05 {
			t.Errorf("%s: errors %.4g, order %.3f; want 2", name, e, order)
		}
		r := (4*e[2] - e[1]) / 3
		q := (4*e[1] - e[0]) / 3
		// Richardson's value drops by h⁴ too, and the twice extrapolated one stays
		if order := math.Log2(math.Abs(q / r)); math.Abs(order-4) > 0.6 {
			t.Errorf("%s: extrapolated %.3g, %.3g, order %.2f; want 4", name, q, r, order)
		}
		if rest := (16*r - q) / 15; name == "fold" && math.Abs(rest) > 1e-8 { // of which 5e-10 is rounding of the published value, the rest h⁶
			t.Errorf("twice extrapolated fold is off by %.3g", rest)
		}
	}
}

// The fold of the Bratu problem on the unit interval is at λ = 8θ²/cosh²θ,
// θ tanh θ = 1 (textbook: 3.513830719), with u(½) = 1.1868421686343890972; at λ = 2
// the two solutions have u(½) = 0.3289524213411136 and 2.895531265492769
// (independent computation: closed form to 25 digits).
func TestBratuOnTheInterval(t *testing.T) {
	theta := 1.2
	for range 60 {
		theta -= (theta*math.Tanh(theta) - 1) / (math.Tanh(theta) + theta/(math.Cosh(theta)*math.Cosh(theta)))
	}
	exact := 8 * math.Pow(theta/math.Cosh(theta), 2)
	if math.Abs(exact-3.513830719) > 1e-9 { // the printed digits
		t.Fatal(exact)
	}
	var fold, upper [3]float64
	for k, n := range []int{16, 32, 64} {
		f, start := bratuLine(n)
		b := follow(t, f, 0.5, start, &ContinuationSettings{At: []float64{2}, Low: 0.1, High: 9, Scale: 2, Lean: true, Stop: func(p Point) bool {
			return p.Kind == Asked && p.Slope < 0
		}})
		folds, asked := b.Of(Fold), b.Of(Asked)
		if len(folds) != 1 || len(asked) != 2 {
			t.Fatalf("%d folds, %d points at λ = 2", len(folds), len(asked))
		}
		fold[k] = folds[0].Parameter - exact
		upper[k] = asked[1].History.At(0, 0, n/2) - 2.895531265492769
		if asked[0].Index != 0 || asked[1].Index != 1 {
			t.Errorf("index %d and %d", asked[0].Index, asked[1].Index)
		}
	}
	for name, e := range map[string][3]float64{"fold": fold, "upper": upper} {
		if order := math.Log2(e[1] / e[2]); math.Abs(order-2) > 0.02 { // h⁴ beside h² at h = 1/32
			t.Errorf("%s: errors %.4g, order %.3f; want 2", name, e, order)
		}
		r, q := (4*e[2]-e[1])/3, (4*e[1]-e[0])/3
		// Richardson's value has h⁴ left, with h⁶ beside it
		if order := math.Log2(math.Abs(q / r)); math.Abs(order-4) > 0.2 {
			t.Errorf("%s: extrapolated %.3g, %.3g, order %.2f; want 4", name, q, r, order)
		}
		if rest := (16*r - q) / 15; name == "fold" && math.Abs(rest) > 1e-9 { // the printed digits
			t.Errorf("twice extrapolated fold is off by %.3g", rest)
		}
	}
}

// ring of N sites and the Allen–Cahn equation u″ + λ(u − u³) = 0 with natural ends:
// from u = 0, where the index rises by one, branches leave at
// λ = (2/h sin(nπh/2L))², which is exact on the lattice: the modes of the free
// chain are cosines (Born & von Kármán 1912, Phys. Z. 13, 297).
func TestBranchPointsOfTheTrivialBranch(t *testing.T) {
	const links, long = 40, 1.0
	h := long / links
	b := lattice.Block{Time: lattice.Axis{Step: 0.01, Sites: 2, Periodic: true}, Space: lattice.Axis{Step: h, Sites: links + 1}}
	family := func(lambda float64) (Functional, *constraint.Set, error) {
		s, err := action.New(b, action.Wave{Potential: action.Phi4{}, Sigma: action.Uniform(lambda), Signature: action.Euclidean})
		return s, nil, err
	}
	start := field.NewHistory(b, 1)
	trivial := follow(t, family, 1, start, &ContinuationSettings{Step: 1, Longest: 5, Low: 0.5, High: 100, Scale: 1})
	points := trivial.Of(Branching)
	if len(points) != 3 || len(trivial.Of(Fold)) != 0 {
		t.Fatalf("%d branch points and %d folds up to λ = 100; want 3 and none", len(points), len(trivial.Of(Fold)))
	}
	for k, p := range points {
		n := float64(k + 1)
		want := math.Pow(2/h*math.Sin(n*math.Pi*h/(2*long)), 2)
		// located to 1e-9 of the eigenvalues at the ends of the step
		if math.Abs(p.Parameter-want) > 1e-8*want {
			t.Errorf("branch point %d at %.12g, want %.12g", k+1, p.Parameter, want)
		}
		for i := range links + 1 {
			// inverse iteration leaves the square of its error in the value,
			// and the error itself in the vector
			if d := math.Abs(p.Null.At(0, 0, i)) - math.Abs(math.Cos(n*math.Pi*float64(i)*h)); math.Abs(d) > 1e-6 {
				t.Errorf("null vector %d is off by %.3g at site %d", k+1, d, i)
				break
			}
		}
	}
	last := trivial.Points[len(trivial.Points)-1]
	if last.Parameter != 100 || last.Index != 4 || !strings.Contains(trivial.Report.Reason, "parameter 100") {
		t.Errorf("%v\n%v", last, trivial.Report)
	}
	// Along the null vector of the second a pitchfork opens to larger λ: by
	// Landau's expansion u² = 4/3 (λ − λ₂)/λ₂ cos² near it (u³ → ¾a³ on the mode).
	side := follow(t, family, points[1].Parameter, points[1].History, &ContinuationSettings{Step: 0.01, Longest: 0.02, Points: 8, Along: points[1].Null})
	end := side.Points[len(side.Points)-1]
	amplitude := end.History.MaxAbs()
	if excess := end.Parameter/points[1].Parameter - 1; math.Abs(amplitude*amplitude*0.75/excess-1) > 0.1*amplitude { // next order a²/16 and the cosine's a third harmonic
		t.Errorf("amplitude %.4g at an excess of %.4g", amplitude, excess)
	}
	if end.Index != 2 { // λ₂ has one negative direction of λ₁ and that of the constant
		t.Errorf("%v", end)
	}
}

// The Klein–Gordon field, zero at its first and last slice and at both ends, has
// other histories at the masses for which a standing wave of leapfrog fits both:
// m² = (4/k²)sin²(jπ/2Nt) − (4/h²)sin²(lπ/2Nx). Each is a branch point of the zero
// history, and its index, Lorentzian, changes by one there.
func TestBranchPointsOfALorentzianBlock(t *testing.T) {
	const nt, nx, k, h, low, high = 6, 5, 0.4, 0.5, 1, 9
	b := lattice.Block{
		Time:  lattice.Axis{Step: k, Sites: nt + 1},
		Space: lattice.Axis{Step: h, Sites: nx + 1, Left: lattice.Held, Right: lattice.Held},
	}
	family := func(squared float64) (Functional, *constraint.Set, error) {
		s, err := action.New(b, action.Wave{Potential: action.Mass(1), Sigma: action.Uniform(squared)})
		return s, frame(b), err
	}
	var want []float64
	for j := 1; j < nt; j++ {
		for l := 1; l < nx; l++ {
			m := math.Pow(2/k*math.Sin(math.Pi*float64(j)/2/nt), 2) - math.Pow(2/h*math.Sin(math.Pi*float64(l)/2/nx), 2)
			if m > low && m < high {
				want = append(want, m)
			}
		}
	}
	slices.Sort(want)
	branch := follow(t, family, low, field.NewHistory(b, 1), &ContinuationSettings{Step: 0.05, Longest: 0.05, Low: low, High: high, Points: 1000})
	points := branch.Of(Branching)
	if len(points) != len(want) || len(want) < 5 {
		t.Fatalf("%d branch points, want %d: %v", len(points), len(want), want)
	}
	for i, p := range points {
		// located to 1e-9 of the eigenvalues at the ends of the step
		if math.Abs(p.Parameter-want[i]) > 1e-8 {
			t.Errorf("branch point at m² = %.12g, want %.12g", p.Parameter, want[i])
		}
	}
	first, last := branch.Points[0], branch.Points[len(branch.Points)-1]
	// −m²φ²: every branch point makes one more direction negative
	if last.Index-first.Index != len(want) {
		t.Errorf("index %d at m² = %g and %d at %g; want %d more", first.Index, first.Parameter, last.Index, last.Parameter, len(want))
	}
}

// A derivative by the parameter that the caller supplies gives the same branch.
func TestSuppliedDerivative(t *testing.T) {
	f, start := bratuLine(16)
	base := follow(t, f, 1, start, &ContinuationSettings{Points: 12})
	given := follow(t, f, 1, start, &ContinuationSettings{Points: 12, Derivative: func(dst, h *field.History, p float64) {
		hk := h.Block.Space.Step * h.Block.Time.Step
		for n := range h.Block.Slices() {
			for i := 1; i < h.Block.Sites()-1; i++ {
				dst.Set(n, 0, i, -hk*math.Exp(h.At(n, 0, i)))
			}
		}
	}})
	if len(base.Points) != len(given.Points) {
		t.Fatalf("%d and %d points", len(base.Points), len(given.Points))
	}
	for k, p := range base.Points {
		// the difference quotient is exact but for rounding, 1e-11, in a family
		// linear in the parameter; the tangents take it over
		if math.Abs(p.Parameter-given.Points[k].Parameter) > 1e-8 {
			t.Errorf("point %d: %v and %v", k, p, given.Points[k])
		}
	}
}

func TestContinuationStops(t *testing.T) {
	f, start := bratuLine(16)
	ctx, cancel := context.WithCancel(context.Background())
	var lines strings.Builder
	b, err := Continue(ctx, f, 1, start, &ContinuationSettings{Progress: &lines, Watch: func(p Point, h *field.History) {
		if p.Arc > 0.5 {
			cancel()
		}
	}})
	var broken *BrokenBranch
	if !errors.As(err, &broken) || !errors.Is(err, context.Canceled) || b.Report.Status != Stopped || len(b.Points) < 2 || broken.Branch != b {
		t.Errorf("%v, %v", b, err)
	}
	if strings.Count(lines.String(), "\n") != len(b.Points) || !strings.Contains(b.Report.String(), "stopped") {
		t.Errorf("%s", lines.String())
	}
	// Above the fold there is nothing to start from.
	b, err = Continue(context.Background(), f, 5, start, nil)
	if !errors.As(err, &broken) || len(b.Points) != 0 || b.Report.Status != Stalled || !strings.Contains(err.Error(), "start could not be corrected") {
		t.Errorf("%v, %v", b, err)
	}
}

func TestWrongContinuation(t *testing.T) {
	f, start := bratuLine(16)
	bad := errors.New("no such member")
	lossy := func(float64) (Functional, *constraint.Set, error) {
		s, err := action.New(start.Block, action.Wave{Alpha: action.Uniform(0.1)})
		return s, nil, err
	}
	other := field.NewHistory(lattice.Block{Time: start.Block.Time, Space: lattice.Axis{Step: 1, Sites: 5}}, 1)
	// only one unknown less at larger parameters
	shrinking := func(p float64) (Functional, *constraint.Set, error) {
		s, _, err := f(p)
		held := constraint.On(start.Block)
		if p > 1.01 {
			held.Event(0, 0.5, 0.2)
		}
		return s, held, err
	}
	for _, tc := range []struct {
		name   string
		family Family
		p      float64
		start  *field.History
		set    *ContinuationSettings
		says   []string
	}{
		{"no family", nil, 1, start, nil, []string{"no family"}},
		{"no start", f, 1, nil, nil, []string{"without a start history"}},
		{"start off the block", f, 1, other, nil, []string{"start history"}},
		{"family fails", func(float64) (Functional, *constraint.Set, error) { return nil, nil, bad }, 1, start, nil, []string{"family at 1", "no such member"}},
		{"losses", lossy, 1, start, nil, []string{"refused", "loss α"}},
		{"negative step", f, 1, start, &ContinuationSettings{Step: -1}, []string{"step -1"}},
		{"steps out of order", f, 1, start, &ContinuationSettings{Step: 1, Longest: 0.5}, []string{"1e-06 ≤ 1 ≤ 0.5"}},
		{"bounds out of order", f, 1, start, &ContinuationSettings{Low: 3, High: 2}, []string{"between the parameters 3 and 2"}},
		{"start out of bounds", f, 1, start, &ContinuationSettings{Low: 2, High: 3}, []string{"from the parameter 1", "from 2 to 3"}},
		{"negative points", f, 1, start, &ContinuationSettings{Points: -1}, []string{"-1 points"}},
		{"direction of another shape", f, 1, start, &ContinuationSettings{Along: other}, []string{"direction"}},
		{"direction of no length", f, 1, start, &ContinuationSettings{Along: field.NewHistory(start.Block, 1)}, []string{"length 0"}},
		{"too large", f, 1, start, &ContinuationSettings{Memory: 1}, []string{"above the limits"}},
		{"unknowns change", shrinking, 1, start, nil, []string{"family at", "want those of the start, 30"}},
	} {
		t.Run(tc.name, func(t *testing.T) {
			b, err := Continue(context.Background(), tc.family, tc.p, tc.start, tc.set)
			if err == nil {
				t.Fatalf("%v", b)
			}
			for _, word := range tc.says {
				if !strings.Contains(err.Error(), word) {
					t.Errorf("%q does not say %q", err, word)
				}
			}
		})
	}
	if _, err := Continue(context.Background(), func(float64) (Functional, *constraint.Set, error) { return nil, nil, bad }, 1, start, nil); !errors.Is(err, bad) {
		t.Errorf("%v", err)
	}
}

// The points do not depend on how they are asked for: bounds, At and the order
// along the arc.
func TestPointsAreInOrder(t *testing.T) {
	f, start := bratuLine(16)
	b := follow(t, f, 3, start, &ContinuationSettings{At: []float64{3.4, 3.2}, Low: 2.9, High: 9, Step: 0.3})
	var at []float64
	for k, p := range b.Points {
		if k > 0 && p.Arc < b.Points[k-1].Arc {
			t.Errorf("arc %.4g after %.4g", p.Arc, b.Points[k-1].Arc)
		}
		if p.Kind == Asked {
			at = append(at, p.Parameter)
		}
	}
	if want := []float64{3.2, 3.4, 3.4, 3.2, 2.9}; !slices.Equal(at, want) {
		t.Errorf("asked points at %v, want %v", at, want)
	}
	back := follow(t, f, 3, start, &ContinuationSettings{Backward: true, Low: 1, High: 9})
	if end := back.Points[len(back.Points)-1]; end.Parameter != 1 || end.Index != 0 || len(back.Of(Fold)) != 0 {
		t.Errorf("%v", end)
	}
}

// Points asked for just below a fold are found on the side of it where the branch
// is: at λ = λc − ε, u(½) lies √ε below and above that of the fold.
func TestPointsBesideAFold(t *testing.T) {
	f, start := bratuLine(16)
	set := &ContinuationSettings{Step: 0.3, Low: 2, High: 9}
	top := follow(t, f, 3, start, set).Of(Fold)[0]
	centre := func(p Point) float64 { return p.History.At(0, 0, 8) - top.History.At(0, 0, 8) }
	var before, after []float64
	for _, e := range []float64{1e-4, 1e-6} {
		set.At = []float64{top.Parameter - e}
		asked := follow(t, f, 3, start, set).Of(Asked)
		if len(asked) != 3 || asked[0].Index != 0 || asked[1].Index != 1 || !(asked[0].Slope > 0 && asked[1].Slope < 0) {
			t.Fatalf("%g below the fold: %v", e, asked)
		}
		before, after = append(before, centre(asked[0])), append(after, centre(asked[1]))
	}
	for name, d := range map[string][]float64{"before": before, "after": after} {
		if r := d[0] / d[1]; math.Abs(r-10) > 0.1 { // √100, with the next order ε at 1e-4
			t.Errorf("%s the fold: distances %.4g, ratio %.4f; want 10", name, d, r)
		}
	}
	if r := before[1] / after[1]; math.Abs(r+1) > 0.01 { // √ε to both sides, beside ε
		t.Errorf("distances %.4g and %.4g", before[1], after[1])
	}
}
