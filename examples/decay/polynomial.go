package main

import (
	"math"
	"slices"
)

// A polynomial is Σ p[k]xᵏ.
type polynomial []float64

// at returns the value at x.
func (p polynomial) at(x float64) (v float64) {
	for _, c := range slices.Backward(p) {
		v = v*x + c
	}
	return v
}

// slope returns the derivative.
func (p polynomial) slope() polynomial {
	var d polynomial
	for k := 1; k < len(p); k++ {
		d = append(d, float64(k)*p[k])
	}
	return d
}

// about returns the same polynomial in powers of x − a.
func (p polynomial) about(a float64) polynomial {
	q := slices.Clone(p)
	for i := range q {
		for k := len(q) - 2; k >= i; k-- {
			q[k] += a * q[k+1]
		}
	}
	return q
}

// roots returns the places where p changes sign, in rising order. They lie one by
// one between those where p′ does, and within Fujiwara's bound.
func (p polynomial) roots() []float64 {
	for len(p) > 0 && p[len(p)-1] == 0 {
		p = p[:len(p)-1]
	}
	n := len(p) - 1
	if n < 1 {
		return nil
	}
	var bound float64
	for k, c := range p[:n] {
		bound = max(bound, 2*math.Pow(math.Abs(c/p[n]), 1/float64(n-k)))
	}
	ends := append([]float64{-2 * bound}, p.slope().roots()...)
	ends = append(ends, 2*bound)
	if bound == 0 { // p = cxⁿ
		ends = []float64{-1, 1}
	}
	var found []float64
	for i := range ends[1:] {
		a, b := ends[i], ends[i+1]
		rising := p.at(b) > 0
		if rising == (p.at(a) > 0) {
			continue
		}
		for {
			m := a + (b-a)/2
			if m == a || m == b {
				break
			}
			if (p.at(m) > 0) == rising {
				b = m
			} else {
				a = m
			}
		}
		if math.Abs(p.at(a)) < math.Abs(p.at(b)) {
			b = a
		}
		found = append(found, b)
	}
	return found
}
