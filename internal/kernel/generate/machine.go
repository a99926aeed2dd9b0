package main

import (
	"fmt"
	"math"
	"slices"

	"github.com/mmcloughlin/avo/attr"
	"github.com/mmcloughlin/avo/build"
	"github.com/mmcloughlin/avo/operand"
	"github.com/mmcloughlin/avo/reg"
)

// A machine writes instructions for vectors of so many float64 lanes: ymm
// registers of AVX2 or zmm registers of AVX-512F.
type machine struct {
	*build.Context
	name   string // suffix of the functions
	lanes  int
	labels int
	consts [][2]uint64 // the table of constants, in order of first use
}

type (
	scalar = reg.GPVirtual
	vector = reg.VecVirtual
)

func (m *machine) wide() bool { return m.lanes == 8 }

func (m *machine) vec() vector {
	if m.wide() {
		return m.ZMM()
	}
	return m.YMM()
}

// label returns a name that is used once in the file.
func (m *machine) label(what string) string {
	m.labels++
	return fmt.Sprintf("%s%d", what, m.labels)
}

// function starts an assembly function.
func (m *machine) function(name, signature, doc string) {
	m.Function(name + m.name)
	m.Attributes(attr.NOSPLIT)
	m.SignatureExpr(signature)
	m.Doc(name + m.name + " " + doc)
}

// leave returns to Go, whose own code uses the narrow registers.
func (m *machine) leave() {
	m.VZEROUPPER()
	m.RET()
}

// argument loads an argument of the function into a register.
func (m *machine) argument(name string) scalar {
	r := m.GP64()
	m.Load(m.Param(name), r)
	return r
}

func (m *machine) arguments(names ...string) []scalar {
	var rs []scalar
	for _, n := range names {
		rs = append(rs, m.argument(n))
	}
	return rs
}

// choose writes one body for every case of op and jumps to the one asked for.
// An op that is none of them does nothing.
func (m *machine) choose(op scalar, cases []int, body func(op int)) {
	done := m.label("done")
	labels := make([]string, len(cases))
	for k, c := range cases {
		labels[k] = m.label("case")
		m.CMPQ(op, operand.Imm(uint64(c)))
		m.JEQ(operand.LabelRef(labels[k]))
	}
	m.JMP(operand.LabelRef(done))
	for k, c := range cases {
		m.Label(labels[k])
		body(c)
		m.JMP(operand.LabelRef(done))
	}
	m.Label(done)
}

// uniform returns a register whose lanes all hold the k-th number at c.
func (m *machine) uniform(c scalar, k int) vector {
	v := m.vec()
	m.VBROADCASTSD(operand.Mem{Base: c, Disp: 8 * k}, v)
	return v
}

// constant returns the place of a constant in the table, repeated in all lanes.
func (m *machine) constant(x float64) operand.Mem { return m.pair(x, x) }

// pair returns the place of two constants, in the even and the odd lanes.
func (m *machine) pair(x, y float64) operand.Mem {
	bits := [2]uint64{math.Float64bits(x), math.Float64bits(y)}
	k := slices.Index(m.consts, bits)
	if k < 0 {
		k = len(m.consts)
		m.consts = append(m.consts, bits)
	}
	return operand.NewDataAddr(operand.NewStaticSymbol("constants"+m.name), 8*m.lanes*k)
}

// held returns a constant in a register.
func (m *machine) held(x float64) vector {
	v := m.vec()
	m.VMOVUPD(m.constant(x), v)
	return v
}

// constantOp is held in a register where there are 32 of them and read from the
// table where there are 16.
func (m *machine) constantOp(x float64) operand.Op {
	if m.wide() {
		return m.held(x)
	}
	return m.constant(x)
}

// tables writes the data that the functions refer to.
func (m *machine) tables() {
	m.StaticGlobal("constants" + m.name)
	m.DataAttributes(attr.RODATA | attr.NOPTR)
	for k, x := range m.consts {
		for j := range m.lanes {
			m.AddDatum(8*(k*m.lanes+j), operand.U64(x[j%2]))
		}
	}
	if m.wide() {
		return
	}
	m.StaticGlobal("masks" + m.name)
	m.DataAttributes(attr.RODATA | attr.NOPTR)
	for j := range 2 * m.lanes {
		var mask uint64
		if j < m.lanes {
			mask = ^uint64(0)
		}
		m.AddDatum(8*j, operand.U64(mask))
	}
}

// A place is where a body of a loop works: lanes i … i+lanes−1 of every array,
// or the first few of them if it is masked.
type place struct {
	m     *machine
	i     scalar
	ahead int    // elements beyond i
	leave string // where to go to give up at this place
	mask  operand.Op

	// The places before and after this one in the same turn of a loop, if any,
	// and φ at each.
	before, after *place
	phi           vector
}

// mem returns the address of element i + ahead + shift of the array at base.
func (p *place) mem(base scalar, shift int) operand.Mem {
	return operand.Mem{Base: base, Index: p.i, Scale: 8, Disp: 8 * (p.ahead + shift)}
}

// load reads a vector; lanes that are masked off are not touched and read 0.
func (p *place) load(base scalar, shift int) vector {
	v, at := p.m.vec(), p.mem(base, shift)
	switch {
	case p.mask == nil:
		p.m.VMOVUPD(at, v)
	case p.m.wide():
		p.m.VMOVUPD_Z(at, p.mask, v)
	default:
		p.m.VMASKMOVPD(at, p.mask, v)
	}
	return v
}

