package minimize

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/constraint"
	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
	"gonum.org/v1/gonum/mat"
)

// dense returns the second variation in the metric by the unknowns.
func (s *stationary) dense() *mat.SymDense {
	n := s.free.N
	d := mat.NewSymDense(n, nil)
	for e := range s.second.Rows() {
		u, _ := s.free.At(e)
		columns, values := s.second.Row(e)
		for k, f := range columns {
			if v, _ := s.free.At(f); u >= 0 && v >= u {
				d.SetSym(u, v, d.At(u, v)+values[k]/(s.bordered.root[u]*s.bordered.root[v]))
			}
		}
	}
	return d
}

// within returns d on the space orthogonal to the rows: QᵀdQ with Q the last
// columns of a complete QR factorisation of the rows.
func within(d *mat.SymDense, rows []linearRow) *mat.SymDense {
	n, m := d.SymmetricDim(), len(rows)
	if m == 0 {
		return d
	}
	c := mat.NewDense(n, m, nil)
	for j, r := range rows {
		for k, u := range r.unknown {
			c.Set(int(u), j, r.coef[k])
		}
	}
	var qr mat.QR
	qr.Factorize(c)
	var q, dq, qdq mat.Dense
	qr.QTo(&q)
	rest := q.Slice(0, n, m, n)
	dq.Mul(d, rest)
	qdq.Mul(rest.T(), &dq)
	out := mat.NewSymDense(n-m, nil)
	for i := range n - m {
		for j := i; j < n-m; j++ {
			out.SetSym(i, j, 0.5*(qdq.At(i, j)+qdq.At(j, i)))
		}
	}
	return out
}

// Index and smallest |eigenvalue| against all eigenvalues, for either signature,
// several ends, links, pins, tied values and zero modes held, at random histories.
func TestInertiaAgainstDense(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	for trial := range 80 {
		line := lattice.Axis{Step: 0.3, Sites: 7 + r.IntN(4), Left: lattice.End(r.IntN(2)), Right: [2]lattice.End{lattice.Even, lattice.Odd}[r.IntN(2)]}
		if r.IntN(3) == 0 {
			line.Left, line.Right, line.Periodic = lattice.Free, lattice.Free, true
		}
		clock := lattice.Axis{Step: 0.2, Sites: 6 + r.IntN(4), Periodic: r.IntN(4) == 0}
		w := action.Wave{Potential: action.Phi4{}, Signature: action.Signature(r.IntN(2)), Links: action.Links(2 + 2*r.IntN(3)), Sigma: action.Uniform(8)}
		s := newAction(t, clock, line, w)
		held := constraint.On(s.Block())
		if r.IntN(2) == 0 {
			held.Slice(0, field.NewSlice(1, line.Sites))
		}
		if r.IntN(2) == 0 {
			held.Event(clock.At(3), line.At(3), 0.4)
		}
		if r.IntN(3) == 0 {
			held.Rate(1, field.NewSlice(1, line.Sites))
		}
		h := field.NewHistory(s.Block(), 1)
		set := &Settings{Shifts: Shift(r.IntN(4))}
		for range r.IntN(2) {
			set.ZeroModes = append(set.ZeroModes, field.NewHistory(s.Block(), 1))
		}
		for e := range h.Data {
			h.Data[e] = 2 * r.NormFloat64()
			for _, z := range set.ZeroModes {
				z.Data[e] = r.NormFloat64()
			}
		}
		p, err := newStationary("test", s, held, h, set)
		if err != nil {
			t.Fatal(err)
		}
		if err := p.linearise(); err != nil {
			t.Fatal(err)
		}
		if err := p.count(); err != nil {
			t.Fatal(err)
		}
		var eig mat.EigenSym
		if !eig.Factorize(within(p.dense(), p.bordered.rows), true) {
			t.Fatal("eigenvalues failed")
		}
		negative, least := 0, 0
		values := eig.Values(nil)
		for k, v := range values {
			if v < 0 {
				negative++
			}
			if math.Abs(v) < math.Abs(values[least]) {
				least = k
			}
		}
		smallest := values[least]
		i := p.rep.Inertia
		if i.Index != negative || !i.Known || i.Nullity != 0 || i.ZeroModesHeld != len(p.bordered.rows) {
			t.Errorf("trial %d: %v, want index %d", trial, i, negative)
		}
		// a Ritz value off by the square of its vector's error
		if math.Abs(i.Smallest-smallest) > 0.03*math.Abs(smallest) {
			t.Errorf("trial %d: smallest eigenvalue %v, want %v", trial, i.Smallest, smallest)
		}
		if len(p.bordered.rows) > 0 {
			continue
		}
		var vectors mat.Dense
		eig.VectorsTo(&vectors)
		var most, there float64
		for u := range p.free.N {
			v := math.Abs(vectors.At(u, least)) / p.bordered.root[u]
			most = max(most, v)
			if _, _, _, at := p.free.Event(p.free.Lead(u)); at == i.At {
				there = v
			}
		}
		if there < 0.8*most { // the vector is good to about a tenth
			t.Errorf("trial %d: smallest at %v, where its vector is %.2f of the largest", trial, i.At, there/most)
		}
	}
}

