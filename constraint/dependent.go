package constraint

import (
	"fmt"
	"math"
)

// Hard rows that depend on one another would make the matrix of a solver
// singular. They are found one group of rows with common unknowns at a time, by
// the Gram–Schmidt process in the order in which the conditions were placed, so
// that a dependence names the later condition and what it depends on. Each row is
// orthogonalised twice, which is enough for orthogonality to rounding [Giraud,
// Langou, Rozložník & van den Eshof 2005, Numer. Math. 101, 87]. The right-hand
// sides are carried along: what remains of that of a dependent row must be zero.
const (
	// dependence is the part of a row, relative to its size, that must not lie in
	// the span of earlier ones.
	dependence = 1e-10

	// A group of more rows, or with more products of numbers to take, is cut into
	// the rows whose first unknown, last unknown and length are the same: equal
	// and proportional rows are found still, others are left to the solver.
	mostRows     = 400
	mostProducts = 1 << 29
)

// dropDependent takes the hard rows that follow from earlier ones away and
// returns a *Contradiction if one is at odds with them.
func (u *Unknowns) dropDependent() error {
	if len(u.hard) < 2 {
		return nil
	}
	g := &gram{u: u, column: make([]int32, u.N), drop: make([]bool, len(u.hard))}
	for k := range g.column {
		g.column[k] = -1
	}
	for _, group := range u.groups() {
		if err := g.group(group); err != nil {
			return err
		}
	}
	kept := u.hard[:0]
	for k, r := range u.hard {
		if !g.drop[k] {
			kept = append(kept, r)
		}
	}
	u.hard = kept
	return nil
}

// groups returns the hard rows in groups that share unknowns, in order.
func (u *Unknowns) groups() [][]int {
	f := newForest(len(u.hard))
	owner := make([]int32, u.N) // 1 + a row of each unknown
	for k, r := range u.hard {
		for _, x := range r.Unknown {
			if owner[x] > 0 {
				f.tie(int(owner[x]-1), k, 0)
			}
			owner[x] = int32(k + 1)
		}
	}
	var groups [][]int
	place := make(map[int]int)
	for k := range u.hard {
		root, _ := f.root(k)
		at, ok := place[root]
		if !ok {
			at = len(groups)
			place[root] = at
			groups = append(groups, nil)
		}
		groups[at] = append(groups[at], k)
	}
	return groups
}

// gram is the state of the process.
type gram struct {
	u      *Unknowns
	column []int32 // of an unknown in the group at hand, −1 if it has none
	drop   []bool  // rows that follow from earlier ones
}

// group finds the dependent rows of a group.
func (g *gram) group(rows []int) error {
	if len(rows) < 2 {
		return nil
	}
	hard := g.u.hard
	var unknowns []int32
	for _, k := range rows {
		for _, x := range hard[k].Unknown {
			if g.column[x] < 0 {
				g.column[x] = int32(len(unknowns))
				unknowns = append(unknowns, x)
			}
		}
	}
	defer func() {
		for _, x := range unknowns {
			g.column[x] = -1
		}
	}()
	if len(rows) <= mostRows && len(rows)*len(rows)*len(unknowns) <= mostProducts {
		return g.orthogonalise(rows, len(unknowns))
	}
	type likeness struct {
		first, last int32
		length      int
	}
	alike := make(map[likeness][]int)
	for _, k := range rows {
		x := hard[k].Unknown
		key := likeness{x[0], x[len(x)-1], len(x)}
		alike[key] = append(alike[key], k)
	}
	for _, k := range rows {
		x := hard[k].Unknown
		key := likeness{x[0], x[len(x)-1], len(x)}
		if same := alike[key]; len(same) > 1 && len(same) <= mostRows && same[0] == k {
			if err := g.orthogonalise(same, len(unknowns)); err != nil {
				return err
			}
		}
	}
	return nil
}

// A direction is a row of the orthonormal basis.
type direction struct {
	row   int       // the hard row that it was made from
	q     []float64 // of length 1
	value float64   // right-hand side
	scale float64   // size of the numbers that value was made from
	parts []float64 // q = (row − Σ parts[i]·q_i)/parts[own], own the last
}

func (g *gram) orthogonalise(rows []int, columns int) error {
	var basis []direction
	for _, k := range rows {
		r := &g.u.hard[k]
		d := direction{row: k, q: make([]float64, columns), parts: make([]float64, len(basis)+1)}
		var norm float64
		for j, x := range r.Unknown {
			d.q[g.column[x]] = r.Weight[j]
			norm = math.Hypot(norm, r.Weight[j])
		}
		scaleBy(d.q, 1/norm)
		d.value, d.scale = r.Value/norm, r.scale/norm
		for range 2 {
			for i, b := range basis {
				along := dot(b.q, d.q)
				if along == 0 {
					continue
				}
				d.parts[i] += along
				for j, v := range b.q {
					d.q[j] -= along * v
				}
				d.value -= along * b.value
				d.scale += math.Abs(along) * b.scale
			}
		}
		rest := math.Sqrt(dot(d.q, d.q))
		if rest > dependence {
			scaleBy(d.q, 1/rest)
			d.value, d.scale = d.value/rest, d.scale/rest
			d.parts[len(basis)] = rest
			basis = append(basis, d)
			continue
		}
		others := g.others(basis, d.parts)
		if math.Abs(d.value) > dependence*d.scale {
			return &Contradiction{Condition: r.Name, Event: r.Event, Component: r.Component, Asked: r.asked, Forced: r.asked - d.value*norm, Others: others}
		}
		g.drop[k] = true
		g.u.repeat(fmt.Sprintf("%s at %v, which follows from %s", r.Name, r.Event, list(others)))
	}
	return nil
}

// others names the rows that a combination of the basis is made of.
func (g *gram) others(basis []direction, parts []float64) (names []string) {
	share := append([]float64(nil), parts[:len(basis)]...)
	for i := len(basis) - 1; i >= 0; i-- {
		share[i] /= basis[i].parts[i]
		for j := range i {
			share[j] -= share[i] * basis[i].parts[j]
		}
	}
	for i, b := range basis {
		if math.Abs(share[i]) > 1e-8 {
			r := &g.u.hard[b.row]
			names = append(names, fmt.Sprintf("%s at %v", r.Name, r.Event))
		}
	}
	return names
}

// list joins up to three names.
func list(names []string) string {
	text := ""
	for i, name := range names {
		switch {
		case i == 3:
			return fmt.Sprintf("%s and %d more", text, len(names)-3)
		case i > 0:
			text += ", "
		}
		text += name
	}
	return text
}

func dot(a, b []float64) float64 {
	var sum float64
	for i, v := range a {
		sum += v * b[i]
	}
	return sum
}

func scaleBy(a []float64, f float64) {
	for i := range a {
		a[i] *= f
	}
}
