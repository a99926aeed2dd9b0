package kernel

// A Potential is a function V(φ) of the catalogue with its first and second
// derivative. The zero value is V = 0.
type Potential struct {
	kind   kind
	degree int // of V, for quadratic and polynomial
	// Coefficients of V, V′ and V″; those of the sine family are η.
	value, slope, curvature [9]float64
}

type kind int

const (
	none kind = iota
	quadratic
	polynomial
	phi4
	phi6
	sine
	doubleSine
)

// MaxDegree is the highest degree of a Polynomial.
const MaxDegree = 8

// Quadratic is V = ½m²φ²; m2 is m², of either sign.
func Quadratic(m2 float64) Potential {
	p, _ := Polynomial([]float64{0, 0, 0.5 * m2})
	p.kind = quadratic
	return p
}

// Polynomial is V = Σ c[k]φᵏ. It reports false if its degree is above
// [MaxDegree].
func Polynomial(c []float64) (Potential, bool) {
	for len(c) > 0 && c[len(c)-1] == 0 {
		c = c[:len(c)-1]
	}
	if len(c) > MaxDegree+1 {
		return Potential{}, false
	}
	p := Potential{kind: polynomial, degree: max(len(c)-1, 0)}
	for k, v := range c {
		p.value[k] = v
		if k >= 1 {
			p.slope[k-1] = float64(k) * v
		}
		if k >= 2 {
			p.curvature[k-2] = float64(k*(k-1)) * v
		}
	}
	return p, true
}

// Phi4 is V = ¼(1 − φ²)².
func Phi4() Potential { return Potential{kind: phi4} }

// Phi6 is V = ½φ²(1 − φ²)².
func Phi6() Potential { return Potential{kind: phi6} }

// Sine is V = 1 − cos φ, found as 2 sin²½φ, which keeps its digits near the
// vacua.
func Sine() Potential { return Potential{kind: sine} }

// DoubleSine is V = (1 − cos φ) + η(1 − cos ½φ).
func DoubleSine(eta float64) Potential {
	c := [9]float64{eta}
	return Potential{kind: doubleSine, value: c, slope: c, curvature: c}
}

// Value writes V(phi[i]) to dst[i]. dst may be phi.
func (p *Potential) Value(dst, phi []float64) {
	var op int
	switch p.kind {
	case none:
		fill(dst[:len(phi)], 0)
		return
	case quadratic, polynomial:
		horner(p.degree, dst, phi, &p.value)
		return
	case phi4:
		op = opPhi4Value
	case phi6:
		op = opPhi6Value
	case sine:
		op = opSineValue
	case doubleSine:
		op = opDoubleValue
	}
	apply(op, dst, phi, &p.value)
}

// Slope writes V′(phi[i]) to dst[i]. dst may be phi.
func (p *Potential) Slope(dst, phi []float64) {
	var op int
	switch p.kind {
	case none:
		fill(dst[:len(phi)], 0)
		return
	case quadratic, polynomial:
		horner(p.degree-1, dst, phi, &p.slope)
		return
	case phi4:
		op = opPhi4Slope
	case phi6:
		op = opPhi6Slope
	case sine:
		op = opSin
	case doubleSine:
		op = opDoubleSlope
	}
	apply(op, dst, phi, &p.slope)
}

// Curvature writes V″(phi[i]) to dst[i]. dst may be phi.
func (p *Potential) Curvature(dst, phi []float64) {
	var op int
	switch p.kind {
	case none:
		fill(dst[:len(phi)], 0)
		return
	case quadratic, polynomial:
		horner(p.degree-2, dst, phi, &p.curvature)
		return
	case phi4:
		op = opPhi4Curvature
	case phi6:
		op = opPhi6Curvature
	case sine:
		op = opCos
	case doubleSine:
		op = opDoubleCurvature
	}
	apply(op, dst, phi, &p.curvature)
}

// horner writes Σ c[k]x[i]ᵏ to dst[i] for a polynomial of a degree, −1 or less
// for 0.
func horner(degree int, dst, x []float64, c *[9]float64) {
	if degree <= 0 {
		fill(dst[:len(x)], c[0])
		return
	}
	apply(opHorner+degree, dst, x, c)
}

func fill(dst []float64, v float64) {
	for i := range dst {
		dst[i] = v
	}
}
