package field_test

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/field"
)

var phi6Sectors = [][2]int{{0, 1}, {1, 0}, {-1, 0}, {0, -1}}

func TestPhi6Kinks(t *testing.T) {
	v := func(u float64) float64 { w := u * (1 - u*u); return w * w / 2 }
	force := func(u float64) float64 { return u * (1 - u*u) * (1 - 3*u*u) }
	for _, s := range phi6Sectors {
		t.Run(fmt.Sprint(s), func(t *testing.T) {
			p := must(t)(field.Phi6Kink(s[0], s[1], field.Moving{At: 0.5, Speed: 0.6}))
			checkEquation(t, p, 1, force, nothing)
			for _, end := range []struct{ x, want float64 }{{-30, float64(s[0])}, {30, float64(s[1])}} {
				// The tails are e^(−γ·30) from the vacuum at worst.
				if got, _ := p(end.x, 0); math.Abs(got-end.want) > 1e-15 {
					t.Errorf("value %v at x = %g, want %v", got, end.x, end.want)
				}
			}
			// phi6_kink_mass ¼: ∫√(2V)dφ from 0 to 1, elementary; γ = 5/4. Slopes are
			// good to 1e-13 over some hundred sites.
			if e := energyOf(p, 0, 40, v); math.Abs(e-0.25*1.25) > 1e-11 {
				t.Errorf("energy %.15g, want γ/4 = %.15g", e, 0.25*1.25)
			}
		})
	}
}

func TestPhi6Errors(t *testing.T) {
	for _, s := range [][2]int{{0, 0}, {-1, 1}, {1, 1}, {1, -1}, {0, 2}, {-2, 0}} {
		_, err := field.Phi6Kink(s[0], s[1], field.Moving{})
		if want := fmt.Sprintf("(%d, %d)", s[0], s[1]); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("sector %v: error %v does not name it", s, err)
		}
	}
	if _, err := field.Phi6Kink(0, 1, field.Moving{Speed: -1}); err == nil || !strings.Contains(err.Error(), "speed -1") {
		t.Errorf("speed -1: error %v does not name it", err)
	}
}
