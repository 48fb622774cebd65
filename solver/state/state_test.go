package state_test

import (
	"math"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/state"

	"pgregory.net/rapid"
)

func close(got, want, rtol float64) bool { return math.Abs(got-want) <= rtol*math.Abs(want) }

func build(t testing.TB, c *column.Column, rate float64) *state.State {
	s, err := state.New(c, rate)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// TestViscosityBetweenNodes: one layer of constant conductivity with an exponential
// source has a closed geotherm (Lachenbruch 1968) and, without expansion, a closed
// pressure; the creep law evaluated on those must be what ViscosityAt interpolates.
// Tolerance: 1e-9 in ln η is what the growth solver is promised.
func TestViscosityBetweenNodes(t *testing.T) {
	const qm, H0, D, k, L, T0, rho, beta = 0.025, 2.5e-6, 10e3, 2.5, 60e3, 283.15, 3300.0, 1e-11
	r := rock(t, rho, H0, D, "dry olivine dislocation Hirth 2003", "dry olivine diffusion Hirth 2003")
	r.Density = column.EquationOfState{Reference: rho, Compressibility: beta}
	r.Conductivity = column.Conductivity{Reference: k}
	c := &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: T0},
		Layers: []column.Layer{{Name: "layer", Thickness: L, Rock: r}},
		Base:   column.Base{Boundary: column.Rigid, HeatFlow: qm + H0*D*math.Exp(-L/D), HasHeatFlow: true},
		Limits: rheology.Limits{Lowest: 1e18, Highest: 1e26}}
	s := build(t, c, 1e-15)
	creep := rheology.Creep{Laws: r.Viscosity.Creep.Laws, Limits: c.Limits}
	worst := 0.0
	for i := range 1000 {
		z := L * (float64(i) + 0.5) / 1000
		T := T0 + qm*z/k - H0*D*D/k*math.Expm1(-z/D)
		P := math.Expm1(rho*beta*9.81*z) / beta
		want, err := creep.Respond(1e-15, r.Conditions(T, P))
		if err != nil {
			t.Fatal(err)
		}
		eta, n := s.ViscosityAt(0, z)
		worst = max(worst, math.Abs(math.Log(eta/want.Viscosity)))
		if !close(n, want.Exponent, 1e-9) {
			t.Fatalf("n(%g m) = %g, want %g", z, n, want.Exponent)
		}
		slope := qm/k + H0*D/k*math.Exp(-z/D)
		if gotT, got := s.TemperatureAt(0, z); !close(gotT, T, 1e-13) || !close(got, slope, 1e-9) {
			t.Fatalf("T = %.16g, dT/dz = %.12g; want %.16g, %.12g", gotT, got, T, slope)
		}
		if got := s.PressureAt(0, z); !close(got, P, 1e-12) {
			t.Fatalf("P = %.16g, want %.16g", got, P)
		}
		p, err := s.At(0, z)
		if err != nil || p.Viscosity != eta || p.Exponent != n || !close(p.Stress, 2*eta*1e-15, 1e-14) || !close(p.Density, rho*(1+beta*P), 1e-13) {
			t.Fatalf("At gives %+v, %v; ViscosityAt %g", p, err, eta)
		}
	}
	t.Logf("largest error of ln η: %.2g", worst)
	if worst > 1e-9 {
		t.Errorf("ln η is off by %g", worst)
	}
	for _, p := range s.Layers[0].Points {
		if eta, _ := s.ViscosityAt(0, p.Depth); !close(eta, p.Viscosity, 1e-12) {
			t.Fatalf("node at %g m: %g and %g", p.Depth, p.Viscosity, eta)
		}
	}
}

