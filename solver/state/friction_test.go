package state_test

import (
	"math"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/rheology"
)

// TestFriction: a cold crust bears τ_y in its upper part, less in shortening's opposite;
// the warning says where, and the exponent's kink is where n_c (τ_c/τ)^8 = 100 (derived).
func TestFriction(t *testing.T) {
	r := rock(t, 2800, 0, 0, "dry Columbia diabase Mackwell 1998")
	f := &rheology.Friction{Cohesion: 20e6, Angle: math.Pi / 6, PoreFluid: 0.4}
	r.Friction = f
	at := func(sense float64) *column.Column {
		return &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: 283}, Sense: sense,
			Layers: []column.Layer{{Name: "crust", Thickness: 40e3, Rock: r}},
			Base:   column.Base{Boundary: column.Rigid, Temperature: 1200, HasTemperature: true}}
	}
	for _, sense := range []float64{-1, 0, 1} {
		s := build(t, at(sense), 1e-15)
		top := s.Layers[0].Points[2]
		if !top.Yielding || !close(top.Stress, f.Yield(top.P, sense), 1e-6) || top.Exponent != rheology.MaxExponent {
			t.Errorf("sense %g: %+v, want yield at %g Pa", sense, top, f.Yield(top.P, sense))
		}
		if w := strings.Join(s.Warnings, "\n"); !strings.Contains(w, "crust: friction decides from 0.0 to") {
			t.Errorf("warnings:\n%s", w)
		}
		k := s.Kinks(0)
		if len(k) != 1 {
			t.Fatalf("kinks %g", k)
		}
		_, above := s.ViscosityAt(0, k[0]-1)
		_, below := s.ViscosityAt(0, k[0]+1)
		// a metre below, n has fallen by about 8 d ln τ_c/dz, 0.3 %
		if above != 100 || !(below < 100 && below > 98) {
			t.Errorf("n %g above the kink, %g below", above, below)
		}
	}
	c := at(0)
	c.Layers[0].Viscosity = column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1}
	if err := c.Validate(); err == nil || !strings.Contains(err.Error(), "friction belongs to creep laws") {
		t.Errorf("a number: %v", err)
	}
}
