package field_test

import (
	"math"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/field"
)

func TestPlaneWaveEquation(t *testing.T) {
	for name, w := range map[string]field.Wave{
		"right":    {Amplitude: 0.7, Wavenumber: 1.1, Phase: 0.3, Mass: 1},
		"left":     {Amplitude: 0.7, Wavenumber: 1.1, Mass: 0.5, Left: true},
		"fast":     {Amplitude: 0.5, Wavenumber: 0.6, Mass: 1, Speed: 1.5},
		"massless": {Amplitude: 1, Wavenumber: 1.2},
		"uniform":  {Amplitude: 1, Mass: 1.3},
	} {
		t.Run(name, func(t *testing.T) {
			p := must(t)(field.PlaneWave(w))
			c := w.Speed
			if c == 0 {
				c = 1
			}
			checkEquation(t, p, c, func(u float64) float64 { return w.Mass * w.Mass * u }, nothing)
		})
	}
}

// The docstring's residual is exact, so that zero is to be had for m = 0.
func TestPacketEquation(t *testing.T) {
	for name, q := range map[string]field.Packet{
		"massive":  {Wave: field.Wave{Amplitude: 0.8, Wavenumber: 1.1, Phase: 0.3, Mass: 1}, At: 1, Width: 2.5},
		"left":     {Wave: field.Wave{Amplitude: 0.8, Wavenumber: 0.7, Mass: 0.4, Speed: 1.3, Left: true}, At: -1, Width: 3},
		"massless": {Wave: field.Wave{Amplitude: 1, Wavenumber: 1.2}, Width: 2},
		"pulse":    {Wave: field.Wave{Amplitude: 1, Left: true}, Width: 1.5},
	} {
		t.Run(name, func(t *testing.T) {
			p := must(t)(field.GaussianPacket(q))
			c := q.Speed
			if c == 0 {
				c = 1
			}
			vg := q.GroupVelocity()
			miss := func(x, t float64) float64 {
				value, _ := p(x, t)
				z := (x - q.At - vg*t) / q.Width
				return -(c*c - vg*vg) * (z*z - 1) / (q.Width * q.Width) * value
			}
			checkEquation(t, p, c, func(u float64) float64 { return q.Mass * q.Mass * u }, miss)
		})
	}
}

// d'Alembert: without mass a pulse keeps its shape and moves at ±c.
func TestPulseTravels(t *testing.T) {
	for _, left := range []bool{false, true} {
		p := must(t)(field.GaussianPacket(field.Packet{Wave: field.Wave{Amplitude: 2, Speed: 1.5, Left: left}, At: 1, Width: 0.5}))
		for _, at := range []float64{-3, 0, 7} {
			x := 1 + 1.5*at
			if left {
				x = 1 - 1.5*at
			}
			if got, _ := p(x, at); got != 2 {
				t.Errorf("left %v: crest %v at t = %g, want 2", left, got, at)
			}
			if got, _ := p(x+0.5, at); math.Abs(got-2/math.Sqrt(math.E)) > 1e-15 { // one rounding of exp
				t.Errorf("left %v: %v one width from the crest, want 2/√e", left, got)
			}
		}
	}
}

// dω/dk of ω = √(c²k² + m²) by a central difference of order 8.
func TestGroupVelocity(t *testing.T) {
	w := field.Wave{Wavenumber: 0.9, Mass: 1.2, Speed: 1.4}
	want := derivative(func(s float64) float64 {
		v := w
		v.Wavenumber += s
		return v.Frequency()
	}, 1./64)
	if got := w.GroupVelocity(); math.Abs(got-want) > 1e-13 { // ulp(ω)/d
		t.Errorf("group velocity %.15g, want %.15g", got, want)
	}
	w.Left = true
	if got := w.GroupVelocity(); math.Abs(got+want) > 1e-13 {
		t.Errorf("group velocity to the left %.15g, want %.15g", got, -want)
	}
}

func TestPacketErrors(t *testing.T) {
	good := field.Packet{Wave: field.Wave{Amplitude: 1, Wavenumber: 1, Mass: 1}, Width: 1}
	for _, tt := range []struct {
		want  string
		spoil func(*field.Packet)
	}{
		{"amplitude NaN", func(p *field.Packet) { p.Amplitude = math.NaN() }},
		{"wave number -2", func(p *field.Packet) { p.Wavenumber = -2 }},
		{"phase +Inf", func(p *field.Packet) { p.Phase = math.Inf(1) }},
		{"mass -1", func(p *field.Packet) { p.Mass = -1 }},
		{"limiting speed -3", func(p *field.Packet) { p.Speed = -3 }},
		{"x = NaN", func(p *field.Packet) { p.At = math.NaN() }},
		{"width 0", func(p *field.Packet) { p.Width = 0 }},
		{"width +Inf", func(p *field.Packet) { p.Width = math.Inf(1) }},
	} {
		p := good
		tt.spoil(&p)
		if _, err := field.GaussianPacket(p); err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("error %v does not say %q", err, tt.want)
		}
	}
	if _, err := field.PlaneWave(field.Wave{Wavenumber: -1}); err == nil || !strings.Contains(err.Error(), "plane wave with the wave number -1") {
		t.Errorf("plane wave: error %v does not name the wave number", err)
	}
}
