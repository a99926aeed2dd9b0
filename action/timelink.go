package action

import "github.com/tenter-go/tenter/field"

// A timeLink is the working memory of a NoisyFlow for the link from slice n to
// slice m = n + 1, with φ(s) = φ(n) + s·Δφ along it. With W = u/M, and K the
// matrix −∂²U/∂φ∂φ of the elastic energy, r depends on the two slices by
//
//	∂r/∂φ(n) = −1/k − ½K/W + (uσ/W) Σ_q w_q (1 − s_q) V″(φ(s_q))
//	∂r/∂φ(m) =  1/k − ½K/W + (uσ/W) Σ_q w_q      s_q  V″(φ(s_q)).
type timeLink struct {
	s     *NoisyFlow
	w     *scratch
	n, m  int
	t     float64
	phi   []field.Slice // φ at the nodes
	noise field.Slice   // r, zero where there is no equation

	// weight is W, zero where there is no equation, and sigma is uσ.
	weight field.Slice
	sigma  []float64

	step, mid, part field.Slice // Δφ, φ(½), and memory for a part

	// curve[0] and curve[1] are uσ Σ w(1 − s)V″ and uσ Σ w s V″, and
	// third[0], [1], [2] are uσ Σ w V‴·r times (1 − s)², s(1 − s) and s².
	curve [2]field.Slice
	third [3]field.Slice
	bends field.Slice // V″ or V‴·r at one node
}

func (s *NoisyFlow) newTimeLink() *timeLink {
	n, sites := s.components, s.block.Sites()
	l := &timeLink{
		s: s, w: s.wave.newScratch(), sigma: make([]float64, sites), bends: field.NewSlice(n*n, sites),
		noise: field.NewSlice(n, sites), weight: field.NewSlice(n, sites),
		step: field.NewSlice(n, sites), mid: field.NewSlice(n, sites), part: field.NewSlice(n, sites),
		curve: [2]field.Slice{field.NewSlice(n*n, sites), field.NewSlice(n*n, sites)},
		third: [3]field.Slice{field.NewSlice(n*n, sites), field.NewSlice(n*n, sites), field.NewSlice(n*n, sites)},
	}
	for range s.node {
		l.phi = append(l.phi, field.NewSlice(n, sites))
	}
	return l
}

// at goes to link n of h and works out r there.
func (l *timeLink) at(n int, h *field.History) {
	s, d := l.s, l.s.wave
	clock := s.block.Time
	var wraps bool
	l.n = n
	l.m, wraps = d.next(n)
	l.t = clock.Between(n)
	copy(l.sigma, d.sigma.row(l.w.sigma, 0, n, l.t))
	for i, u := range d.u {
		l.sigma[i] *= u
	}

	l.step.CopyFrom(h.Slice(l.m))
	l.step.Axpy(-1, h.Slice(n))
	for c := range s.components {
		if jump := clock.JumpOf(c); wraps && jump != 0 {
			row := l.step.Component(c)
			for i := range row {
				row[i] += jump
			}
		}
	}
	l.mid.CopyFrom(h.Slice(n))
	l.mid.Axpy(0.5, l.step)
	slope := l.w.slope
	slope.Zero()
	for q, x := range s.node {
		l.phi[q].CopyFrom(h.Slice(n))
		l.phi[q].Axpy(x, l.step)
		d.wave.Potential.Slope(l.part, l.phi[q], d.at(l.t))
		slope.Axpy(s.share[q], l.part)
	}
	for c := range s.components {
		force := l.part.Component(c)
		clear(force)
		d.addForce(force, l.w, l.mid.Component(c), slope.Component(c), c, n, l.t, 1)
		r, w, step := l.noise.Component(c), l.weight.Component(c), l.step.Component(c)
		for i, m := range s.mobility.row(l.w.al, c, n, l.t) {
			w[i] = d.u[i] / m
			r[i] = step[i]/clock.Step - force[i]/w[i]
		}
		for _, i := range s.ends() {
			w[i], r[i] = 0, 0
		}
	}
}

