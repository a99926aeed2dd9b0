package nested_test

import (
	"fmt"

	"github.com/tenter-go/tenter/internal/nested"
)

// A chain of four unknowns with −1, 2, −1 in each row, the second difference, and
// a load on the first.
func Example() {
	p := nested.Pattern{
		N: 4, Rows: 1, Cols: 4,
		Row: []int32{0, 0, 0, 0},
		Col: []int32{0, 1, 2, 3},
		Ptr: []int{0, 1, 3, 5, 7},
		Adj: []int32{0, 0, 1, 1, 2, 2, 3},
	}
	s, err := nested.Analyse(p)
	if err != nil {
		fmt.Println(err)
		return
	}
	f, err := s.Cholesky([]float64{2, -1, 2, -1, 2, -1, 2}, 1)
	if err != nil {
		fmt.Println(err)
		return
	}
	x := []float64{5, 0, 0, 0}
	f.Solve(x, x)
	fmt.Printf("%.3f\n", x)
	// Output: [4.000 3.000 2.000 1.000]
}

// The wave operator on 2 × 2 intervals has one unknown and is zero: a standing
// wave fits both sides. LDLT finds the null vector.
func ExampleFactor_Nullity() {
	p := nested.Pattern{
		N: 1, Rows: 1, Cols: 1, Row: []int32{0}, Col: []int32{0},
		Ptr: []int{0, 1}, Adj: []int32{0},
	}
	s, err := nested.Analyse(p)
	if err != nil {
		fmt.Println(err)
		return
	}
	f, err := s.LDLT([]float64{0}, 1)
	if err != nil {
		fmt.Println(err)
		return
	}
	_, _, zero, known := f.Inertia()
	fmt.Println(f.Nullity(), zero, known)
	// Output: 1 1 false
}