// TestJumps: both sides of each jump are taken at the interface's own T and P.
func TestJumps(t *testing.T) {
	c := arc(t)
	s := build(t, c, 1e-15)
	if len(s.Jumps) != len(c.Layers)+1 {
		t.Fatalf("%d jumps", len(s.Jumps))
	}
	for i := range c.Layers[:4] {
		z := s.Layers[i+1].Points[0].Depth
		T, _ := s.TemperatureAt(i, z)
		P := s.PressureAt(i, z)
		want := c.Layers[i+1].Density.At(T, P, 0) - c.Layers[i].Density.At(T, P, 1)
		if !close(s.Jumps[i+1], want, 1e-12) {
			t.Errorf("jump %d: %g, want %g", i+1, s.Jumps[i+1], want)
		}
	}
	// Surface against air of density 0; equation of state by hand at 273.15 K.
	if !close(s.Jumps[0], 2700*(1+3e-5*20), 1e-14) {
		t.Errorf("surface jump %g", s.Jumps[0])
	}
	// Equal laws of state 10 kg/m³ apart at the reference, at the basal T and P.
	P := s.PressureAt(4, c.Depth())
	if want := -10 * (1 - 3e-5*(1623.15-293.15)) * (1 + 1e-11*P); !close(s.Jumps[5], want, 1e-9) {
		t.Errorf("basal jump %g, want %g", s.Jumps[5], want)
	}
	if !close(s.Base.T, 1623.15, 2e-13) || !(s.Base.Viscosity > 0) {
		t.Errorf("half-space %+v", s.Base)
	}
	for i := range c.Layers {
		top, bottom := s.Span(i)
		if g := s.GradientAt(i, (top+bottom)/2); g != 0 {
			t.Errorf("%s: one composition has a gradient %g", c.Layers[i].Name, g)
		}
	}
}

// TestOneComposition: the same rock above and below an interface, however compressed
// and heated, has no jump: nothing to drive a flow. Source: derived.
func TestOneComposition(t *testing.T) {
	c := arc(t)
	for i := range c.Layers {
		c.Layers[i].Rock = c.Layers[4].Rock
	}
	c.Base.Rock = c.Layers[4].Rock
	for i, j := range build(t, c, 1e-15).Jumps[1:] {
		if j != 0 {
			t.Errorf("interface %d: %g kg/m³", i+1, j)
		}
	}
}

func TestNumbersWithoutTemperature(t *testing.T) {
	c := &column.Column{Gravity: 9.81, Limits: rheology.Limits{Lowest: 1e20, Highest: 1e22},
		Layers: []column.Layer{{Name: "a", Thickness: 20e3, Rock: column.Rock{
			Density: column.Linear{Top: 2800, Bottom: 3000}, Viscosity: column.Viscosity{Top: 1e24, Bottom: 1e18, Exponent: 3, Factor: 10}}}},
		Base: column.Base{Boundary: column.Inviscid, Rock: column.Rock{Density: column.Uniform(3300)}}}
	s := build(t, c, 0)
	if s.HasTemperature || s.Base.T != 0 || s.SurfaceFlow != 0 || s.Base.Viscosity != 0 || s.Base.Density != 3300 {
		t.Errorf("%+v", s)
	}
	if eta, n := s.ViscosityAt(0, 10e3); !close(eta, 1e22, 1e-13) || n != 3 { // √(1e24 × 1e18) × 10; limits do not apply
		t.Errorf("η = %g, n %g", eta, n)
	}
	if g := s.GradientAt(0, 3e3); g != 200/20e3 {
		t.Errorf("gradient %g kg/m⁴", g)
	}
	if s.Jumps[0] != 2800 || s.Jumps[1] != 300 {
		t.Errorf("jumps %v", s.Jumps)
	}
	for _, p := range s.Layers[0].Points {
		if p.T != 0 || p.Stress != 0 || p.Capped || p.Floored || math.IsNaN(p.P+p.Density+p.Viscosity) {
			t.Errorf("%+v", p)
		}
	}
	c.Base.Boundary = column.Rigid
	if s := build(t, c, 1e-15); s.Jumps[1] != 0 || s.Base.Density != 0 || s.Layers[0].Points[0].Stress != 2*1e25*1e-15 {
		t.Errorf("rigid base: %+v", s)
	}
}

