package main

import "github.com/mmcloughlin/avo/operand"

// The combinations that combine writes.
const (
	opAddScaled = iota // dst = x + a·y
	opDeduct           // dst = x − y·z
)

// combine writes linear combinations of arrays.
func (m *machine) combine() {
	m.function("combine", "func(op, n int, dst, x, y, z, a *float64)",
		"is a combination of arrays of n > 0 numbers; see combinePortable.")
	p := m.arguments("op", "n", "dst", "x", "y", "z", "a")
	op, n, dst, x, y, z, a := p[0], p[1], p[2], p[3], p[4], p[5], p[6]
	m.choose(op, []int{opAddScaled, opDeduct}, func(op int) {
		var scale vector
		if op == opAddScaled {
			scale = m.uniform(a, 0)
		}
		m.sweep(n, dst, 2, nil, func(p *place) {
			v := p.load(x, 0)
			if op == opAddScaled {
				m.accumulate(v, p.load(y, 0), scale)
			} else {
				m.deduct(v, p.load(y, 0), p.load(z, 0))
			}
			p.store(v, dst)
		})
	})
	m.leave()
}

// The reductions.
const (
	opSum              = iota // Σ x
	opSquares                 // Σ x²
	opDot                     // Σ xy
	opWeightedSquares         // Σ wx²
	opDistance                // Σ (y − x)²
	opWeightedDistance        // Σ w(y − x)²
	opMaxAbs                  // the largest bit pattern of |x|
	opReductions
)

// reduce writes sums in eight lanes, lane j over the elements i ≡ j mod 8.
func (m *machine) reduce() {
	m.function("reduce", "func(op, n int, x, y, w, lanes *float64)",
		"reduces n > 0 numbers to eight lanes; see reducePortable.")
	p := m.arguments("op", "n", "x", "y", "w", "lanes")
	op, n, x, y, w, lanes := p[0], p[1], p[2], p[3], p[4], p[5]
	var cases []int
	for k := range opReductions {
		cases = append(cases, k)
	}
	m.choose(op, cases, func(op int) {
		parts := 8 / m.lanes
		sums := make([]vector, parts)
		for k := range sums {
			sums[k] = m.zero()
		}
		positive := m.held(absMask)
		body := func(k int, p *place) {
			v := p.load(x, 0)
			switch op {
			case opSum:
				m.VADDPD(v, sums[k], sums[k])
			case opSquares:
				m.accumulate(sums[k], v, v)
			case opDot:
				m.accumulate(sums[k], v, p.load(y, 0))
			case opWeightedSquares:
				m.accumulate(sums[k], m.mul(v, p.load(w, 0)), v)
			case opDistance:
				d := m.sub(p.load(y, 0), v)
				m.accumulate(sums[k], d, d)
			case opWeightedDistance:
				d := m.sub(p.load(y, 0), v)
				m.accumulate(sums[k], m.mul(d, p.load(w, 0)), d)
			case opMaxAbs:
				m.larger(sums[k], m.and(v, positive))
			}
		}
		m.lanesOf(n, body)
		for k, s := range sums {
			m.VMOVUPD(s, operand.Mem{Base: lanes, Disp: 8 * m.lanes * k})
		}
	})
	m.leave()
}

// larger puts the larger of two non-negative bit patterns into a, lane by lane.
func (m *machine) larger(a, b vector) {
	if m.wide() {
		m.VPMAXSQ(a, b, a)
		return
	}
	over := m.vec()
	m.VPCMPGTQ(a, b, over) // b > a
	m.VBLENDVPD(over, b, a, a)
}

// lanesOf writes a loop over n elements, eight at a time, in which part k of
// each eight goes to body(k, …).
func (m *machine) lanesOf(n scalar, body func(k int, p *place)) {
	i, rest, count, least := m.GP64(), m.GP64(), m.GP64(), m.GP64()
	loop, some, done := m.label("eight"), m.label("some"), m.label("end")
	m.XORQ(i, i)
	m.MOVQ(n, rest)
	m.CMPQ(rest, operand.Imm(8))
	m.JLT(operand.LabelRef(some))
	m.Label(loop)
	for k := range 8 / m.lanes {
		body(k, &place{m: m, i: i, ahead: k * m.lanes})
	}
	m.ADDQ(operand.Imm(8), i)
	m.SUBQ(operand.Imm(8), rest)
	m.CMPQ(rest, operand.Imm(8))
	m.JGE(operand.LabelRef(loop))
	m.Label(some)
	for k := range 8 / m.lanes {
		m.TESTQ(rest, rest)
		m.JLE(operand.LabelRef(done))
		m.MOVQ(operand.I32(int32(m.lanes)), least)
		m.MOVQ(rest, count)
		m.CMPQ(count, least)
		m.CMOVQGT(least, count)
		body(k, &place{m: m, i: i, ahead: k * m.lanes, mask: m.limit(count)})
		m.SUBQ(least, rest)
	}
	m.Label(done)
}
