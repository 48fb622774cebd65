package state_test

import (
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/rheology"
)

// TestBreaks: cold rock without friction bears more than the pressure, and that is said;
// with friction it is not. Weakening by more melt than its law was fitted to is said too.
func TestBreaks(t *testing.T) {
	r := rock(t, 2800, 0, 0, "dry Columbia diabase Mackwell 1998")
	c := &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: 283},
		Layers: []column.Layer{{Name: "crust", Thickness: 40e3, Rock: r}},
		Base:   column.Base{Boundary: column.Rigid, Temperature: 1200, HasTemperature: true}}
	const breaks = "km creep alone would bear a differential stress above the pressure there"
	const weakened = "the melt fraction is above 0.12, up to which the weakening was fitted"
	said := func(what string) bool { return strings.Contains(strings.Join(build(t, c, 1e-15).Warnings, "\n"), what) }
	if !said(breaks) || said(weakened) {
		t.Error("without friction and melt")
	}
	c.Layers[0].Friction = &rheology.Friction{Cohesion: 20e6, Angle: 0.5}
	c.Layers[0].Melt = &column.Melt{Fraction: 0.2, Weakening: 30}
	if said(breaks) || !said(weakened) {
		t.Error("with friction and melt")
	}
	c.Layers[0].Melt.Fraction = 0.1
	if said(weakened) {
		t.Error("melt of 0.1")
	}
}
