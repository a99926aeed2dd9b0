package figure

import (
	"fmt"
	"math"
)

// A range wider than tooWide, or narrower than tooClose of its largest value,
// cannot be labelled.
const (
	tooWide  = 1e300
	tooClose = 1e-11
)

// spread returns the range from low to high, widened if it is too narrow to be
// labelled.
func spread(low, high float64) (float64, float64, error) {
	largest := max(math.Abs(low), math.Abs(high))
	if !(largest < tooWide) {
		return 0, 0, fmt.Errorf("values from %g to %g; want values below %g", low, high, tooWide)
	}
	if largest < 1/tooWide {
		return -1, 1, nil
	}
	if high-low < tooClose*largest {
		return low - largest/2, high + largest/2, nil
	}
	return low, high, nil
}
