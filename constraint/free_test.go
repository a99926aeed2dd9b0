package constraint

import (
	"errors"
	"math/rand/v2"
	"testing"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// A tiedValue is what the search below finds for a value of the history.
type tiedValue struct {
	group int     // number of the group of values that rates join
	above float64 // over the first value of its group
}

// groups finds by breadth-first search which values the ties join, and by how
// much they differ. ok is false if two ways round differ.
func groups(n int, ties [][3]int) (found []tiedValue, count int, ok bool) {
	found = make([]tiedValue, n)
	for i := range found {
		found[i].group = -1
	}
	ok = true
	for first := range n {
		if found[first].group >= 0 {
			continue
		}
		found[first] = tiedValue{group: count}
		for queue := []int{first}; len(queue) > 0; queue = queue[1:] {
			at := queue[0]
			for _, t := range ties {
				a, b, gain := t[0], t[1], float64(t[2])
				if b == at {
					a, b, gain = b, a, -gain
				}
				if a != at {
					continue
				}
				above := found[at].above + gain
				if found[b].group < 0 {
					found[b] = tiedValue{count, above}
					queue = append(queue, b)
				} else if found[b].above != above {
					ok = false
				}
			}
		}
		count++
	}
	return found, count, ok
}

// checkFree makes rates and pins of whole numbers out of bytes, on a clock that
// is periodic or not, and compares Free with the search. With k = ½ the gain of
// a rate is the rate, and all sums are exact.
func checkFree(t *testing.T, periodic bool, data []byte) {
	const slices = 9
	b, err := lattice.NewBlock(lattice.Axis{Step: 0.5, Sites: slices, Periodic: periodic}, lattice.Axis{Step: 1, Sites: 2})
	if err != nil {
		t.Fatal(err)
	}
	held := On(b)
	var ties [][3]int
	pins := map[int]int{}
	clash := false
	for ; len(data) >= 3; data = data[3:] {
		n, v := int(data[0])%slices, int(data[2])%5-2
		if data[1]%2 == 0 {
			if !periodic && (n == 0 || n == slices-1) {
				continue
			}
			w := int(data[1]) / 2 % 3
			held.Rate(n, field.SliceOf([]float64{float64(v), float64(w)}))
			before, after := (n-1+slices)%slices, (n+1)%slices
			ties = append(ties, [3]int{2 * before, 2 * after, v}, [3]int{2*before + 1, 2*after + 1, w})
			continue
		}
		e := 2*n + int(data[1])/2%2
		held.Event(b.Time.At(n), b.Space.At(e%2), float64(v))
		if old, ok := pins[e]; ok && old != v {
			clash = true
		}
		pins[e] = v
	}
	found, count, ok := groups(2*slices, ties)
	fixed := map[int]float64{} // first value of a group
	for e, v := range pins {
		base := float64(v) - found[e].above
		if old, has := fixed[found[e].group]; has && old != base {
			clash = true
		}
		fixed[found[e].group] = base
	}
	u, err := held.Free(field.NewHistory(b, 1))
	var c *Conflict
	if clash || !ok {
		if !errors.As(err, &c) {
			t.Fatalf("error %v; the search finds a conflict", err)
		}
		return
	}
	if err != nil {
		t.Fatalf("%v; the search finds no conflict", err)
	}
	if u.N != count-len(fixed) {
		t.Fatalf("%d unknowns, the search finds %d", u.N, count-len(fixed))
	}
	h := field.NewHistory(b, 1)
	x := make([]float64, u.N)
	for k := range x {
		x[k] = float64(100 * (k + 1))
	}
	u.Scatter(h, x)
	first := map[int]float64{}
	for e, f := range found {
		base := h.Data[e] - f.above
		if old, has := first[f.group]; has && old != base {
			t.Fatalf("value %d is %v, which breaks its rate", e, h.Data[e])
		}
		first[f.group] = base
		if want, has := fixed[f.group]; has && want != base {
			t.Fatalf("value %d is %v, %v above a group fixed at %v", e, h.Data[e], f.above, want)
		}
	}
}

func FuzzFree(f *testing.F) {
	rng := rand.New(rand.NewPCG(7, 8))
	for range 300 {
		data := make([]byte, 3*(1+rng.IntN(12)))
		for i := range data {
			data[i] = byte(rng.Uint32())
		}
		f.Add(rng.IntN(2) == 0, data)
	}
	f.Fuzz(checkFree)
}
