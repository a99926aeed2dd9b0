package constraint

import (
	"errors"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// rank returns the rank of a matrix of small numbers: singular values below 1e-9
// are rounding, the others are above 1e-3 for rows this short.
func rank(rows [][]float64, extra []float64) int {
	if len(rows) == 0 {
		return 0
	}
	columns := len(rows[0])
	if extra != nil {
		columns++
	}
	a := mat.NewDense(len(rows), columns, nil)
	for i, r := range rows {
		for j, v := range r {
			a.Set(i, j, v)
		}
		if extra != nil {
			a.Set(i, columns-1, extra[i])
		}
	}
	var svd mat.SVD
	if !svd.Factorize(a, mat.SVDNone) {
		return -1
	}
	n := 0
	for _, v := range svd.Values(nil) {
		if v > 1e-9 {
			n++
		}
	}
	return n
}

// The resolved problem is the same problem as the plain one: the same affine set
// of histories, the same cost and gradient, the same bounds; and the reactions of
// its solution add up to the gradient.
func TestEverythingAgainstDenseAlgebra(t *testing.T) {
	blocks := []lattice.Block{
		block(t, lattice.Axis{Step: 0.5, Sites: 4}, lattice.Axis{Step: 1, Sites: 4}),
		block(t, lattice.Axis{Step: 0.5, Sites: 5}, lattice.Axis{Step: 1, Sites: 4, Periodic: true, Jump: []float64{2, -1}}),
	}
	solved, refused, repeated := 0, 0, 0
	for seed := range uint64(400) {
		s := newSampler(seed, blocks[seed%2], 1+int(seed/2%2))
		for range 4 + s.rng.IntN(40) {
			s.add()
		}
		u, err := s.set.Free(field.NewHistory(s.set.Block(), s.truth.Components))
		if rank(s.plain.rows, s.plain.right) > rank(s.plain.rows, nil) {
			var conflict *Conflict
			var contradiction *Contradiction
			var crossing *Crossing // which is found before a contradiction
			if !errors.As(err, &conflict) && !errors.As(err, &contradiction) && !errors.As(err, &crossing) {
				t.Fatalf("seed %d: error %v; the dense equations contradict one another", seed, err)
			}
			refused++
			continue
		}
		if err != nil {
			var crossing *Crossing
			if s.spoilt && errors.As(err, &crossing) {
				continue // a wrong pin may well be outside of the true bounds
			}
			t.Fatalf("seed %d: %v; the dense equations have a solution", seed, err)
		}
		checkAffine(t, seed, s, u)
		checkCost(t, seed, s, u)
		checkBounds(t, seed, s, u)
		checkReactions(t, seed, s, u)
		solved++
		repeated += len(u.Repeats)
		if t.Failed() {
			return
		}
	}
	if solved < 100 || refused < 50 || repeated < 100 {
		t.Errorf("%d problems solved, %d refused, %d conditions repeated; the sample is too one-sided", solved, refused, repeated)
	}
}

// solveHard returns unknowns that meet the hard rows: x plus the shortest change.
func solveHard(u *Unknowns, x []float64) []float64 {
	rows := u.HardRows()
	if len(rows) == 0 {
		return x
	}
	a, b := mat.NewDense(len(rows), u.N, nil), mat.NewVecDense(len(rows), nil)
	for i := range rows {
		for j, k := range rows[i].Unknown {
			a.Set(i, int(k), rows[i].Weight[j])
		}
		b.SetVec(i, -rows[i].Miss(x))
	}
	var svd mat.SVD
	svd.Factorize(a, mat.SVDThin)
	var d mat.VecDense
	svd.SolveVecTo(&d, b, len(rows))
	for k := range x {
		x[k] += d.AtVec(k)
	}
	return x
}

func checkAffine(t *testing.T, seed uint64, s *sampler, u *Unknowns) {
	t.Helper()
	if got, want := u.N-len(u.HardRows()), u.Values()-rank(s.plain.rows, nil); got != want {
		t.Errorf("seed %d: %d free directions, want %d", seed, got, want)
	}
	x := make([]float64, u.N)
	for k := range x {
		x[k] = s.eighths()
	}
	h := s.truth.Clone()
	u.Scatter(h, solveHard(u, x))
	for i, row := range s.plain.rows {
		// Numbers up to 30 in sums of up to 20, solved with a condition below 1e3.
		if d := dot(row, h.Data) - s.plain.right[i]; math.Abs(d) > 1e-10 {
			t.Errorf("seed %d: equality %d is missed by %.3g", seed, i, d)
		}
	}
}

func checkCost(t *testing.T, seed uint64, s *sampler, u *Unknowns) {
	t.Helper()
	h := s.truth.Clone()
	for e := range h.Data {
		h.Data[e] = s.eighths()
	}
	total := func() (sum float64) {
		for _, f := range s.plain.cost {
			sum += f(h.Data)
		}
		return sum
	}
	want := total()
	g, d := field.NewHistory(h.Block, h.Components), field.NewHistory(h.Block, h.Components)
	got := u.AddGradient(g, h)
	u.AddCurvature(d, h)
	size := 1 + math.Abs(want)
	if math.Abs(got-want) > 1e-12*size || u.Cost(h) != got {
		t.Errorf("seed %d: cost %v and %v, want %v", seed, got, u.Cost(h), want)
	}
	for _, r := range u.SoftRows() {
		for j, e := range r.Index {
			d.Data[e] += r.Precision * r.Coefficient[j] * r.Coefficient[j]
		}
	}
	// Exact for quadratic costs up to rounding over δ²; δ²/6 and δ²/12 for cosines.
	const delta = 1e-3
	for e, v := range h.Data {
		h.Data[e] = v + delta
		up := total()
		h.Data[e] = v - delta
		down := total()
		h.Data[e] = v
		if slope := (up - down) / (2 * delta); math.Abs(slope-g.Data[e]) > 1e-6+1e-12*size/delta {
			t.Errorf("seed %d: value %d: slope %v, differences give %v", seed, e, g.Data[e], slope)
		}
		if curve := (up - 2*want + down) / (delta * delta); math.Abs(curve-d.Data[e]) > 1e-5+1e-14*size/(delta*delta) {
			t.Errorf("seed %d: value %d: curvature %v, differences give %v", seed, e, d.Data[e], curve)
		}
	}
}

func checkBounds(t *testing.T, seed uint64, s *sampler, u *Unknowns) {
	t.Helper()
	low, high := u.Bounds()
	x, h := u.Gather(nil, s.truth), s.truth.Clone()
	for range 20 {
		trial := append([]float64(nil), x...)
		for k := range trial {
			trial[k] += s.eighths() / 4
		}
		u.Scatter(h, trial)
		inside := true
		for e, v := range h.Data {
			if k, _ := u.At(e); k >= 0 {
				inside = inside && v >= s.plain.low[e] && v <= s.plain.high[e]
			}
		}
		if moved := u.Clamp(trial); (moved == 0) != inside {
			t.Errorf("seed %d: %d unknowns out of bounds, all values inside: %v", seed, moved, inside)
		}
		for k := range low {
			if trial[k] < low[k] || trial[k] > high[k] {
				t.Errorf("seed %d: unknown %d clamped to %v, want %v to %v", seed, k, trial[k], low[k], high[k])
			}
		}
	}
}

// The solution nearest to zero, in dense algebra over unknowns: with the push
// −φ, all reactions together push every value back to zero.
func checkReactions(t *testing.T, seed uint64, s *sampler, u *Unknowns) {
	t.Helper()
	h, push := s.truth.Clone(), s.truth.Clone()
	rows := u.HardRows()
	// minimise |E x + o|²/2 under W x = v: [EᵀE Wᵀ; W 0][x; −λ] = [−Eᵀo; v], and
	// the push −(E x + o), reduced to unknowns, is Wᵀλ with the other sign of λ.
	size := u.N + len(rows)
	if size == 0 {
		return
	}
	a, b := mat.NewDense(size, size, nil), mat.NewVecDense(size, nil)
	for e := range h.Data {
		if k, offset := u.At(e); k >= 0 {
			a.Set(k, k, a.At(k, k)+1)
			b.SetVec(k, b.AtVec(k)-offset)
		}
	}
	for i := range rows {
		for j, k := range rows[i].Unknown {
			a.Set(int(k), u.N+i, rows[i].Weight[j])
			a.Set(u.N+i, int(k), rows[i].Weight[j])
		}
		b.SetVec(u.N+i, rows[i].Value)
	}
	var z mat.VecDense
	if err := z.SolveVec(a, b); err != nil {
		t.Errorf("seed %d: %v; hard rows should be independent", seed, err)
		return
	}
	u.Scatter(h, z.RawVector().Data[:u.N])
	lambda := make([]float64, len(rows))
	total := make([]float64, len(h.Data))
	for i := range rows {
		lambda[i] = z.AtVec(u.N + i)
		for j, e := range rows[i].Index {
			total[e] += lambda[i] * rows[i].Coefficient[j]
		}
	}
	for e, v := range h.Data {
		push.Data[e] = -v
	}
	found := map[string]int{}
	last := math.Inf(1)
	for _, r := range u.ReactionsWith(h, push, Multipliers{Rows: lambda}) {
		if math.Abs(r.Push) > last {
			t.Errorf("seed %d: reactions out of order at %v", seed, r)
		}
		last = math.Abs(r.Push)
		found[r.Kind]++
		switch r.Kind {
		case "event", "rate":
			n, i, _ := h.Block.Index(r.Event)
			total[h.Index(n, r.Component, i)] += r.Push
		}
	}
	for e, v := range total {
		// λ is solved with a condition below 1e4 from numbers up to 100.
		if math.Abs(v-push.Data[e]) > 1e-9 {
			t.Errorf("seed %d: reactions push value %d by %v, want %v", seed, e, v, push.Data[e])
		}
	}
	linear := 0
	for kind, n := range found {
		if kind != "event" && kind != "rate" {
			linear += n
		}
	}
	if linear != len(rows) {
		t.Errorf("seed %d: %d reactions of linear conditions, want %d", seed, linear, len(rows))
	}
}
