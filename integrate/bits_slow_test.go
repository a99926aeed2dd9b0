//go:build slow

package integrate

import "testing"

// allSizes are all numbers of sites up to 70.
func allSizes(int) []int {
	var n []int
	for sites := 2; sites <= 70; sites++ {
		n = append(n, sites)
	}
	return n
}

func TestSlowBlockedBits(t *testing.T) { testBlockedBits(t, allSizes) }

func TestSlowPathBits(t *testing.T) { testPathBits(t, "TestSlowPathBits", allSizes) }
