//go:build amd64 && !noasm

package nested

import "testing"

// Every level that this processor has must pass for its twin.
func TestKernelLevels(t *testing.T) {
	best := processor
	defer func() { processor = best }()
	for processor = plain; processor <= best; processor++ {
		TestKernelTwins(t)
	}
}
