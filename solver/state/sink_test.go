package state_test

import (
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/state"
)

func modesOf(t testing.TB, shares ...column.Mode) *column.Modes {
	t.Helper()
	m, err := column.NewModes(shares, false)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// stacked is a column of 20 km layers of these densities over a base of the last one, at
// a geotherm of 15 K/km.
func stacked(base column.Boundary, densities ...column.Density) *column.Column {
	c := &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: 300}, Base: column.Base{Boundary: base, HasTemperature: true}}
	for i, d := range densities {
		r := column.Rock{Density: d, Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1}, Conductivity: column.Conductivity{Reference: 2.5}, HeatCapacity: 1000}
		c.Layers = append(c.Layers, column.Layer{Name: string(rune('a' + i)), Thickness: 20e3, Rock: r})
		c.Base.Rock = r
	}
	c.Base.Temperature = 300 + 300*float64(len(densities))
	return c
}

func sinking(t testing.TB, c *column.Column) (*state.State, []state.Sinking) {
	t.Helper()
	s := build(t, c, 0)
	k, err := s.Sinking()
	if err != nil {
		t.Fatal(err)
	}
	return s, k
}

// TestSinkingReaction: numbers, where 1/ρ_below = (1 − X)/ρ_A + X/ρ_B by hand; and the
// same with a fraction of melt that stays.
func TestSinkingReaction(t *testing.T) {
	r := column.Reaction{Protolith: column.Uniform(2900), Product: column.Uniform(3500), Extent: 0.25, Cap: 0.8}
	c := stacked(column.HalfSpace, column.Linear{Top: 2700, Bottom: 2800}, r, column.Linear{Top: 3300, Bottom: 3400})
	c.Base.HasTemperature = false // numbers need none
	_, all := sinking(t, c)
	top, k := all[0], all[1]
	if len(top.Needs) != 0 || top.Density != 2750 || !close(top.Below, 1/(0.75/2900+0.25/3500), 1e-15) || top.T != 0 || top.Depth != 10e3 {
		t.Errorf("%+v", top)
	}
	if k.Contrast != k.Density-3300 || !math.IsInf(k.BulkModulus, 1) || k.Expansivity != 0 || len(k.Needs) != 1 {
		t.Fatalf("%+v", k)
	}
	want := (1/2900.0 - 1/3300.0) / (1/2900.0 - 1/3500.0)
	if n := k.Needs[0]; n.What != "reaction extent" || n.Now != 0.25 || n.From != 0 || n.To != 1 || !n.Found || !n.Rises || !close(n.At, want, 1e-12) {
		t.Errorf("%+v, want %.15g", n, want)
	}
	melt := &column.Melt{Fraction: 0.1, Density: 2700}
	c.Layers[1].Density, c.Layers[1].Melt = column.Molten{Solid: r, Melt: melt}, melt
	_, all = sinking(t, c)
	solid := (3300 - 0.1*2700) / 0.9 // what the solid must have
	want = (1/2900.0 - 1/solid) / (1/2900.0 - 1/3500.0)
	if n := all[1].Needs; len(n) != 2 || !close(n[0].At, want, 1e-12) || n[1].What != "melt fraction" || n[1].Now != 0.1 || n[1].Rises || n[1].Found {
		t.Errorf("%+v, want %.15g and no fraction that makes a light rock sink", n, want)
	}
	c.Layers[1].Density = column.Molten{Solid: column.Varying{Of: r, Depth: []float64{0, 0.5, 1}, Place: []float64{0, 0.7, 1}, Extent: []float64{0.1, 0.4, 0.5}}, Melt: melt}
	_, all = sinking(t, c)
	if n := all[1].Needs; len(n) != 2 || n[0].What != "reaction extent" || n[0].Now != 0.4 || !close(n[0].At, want, 1e-12) || n[1].What != "melt fraction" {
		t.Errorf("reacted share by depth: %+v, want %.15g", n, want)
	}
	r.Extent = 0.8
	c.Layers[1].Density = column.Molten{Solid: r, Melt: melt}
	_, all = sinking(t, c)
	rho := 1 / (0.2/2900 + 0.8/3500)
	if n := all[1].Needs[1]; !n.Found || !close(n.At, (rho-3300)/(rho-2700), 1e-12) {
		t.Errorf("%+v, want %g", n, (rho-3300)/(rho-2700))
	}
	r.Product = column.Uniform(3200)
	c.Layers[1].Density = r
	_, all = sinking(t, c)
	if n := all[1].Needs[0]; n.Found || n.At != 0 || !n.Rises {
		t.Errorf("a product lighter than what lies below: %+v", n)
	}
}

