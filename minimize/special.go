package minimize

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
)

// passed reports whether there is a fold or a branch point between a and b.
func (c *continuation) passed(a, b *curvePoint) (fold, branching bool) {
	fold = a.slope*b.slope < 0
	if a.Known && b.Known {
		change := abs(b.Index - a.Index)
		if fold {
			return true, change != 1
		}
		return false, change != 0
	}
	return fold, a.sign != 0 && a.sign*b.sign < 0
}

// between returns the points that stand between a and b, step apart, in order:
// folds, branch points and those at parameters that were asked for.
func (c *continuation) between(ctx context.Context, a, b *curvePoint, step float64) ([]*curvePoint, error) {
	var list []*curvePoint
	fold, branching := c.passed(a, b)
	if fold || branching {
		kind := Branching
		if fold {
			kind = Fold
		}
		q, err := c.locate(ctx, a, b, step, kind)
		if err != nil {
			return nil, fmt.Errorf("a %v point could not be located: %w", kind, err)
		}
		list = append(list, q)
	}
	// Between a fold and its neighbours the parameter is monotonic.
	ends := append(append([]*curvePoint{a}, list...), b)
	for _, v := range slices.Concat(c.set.At, []float64{c.set.Low, c.set.High}) {
		for k := 1; k < len(ends); k++ {
			lo, hi := ends[k-1], ends[k]
			if !(lo.Parameter < v && v <= hi.Parameter || hi.Parameter <= v && v < lo.Parameter) {
				continue
			}
			f := (v - lo.Parameter) / (hi.Parameter - lo.Parameter)
			if lo.Kind == Fold || hi.Kind == Fold { // parabolic there
				if f = math.Sqrt(f); hi.Kind == Fold {
					f = 1 - math.Sqrt((hi.Parameter-v)/(hi.Parameter-lo.Parameter))
				}
			}
			x := slices.Clone(lo.x)
			for i := range x {
				x[i] += f * (hi.x[i] - lo.x[i])
			}
			q, err := c.settle(ctx, x, v, lo)
			if err != nil {
				return nil, fmt.Errorf("parameter %g could not be met: %w", v, err)
			}
			if q.slope*(hi.Parameter-lo.Parameter) < 0 {
				return nil, fmt.Errorf("parameter %g was met on the other side of a fold", v)
			}
			q.Kind, q.Arc = Asked, lo.Arc+f*(hi.Arc-lo.Arc)
			list = append(list, q)
		}
	}
	slices.SortStableFunc(list, func(p, q *curvePoint) int { return cmp.Compare(p.Arc, q.Arc) })
	// Nothing follows the end of the branch.
	for k, q := range list {
		if q.Kind == Asked && (q.Parameter == c.set.Low || q.Parameter == c.set.High) {
			return list[:k+1], nil
		}
	}
	return list, nil
}

// locate finds the fold or branch point between a and b, step apart, as the zero
// of a test function along the arc: the slope of the parameter, or the eigenvalue
// of least modulus of the second variation. The method is regula falsi in the
// Illinois variant [Dowell & Jarratt 1971, BIT 11, 168].
func (c *continuation) locate(ctx context.Context, a, b *curvePoint, step float64, kind PointKind) (*curvePoint, error) {
	test := func(q *curvePoint) (float64, error) { return q.slope, nil }
	if kind == Branching {
		test = func(q *curvePoint) (float64, error) {
			sigma, err := c.softest(q)
			if q.Known && a.Known && q.Index != a.Index || !(q.Known && a.Known) && q.sign != a.sign {
				sigma = -sigma
			}
			return sigma, err
		}
	}
	fa, err := test(a)
	if err != nil {
		return nil, err
	}
	fb, err := test(b)
	if err != nil {
		return nil, err
	}
	lo, hi := 0.0, step
	scale := max(math.Abs(fa), math.Abs(fb))
	best, least := b, math.Abs(fb)
	if math.Abs(fa) < least {
		best, least = a, math.Abs(fa)
	}
	side := 0
	const most = 60
	for range most {
		s := (lo*fb - hi*fa) / (fb - fa)
		if !(s > lo && s < hi) {
			s = 0.5 * (lo + hi)
		}
		x, p := a.along(s)
		q, err := c.correct(ctx, x, p, a)
		// At a branch point the bordered matrix is singular, too.
		hit := (*singularMatrix)(nil)
		if errors.As(err, &hit) && kind == Branching {
			if q == nil && least > 1e-6*scale {
				return nil, err
			}
			if q != nil {
				q.Arc, q.tangent, q.slope, q.Slope = a.Arc+s, a.tangent, a.slope, a.slope
				best = q
			}
			break
		}
		if err != nil {
			return nil, err
		}
		q.Arc = a.Arc + s
		f, err := test(q)
		if err != nil {
			return nil, err
		}
		if math.Abs(f) < least {
			best, least = q, math.Abs(f)
		}
		if f == 0 || math.Abs(f) <= 1e-9*scale || hi-lo <= 1e-12*step {
			break
		}
		if f*fa > 0 {
			lo, fa = s, f
			if side == -1 {
				fb *= 0.5
			}
			side = -1
		} else {
			hi, fb = s, f
			if side == 1 {
				fa *= 0.5
			}
			side = 1
		}
	}
	special := *best
	special.Kind, special.Index, special.Known = kind, 0, false
	null := special.tangent
	if kind == Branching {
		if null, err = c.nullVector(&special); err != nil {
			return nil, err
		}
	}
	var top float64
	for _, v := range null {
		if math.Abs(v) > math.Abs(top) {
			top = v
		}
	}
	unit := make([]float64, len(null))
	for k, v := range null {
		unit[k] = v / top
	}
	special.Null = special.History.Clone()
	c.first.free.Expand(special.Null, unit)
	return &special, nil
}

// softest returns the modulus of the eigenvalue of the second variation that is
// nearest to zero.
func (c *continuation) softest(q *curvePoint) (float64, error) {
	sigma, _, err := c.smallest(q)
	return sigma, err
}

// nullVector returns its eigenvector.
func (c *continuation) nullVector(q *curvePoint) ([]float64, error) {
	_, v, err := c.smallest(q)
	return v, err
}

func (c *continuation) smallest(q *curvePoint) (sigma float64, vector []float64, err error) {
	if _, err := c.look(q.x, q.Parameter); err != nil {
		return 0, nil, err
	}
	if c.plain == nil {
		if c.plain, err = newEdged(c.grid, 0); err != nil {
			return 0, nil, err
		}
	}
	c.rep.Factorisations++
	// A matrix that is singular to rounding has a factor all the same.
	if err := c.plain.symmetricOnly(c.hess.values); err != nil {
		return 0, nil, err
	}
	sigma, vector, _ = c.plain.factor.Smallest(20)
	return sigma, vector, nil
}
