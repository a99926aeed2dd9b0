package minimize

import (
	"fmt"

	"github.com/tenter-go/tenter/field"
)

// Shift names translations of a history.
type Shift uint8

// The shifts, which can be added up. A shift is a zero mode of the second
// variation where nothing holds the place of the history: no pin near it, no
// coefficient that varies. On a lattice its eigenvalue is a small number of
// either sign.
const (
	InTime Shift = 1 << iota
	InSpace
)

// A linearRow is a hard linear condition Σ coef·x[unknown] = rhs on the unknowns.
type linearRow struct {
	name    string
	unknown []int32
	coef    []float64
	rhs     float64
}

// linearRows returns the hard linear conditions of the problem.
func (p *problem) linearRows() []linearRow {
	var rows []linearRow
	for _, r := range p.free.HardRows() {
		rows = append(rows, linearRow{name: r.Name, unknown: r.Unknown, coef: r.Weight, rhs: r.Value})
	}
	return rows
}

// zeroModes returns the rows that hold the zero modes of the settings: the
// change of the history is orthogonal to each in the L² product of the block.
func (p *problem) zeroModes() ([]linearRow, error) {
	if p.set.Shifts > InTime|InSpace {
		return nil, fmt.Errorf("minimize: shifts %d in the settings; want InTime, InSpace or their sum", p.set.Shifts)
	}
	var modes []*field.History
	var names []string
	for k, z := range p.set.ZeroModes {
		if err := p.f.Fits(z); err != nil {
			return nil, fmt.Errorf("minimize: zero mode %d: %w", k, err)
		}
		modes, names = append(modes, z), append(names, fmt.Sprintf("zero mode %d", k))
	}
	if p.set.Shifts&InTime != 0 {
		modes, names = append(modes, p.h.TimeSlope()), append(names, "shift in time")
	}
	if p.set.Shifts&InSpace != 0 {
		modes, names = append(modes, p.h.SpaceSlope()), append(names, "shift in space")
	}
	var rows []linearRow
	x := p.free.Gather(nil, p.h)
	for k, z := range modes {
		weighted := z.Clone()
		for e := range weighted.Data {
			weighted.Data[e] *= p.cell(e)
		}
		r := linearRow{name: names[k]}
		for u, a := range p.free.Reduce(nil, weighted) {
			if a != 0 {
				r.unknown, r.coef = append(r.unknown, int32(u)), append(r.coef, a)
				r.rhs += a * x[u]
			}
		}
		rows = append(rows, r)
	}
	return rows, nil
}

// cell returns the area that belongs to value e of a history.
func (p *problem) cell(e int) float64 {
	n, _, i, _ := p.free.Event(e)
	b := p.f.Block()
	return p.hk * b.Time.Weight(n) * b.Space.Weight(i)
}

// cells returns the area that belongs to each unknown.
func (p *problem) cells() []float64 {
	area := p.h.Clone()
	for e := range area.Data {
		area.Data[e] = p.cell(e)
	}
	return p.free.Reduce(nil, area)
}
