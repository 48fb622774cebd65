package state_test

import (
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/state"
)

func tabulated(t *testing.T, hottest float64) *column.Column {
	t.Helper()
	tab, err := column.NewTable([]column.TableRow{
		{T: 273.15, P: 0, Density: 3350}, {T: hottest, P: 0, Density: 3250},
		{T: 273.15, P: 4e9, Density: 3450}, {T: hottest, P: 4e9, Density: 3350}})
	if err != nil {
		t.Fatal(err)
	}
	r := column.Rock{Density: tab, Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1}, Conductivity: column.Conductivity{Reference: 2.5}, HeatCapacity: 1000}
	return &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: 283.15},
		Layers: []column.Layer{{Name: "mantle", Thickness: 60e3, Rock: r}},
		Base:   column.Base{Boundary: column.HalfSpace, Temperature: 1473.15, HasTemperature: true, Rock: r}}
}

// TestTableRange: what lies outside a table is an error with layer, depth and numbers;
// a table that ends at the basal temperature covers it.
func TestTableRange(t *testing.T) {
	s := build(t, tabulated(t, 1473.15), 0)
	if got := s.Base.Density; !(got > 3250 && got < 3350) || len(s.Warnings) != 0 {
		t.Errorf("density at the base %g, warnings %v", got, s.Warnings)
	}
	_, err := state.New(tabulated(t, 1273.15), 0)
	for _, want := range []string{"state: mantle at ", " m: outside the table of densities: T = 10", "degC, P = 1.", "it covers 0 to 1000 degC and 0 to 4 GPa"} {
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%v, want %q", err, want)
		}
	}
	for _, b := range []column.Boundary{column.HalfSpace, column.Inviscid} {
		c := tabulated(t, 1273.15)
		c.Base.Boundary, c.Layers[0].Density = b, column.Uniform(3300)
		if _, err := state.New(c, 0); err == nil || !strings.Contains(err.Error(), "state: base at 60000 m: outside the table of densities: T = 1200 degC") {
			t.Errorf("%v: %v", b, err)
		}
	}
}

// TestTableKinks: the depths at which a straight geotherm and the pressure pass the
// grid's inner lines. 1000 K lies at (1000 − 283.15)/1190 of 60 km; 1 GPa of about
// 3330 kg/m³ at 30.6 km. A layer without a table has none.
func TestTableKinks(t *testing.T) {
	var rows []column.TableRow
	for i, T := range []float64{273.15, 1000, 1473.15} {
		for j, P := range []float64{0, 1e9, 4e9} {
			rows = append(rows, column.TableRow{T: T, P: P, Density: 3300 - 40*float64(i) + 50*float64(j)})
		}
	}
	tab, err := column.NewTable(rows)
	if err != nil {
		t.Fatal(err)
	}
	c := tabulated(t, 1473.15)
	c.Layers[0].Density = tab
	s := build(t, c, 0)
	k := s.Kinks(0)
	if want := (1000 - 283.15) / 1190 * 60e3; len(k) != 2 || !close(k[1], want, 1e-10) || !close(k[0], 30.6e3, 0.02) || !close(s.PressureAt(0, k[0]), 1e9, 1e-12) {
		t.Errorf("kinks %v, want two, the second at %g m", k, want)
	}
	c.Layers[0].Density = column.Uniform(3300)
	if k := build(t, c, 0).Kinks(0); len(k) != 0 {
		t.Errorf("kinks %v", k)
	}
	// Two equal layers whose contact lies on a line of the grid: no element of no size.
	c = tabulated(t, 1473.15)
	c.Layers[0].Density, c.Layers[0].Thickness = tab, (1000-283.15)/1190*60e3
	low := c.Layers[0]
	low.Name, low.Thickness = "lower", 60e3-low.Thickness
	c.Layers = append(c.Layers, low)
	s = build(t, c, 0)
	if len(s.Kinks(0)) != 1 || len(s.Kinks(1)) != 0 {
		t.Errorf("kinks %v and %v", s.Kinks(0), s.Kinks(1))
	}
}

// TestModesWarn: minerals whose numbers are recalled are said to be so, once.
func TestModesWarn(t *testing.T) {
	m, err := column.NewModes([]column.Mode{{Mineral: "forsterite", Share: 0.7}, {Mineral: "enstatite", Share: 0.3}}, false)
	if err != nil {
		t.Fatal(err)
	}
	c := tabulated(t, 1473.15)
	c.Layers[0].Density, c.Base.Density = m, m
	s := build(t, c, 0)
	if w := strings.Join(s.Warnings, "\n"); len(s.Warnings) != 1 || !strings.Contains(w, "densities from mineral modes rest on") || !strings.Contains(w, "(in mantle, the base)") {
		t.Error(w)
	}
	if s.Jumps[1] != 0 || s.GradientAt(0, 3e4) != 0 { // one composition
		t.Errorf("jump %g, gradient %g", s.Jumps[1], s.GradientAt(0, 3e4))
	}
}