// store writes the lanes that are not masked off.
func (p *place) store(v vector, base scalar) {
	at := p.mem(base, 0)
	switch {
	case p.mask == nil:
		p.m.VMOVUPD(v, at)
	case p.m.wide():
		p.m.VMOVUPD(v, p.mask, at)
	default:
		p.m.VMASKMOVPD(v, p.mask, at)
	}
}

// limit writes to mask a mask of the first count lanes.
func (m *machine) limit(count scalar) operand.Op {
	bits := m.GP64()
	if m.wide() {
		m.MOVQ(operand.I32(-1), bits)
		m.BZHIQ(count, bits, bits)
		m.KMOVW(bits.As32(), reg.K1)
		return reg.K1
	}
	table := m.GP64()
	mask := m.vec()
	m.LEAQ(operand.NewDataAddr(operand.NewStaticSymbol("masks"+m.name), 8*m.lanes), table)
	m.MOVQ(count, bits)
	m.NEGQ(bits)
	m.VMOVUPD(operand.Mem{Base: table, Index: bits, Scale: 8}, mask)
	return mask
}

// A field is the array φ that a loop reads with its neighbours; the first ghost
// cell is at base.
type field struct {
	base   scalar
	radius int
}

// shifted returns φ at the sites of p, moved by d. Half of the unaligned loads,
// which straddle two cache lines, are spared by taking the lanes from the
// places beside.
func (p *place) shifted(f *field, d int) vector {
	low, high, by := p.phi, vector(nil), d
	switch {
	case d > 0 && p.after != nil:
		high = p.after.phi
	case d < 0 && p.before != nil:
		low, high, by = p.before.phi, p.phi, p.m.lanes+d
	}
	if high == nil || !p.m.wide() {
		return p.load(f.base, f.radius+d)
	}
	v := p.m.vec()
	p.m.VALIGNQ(operand.Imm(uint64(by)), low, high, v)
	return v
}

// sweep writes a loop over n elements, n > 0, which counts i up from 0. It
// works on unroll vectors at a time, once the array at align is aligned to a
// vector, so that stores do not straddle cache lines; what is left at either
// end is done under a mask. Phi, if not nil, is loaded at all places of a turn
// before the bodies. On return i is the number of elements done: n, or
// less if a body gave up.
func (m *machine) sweep(n, align scalar, unroll int, phi *field, body func(p *place)) (i scalar) {
	ready := func(p *place) {
		if phi != nil {
			p.phi = p.load(phi.base, phi.radius)
		}
	}
	i = m.GP64()
	count := m.GP64()
	rest := m.GP64()
	full, part, some, done := m.label("full"), m.label("part"), m.label("some"), m.label("end")
	step := operand.I32(int32(unroll * m.lanes))
	var exits []func()

	m.XORQ(i, i)
	m.MOVQ(n, rest)
	m.CMPQ(rest, step)
	m.JLT(operand.LabelRef(some))
	m.MOVQ(align, count)
	m.NEGQ(count)
	m.SHRQ(operand.Imm(3), count)
	m.ANDQ(operand.Imm(uint64(m.lanes-1)), count)
	m.JNE(operand.LabelRef(part))

	m.Label(full)
	var last vector // φ before the sites of a turn, as far as neighbours reach
	loop := full
	if phi != nil && m.wide() && unroll > 1 {
		bits := m.GP64()
		m.MOVQ(operand.I32(int32(0xff00>>phi.radius&0xff)), bits)
		m.KMOVW(bits.As32(), reg.K2)
		last = m.vec()
		m.VMOVUPD_Z(operand.Mem{Base: phi.base, Index: i, Scale: 8, Disp: 8 * (phi.radius - m.lanes)}, reg.K2, last)
		loop = m.label("loop")
		m.Label(loop)
	}
	turn := make([]*place, unroll)
	for u := range turn {
		p := &place{m: m, i: i, ahead: u * m.lanes, leave: m.label("leave")}
		if turn[u] = p; u > 0 {
			p.before, turn[u-1].after = turn[u-1], p
		}
		exits = append(exits, m.exit(p, done))
		ready(p)
	}
	if last != nil {
		turn[0].before = &place{phi: last}
	}
	for _, p := range turn {
		body(p)
	}
	if last != nil {
		m.VMOVAPD(turn[unroll-1].phi, last)
	}
	m.ADDQ(step, i)
	m.SUBQ(step, rest)
	m.CMPQ(rest, step)
	m.JGE(operand.LabelRef(loop))

	m.Label(some)
	m.TESTQ(rest, rest)
	m.JEQ(operand.LabelRef(done))
	m.MOVQ(operand.I32(int32(m.lanes)), count)
	m.CMPQ(rest, count)
	m.CMOVQLT(rest, count)

	m.Label(part)
	p := &place{m: m, i: i, mask: m.limit(count), leave: done}
	ready(p)
	body(p)
	m.ADDQ(count, i)
	m.SUBQ(count, rest)
	m.CMPQ(rest, step)
	m.JGE(operand.LabelRef(full))
	m.JMP(operand.LabelRef(some))

	for _, x := range exits {
		x()
	}
	m.Label(done)
	return i
}

// exit returns what writes the way out of a body that gives up at p.
func (m *machine) exit(p *place, done string) func() {
	return func() {
		m.Label(p.leave)
		if p.ahead > 0 {
			m.ADDQ(operand.Imm(uint64(p.ahead)), p.i)
		}
		m.JMP(operand.LabelRef(done))
	}
}
