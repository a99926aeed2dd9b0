package field

import (
	"math"
	"strings"
	"testing"
)

// The rate is the derivative of the value (central difference, error δ²/6 of a
// third derivative of order 1/w³), the lump is round and has the stated values.
func TestLump(t *testing.T) {
	p, err := NewLump(Lump{Outside: -1, Inside: 1, X: 0.3, T: -0.2, Radius: 5, Wall: 0.5})
	if err != nil {
		t.Fatal(err)
	}
	value := func(x, t float64) float64 { v, _ := p(x, t); return v }
	if v, want := value(0.3, -0.2), -1+2*math.Tanh(5/0.5); math.Abs(v-want) > 4e-16 { // rounding of two sums
		t.Errorf("centre: %v, want %v", v, want)
	}
	if v := value(30, 0); v != -1 {
		t.Errorf("far away: %v, want −1", v)
	}
	if v := value(0.3+5*0.6, -0.2+5*0.8); math.Abs(v) > 1e-8 { // 1 − tanh(2R/w)
		t.Errorf("on the wall: %v, want 0", v)
	}
	const d = 1e-4
	for _, at := range [][2]float64{{0.3, -0.2}, {3.3, 3.5}, {-4, 1.5}} {
		_, rate := p(at[0], at[1])
		if want := (value(at[0], at[1]+d) - value(at[0], at[1]-d)) / (2 * d); math.Abs(rate-want) > 1e-6 {
			t.Errorf("rate at %v: %v, want %v", at, rate, want)
		}
	}
	for _, tc := range []struct {
		l    Lump
		says string
	}{
		{Lump{Inside: math.NaN(), Wall: 1}, "inside = NaN"},
		{Lump{X: math.Inf(1), Wall: 1}, "centre at x = +Inf"},
		{Lump{Radius: -1, Wall: 1}, "radius -1"},
		{Lump{Radius: 1}, "thickness 0"},
	} {
		if _, err := NewLump(tc.l); err == nil || !strings.Contains(err.Error(), tc.says) {
			t.Errorf("%+v: %v, want %q", tc.l, err, tc.says)
		}
	}
}
