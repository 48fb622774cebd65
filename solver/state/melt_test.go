package state_test

import (
	"math"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/state"
)

// meltingColumn is one creeping layer of 3000 kg/m³ under a geotherm of 15 K/km from
// 300 K; its melt begins at 900 K + 100 K/GPa and would end 400 K above.
func meltingColumn(t testing.TB, weakening float64) *column.Column {
	r := rock(t, 3000, 0, 0, "dry eclogite Zhang 2007")
	r.Density = column.Uniform(3000)
	r.Melt = &column.Melt{Solidus: &column.Curve{Surface: 900, Slope: 1e-7}, Liquidus: &column.Curve{Surface: 1300, Slope: 1e-7}, Weakening: weakening}
	return &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: 300},
		Geotherm: []column.Point{{Depth: 0, Temperature: 300}, {Depth: 60e3, Temperature: 1200}},
		Layers:   []column.Layer{{Name: "root", Thickness: 60e3, Root: true, Rock: r}},
		Base:     column.Base{Boundary: column.Rigid}}
}

// TestMeltKink: the solidus crosses the geotherm where 300 + 0.015 z = 900 + 1e-7 ρ g z.
// The viscosity is that without melt above, exp(−αφ/n) of it below.
func TestMeltKink(t *testing.T) {
	const alpha = 30.0
	solidus := 600 / (0.015 - 1e-7*3000*9.81)
	dry, wet := build(t, meltingColumn(t, 0), 1e-15), build(t, meltingColumn(t, alpha), 1e-15)
	if k := wet.Kinks(0); len(k) != 1 || !close(k[0], solidus, 1e-12) {
		t.Fatalf("kinks %v, want %g", k, solidus)
	}
	for _, z := range []float64{20e3, solidus - 1, solidus, solidus + 10, 55e3, 60e3} {
		T, P := 300+0.015*z, 3000*9.81*z
		phi := math.Max(0, (T-900-1e-7*P)/400)
		a, n := dry.ViscosityAt(0, z)
		b, m := wet.ViscosityAt(0, z)
		if want := a * math.Exp(-alpha*phi/n); !close(b, want, 1e-9) || !close(m, n, 1e-12) {
			t.Errorf("%g m: %g Pa s with φ = %g, want %g; exponents %g, %g", z, b, phi, want, m, n)
		}
	}
	// A density that melts has the kink as well, and a jump of ∂ρ/∂T there.
	c := meltingColumn(t, 0)
	c.Layers[0].Melt.Density = 2600
	d := column.Molten{Solid: column.Uniform(3000), Melt: c.Layers[0].Melt}
	c.Layers[0].Density, c.Layers[0].Melt = d, nil
	s := build(t, c, 1e-15)
	// A step of the pressure straddles the kink: 250 m × 1.5e-2 kg/m⁴ of 1.5e8 kg/m², 1e-8.
	if k := s.Kinks(0); len(k) != 1 || !close(k[0], solidus, 1e-8) {
		t.Errorf("kinks %v, want %g", k, solidus)
	}
	perKelvin := func(z float64) float64 {
		T, _ := s.TemperatureAt(0, z)
		return d.PerKelvin(T, s.PressureAt(0, z), 0)
	}
	if above, below := perKelvin(solidus-1), perKelvin(solidus+1); above != 0 || !close(below, -1, 1e-12) {
		t.Errorf("∂ρ/∂T %g above and %g below", above, below)
	}
}

func TestMeltWarnings(t *testing.T) {
	const beyond = "the melt fraction is above 0.25, and beyond about a quarter of melt a rock no longer is one with melt in it (common practice)"
	c := meltingColumn(t, 30)
	c.Layers[0].Melt.Liquidus.Surface = 1000 // 100 K above: φ = 0.25 where 0.012057 z = 625
	all := strings.Join(build(t, c, 1e-15).Warnings, "\n")
	for _, want := range []string{"root: from 52.0 to 60.0 km " + beyond, "root: the melt from 50.0 to 60.0 km has no density and leaves the rock's as it is"} {
		if strings.Count(all, want) != 1 {
			t.Errorf("no %q in\n%s", want, all)
		}
	}
	c.Layers[0].Melt = &column.Melt{Fraction: 0.3, Density: 2700}
	if all := strings.Join(build(t, c, 1e-15).Warnings, "\n"); !strings.Contains(all, "root: from 0.0 to 60.0 km "+beyond) || strings.Contains(all, "no density") {
		t.Error(all)
	}
	c.Layers[0].Melt.Fraction = 0.25
	if all := strings.Join(build(t, c, 1e-15).Warnings, "\n"); strings.Contains(all, "quarter") {
		t.Error(all)
	}
}

func TestMeltErrors(t *testing.T) {
	for want, spoil := range map[string]func(*column.Column){
		"state: root at ": func(c *column.Column) { c.Layers[0].Melt.Liquidus = &column.Curve{Surface: 1000} },
		"is not below the liquidus, 726.85 degC, at P =": func(c *column.Column) { c.Layers[0].Melt.Liquidus = &column.Curve{Surface: 1000} },
		"column: root: its solidus needs a temperature":  func(c *column.Column) { c.Geotherm = nil; c.Layers[0].Viscosity.Creep = nil },
		"column: root: melt: fraction 2, must be":        func(c *column.Column) { c.Layers[0].Melt = &column.Melt{Fraction: 2} },
	} {
		c := meltingColumn(t, 30)
		c.Layers[0].Melt.Solidus.Slope = 1e-7 * 2 // 1000 K at 0.5 GPa
		spoil(c)
		if _, err := state.New(c, 1e-15); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%v, want %q", err, want)
		}
	}
}
