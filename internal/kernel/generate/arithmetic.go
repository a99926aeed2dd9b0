package main

import "github.com/mmcloughlin/avo/operand"

// The operations below return a fresh register. The last operand of a
// non-commutative one may be memory, as the machine allows.

func (m *machine) add(a vector, b operand.Op) vector {
	v := m.vec()
	m.VADDPD(b, a, v)
	return v
}

// sub returns a − b.
func (m *machine) sub(a vector, b operand.Op) vector {
	v := m.vec()
	m.VSUBPD(b, a, v)
	return v
}

func (m *machine) mul(a vector, b operand.Op) vector {
	v := m.vec()
	m.VMULPD(b, a, v)
	return v
}

// fma returns a·b + c, rounded once.
func (m *machine) fma(a vector, b vector, c operand.Op) vector {
	v := m.copy(a)
	m.VFMADD213PD(c, b, v)
	return v
}

// accumulate adds a·b to sum, rounded once.
func (m *machine) accumulate(sum, a vector, b operand.Op) { m.VFMADD231PD(b, a, sum) }

// deduct subtracts a·b from sum, rounded once.
func (m *machine) deduct(sum, a vector, b operand.Op) { m.VFNMADD231PD(b, a, sum) }

func (m *machine) copy(a vector) vector {
	v := m.vec()
	m.VMOVAPD(a, v)
	return v
}

func (m *machine) xor(a, b operand.Op) vector {
	v := m.vec()
	if m.wide() {
		m.VPXORQ(a, b, v)
	} else {
		m.VXORPD(a, b, v)
	}
	return v
}

func (m *machine) and(a, b operand.Op) vector {
	v := m.vec()
	if m.wide() {
		m.VPANDQ(a, b, v)
	} else {
		m.VANDPD(a, b, v)
	}
	return v
}

func (m *machine) zero() vector {
	v := m.vec()
	if m.wide() {
		m.VPXORQ(v, v, v)
	} else {
		m.VXORPD(v, v, v)
	}
	return v
}

// unlessAtMost jumps to label unless every lane of a is at most limit; a lane
// that is NaN is not.
func (m *machine) unlessAtMost(a vector, limit operand.Op, label string) {
	const notLessOrEqual = 0x16 // unordered, quiet
	if m.wide() {
		over := m.K()
		m.VCMPPD(operand.Imm(notLessOrEqual), limit, a, over)
		m.KORTESTW(over, over)
	} else {
		over, bits := m.vec(), m.GP32()
		m.VCMPPD(operand.Imm(notLessOrEqual), limit, a, over)
		m.VMOVMSKPD(over, bits)
		m.TESTL(bits, bits)
	}
	m.JNE(operand.LabelRef(label))
}
