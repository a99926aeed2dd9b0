package main

import "github.com/mmcloughlin/avo/operand"

// The constants of a line, as they lie behind the pointer c. See type
// coefficients of package kernel.
const (
	keep  = 0
	bias  = 1
	link  = 2 // and 3, 4
	pull  = 5
	extra = 6 // and 7
)

// How the slope V′ is found: op = 3·kind + radius. Only leap knows sinus, whose
// own work is such that a pass of its own does not show.
const (
	given = 0 // read from memory
	phi4  = 1
	sinus = 2
)

// A stencil is the right-hand side of a line with constant coefficients.
type stencil struct {
	field
	m          *machine
	kind       int
	link       []vector
	pull, bias vector
	keep       vector // nil if there is no rate
	one, two   operand.Op
	sine       *sine
	load       func() // loads the constants above
	late       bool   // for lack of registers, in the loop
	slope      scalar
}

// newStencil loads the constants. phi points at the first ghost site.
func (m *machine) newStencil(kind, radius int, hasRate bool, phi, slope, c scalar) *stencil {
	s := &stencil{field: field{phi, radius}, m: m, kind: kind, slope: slope}
	s.load = func() {
		if hasRate {
			s.keep = m.uniform(c, keep)
		}
		s.bias = m.uniform(c, bias)
		s.link = nil
		for d := range radius {
			s.link = append(s.link, m.uniform(c, link+d))
		}
		s.pull = m.uniform(c, pull)
	}
	if s.late = kind == sinus && !m.wide(); !s.late {
		s.load()
	}
	if radius > 1 {
		s.two = m.constantOp(2)
	}
	switch kind {
	case phi4:
		s.one = m.constantOp(1)
	case sinus:
		s.sine = m.newSine()
	}
	return s
}

// force returns A·rate + g + Σ c_d·((φ(i+d) − φ(i)) − (φ(i) − φ(i−d))) − f·V′,
// rate nil for none. The longer links weigh little: theirs is found from the sum
// of the neighbours, which rounds once more and leaves a constant field alone as
// well.
func (s *stencil) force(p *place, rate vector) vector {
	m, phi := s.m, p.phi
	var slope vector // first: a sine needs most of the registers
	switch s.kind {
	case given:
		slope = p.load(s.slope, 0)
	case phi4:
		slope = m.mul(m.sub(m.mul(phi, phi), s.one), phi)
	case sinus:
		slope = s.sine.sin(p, phi)
	}
	if s.late {
		s.load()
	}
	v := m.copy(s.bias)
	if rate != nil {
		m.accumulate(v, s.keep, rate)
	}
	for k, c := range s.link {
		d := k + 1
		right, left := p.shifted(&s.field, d), p.shifted(&s.field, -d)
		if d == 1 {
			m.accumulate(v, c, m.sub(m.sub(right, phi), m.sub(phi, left)))
			continue
		}
		second := m.add(right, left)
		m.deduct(second, phi, s.two)
		m.accumulate(v, c, second)
	}
	return m.sub(v, m.mul(slope, s.pull))
}

// leap writes next = now + (A(now − before) + force).
func (m *machine) leap() {
	m.function("leap", "func(op, n int, next, now, before, slope, c *float64) (done int)",
		"is the leapfrog update of n > 0 sites; see leapPortable.")
	p := m.arguments("op", "n", "next", "now", "before", "slope", "c")
	op, n, next, now, before, slope, c := p[0], p[1], p[2], p[3], p[4], p[5], p[6]
	out := m.GP64()
	m.XORQ(out, out)
	var cases []int
	for kind := given; kind <= sinus; kind++ {
		for radius := 1; radius <= 3; radius++ {
			cases = append(cases, 3*kind+radius)
		}
	}
	m.choose(op, cases, func(op int) {
		kind, radius := (op-1)/3, (op-1)%3+1
		s := m.newStencil(kind, radius, true, now, slope, c)
		unroll := 2
		if kind == sinus {
			unroll = 1
		}
		done := m.sweep(n, next, unroll, &s.field, func(p *place) {
			gain := m.sub(p.phi, p.load(before, 0))
			p.store(m.add(p.phi, s.force(p, gain)), next)
		})
		m.MOVQ(done, out)
	})
	m.Store(out, m.Return("done"))
	m.leave()
}

