package minimize

import (
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// residualCurvature returns weight·Σ_E r(E) ∂²r(E) over the given rows, what the
// second derivative of the cost has beside JᵀJ; nil where the residual or its
// curvature is zero, as for a linear equation. Only the potential is not linear,
// so that the values of one event are coupled: component a·C + b of the result
// couples the components a and b of C.
//
// Since V‴ is symmetric the sum is the derivative of ∂r/∂φ along r, which is
// taken by differences of the fourth order. They err by 1e-12 of V″ and 3e-14 of
// the seventh derivative.
func residualCurvature(s *action.Discrete, h, residual *field.History, rows []int32, weight float64) *field.History {
	along := field.NewHistory(h.Block, h.Components)
	for _, e := range rows {
		along.Data[e] = residual.Data[e]
	}
	size := along.MaxAbs()
	if size == 0 {
		return nil
	}
	const reach = 1e-3 // in φ, of the nearer differences
	eps := reach / size
	sites := h.Block.Sites()
	bent := field.NewHistory(h.Block, h.Components*h.Components)
	moved := h.Clone()
	var jac *action.Matrix
	for _, p := range [...][2]float64{{1, 8}, {-1, -8}, {2, -1}, {-2, 1}} {
		for e, v := range along.Data {
			moved.Data[e] = h.Data[e] + p[0]*eps*v
		}
		jac = s.ResidualJacobian(jac, moved)
		for _, e := range rows {
			n, a, i := h.Place(int(e))
			columns, values := jac.Row(int(e))
			for k, f := range columns {
				if m, b, j := f/(h.Components*sites), f/sites%h.Components, f%sites; m == n && j == i {
					bent.Data[bent.Index(n, a*h.Components+b, i)] += weight * p[1] / (12 * eps) * values[k]
				}
			}
		}
	}
	// The terms that do not depend on φ leave their rounding behind.
	var noise float64
	for _, v := range jac.Value {
		noise = max(noise, math.Abs(v))
	}
	if bent.MaxAbs() <= 4*0x1p-52*noise*weight/eps {
		return nil
	}
	return bent
}

// bend adds what residualCurvature has along the direction v to out.
func (k *curvature) bend(out []float64, v *field.History) {
	if k.bent == nil {
		return
	}
	for e := range out {
		n, a, i := v.Place(e)
		for b := range v.Components {
			out[e] += k.bent.At(n, a*v.Components+b, i) * v.At(n, b, i)
		}
	}
}

// addBent adds what residualCurvature has to the values of a matrix over the
// unknowns.
func (k *curvature) addBent(values []float64, place func(u, v int) int) {
	if k.bent == nil {
		return
	}
	for e := range k.shape.Data {
		n, a, i := k.shape.Place(e)
		u, _ := k.free.At(e)
		for b := range k.shape.Components {
			v, _ := k.free.At(k.shape.Index(n, b, i))
			if bend := k.bent.At(n, a*k.shape.Components+b, i); bend != 0 && v >= 0 && u >= v {
				values[place(u, v)] += bend
			}
		}
	}
}
