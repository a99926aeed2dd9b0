package main

// The functions that apply evaluates; the names are those of package kernel.
const (
	opPhi4Value = iota
	opPhi4Slope
	opPhi4Curvature
	opPhi6Value
	opPhi6Slope
	opPhi6Curvature
	opSin
	opCos
	opSineValue
	opDoubleValue
	opDoubleSlope
	opDoubleCurvature
	opHorner // + degree, 1 … 8
	opCount  = opHorner + 9
)

// apply writes dst[i] = F(x[i]) for the function op with the constants at c.
func (m *machine) apply() {
	m.function("apply", "func(op, n int, dst, x, c *float64) (done int)",
		"evaluates the function op at n > 0 numbers; see applyPortable.")
	p := m.arguments("op", "n", "dst", "x", "c")
	op, n, dst, x, c := p[0], p[1], p[2], p[3], p[4]
	out := m.GP64()
	m.XORQ(out, out)
	var cases []int
	for op := range opCount {
		if op != opHorner {
			cases = append(cases, op)
		}
	}
	m.choose(op, cases, func(op int) {
		f := m.formula(op, c)
		unroll := 2
		if op >= opSin && op < opHorner {
			unroll = 1
		}
		done := m.sweep(n, dst, unroll, nil, func(p *place) { p.store(f(p, p.load(x, 0)), dst) })
		m.MOVQ(done, out)
	})
	m.Store(out, m.Return("done"))
	m.leave()
}

// formula loads the constants of a function and returns what writes its body.
func (m *machine) formula(op int, c scalar) func(p *place, x vector) vector {
	if op >= opHorner {
		return m.horner(op-opHorner, c)
	}
	if op >= opSin {
		return m.sineFormula(op, c)
	}
	k := m.constantOp
	switch op {
	case opPhi4Value:
		one, quarter := m.held(1), k(0.25)
		return func(_ *place, x vector) vector {
			w := m.sub(one, m.mul(x, x))
			return m.mul(m.mul(w, quarter), w)
		}
	case opPhi4Slope:
		one := k(1)
		return func(_ *place, x vector) vector { return m.mul(m.sub(m.mul(x, x), one), x) }
	case opPhi4Curvature:
		one, three := k(1), k(3)
		return func(_ *place, x vector) vector { return m.sub(m.mul(m.mul(x, three), x), one) }
	case opPhi6Value:
		one, half := m.held(1), k(0.5)
		return func(_ *place, x vector) vector {
			w := m.mul(m.sub(one, m.mul(x, x)), x)
			return m.mul(m.mul(w, half), w)
		}
	case opPhi6Slope:
		one, three := m.held(1), k(3)
		return func(_ *place, x vector) vector {
			q := m.mul(x, x)
			return m.mul(m.mul(m.sub(one, q), x), m.sub(one, m.mul(q, three)))
		}
	}
	one, twelve, fifteen := m.held(1), k(12), k(15)
	return func(_ *place, x vector) vector { // opPhi6Curvature
		q := m.mul(x, x)
		return m.add(m.sub(one, m.mul(q, twelve)), m.mul(m.mul(q, fifteen), q))
	}
}

// horner returns the polynomial of a degree with the coefficients at c.
func (m *machine) horner(degree int, c scalar) func(p *place, x vector) vector {
	var coef []vector
	for k := range degree + 1 {
		coef = append(coef, m.uniform(c, k))
	}
	return func(_ *place, x vector) vector {
		v := m.copy(coef[degree])
		for k := degree - 1; k >= 0; k-- {
			m.VFMADD213PD(coef[k], x, v)
		}
		return v
	}
}

// sineFormula returns a function of the sine family; η stands first at c.
func (m *machine) sineFormula(op int, c scalar) func(p *place, x vector) vector {
	s := m.newSine()
	square := func(p *place, x vector, part float64) vector { // 2 sin²(part·x)
		v := s.sin(p, m.mul(x, m.constant(part)))
		return m.mul(m.add(v, v), v)
	}
	half := func(x vector) vector { return m.mul(x, m.constant(0.5)) }
	eta := func(v vector, part float64) vector { // (part·η)·v
		return m.mul(v, m.mul(m.uniform(c, 0), m.constant(part)))
	}
	switch op {
	case opSin:
		return s.sin
	case opCos:
		return s.cos
	case opSineValue:
		return func(p *place, x vector) vector { return square(p, x, 0.5) }
	case opDoubleValue:
		return func(p *place, x vector) vector {
			return m.add(square(p, x, 0.5), eta(square(p, x, 0.25), 1))
		}
	case opDoubleSlope:
		return func(p *place, x vector) vector { return m.add(s.sin(p, x), eta(s.sin(p, half(x)), 0.5)) }
	}
	return func(p *place, x vector) vector { // opDoubleCurvature
		return m.add(s.cos(p, x), eta(s.cos(p, half(x)), 0.25))
	}
}
