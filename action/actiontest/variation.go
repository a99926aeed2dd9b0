package actiontest

import (
	"math"

	"github.com/tenter-go/tenter/action"
	"github.com/tenter-go/tenter/field"
)

// rounding is what two ways to the same sum of a few dozen terms may differ by,
// relative to the largest of them.
const rounding = 1e-12

// gradient holds ∂S/∂φ against differences of S, event by event.
func (e *trial) gradient() {
	given := e.of.Gradient(nil, e.h)
	moved := e.h.Clone()
	all := quotient{}
	for k, v := range e.h.Data {
		q := slopeOf(1, e.s.Step, func(dst []float64, eps float64) {
			moved.Data[k] = v + eps
			dst[0] = e.of.Value(moved)
		})
		moved.Data[k] = v
		all.value = append(all.value, q.value[0])
		all.spread = append(all.spread, q.spread[0])
		all.rounding = max(all.rounding, q.rounding)
	}
	e.judge("gradient", given.Data, all, "Value")
}

// secondVariation holds S″η against differences of the gradient, and the matrix
// against the product.
func (e *trial) secondVariation() {
	eta := e.direction()
	product := e.of.SecondVariation(nil, e.h, eta)
	q := e.along(eta, func(dst, h *field.History) { e.of.Gradient(dst, h) })
	e.judge("second variation", product.Data, q, "Gradient")

	m := e.of.SecondVariationMatrix(nil, e.h)
	e.equal("second variation matrix × direction", e.times(m, eta), product.Data, "the product that SecondVariation gives")
	e.symmetric(m)
}

// along measures the derivative of a history-valued function at h in the
// direction eta.
func (e *trial) along(eta *field.History, f func(dst, h *field.History)) quotient {
	moved, out := e.h.Clone(), field.NewHistory(e.of.Block(), e.of.Components())
	return slopeOf(len(e.h.Data), e.s.Step, func(dst []float64, eps float64) {
		for k, v := range e.h.Data {
			moved.Data[k] = v + eps*eta.Data[k]
		}
		f(out, moved)
		copy(dst, out.Data)
	})
}

func (e *trial) times(m *action.Matrix, x *field.History) []float64 {
	dst := make([]float64, len(x.Data))
	m.MulVec(dst, x.Data)
	return dst
}

// equal holds one list of values, an entry an event, against another.
func (e *trial) equal(kind string, got, want []float64, of string) {
	var scale float64
	for _, v := range want {
		scale = max(scale, math.Abs(v))
	}
	for k, v := range got {
		if off := math.Abs(v - want[k]); !(off <= rounding*scale) {
			e.found.add(kind, off, "%s, %s, is %.12g; want %.12g, %s", kind, e.place(k), v, want[k], of)
		}
	}
}

func (e *trial) symmetric(m *action.Matrix) {
	type entry struct{ r, c int }
	at := map[entry]float64{}
	var scale float64
	for r := range m.Rows() {
		columns, values := m.Row(r)
		for k, c := range columns {
			at[entry{r, c}] += values[k]
			scale = max(scale, math.Abs(values[k]))
		}
	}
	for p, v := range at {
		if w := at[entry{p.c, p.r}]; p.r < p.c && !(math.Abs(v-w) <= rounding*scale) {
			e.found.add("symmetry", math.Abs(v-w), "second variation matrix couples %s and %s by %.12g one way and %.12g the other; want it symmetric", e.place(p.r), e.place(p.c), v, w)
		}
	}
}

// residual holds the residual against the gradient per hk where both are
// defined, and against zero where there is no equation.
func (e *examination) residual() {
	b := e.Block()
	hk := b.Space.Step * b.Time.Step
	r := e.Residual(nil, e.h)
	want := e.Gradient(nil, e.h)
	conservative := e.Conservative() == nil
	for k := range want.Data {
		switch n, _, i := e.h.Place(k); {
		case !e.hasEquation(n, i):
			want.Data[k] = 0
		case conservative:
			want.Data[k] /= hk
		default:
			want.Data[k] = r.Data[k]
		}
	}
	e.equal("residual", r.Data, want.Data, "∂S/∂φ per hk where there is an equation, 0 where there is none")
}

func (e *examination) hasEquation(n, i int) bool {
	return e.Interior(n) && !(i == 0 && e.HeldLeft()) && !(i == e.Block().Sites()-1 && e.HeldRight())
}

// jacobian holds the Jacobian of the residual against its differences.
func (e *examination) jacobian() {
	eta := e.direction()
	m := e.ResidualJacobian(nil, e.h)
	q := e.along(eta, func(dst, h *field.History) { e.Residual(dst, h) })
	e.judge("residual Jacobian × direction", e.times(m, eta), q, "Residual")
}