// TestRelativeDepth: a layer's gradients run over that layer, not over the column.
func TestRelativeDepth(t *testing.T) {
	r := column.Rock{Density: column.Linear{Top: 2800, Bottom: 3000}, Viscosity: column.Viscosity{Top: 1e24, Bottom: 1e20, Exponent: 1}}
	c := &column.Column{Gravity: 9.81, Base: column.Base{Boundary: column.Rigid},
		Layers: []column.Layer{{Name: "a", Thickness: 20e3, Rock: r}, {Name: "b", Thickness: 40e3, Rock: r}}}
	s := build(t, c, 1e-15)
	p, err := s.At(1, 40e3)
	if err != nil || !close(p.Density, 2900, 1e-14) || !close(p.Viscosity, 1e22, 1e-13) { // half-way, by hand
		t.Errorf("%+v, %v", p, err)
	}
	if eta, _ := s.ViscosityAt(1, 40e3); !close(eta, 1e22, 1e-13) {
		t.Errorf("η = %g", eta)
	}
	mid := s.Layers[1].Points[len(s.Layers[1].Points)/2]
	if !close(mid.Density, 2900, 1e-14) || !close(mid.Viscosity, 1e22, 1e-13) || s.Jumps[1] != -200 {
		t.Errorf("%+v, jumps %v", mid, s.Jumps)
	}
}

func TestResponseAt(t *testing.T) {
	c := arc(t)
	c.Layers[0].Viscosity = column.Viscosity{Top: 1e23, Bottom: 1e23, Exponent: 3}
	s := build(t, c, 1e-15)
	// Eight times the rate at n = 3 is twice the stress and a quarter of the viscosity.
	r, err := s.ResponseAt(0, 1e3, 8e-15)
	if err != nil || !close(r.Viscosity, 2.5e22, 1e-13) || !close(r.Stress, 2*2e8, 1e-13) || r.Exponent != 3 {
		t.Errorf("%+v, %v", r, err)
	}
	for i := range c.Layers { // at the state's own rate it is the state
		_, bottom := s.Span(i)
		p, err1 := s.At(i, bottom-1e3)
		r, err2 := s.ResponseAt(i, bottom-1e3, 1e-15)
		if err1 != nil || err2 != nil || !close(r.Stress, p.Stress, 1e-13) || r.Viscosity != p.Viscosity {
			t.Errorf("%+v, %v; %+v, %v", p, err1, r, err2)
		}
	}
	if r, err := s.ResponseAt(5, 0, 1e-15); err != nil || r.Viscosity != s.Base.Viscosity {
		t.Errorf("half-space %+v, %v", r, err)
	}
	c.Base.Boundary = column.Rigid
	if _, err := build(t, c, 1e-15).ResponseAt(5, 0, 1e-15); err == nil {
		t.Error("a rigid base has no response")
	}
	if _, err := s.ResponseAt(0, 1e3, 0); err == nil {
		t.Error("a rate of 0 has no response")
	}
}

// TestGivenGeotherm: temperatures by hand between the points; only a bend is a kink.
func TestGivenGeotherm(t *testing.T) {
	c := arc(t)
	c.Geotherm = []column.Point{{Depth: 0, Temperature: 280}, {Depth: 60e3, Temperature: 1100}, {Depth: 102e3, Temperature: 1600}}
	s := build(t, c, 1e-15)
	if len(s.Kinks(3)) != 0 || len(s.Kinks(4)) != 1 || s.Kinks(4)[0] != 60e3 {
		t.Errorf("kinks %v, %v", s.Kinks(3), s.Kinks(4))
	}
	if T, slope := s.TemperatureAt(4, 81e3); !close(T, 1350, 1e-13) || !close(slope, 500/42e3, 1e-12) {
		t.Errorf("T = %g, slope %g", T, slope)
	}
	if s.Base.T != 1600 || s.HeatResidual != 0 {
		t.Errorf("%+v", s.Base)
	}
}

func TestWarnings(t *testing.T) {
	s := build(t, arc(t), 1e-15)
	all := strings.Join(s.Warnings, "\n")
	for _, want := range []string{
		"mafic granulite Wilks 1990: used above 1 GPa, where its activation volume (not determined, 0 cm3/mol assumed) counts (in lower crust)",
		"upper crust: the highest viscosity, 1e+24 Pa s, decides from 0.0 to",
	} {
		if !strings.Contains(all, want) {
			t.Errorf("no warning %q in\n%s", want, all)
		}
	}
	if n := strings.Count(all, "upper crust: the highest viscosity"); n != 1 {
		t.Errorf("%d warnings for one range of depths", n)
	}
	c := arc(t)
	c.Base.Rock = c.Layers[2].Rock
	if all := strings.Join(build(t, c, 1e-15).Warnings, "\n"); !strings.Contains(all, "(in lower crust, the half-space)") {
		t.Errorf("one caution for two rocks expected in\n%s", all)
	}
	c.Limits.Lowest = 1e22
	if all := strings.Join(build(t, c, 1e-12).Warnings, "\n"); !strings.Contains(all, "the lowest viscosity, 1e+22 Pa s, decides") {
		t.Errorf("no warning of the lowest viscosity in\n%s", all)
	}
}