// accelerate writes dst = A·rate + force; op = 3·kind + radius, + 6 with a rate.
func (m *machine) accelerate() {
	m.function("accelerate", "func(op, n int, dst, phi, rate, slope, c *float64)",
		"is the right-hand side at n > 0 sites; see acceleratePortable.")
	p := m.arguments("op", "n", "dst", "phi", "rate", "slope", "c")
	op, n, dst, phi, rate, slope, c := p[0], p[1], p[2], p[3], p[4], p[5], p[6]
	m.choose(op, []int{1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12}, func(op int) {
		kind, radius := (op-1)/3%2, (op-1)%3+1
		s := m.newStencil(kind, radius, op > 6, phi, slope, c)
		m.sweep(n, dst, 2, &s.field, func(p *place) {
			var v vector
			if op > 6 {
				v = p.load(rate, 0)
			}
			p.store(s.force(p, v), dst)
		})
	})
	m.leave()
}

// kickDrift writes rate = A·rate + force and next = φ + drift·rate.
func (m *machine) kickDrift() {
	m.function("kickDrift", "func(op, n int, next, phi, rate, slope, c *float64)",
		"is a kick and a drift of n > 0 sites; see kickDriftPortable.")
	p := m.arguments("op", "n", "next", "phi", "rate", "slope", "c")
	op, n, next, phi, rate, slope, c := p[0], p[1], p[2], p[3], p[4], p[5], p[6]
	m.choose(op, []int{1, 2, 3, 4, 5, 6}, func(op int) {
		s := m.newStencil((op-1)/3, (op-1)%3+1, true, phi, slope, c)
		drift := m.uniform(c, extra)
		m.sweep(n, next, 2, &s.field, func(p *place) {
			v := s.force(p, p.load(rate, 0))
			p.store(v, rate)
			p.store(m.fma(v, drift, p.phi), next)
		})
	})
	m.leave()
}

// stage writes field = φ₀ + part·v and rate = v₀ + part·(A·v + force), the field
// and rate of the next stage of a Runge–Kutta step.
func (m *machine) stage() {
	m.function("stage", "func(op, n int, field, rate, phi, v, phi0, v0, slope, c *float64)",
		"is a Runge–Kutta stage at n > 0 sites; see stagePortable.")
	p := m.arguments("op", "n", "field", "rate", "phi", "v", "phi0", "v0", "slope", "c")
	op, n, field, rate, phi, v, phi0, v0, slope, c := p[0], p[1], p[2], p[3], p[4], p[5], p[6], p[7], p[8], p[9]
	m.choose(op, []int{1, 2, 3, 4, 5, 6}, func(op int) {
		s := m.newStencil((op-1)/3, (op-1)%3+1, true, phi, slope, c)
		part := m.uniform(c, extra)
		m.sweep(n, field, 2, &s.field, func(p *place) {
			speed := p.load(v, 0)
			kick := s.force(p, speed)
			p.store(m.fma(speed, part, p.load(phi0, 0)), field)
			p.store(m.fma(kick, part, p.load(v0, 0)), rate)
		})
	})
	m.leave()
}

// finish writes the end of a step of RK4 from its stages.
func (m *machine) finish() {
	m.function("finish", "func(op, n int, field, rate, v2, v3, phi4, v4, slope, c *float64)",
		"is the end of an RK4 step at n > 0 sites; see finishPortable.")
	p := m.arguments("op", "n", "field", "rate", "v2", "v3", "phi4", "v4", "slope", "c")
	op, n, field, rate, v2, v3, phi4, v4, slope, c := p[0], p[1], p[2], p[3], p[4], p[5], p[6], p[7], p[8], p[9]
	m.choose(op, []int{1, 2, 3, 4, 5, 6}, func(op int) {
		s := m.newStencil((op-1)/3, (op-1)%3+1, true, phi4, slope, c)
		sixth := m.uniform(c, extra)
		third, two := m.constantOp(1./3), m.constantOp(2)
		m.sweep(n, field, 2, &s.field, func(p *place) {
			last := p.load(v4, 0)
			kick := m.mul(s.force(p, last), sixth)
			first, second, middle := p.load(rate, 0), p.load(v2, 0), p.load(v3, 0)
			change := m.add(m.sub(second, first), m.sub(last, first))
			m.accumulate(change, m.sub(middle, first), two)
			m.accumulate(kick, change, third)
			p.store(m.add(first, kick), rate)
			sum := m.add(first, last)
			m.accumulate(sum, m.add(second, middle), two)
			q := p.load(field, 0)
			m.accumulate(q, sum, sixth)
			p.store(q, field)
		})
	})
	m.leave()
}
