package main

import (
	"math"

	"github.com/mmcloughlin/avo/operand"
)

// The numbers of sine.go of package kernel, which says where they come from.
const (
	reach    = 1e4
	shifter  = 0x1.8p52
	perRight = 0x1.45f306dc9c883p-1
	piHigh   = 0x1.921fb54442d18p+0
	piMid    = 0x1.1a62633145c07p-54
	piLow    = -0x1.f1976b7ed8fbcp-110
)

// circular holds the coefficients of the polynomials of sine and cosine.
var circular = [7][2]float64{
	{-0x1.5555555555555p-3, -0x1p-1},
	{0x1.111111111108ap-7, 0x1.555555555554ap-5},
	{-0x1.a01a01a0069e2p-13, -0x1.6c16c16c14e49p-10},
	{0x1.71de3a3fc9b45p-19, 0x1.a01a019c687a6p-16},
	{-0x1.ae643cdcf9723p-26, -0x1.27e4f7d8e48b5p-22},
	{0x1.6114666ffd175p-33, 0x1.1ee9ccb790299p-29},
	{-0x1.a53e76a29d14ap-41, -0x1.8f9f6356befd8p-37},
}

var (
	absMask  = math.Float64frombits(1<<63 - 1) // all bits but the sign
	signMask = math.Copysign(0, -1)
)

// A sine holds the constants of sin and cos.
type sine struct {
	m                                  *machine
	positive, sign                     operand.Op
	reach, perRight, shift, p1, p2, p3 operand.Op
	one, integer                       operand.Op
	coef                               [7]operand.Op
}

func (m *machine) newSine() *sine {
	s := &sine{m: m}
	s.positive, s.sign = m.constant(absMask), m.constant(signMask)
	s.reach, s.perRight = m.constant(reach), m.constant(perRight)
	s.shift = m.constantOp(shifter)
	s.p1, s.p2, s.p3 = m.constantOp(piHigh), m.constantOp(piMid), m.constant(piLow)
	s.one = m.constant(1)
	s.integer = m.constant(math.Float64frombits(1))
	for k, c := range circular {
		s.coef[k] = m.pair(c[0], c[1])
		if m.wide() {
			s.coef[k] = m.load(s.coef[k])
		}
	}
	return s
}

// sin returns sin x, or gives up at p if a lane is out of reach.
func (s *sine) sin(p *place, x vector) vector { return s.circle(p, x, false) }

// cos returns cos x, or gives up at p if a lane is out of reach.
func (s *sine) cos(p *place, x vector) vector { return s.circle(p, x, true) }

func (s *sine) circle(p *place, x vector, cosine bool) vector {
	m := s.m
	a := m.and(s.positive, x)
	m.unlessAtMost(a, s.reach, p.leave)
	t := m.load(s.shift)
	m.accumulate(t, a, s.perRight)
	n := m.sub(t, s.shift)
	r := m.copy(a)
	m.deduct(r, n, s.p1)
	m.deduct(r, n, s.p2)
	m.deduct(r, n, s.p3)
	if cosine {
		m.VPADDQ(s.integer, t, t)
	}
	u := m.mul(r, r)
	// Bit 1 of the control chooses the even or the odd lane of a pair.
	control := m.shiftLeft(t, 1)
	// Even and odd powers apart, which halves the chain of operations that wait
	// for each other.
	square := m.mul(u, u)
	q, odd := m.choice(control, s.coef[6]), m.choice(control, s.coef[5])
	for k := 4; k >= 0; k -= 2 {
		m.VFMADD213PD(m.choice(control, s.coef[k]), square, q)
		if k > 0 {
			m.VFMADD213PD(m.choice(control, s.coef[k-1]), square, odd)
		}
	}
	m.accumulate(q, odd, u)
	base := m.oneWhereOdd(t, r, s.one, s.integer)
	w := m.mul(base, u)
	m.accumulate(base, w, q)
	sign := m.shiftLeft(t, 62)
	if !cosine {
		sign = m.xor(sign, x)
	}
	return m.xor(m.and(s.sign, sign), base)
}

func (m *machine) shiftLeft(a vector, by uint64) vector {
	v := m.vec()
	m.VPSLLQ(operand.Imm(by), a, v)
	return v
}

// choice returns the even or the odd lanes of a pair as the control says.
func (m *machine) choice(control vector, pair operand.Op) vector {
	v := m.vec()
	if m.wide() {
		m.VPERMILPD(control, pair, v)
		return v
	}
	m.VMOVUPD(pair, v)
	m.VPERMILPD(control, v, v)
	return v
}

// oneWhereOdd returns r where the last bit of t is clear, and 1 where it is set.
func (m *machine) oneWhereOdd(t, r vector, one, integer operand.Op) vector {
	v := m.vec()
	if m.wide() {
		odd := m.K()
		m.VPTESTMQ(integer, t, odd)
		m.VBLENDMPD(one, r, odd, v)
		return v
	}
	m.VBLENDVPD(m.shiftLeft(t, 63), one, r, v)
	return v
}

// load returns a register that holds a constant and may be written to.
func (m *machine) load(c operand.Op) vector {
	v := m.vec()
	m.VMOVUPD(c, v)
	return v
}