// A linear condition Σax = b: the mean of the field is held at 0.3, in a quadratic
// well the answer is 0.3 everywhere, exactly; and in φ⁴ at the top, where the free
// index is 1, holding the mean leaves a minimum.
func TestLinearCondition(t *testing.T) {
	a := lattice.Axis{Step: 0.2, Sites: 6}
	for name, tc := range map[string]struct {
		v    action.Potential
		free int // index without the condition
	}{"well": {action.Mass(1), 0}, "top": {action.Phi4{}, 1}} {
		s := newAction(t, a, a, action.Wave{Potential: tc.v, Signature: action.Euclidean})
		free, err := Stationary(context.Background(), s, nil, field.NewHistory(s.Block(), 1), nil)
		if err != nil || free.Report.Inertia.Index != tc.free {
			t.Errorf("%s, nothing held: %v, %v", name, free.Report.Inertia, err)
		}
		p, err := newStationary("test", s, nil, field.NewHistory(s.Block(), 1), nil)
		if err != nil {
			t.Fatal(err)
		}
		row := linearRow{name: "mean"}
		for u, w := range p.cells() {
			row.unknown, row.coef = append(row.unknown, int32(u)), append(row.coef, w) // area 1
		}
		row.rhs = 0.3
		if p.bordered, err = newBordered(p.problem, p.hess, []linearRow{row}); err != nil {
			t.Fatal(err)
		}
		first := make([]float64, p.free.N)
		p.bordered.meet(first, p.free.Gather(nil, p.h))
		value, _ := p.evaluate(first)
		p.accept(value)
		p.measure()
		found, err := p.solve(context.Background())
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		for e, v := range found.History.Data {
			if math.Abs(v-0.3) > 1e-14 { // rounding of a sum of 36 terms
				t.Fatalf("%s: value %d is %v, want 0.3", name, e, v)
			}
		}
		if i := found.Report.Inertia; i.Index != 0 || !i.Known {
			t.Errorf("%s: %v", name, i)
		}
	}
}

