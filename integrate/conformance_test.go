package integrate_test

import (
	"testing"

	"github.com/tenter-go/tenter/integrate"
	"github.com/tenter-go/tenter/integrate/integratetest"
)

func TestConformance(t *testing.T) {
	for _, tt := range []struct {
		method integrate.Method
		claims integratetest.Claims
	}{
		{integrate.Leapfrog{}, integratetest.Claims{Order: 2, Reversible: true, Symplectic: true, Losses: true, Pair: true, Tables: true}},
		{integrate.Yoshida4{}, integratetest.Claims{Order: 4, Reversible: true, Symplectic: true}},
		{integrate.RK4{}, integratetest.Claims{Order: 4, Losses: true}},
	} {
		t.Run(tt.method.Name(), func(t *testing.T) {
			if err := integratetest.Method(tt.method, tt.claims); err != nil {
				t.Error(err)
			}
		})
	}
}