// TestSinkingGarnet: what the volumes of the minerals at that T and P say: with garnet
// G and other minerals R, ρ = [gρ_G + (1 − g)ρ_R]/[gv_G + (1 − g)v_R], ρ at the reference
// and v the volume there to that at T and P.
func TestSinkingGarnet(t *testing.T) {
	root := modesOf(t, column.Mode{Mineral: "diopside", Share: 0.8}, column.Mode{Mineral: "pyrope", Share: 0.12}, column.Mode{Mineral: "almandine", Share: 0.08})
	below := modesOf(t, column.Mode{Mineral: "forsterite", Share: 0.9}, column.Mode{Mineral: "fayalite", Share: 0.1})
	s, all := sinking(t, stacked(column.HalfSpace, root, below))
	k := all[0]
	di, _ := column.FindMineral("diopside")
	garnet := modesOf(t, column.Mode{Mineral: "pyrope", Share: 0.6}, column.Mode{Mineral: "almandine", Share: 0.4})
	target := below.At(k.T, k.P, 0)
	term := func(d column.Density) float64 { at0 := d.At(298, 0, 0); return at0 - target*at0/d.At(k.T, k.P, 0) }
	a, b := term(garnet), term(modesOf(t, column.Mode{Mineral: di.Name, Share: 1}))
	want := b / (b - a)
	n := k.Needs
	if len(n) != 1 || n[0].What != "garnet share" || !close(n[0].Now, 0.2, 1e-14) || !n[0].Found || !n[0].Rises || !close(n[0].At, want, 1e-12) {
		t.Errorf("%+v, want %.15g", n, want)
	}
	if k.T != 450 || !close(k.P, s.PressureAt(0, 10e3), 1e-15) || !close(k.Expansivity, -root.PerKelvin(k.T, k.P, 0)/k.Density, 1e-15) || !(k.BulkModulus > 9e10 && k.BulkModulus < 1.5e11) {
		t.Errorf("%+v", k)
	}
	if last := all[1]; !last.HasBelow || last.Contrast != 0 || len(last.Needs) != 0 { // no garnet in it
		t.Errorf("%+v", last)
	}
}

// TestSinkingNothingBelow: over a wall, and over a table that does not reach the T and P
// of the layer above it, there is no contrast and no need.
func TestSinkingNothingBelow(t *testing.T) {
	tab, err := column.NewTable([]column.TableRow{
		{T: 590, P: 0.5e9, Density: 3350}, {T: 1000, P: 0.5e9, Density: 3250}, {T: 590, P: 4e9, Density: 3450}, {T: 1000, P: 4e9, Density: 3350}})
	if err != nil {
		t.Fatal(err)
	}
	r := column.Reaction{Protolith: column.Uniform(2900), Product: column.Uniform(3500), Cap: 1}
	_, all := sinking(t, stacked(column.Rigid, r, tab))
	for _, k := range all {
		if k.HasBelow || k.Below != 0 || k.Contrast != 0 || k.Needs != nil || !(k.Density > 0) {
			t.Errorf("%+v", k)
		}
	}
	// Nor is the extent a handle where the product has no density.
	r.Product = tab
	if _, all = sinking(t, stacked(column.HalfSpace, r, column.Uniform(3300))); !all[0].HasBelow || len(all[0].Needs) != 0 {
		t.Errorf("%+v", all[0])
	}
}

// TestDepthOf: P back to z; nothing above the surface or below the column.
func TestDepthOf(t *testing.T) {
	state := column.EquationOfState{Reference: 3300, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15}
	c := stacked(column.HalfSpace, column.Uniform(2800), state)
	s := build(t, c, 0)
	for z := 0.0; z <= 40e3; z += 1250 {
		layer := min(int(z/20e3), 1)
		if got, ok := s.DepthOf(s.PressureAt(layer, z)); !ok || math.Abs(got-z) > 1e-10*z {
			t.Errorf("%.15g m, %v; want %g", got, ok, z)
		}
	}
	if got, ok := s.DepthOf(2800 * 9.81 * 7e3); !ok || !close(got, 7e3, 1e-12) {
		t.Errorf("%.15g m in rock of one density, want 7 km", got)
	}
	for _, P := range []float64{-1, math.NaN(), math.Inf(1), s.Base.P * 1.0001} {
		if z, ok := s.DepthOf(P); ok {
			t.Errorf("%g Pa at %g m", P, z)
		}
	}
}
