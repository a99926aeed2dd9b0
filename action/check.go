package action

import (
	"fmt"
	"math"
)

// checkPotential returns an error if a combination does not fit together.
func checkPotential(p Potential) error {
	switch v := p.(type) {
	case nil:
		return fmt.Errorf("action: potential is nil; want a Potential")
	case Each:
		if v.N < 1 {
			return fmt.Errorf("action: Each on %d components; want at least 1", v.N)
		}
		if err := checkPotential(v.Potential); err != nil {
			return err
		}
		if n := v.Potential.Components(); n != 1 {
			return fmt.Errorf("action: Each of a potential of %d components; want one of 1", n)
		}
	case Sum:
		if len(v) == 0 {
			return fmt.Errorf("action: sum of no potentials; want at least 1")
		}
		for k, q := range v {
			if err := checkPotential(q); err != nil {
				return err
			}
			if q.Components() != v.Components() {
				return fmt.Errorf("action: term %d of a sum has %d components, term 0 has %d; want equally many", k, q.Components(), v.Components())
			}
		}
	case Bilinear:
		for a, row := range v {
			if len(row) != len(v) {
				return fmt.Errorf("action: row %d of a bilinear coupling has %d numbers; want %d", a, len(row), len(v))
			}
			for b, x := range row {
				if !finite(x) {
					return fmt.Errorf("action: bilinear coupling has M[%d][%d] = %v; want a finite number", a, b, x)
				}
			}
			for b := range row {
				if v[a][b] != v[b][a] {
					return fmt.Errorf("action: bilinear coupling has M[%d][%d] = %v and M[%d][%d] = %v; want a symmetric matrix", a, b, v[a][b], b, a, v[b][a])
				}
			}
		}
	case Scalar:
		if v.V == nil || v.D1 == nil || v.D2 == nil {
			return fmt.Errorf("action: Scalar with a nil function; want V, V′ and V″ (or use Auto)")
		}
	case Auto:
		if v == nil {
			return fmt.Errorf("action: nil Auto; want a function")
		}
	case Polynomial:
		if len(v) == 0 {
			return fmt.Errorf("action: polynomial of no coefficients; want at least c[0]")
		}
		for k, x := range v {
			if !finite(x) {
				return fmt.Errorf("action: polynomial has c[%d] = %v; want a finite number", k, x)
			}
		}
	case Mass:
		if !finite(float64(v)) {
			return fmt.Errorf("action: mass %v; want a finite number", float64(v))
		}
	case DoubleSineGordon:
		if !finite(v.Eta) {
			return fmt.Errorf("action: double sine-Gordon with η = %v; want a finite number", v.Eta)
		}
	}
	if n := p.Components(); n < 1 {
		return fmt.Errorf("action: potential of %d components; want at least 1", n)
	}
	return nil
}

func finite(x float64) bool { return !math.IsNaN(x - x) }
