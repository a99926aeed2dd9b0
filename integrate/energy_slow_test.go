//go:build slow

package integrate_test

import "testing"

// Hundreds of collisions with each other and with the ends.
func TestSlowEnergyOfLeapfrog(t *testing.T) {
	const steps = 100_000
	wantBoundedEnergy(t, 0.05, steps, steps)
}
