package main

// What the increment of a line with varying coefficients is added to: op =
// 3·kind + radius.
const (
	ontoLeap = 0 // next = now + (Aᵢ(now − before) + Bᵢ·force)
	ontoRate = 1 // dst = Aᵢ·rate + Bᵢ·force
	alone    = 2 // dst = Bᵢ·force
)

// varying writes the update of a line whose coefficients are arrays.
func (m *machine) varying() {
	m.function("varying", "func(op, n int, dst, phi, other, kappa1, kappa2, kappa3, keep, give, load, c *float64)",
		"is an update of n > 0 sites with varying coefficients; see varyingPortable.")
	p := m.arguments("op", "n", "dst", "phi", "other", "kappa1", "kappa2", "kappa3", "keep", "give", "load", "c")
	op, n, dst, phi, other, kappa, keeps, give, load, c := p[0], p[1], p[2], p[3], p[4], p[5:8], p[8], p[9], p[10], p[11]
	m.choose(op, []int{1, 2, 3, 4, 5, 6, 7, 8, 9}, func(op int) {
		kind, radius := (op-1)/3, (op-1)%3+1
		var links []vector
		for d := range radius {
			links = append(links, m.uniform(c, link+d))
		}
		near := &field{phi, radius}
		m.sweep(n, dst, 2, near, func(p *place) {
			at := p.phi
			f := p.load(load, 0)
			for k, w := range links {
				d := k + 1
				// kappa[k] points at the link that ends at site 0.
				t := m.mul(m.sub(p.shifted(near, d), at), p.load(kappa[k], d))
				m.deduct(t, m.sub(at, p.shifted(near, -d)), p.load(kappa[k], 0))
				m.accumulate(f, t, w)
			}
			b := p.load(give, 0)
			switch kind {
			case ontoLeap:
				v := m.mul(m.sub(at, p.load(other, 0)), p.load(keeps, 0))
				m.accumulate(v, f, b)
				p.store(m.add(at, v), dst)
			case ontoRate:
				v := m.mul(p.load(other, 0), p.load(keeps, 0))
				m.accumulate(v, f, b)
				p.store(v, dst)
			case alone:
				p.store(m.mul(f, b), dst)
			}
		})
	})
	m.leave()
}
