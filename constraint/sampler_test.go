package constraint

import (
	"math"
	"math/rand/v2"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A plain is a set of conditions in dense linear algebra over all values of a
// history: equalities A·φ = b, costs and bounds. It is written down beside the
// set, by another way, and knows of no unknowns.
type plain struct {
	rows      [][]float64
	right     []float64
	cost      []func(phi []float64) float64
	low, high []float64
}

// A sampler puts random conditions on a block that a true history satisfies. All
// numbers are small multiples of 1/8 and steps are powers of 2, so that pins and
// rates agree bit for bit.
type sampler struct {
	rng    *rand.Rand
	set    *Set
	truth  *field.History
	plain  plain
	spoilt bool // some right-hand side is wrong
}

func newSampler(seed uint64, b lattice.Block, components int) *sampler {
	s := &sampler{rng: rand.New(rand.NewPCG(seed, 1)), set: On(b), truth: field.NewHistory(b, components)}
	for e := range s.truth.Data {
		s.truth.Data[e] = s.eighths()
		s.plain.low, s.plain.high = append(s.plain.low, math.Inf(-1)), append(s.plain.high, math.Inf(1))
	}
	return s
}

func (s *sampler) eighths() float64 { return float64(s.rng.IntN(65)-32) / 8 }

// right returns a right-hand side that is rarely wrong, by at least ½.
func (s *sampler) right(v float64) float64 {
	if s.rng.IntN(20) == 0 {
		s.spoilt = true
		return v + 0.5 + float64(s.rng.IntN(3))
	}
	return v
}

// equal writes down Σ coefficient·φ = b.
func (s *sampler) equal(b float64, terms map[int]float64) {
	row := make([]float64, len(s.truth.Data))
	for e, a := range terms {
		row[e] += a
	}
	s.plain.rows, s.plain.right = append(s.plain.rows, row), append(s.plain.right, b)
}

// anywhere returns a random event, its stored value, and what the field gains by
// the laps from there to the event.
func (s *sampler) anywhere() (at lattice.Event, c, e int, gain float64) {
	b := s.set.Block()
	n, i := s.rng.IntN(b.Slices()), s.rng.IntN(b.Sites())
	c = s.rng.IntN(s.truth.Components)
	at, e = b.At(n, i), s.truth.Index(n, c, i)
	if b.Space.Periodic {
		laps := float64(s.rng.IntN(3) - 1)
		at.X += laps * b.Space.Length()
		gain = laps * b.Space.JumpOf(c)
	}
	return at, c, e, gain
}

// add puts one more condition on the set.
func (s *sampler) add() {
	b, phi := s.set.Block(), s.truth.Data
	at, c, e, gain := s.anywhere()
	on := s.set.Component(c)
	switch s.rng.IntN(9) {
	case 0:
		v := s.right(phi[e] + gain)
		on.Event(at.T, at.X, v)
		s.equal(v-gain, map[int]float64{e: 1})
	case 1:
		if s.rng.IntN(3) > 0 {
			return
		}
		n := 1 + s.rng.IntN(b.Slices()-2)
		v := field.NewSlice(1, b.Sites())
		for i := range b.Sites() {
			after, before := s.truth.Index(n+1, c, i), s.truth.Index(n-1, c, i)
			v.Data[i] = s.right((phi[after] - phi[before]) / (2 * b.Time.Step))
			s.equal(2*b.Time.Step*v.Data[i], map[int]float64{after: 1, before: -1})
		}
		on.Rate(n, v)
	case 2, 3: // a linear condition over two to four events
		var terms []Coefficient
		dense := make([]float64, len(phi))
		var sum float64
		for range 2 + s.rng.IntN(3) {
			at, c, e, gain := s.anywhere()
			a := float64(1 + s.rng.IntN(3))
			terms = append(terms, Coefficient{at, c, a})
			dense[e] += a
			sum += a * gain
		}
		for e, a := range dense {
			sum += a * phi[e]
		}
		soft := s.rng.IntN(2) == 0
		if !soft {
			sum = s.right(sum)
		}
		l := s.set.Linear(sum, terms...)
		for _, t := range terms { // the jumps of the laps to the right
			sum -= t.A * math.Round((t.X-b.Space.At(s.site(t.X)))/b.Space.Length()) * b.Space.JumpOf(t.Component)
		}
		if soft {
			l.Soft(0.5)
			l.Strength = 3
			s.plain.cost = append(s.plain.cost, func(phi []float64) float64 {
				d := -sum
				for e, a := range dense {
					d += a * phi[e]
				}
				return 3 * d * d / (2 * 0.25)
			})
			return
		}
		s.plain.rows, s.plain.right = append(s.plain.rows, dense), append(s.plain.right, sum)
	case 4:
		n := s.rng.IntN(b.Slices())
		terms := make(map[int]float64)
		var sum, all float64
		for i := range b.Sites() {
			w := 2.0
			if !b.Space.Periodic && (i == 0 || i == b.Sites()-1) {
				w = 1
			}
			terms[s.truth.Index(n, c, i)] = w
			sum += w * s.truth.At(n, c, i)
			all += w
		}
		mean := s.right(sum / all)
		on.Mean(n, mean)
		s.equal(mean*all, terms)
	case 5:
		on.Observe(at.T, at.X, phi[e]+gain+1, 0.25)
		want := phi[e] + 1
		s.plain.cost = append(s.plain.cost, func(phi []float64) float64 { return 8 * (phi[e] - want) * (phi[e] - want) })
	case 6:
		k := on.Cost(at.T, at.X, Cosine{0.5})
		k.Strength = 2
		s.plain.cost = append(s.plain.cost, func(phi []float64) float64 { return 2 * (1 - math.Cos(phi[e]+gain-0.5)) })
	case 7:
		n := s.rng.IntN(b.Slices())
		v := field.NewSlice(1, b.Sites())
		on.ObserveSlice(n, v, 2)
		from := s.truth.Index(n, c, 0)
		s.plain.cost = append(s.plain.cost, func(phi []float64) float64 {
			var sum float64
			for _, v := range phi[from : from+b.Sites()] {
				sum += v * v / 8
			}
			return sum
		})
	case 8:
		low, high := phi[e]-float64(s.rng.IntN(3)), phi[e]+float64(s.rng.IntN(3))
		on.Bound(at.T, at.X, low+gain, high+gain)
		s.plain.low[e], s.plain.high[e] = max(s.plain.low[e], low), min(s.plain.high[e], high)
	}
}

func (s *sampler) site(x float64) int {
	i, _ := s.set.Block().Space.Nearest(x)
	return i
}
