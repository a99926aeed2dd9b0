package action

// Window returns the action of the same density on the slices n0 ≤ n < n1
// alone. The residual of an interior slice of the window is that of the whole
// block. Tables are cut to the rows of the window; a block that is periodic in
// time becomes a free one. It is an error if fewer than two slices are asked for
// or they leave the block.
func (s *Discrete) Window(n0, n1 int) (*Discrete, error) {
	b, err := s.block.Window(n0, n1, 0, s.block.Sites())
	if err != nil {
		return nil, err
	}
	w := s.wave
	sites, links := s.block.Sites(), s.block.Space.Links()
	for _, t := range []struct {
		coef          *Coefficient
		columns, rows int
	}{
		{&w.Rho, sites, n1 - n0 - 1}, {&w.Kappa, links, n1 - n0}, {&w.Sigma, sites, n1 - n0}, {&w.Source, sites, n1 - n0},
		{&w.Alpha, sites, n1 - n0}, {&w.Beta, links, n1 - n0}, {&w.LeftFlux, 1, n1 - n0}, {&w.RightFlux, 1, n1 - n0},
	} {
		*t.coef = cutRows(*t.coef, t.columns, n0, t.rows)
	}
	return New(b, w)
}

// cutRows returns the coefficient with its tables cut to so many rows from the
// given one.
func cutRows(c Coefficient, columns, from, rows int) Coefficient {
	switch c := c.(type) {
	case Table:
		if len(c) == columns { // one row for all times
			return c
		}
		return c[from*columns : (from+rows)*columns]
	case PerComponent:
		cut := make(PerComponent, len(c))
		for k, q := range c {
			cut[k] = cutRows(q, columns, from, rows)
		}
		return cut
	}
	return c
}