func TestErrors(t *testing.T) {
	for _, c := range []struct {
		name  string
		rate  float64
		spoil func(c *column.Column)
		want  string
	}{
		{"validate", 1e-15, func(c *column.Column) { c.Layers[0].Thickness = -1 }, "state: column: upper crust: thickness -1 m"},
		{"negative rate", -1, func(*column.Column) {}, "state: strain rate -1 1/s"},
		{"rate not a number", math.NaN(), func(*column.Column) {}, "state: strain rate NaN"},
		{"creep at rest", 0, func(*column.Column) {}, "state: upper crust at 0 m: rheology: strain rate 0 1/s"},
		{"heat", 1e-15, func(c *column.Column) { c.Base.HasTemperature, c.Base.HasHeatFlow, c.Base.HeatFlow = false, true, -0.1 }, "state: heat: "},
		{"density", 1e-15, func(c *column.Column) {
			c.Layers[4].Density = column.EquationOfState{Reference: 3300, Expansivity: 1e-3, ReferenceTemperature: 293}
		}, "kg/m³ at T ="},
	} {
		col := arc(t)
		c.spoil(col)
		if _, err := state.New(col, c.rate); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v, want %q", c.name, err, c.want)
		}
	}
	s := build(t, arc(t), 1e-15)
	for _, z := range []float64{-1, 15001, math.NaN()} {
		if p, err := s.At(0, z); err == nil {
			t.Errorf("At(0, %g) = %+v", z, p)
		}
	}
}

// TestRandomColumns: for any thicknesses and boundary temperatures pressure rises
// downward, temperature and pressure are continuous, ViscosityAt agrees with At, and
// a factor on every viscosity multiplies every viscosity.
func TestRandomColumns(t *testing.T) {
	base := arc(t)
	rapid.Check(t, func(t *rapid.T) {
		c := *base
		c.Limits = rheology.Limits{}
		c.Layers = append([]column.Layer(nil), base.Layers...)
		for i := range c.Layers {
			c.Layers[i].Thickness = rapid.Float64Range(2e3, 60e3).Draw(t, "thickness")
		}
		c.Base.Temperature = rapid.Float64Range(800, 1900).Draw(t, "basal temperature")
		s, err := state.New(&c, 1e-15)
		if err != nil {
			t.Fatal(err)
		}
		factor := rapid.Float64Range(0.01, 100).Draw(t, "factor")
		scaled := c
		scaled.Layers = append([]column.Layer(nil), c.Layers...)
		for i := range scaled.Layers {
			scaled.Layers[i].Viscosity.Factor = factor
		}
		s2, err := state.New(&scaled, 1e-15)
		if err != nil {
			t.Fatal(err)
		}
		P := -1.0
		for i := range s.Layers {
			for j, p := range s.Layers[i].Points {
				if j > 0 && p.P <= P || j == 0 && p.P < P {
					t.Fatalf("P = %g Pa at %g m below %g Pa", p.P, p.Depth, P)
				}
				P = p.P
			}
			top, bottom := s.Span(i)
			z := top + (bottom-top)*rapid.Float64Range(0, 1).Draw(t, "x")
			p, err := s.At(i, z)
			if err != nil {
				t.Fatal(err)
			}
			if eta, n := s.ViscosityAt(i, z); eta != p.Viscosity || n != p.Exponent {
				t.Fatalf("ViscosityAt %g, %g; At %+v", eta, n, p)
			}
			if eta, _ := s2.ViscosityAt(i, z); !close(eta, factor*p.Viscosity, 1e-11) {
				t.Fatalf("factor %g: %g from %g", factor, eta, p.Viscosity)
			}
		}
	})
}

func TestNoAllocation(t *testing.T) {
	s := build(t, arc(t), 1e-15)
	if n := testing.AllocsPerRun(100, func() { s.ViscosityAt(1, 20e3); s.GradientAt(1, 20e3) }); n != 0 {
		t.Errorf("%g allocations", n)
	}
}
