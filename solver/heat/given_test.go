package heat_test

import (
	"math"
	"slices"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"
)

// TestGiven: a geotherm of three straight pieces over two layers. Temperatures are the
// points' own; heat flows are κ_c times the slopes at either end; the pressure of
// ρ = ρ₀(1 − α(T − T_r)) with T = T₀ + s z is ρ₀ g [z − α(T₀ − T_r) z − α s z²/2]
// (derived).
func TestGiven(t *testing.T) {
	const rho, alpha, g = 2900.0, 3e-5, 9.81
	eos := column.EquationOfState{Reference: rho, Expansivity: alpha, ReferenceTemperature: 300}
	a := layer("a", 30e3, constant(3), column.HeatProduction{})
	b := layer("b", 50e3, constant(2), column.HeatProduction{})
	a.Density, b.Density = eos, eos
	c := &column.Column{Gravity: g, Surface: column.Surface{Temperature: 280}, Layers: []column.Layer{a, b},
		Base:     column.Base{Boundary: column.Rigid},
		Geotherm: []column.Point{{Depth: 0, Temperature: 280}, {Depth: 12345, Temperature: 600}, {Depth: 30e3, Temperature: 800}, {Depth: 40e3, Temperature: 900}, {Depth: 50e3, Temperature: 1000}, {Depth: 80e3, Temperature: 1200}}}
	if err := c.Validate(); err != nil {
		t.Fatal(err)
	}
	p, err := heat.Solve(c)
	if err != nil {
		t.Fatal(err)
	}
	for i, pt := range c.Geotherm {
		l := &p.Layers[0]
		if i > 2 {
			l = &p.Layers[1]
		}
		if T, _, _ := l.At(pt.Depth); !close(T, pt.Temperature, 1e-14) {
			t.Errorf("T(%g m) = %.16g K, want %g", pt.Depth, T, pt.Temperature)
		}
	}
	if T, _, slope := p.Layers[0].At(6000); !close(T, 280+320*6000/12345.0, 1e-14) || !close(slope, 320/12345.0, 1e-12) {
		t.Errorf("T(6 km) = %g K, slope %g", T, slope)
	}
	const z, s = 12345.0, 320 / 12345.0
	if _, P, _ := p.Layers[0].At(z); !close(P, rho*g*(z-alpha*(280-300)*z-alpha*s*z*z/2), 1e-13) {
		t.Errorf("P(12345 m) = %.16g Pa", P)
	}
	if !close(p.SurfaceFlow, 3*s, 1e-12) || !close(p.BaseFlow, 2*200/30e3, 1e-12) {
		t.Errorf("flows %g and %g W/m²", p.SurfaceFlow, p.BaseFlow)
	}
	// The kink at 30 km is the contact's, and 40 km is none.
	if !slices.Equal(p.Layers[0].Kinks, []float64{12345}) || !slices.Equal(p.Layers[1].Kinks, []float64{50e3}) {
		t.Errorf("kinks %v and %v", p.Layers[0].Kinks, p.Layers[1].Kinks)
	}
	for i, l := range p.Layers {
		for j, n := range l.Nodes[1:] {
			if n.Depth <= l.Nodes[j].Depth {
				t.Errorf("layer %d: node at %g m after %g m", i, n.Depth, l.Nodes[j].Depth)
			}
		}
	}
}

// TestPressure: without a temperature; a density that grades linearly has
// P = g (ρ_top z + (ρ_bottom − ρ_top) z²/2h), a compressible one
// P = (exp(ρ₀ β g z) − 1)/β. Source: derived.
func TestPressure(t *testing.T) {
	const h, beta = 40e3, 2e-11
	graded := layer("graded", h, constant(0), column.HeatProduction{})
	graded.Density = column.Linear{Top: 2700, Bottom: 3300}
	squeezed := layer("squeezed", h, constant(0), column.HeatProduction{})
	squeezed.Density = column.EquationOfState{Reference: 3000, Compressibility: beta}
	for _, c := range []struct {
		l    column.Layer
		want func(z float64) float64
	}{
		{graded, func(z float64) float64 { return 9.81 * (2700*z + 600*z*z/(2*h)) }},
		{squeezed, func(z float64) float64 { return math.Expm1(3000*beta*9.81*z) / beta }},
	} {
		col := &column.Column{Gravity: 9.81, Layers: []column.Layer{c.l}, Base: column.Base{Boundary: column.Rigid}}
		if err := col.Validate(); err != nil {
			t.Fatal(err)
		}
		p, err := heat.Solve(col)
		if err != nil || p.HasTemperature {
			t.Fatalf("%v, temperature %v", err, p.HasTemperature)
		}
		for z := 777.0; z < h; z += 3333 {
			if T, P, slope := p.Layers[0].At(z); !close(P, c.want(z), 1e-13) || T != 0 || slope != 0 {
				t.Errorf("%s: P(%g m) = %.16g, want %.16g; T = %g", c.l.Name, z, P, c.want(z), T)
			}
		}
	}
}
