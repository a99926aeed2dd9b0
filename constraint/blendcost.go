package constraint

import "fmt"

// costs blends observations and cost conditions.
func (m *blending) costs() error {
	a, b := m.a.penalties, m.b.penalties
	if len(a) != len(b) {
		k, inA := pick(a, b, min(len(a), len(b)))
		return m.only("the "+k.Name, k.parts[0].place, k.parts[0].site, inA)
	}
	for k := range a {
		c, err := m.cost(a[k], b[k])
		if err != nil {
			return err
		}
		m.to.penalties = append(m.to.penalties, c)
	}
	return nil
}

func (m *blending) cost(a, b *Cost) (*Cost, error) {
	if j := differ(len(a.parts), len(b.parts), func(j int) bool {
		p, q := a.parts[j], b.parts[j]
		return p.place == q.place && p.site == q.site && p.shift == q.shift
	}); j >= 0 {
		p, inA := pick(a.parts, b.parts, j)
		return nil, m.only("the "+a.Name, p.place, p.site, inA)
	}
	c := &Cost{Name: a.Name, Strength: m.mix(a.Strength, b.Strength)}
	for j, p := range a.parts {
		var err error
		if p.weight, p.penalty, err = m.penalty(p, b.parts[j]); err != nil {
			return nil, fmt.Errorf("constraint: blend of the %s at %v: %w", a.Name, m.a.block.At(p.slice, p.site), err)
		}
		c.parts = append(c.parts, p)
	}
	return c, nil
}

// penalty blends weight and penalty of two parts.
func (m *blending) penalty(a, b part) (weight float64, p Penalty, err error) {
	weight = m.mix(a.weight, b.weight)
	switch pa := a.penalty.(type) {
	case Quadratic:
		if pb, ok := b.penalty.(Quadratic); ok {
			q := Quadratic{m.mix(pa.Centre, pb.Centre), m.mix(pa.Sigma, pb.Sigma)}
			return weight, q, sound(weight, q.Check())
		}
	case Cosine:
		if pb, ok := b.penalty.(Cosine); ok {
			return weight, Cosine{m.mix(pa.Around, pb.Around)}, sound(weight, nil)
		}
	case RapiniPapoular:
		if pb, ok := b.penalty.(RapiniPapoular); ok {
			q := RapiniPapoular{m.mix(pa.W, pb.W), m.mix(pa.Easy, pb.Easy)}
			return weight, q, sound(weight, q.Check())
		}
	}
	return 1, mixture{a.penalty, b.penalty, (1 - m.s) * a.weight, m.s * b.weight}, nil
}

// sound returns err, or an error if the weight is negative.
func sound(weight float64, err error) error {
	if err == nil && !(weight >= 0) {
		err = fmt.Errorf("weight %v; want a share that leaves it ≥ 0", weight)
	}
	return err
}

// linears blends linear conditions.
func (m *blending) linears() error {
	a, b := m.a.linears, m.b.linears
	if len(a) != len(b) {
		l, inA := pick(a, b, min(len(a), len(b)))
		return m.only("the "+l.Name, l.terms[0].place, l.terms[0].site, inA)
	}
	for k := range a {
		l, err := m.linear(a[k], b[k])
		if err != nil {
			return err
		}
		m.to.linears = append(m.to.linears, l)
	}
	return nil
}

func (m *blending) linear(a, b *Linear) (*Linear, error) {
	if j := differ(len(a.terms), len(b.terms), func(j int) bool {
		return a.terms[j].place == b.terms[j].place && a.terms[j].site == b.terms[j].site
	}); j >= 0 {
		t, inA := pick(a.terms, b.terms, j)
		return nil, m.only("the "+a.Name, t.place, t.site, inA)
	}
	if (a.sigma > 0) != (b.sigma > 0) {
		return nil, m.only("the softness of the "+a.Name, a.terms[0].place, a.terms[0].site, a.sigma > 0)
	}
	l := &Linear{
		Name: a.Name, Strength: m.mix(a.Strength, b.Strength), asked: m.mix(a.asked, b.asked), shift: m.mix(a.shift, b.shift),
		sigma: m.mix(a.sigma, b.sigma), at: a.at, component: a.component, held: m.to.held,
	}
	if a.sigma > 0 {
		if err := checkSigma(l.sigma); err != nil {
			return nil, fmt.Errorf("constraint: blend of the %s at %v: %w", a.Name, a.at, err)
		}
	}
	for j, t := range a.terms {
		t.a = m.mix(t.a, b.terms[j].a)
		l.terms = append(l.terms, t)
	}
	return l, nil
}
