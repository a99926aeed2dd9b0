package action

// Links is the order of accuracy of the elastic energy −½κφ_x², and with it the
// stencil of everything derived from it. The energy of one slice is
//
//	h Σ_d b_d Σ_i ½κ [(φ(i+d) − φ(i))/h]²
//
// over links of length d = 1 … Links/2, κ sampled in the middle of each link,
// with the weights b of the central second difference [Fornberg 1988, Math.
// Comp. 51, 699, table 1].
type Links int

// The orders of links.
const (
	Nearest Links = 2 // b = 1
	Fourth  Links = 4 // b = 4/3, −1/12
	Sixth   Links = 6 // b = 3/2, −3/20, 1/90
)

func (l Links) weights() []float64 {
	switch l {
	case Nearest:
		return []float64{1}
	case Fourth:
		return []float64{4. / 3, -1. / 12}
	case Sixth:
		return []float64{3. / 2, -3. / 20, 1. / 90}
	}
	return nil
}

// Mu returns h²/c² times the largest squared frequency of the links alone:
// 4, 16/3 and 272/45 for the orders 2, 4 and 6.
func (l Links) Mu() float64 {
	var mu float64
	for k, b := range l.weights() {
		if d := k + 1; d%2 == 1 { // sin²(dθ/2) at θ = π
			mu += 4 * b
		}
	}
	return mu
}