// bend works out the averages of V″.
func (l *timeLink) bend() {
	d := l.s.wave
	for k := range l.curve {
		l.curve[k].Zero()
	}
	for q, x := range l.s.node {
		d.wave.Potential.Curvature(l.bends, l.phi[q], d.at(l.t))
		l.average(l.curve[0], l.s.share[q]*(1-x))
		l.average(l.curve[1], l.s.share[q]*x)
	}
}

// twist works out the averages of V‴·r.
func (l *timeLink) twist() {
	d := l.s.wave
	for k := range l.third {
		l.third[k].Zero()
	}
	for q, x := range l.s.node {
		curvatureAlong(l.bends, d.wave.Potential, l.phi[q], l.noise, d.at(l.t))
		l.average(l.third[0], l.s.share[q]*(1-x)*(1-x))
		l.average(l.third[1], l.s.share[q]*x*(1-x))
		l.average(l.third[2], l.s.share[q]*x*x)
	}
}

// average adds uσ·share times what one node has to dst.
func (l *timeLink) average(dst field.Slice, share float64) {
	for k := range dst.Components {
		row, v := dst.Component(k), l.bends.Component(k)
		for i, sigma := range l.sigma {
			row[i] += share * sigma * v[i]
		}
	}
}

// push writes the change of r for a change of the history to dst.
func (l *timeLink) push(dst field.Slice, eta *field.History) {
	from, to := eta.Slice(l.n), eta.Slice(l.m)
	k := l.s.block.Time.Step
	for c := range l.s.components {
		row, a, b := dst.Component(c), from.Component(c), to.Component(c)
		force, mid := l.part.Component(c), l.mid.Component(c)
		clear(force)
		for i := range mid {
			mid[i] = a[i] + b[i]
		}
		l.elastic(force, mid, c)
		l.addProduct(force, l.curve[0], from, c, -1)
		l.addProduct(force, l.curve[1], to, c, -1)
		for i, w := range l.weight.Component(c) {
			row[i] = 0
			if w > 0 {
				row[i] = (b[i]-a[i])/k - force[i]/w
			}
		}
	}
}

// pull adds hk times the transpose of push, of W·r, to dst. r must be zero where
// there is no equation.
func (l *timeLink) pull(dst *field.History, r field.Slice) {
	k, hk := l.s.block.Time.Step, l.s.cellArea()
	from, to := dst.Slice(l.n), dst.Slice(l.m)
	for c := range l.s.components {
		push, noise := l.part.Component(c), r.Component(c)
		for part, slice := range [2]field.Slice{from, to} {
			clear(push)
			l.elastic(push, noise, c)
			l.addProduct(push, l.curve[part], r, c, -1)
			sign := [2]float64{-1, 1}[part]
			row := slice.Component(c)
			for i, w := range l.weight.Component(c) {
				row[i] += hk * (sign*w*noise[i]/k - push[i])
			}
		}
	}
}

// elastic adds ½K times component c of a field to dst.
func (l *timeLink) elastic(dst, phi []float64, c int) {
	d := l.s.wave
	d.elastic.addForce(dst, phi, d.kappaAt(l.w, c, l.n, l.t), 0, 0.5)
}

// addProduct adds scale times row a of a matrix at every site times a field to
// dst.
func (l *timeLink) addProduct(dst []float64, matrix, phi field.Slice, a int, scale float64) {
	n := l.s.components
	for b := range n {
		v, p := matrix.Component(a*n+b), phi.Component(b)
		for i := range dst {
			dst[i] += scale * v[i] * p[i]
		}
	}
}

// addTwist adds hk times the part of the second variation that comes with V‴ to
// dst.
func (l *timeLink) addTwist(dst, eta *field.History) {
	hk := l.s.cellArea()
	from, to := eta.Slice(l.n), eta.Slice(l.m)
	for a := range l.s.components {
		first, second := dst.Slice(l.n).Component(a), dst.Slice(l.m).Component(a)
		l.addProduct(first, l.third[0], from, a, hk)
		l.addProduct(first, l.third[1], to, a, hk)
		l.addProduct(second, l.third[1], from, a, hk)
		l.addProduct(second, l.third[2], to, a, hk)
	}
}
