package kernel

import "math"

// The functions that apply evaluates at every element.
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
)

// applyPortable writes F(x[i]) to dst[i].
func applyPortable(op int, dst, x []float64, c *[9]float64) {
	dst = dst[:len(x)]
	switch op {
	case opPhi4Value:
		for i, p := range x {
			w := 1 - float64(p*p)
			dst[i] = float64(0.25*w) * w
		}
	case opPhi4Slope:
		for i, p := range x {
			dst[i] = phi4Slope(p)
		}
	case opPhi4Curvature:
		for i, p := range x {
			dst[i] = float64(float64(3*p)*p) - 1
		}
	case opPhi6Value:
		for i, p := range x {
			w := float64(p * (1 - float64(p*p)))
			dst[i] = float64(0.5*w) * w
		}
	case opPhi6Slope:
		for i, p := range x {
			q := float64(p * p)
			dst[i] = float64(p*(1-q)) * (1 - float64(3*q))
		}
	case opPhi6Curvature:
		for i, p := range x {
			q := float64(p * p)
			dst[i] = (1 - float64(12*q)) + float64(float64(15*q)*q)
		}
	case opSin:
		for i, p := range x {
			dst[i] = sin(p)
		}
	case opCos:
		for i, p := range x {
			dst[i] = cos(p)
		}
	case opSineValue:
		for i, p := range x {
			dst[i] = twiceSquare(sin(0.5 * p))
		}
	case opDoubleValue:
		for i, p := range x {
			dst[i] = twiceSquare(sin(0.5*p)) + float64(c[0]*twiceSquare(sin(0.25*p)))
		}
	case opDoubleSlope:
		for i, p := range x {
			dst[i] = sin(p) + float64(float64(0.5*c[0])*sin(0.5*p))
		}
	case opDoubleCurvature:
		for i, p := range x {
			dst[i] = cos(p) + float64(float64(0.25*c[0])*cos(0.5*p))
		}
	default:
		hornerPortable(dst, x, c[:op-opHorner+1])
	}
}

func hornerPortable(dst, x, c []float64) {
	top := len(c) - 1
	for i, p := range x {
		v := c[top]
		for k := top - 1; k >= 0; k-- {
			v = math.FMA(v, p, c[k])
		}
		dst[i] = v
	}
}

func phi4Slope(p float64) float64 { return float64(p * (float64(p*p) - 1)) }

// twiceSquare returns 2s².
func twiceSquare(s float64) float64 { return float64((s + s) * s) }