func TestStationaryRefuses(t *testing.T) {
	clock, line := lattice.Axis{Step: 0.1, Sites: 6}, lattice.Axis{Step: 0.2, Sites: 5}
	wave := action.Wave{Potential: action.SineGordon{}}
	euclidean := wave
	euclidean.Signature = action.Euclidean
	lossy := wave
	lossy.Alpha = action.Uniform(0.1)
	open := line
	open.Right = lattice.Open
	s, e := newAction(t, clock, line, wave), newAction(t, clock, line, euclidean)
	start := field.NewHistory(s.Block(), 1)
	ones := start.Clone()
	for k := range ones.Data {
		ones.Data[k] = 1
	}
	other := field.NewHistory(lattice.Block{Time: clock, Space: lattice.Axis{Step: 0.2, Sites: 6}}, 1)
	for _, tc := range []struct {
		name    string
		solve   func(context.Context, Functional, *constraint.Set, *field.History, *Settings) (*Found, error)
		s       *action.Discrete
		set     *Settings
		says    []string
		refused bool
	}{
		{"loss", Stationary, newAction(t, clock, line, lossy), nil, []string{"stationary refused", "loss α", "least residual"}, true},
		{"open end", Stationary, newAction(t, clock, open, wave), nil, []string{"stationary refused", "open right end"}, true},
		{"loss in a saddle", Saddle, newAction(t, clock, line, lossy), nil, []string{"saddle refused"}, true},
		{"Lorentzian saddle", Saddle, s, nil, []string{"saddle refused", "Lorentzian"}, true},
		{"no action", Stationary, nil, nil, []string{"stationary of no action"}, false},
		{"no action for a saddle", Saddle, nil, nil, []string{"saddle of no action"}, false},
		{"zero mode elsewhere", Stationary, s, &Settings{ZeroModes: []*field.History{other}}, []string{"zero mode 0", "sites"}, false},
		{"reference elsewhere", Stationary, s, &Settings{Reference: other}, []string{"reference history", "sites"}, false},
		{"zero mode of nothing", Stationary, s, &Settings{ZeroModes: []*field.History{ones, start}}, []string{"zero mode 1 vanishes"}, true},
		{"zero mode twice", Stationary, s, &Settings{ZeroModes: []*field.History{ones, ones}}, []string{"zero mode 1 follows"}, true},
		{"shift of a uniform history", Saddle, e, &Settings{Shifts: InSpace}, []string{"shift in space vanishes"}, true},
		{"unknown shift", Saddle, e, &Settings{Shifts: 8}, []string{"shifts 8"}, false},
		{"too large", Stationary, s, &Settings{Memory: 1}, []string{"30 unknowns", "limits"}, false},
	} {
		t.Run(tc.name, func(t *testing.T) {
			var f Functional
			if tc.s != nil {
				f = tc.s
			}
			found, err := tc.solve(context.Background(), f, nil, start, tc.set)
			if err == nil || found != nil {
				t.Fatalf("found %v, error %v", found, err)
			}
			for _, word := range tc.says {
				if !strings.Contains(err.Error(), word) {
					t.Errorf("%q does not say %q", err, word)
				}
			}
			var refusal *Refusal
			if errors.As(err, &refusal) != tc.refused {
				t.Errorf("refusal: %v", err)
			}
		})
	}
}

// A solve that ends early returns the best history and says why; a saddle where
// there is none says what was found instead.
func TestStationaryStops(t *testing.T) {
	a := lattice.Axis{From: -4, Step: 0.5, Sites: 17}
	s := newAction(t, a, a, metastable(0))
	start := profile(field.NewLump(bell)).Over(s.Block())
	for name, solve := range map[string]func(context.Context, Functional, *constraint.Set, *field.History, *Settings) (*Found, error){"stationary": Stationary, "saddle": Saddle} {
		ctx, cancel := context.WithCancel(context.Background())
		found, err := solve(ctx, s, allAround(s.Block()), start, &Settings{Watch: func(Step, *field.History) { cancel() }})
		if !errors.Is(err, context.Canceled) || found.Report.Status != Stopped || found.Report.Iterations != 1 {
			t.Errorf("%s: %v", name, err)
		}
		if r := found.Report; r.Accepted == 1 && !(r.After.RMS < r.Before.RMS) {
			t.Errorf("%s: %v", name, r)
		}
		found, err = solve(context.Background(), s, allAround(s.Block()), start, &Settings{Iterations: 1})
		if err == nil || found.Report.Status != Stopped || !strings.Contains(err.Error(), "limit of 1 steps") {
			t.Errorf("%s: %v", name, err)
		}
	}
	found, err := Saddle(context.Background(), s, allAround(s.Block()), field.NewHistory(s.Block(), 1), nil)
	if err == nil || found.Report.Status != Singular || found.Report.Inertia.Index != 0 || !strings.Contains(err.Error(), "index 0") {
		t.Errorf("at the false vacuum: %v", err)
	}
	if text := fmt.Sprint(found.Report); !strings.Contains(text, "inertia   index 0, smallest") {
		t.Error(text)
	}
}
