package heat_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"

	"pgregory.net/rapid"
)

func close(got, want, rtol float64) bool { return math.Abs(got-want) <= rtol*math.Abs(want) }

// layer is a rock of density 3000 kg/m³ with the given conduction.
func layer(name string, thickness float64, k column.Conductivity, h column.HeatProduction) column.Layer {
	return column.Layer{Name: name, Thickness: thickness, Rock: column.Rock{
		Density: column.Uniform(3000), Conductivity: k, HeatProduction: h,
		Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1},
	}}
}

func constant(k float64) column.Conductivity { return column.Conductivity{Reference: k} }

// heated and cooled have their base at a heat flow or a temperature.
func heated(surface, flow float64, ls ...column.Layer) *column.Column {
	return &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: surface}, Layers: ls,
		Base: column.Base{Boundary: column.Rigid, HeatFlow: flow, HasHeatFlow: true}}
}

func cooled(surface, base float64, ls ...column.Layer) *column.Column {
	return &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: surface}, Layers: ls,
		Base: column.Base{Boundary: column.Rigid, Temperature: base, HasTemperature: true}}
}

func steady(t testing.TB, c *column.Column) *heat.Profile {
	if err := c.Validate(); err != nil {
		t.Fatal(err)
	}
	p, err := heat.Steady(c)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// compare checks T at odd depths of a layer, between nodes as well as on them.
func compare(t *testing.T, p *heat.Profile, layer int, want func(z float64) float64, rtol float64, source string) {
	t.Helper()
	l := &p.Layers[layer]
	for i := 0; i <= 97; i++ {
		z := l.Top + (l.Bottom-l.Top)*float64(i)/97
		if T, _, _ := l.At(z); !close(T, want(z), rtol) {
			t.Fatalf("T(%g m) = %.14g K, want %.14g (%s)", z, T, want(z), source)
		}
	}
}

// TestLayered: three layers of constant conductivity and heat production, each
// T = T_top + q_top z/k − H z²/2k. Source: closed form, Carslaw & Jaeger 1959; the
// basal temperature fixes q through the sum of resistances (derived).
func TestLayered(t *testing.T) {
	hs := []float64{12e3, 21e3, 55e3}
	ks := []float64{3.1, 2.4, 3.3}
	As := []float64{1.7e-6, 0.4e-6, 0.02e-6}
	const surface, base = 283.15, 1573.15
	var ls []column.Layer
	var resistance, fall, made float64
	for i := range hs {
		ls = append(ls, layer(string(rune('a'+i)), hs[i], constant(ks[i]), column.HeatProduction{Top: As[i]}))
		resistance += hs[i] / ks[i]
		fall += made*hs[i]/ks[i] + As[i]*hs[i]*hs[i]/(2*ks[i])
		made += As[i] * hs[i]
	}
	q := (base - surface + fall) / resistance
	p := steady(t, cooled(surface, base, ls...))
	if !close(p.SurfaceFlow, q, 1e-12) || !close(p.BaseFlow, q-made, 1e-12) {
		t.Errorf("flows %.15g and %.15g W/m², want %.15g and %.15g", p.SurfaceFlow, p.BaseFlow, q, q-made)
	}
	T := surface
	for i := range hs {
		top, T0, q0 := p.Layers[i].Top, T, q
		at := func(z float64) float64 { z -= top; return T0 + q0*z/ks[i] - As[i]*z*z/(2*ks[i]) }
		compare(t, p, i, at, 1e-12, "closed form")
		T, q = at(top+hs[i]), q0-As[i]*hs[i]
	}
	if p.Residual > 1e-12 {
		t.Errorf("residual %g", p.Residual)
	}
	// Pressure of a uniform density: ρ g z.
	if _, P, _ := p.Layers[1].At(20e3); !close(P, 3000*9.81*20e3, 1e-13) {
		t.Errorf("P = %g Pa", P)
	}
}

// TestExponentialSource: T = T₀ + q_m z/k + (H₀ D²/k)(1 − exp(−z/D)), q_s = q_m + H₀D
// on a half-space. Source: Lachenbruch 1968, JGR 73; for a layer of finite depth L the
// basal flow stands for q_m + H₀ D exp(−L/D). Parameters: q_m 30 mW/m², H₀ 2.6 µW/m³,
// D 11.7 km, k 3 W/m/K, common practice.
func TestExponentialSource(t *testing.T) {
	const qm, H0, D, k, L, T0 = 0.03, 2.6e-6, 11.7e3, 3.0, 35e3, 288.15
	p := steady(t, heated(T0, qm+H0*D*math.Exp(-L/D), layer("crust", L, constant(k), column.HeatProduction{Top: H0, DecayLength: D})))
	compare(t, p, 0, func(z float64) float64 { return T0 + qm*z/k - H0*D*D/k*math.Expm1(-z/D) }, 1e-12, "Lachenbruch 1968")
	if !close(p.SurfaceFlow, qm+H0*D, 1e-14) {
		t.Errorf("surface flow %.16g", p.SurfaceFlow)
	}
	if p.Residual > 1e-12 {
		t.Errorf("residual %g", p.Residual)
	}
}

// TestKirchhoff: κ = κ₀/(1 + b(T − T_r)) without sources. With θ = ∫κ dT = q z,
// T = T_r + [(1 + b(T₀ − T_r)) exp(b q z/κ₀) − 1]/b. Source: derived by the Kirchhoff
// transform (Carslaw & Jaeger 1959). And κ = κ₀(1 + c P), P = ρ g z:
// T = T₀ + q ln(1 + c ρ g z)/(κ₀ c ρ g), derived.
func TestKirchhoff(t *testing.T) {
	const T0, Tr, k0, b, L, base = 273.15, 293.15, 3.2, 1.5e-3, 90e3, 1600.0
	q := k0 / (b * L) * math.Log((1+b*(base-Tr))/(1+b*(T0-Tr)))
	p := steady(t, cooled(T0, base, layer("warm", L, column.Conductivity{Reference: k0, PerKelvin: b, At: Tr}, column.HeatProduction{})))
	if !close(p.SurfaceFlow, q, 1e-12) {
		t.Errorf("q = %.15g, want %.15g", p.SurfaceFlow, q)
	}
	compare(t, p, 0, func(z float64) float64 {
		return Tr + ((1+b*(T0-Tr))*math.Exp(b*q*z/k0)-1)/b
	}, 2e-12, "Kirchhoff transform")

	const c, flow, g = 4e-11, 0.04, 3000 * 9.81
	p = steady(t, heated(T0, flow, layer("pressed", L, column.Conductivity{Reference: k0, PerPascal: c}, column.HeatProduction{})))
	compare(t, p, 0, func(z float64) float64 { return T0 + flow*math.Log1p(c*g*z)/(k0*c*g) }, 1e-12, "derived")
}

// TestOrderOfAccuracy: one nonlinear layer is integrated in 8 steps, the least a layer
// has, and as two and sixteen pieces in 16 and 128. Halving the step divides the error
// by 2⁶. The conductivities are far from any rock's, so that the error is not round-off.
func TestOrderOfAccuracy(t *testing.T) {
	const T0, L = 300.0, 1600.0
	k := column.Conductivity{Reference: 3, PerKelvin: 8e-3, PerPascal: 3e-8, At: 300}
	bottom := func(pieces int) float64 {
		var ls []column.Layer
		for i := range pieces {
			ls = append(ls, layer(string(rune('a'+i)), L/float64(pieces), k, column.HeatProduction{}))
		}
		p := steady(t, heated(T0, 0.4, ls...))
		T, _, _ := p.Layers[pieces-1].At(L)
		return T
	}
	exact := bottom(16)
	e1, e2 := math.Abs(bottom(1)-exact), math.Abs(bottom(2)-exact)
	order := math.Log2(e1 / e2)
	t.Logf("errors %.3g and %.3g K of %.1f K: order %.2f", e1, e2, exact, order)
	if order < 5.7 || order > 6.5 {
		t.Errorf("observed order %.2f, want 6 (errors %g, %g K)", order, e1, e2)
	}
}

// TestEnergyBalance: for any layering, the flow in at the base and the heat made leave
// at the surface, and the independent residual is small.
func TestEnergyBalance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var ls []column.Layer
		var made float64
		for i := range rapid.IntRange(1, 6).Draw(t, "layers") {
			h := column.HeatProduction{Top: rapid.Float64Range(0, 4e-6).Draw(t, "H")}
			thickness := rapid.Float64Range(5e3, 30e3).Draw(t, "thickness")
			if rapid.Bool().Draw(t, "decays") {
				h.DecayLength = rapid.Float64Range(2e3, 50e3).Draw(t, "decay length")
			}
			k := column.Conductivity{Reference: rapid.Float64Range(1.5, 5).Draw(t, "k"),
				PerKelvin: rapid.Float64Range(0, 1.5e-3).Draw(t, "b"), PerPascal: rapid.Float64Range(0, 1e-10).Draw(t, "c"), At: 293.15}
			l := layer(string(rune('a'+i)), thickness, k, h)
			l.Density = column.EquationOfState{Reference: 2900, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15}
			ls = append(ls, l)
			// Simpson on 2000 intervals, apart from the closed form.
			for j := range 2000 {
				d := thickness / 2000
				z := d * float64(j)
				made += d * (h.At(z) + 4*h.At(z+d/2) + h.At(z+d)) / 6
			}
		}
		base := rapid.Float64Range(600, 1700).Draw(t, "basal temperature")
		c := cooled(280, base, ls...)
		p, err := heat.Steady(c)
		if err != nil {
			t.Fatal(err)
		}
		scale := max(math.Abs(p.SurfaceFlow), math.Abs(p.BaseFlow), made)
		if d := p.SurfaceFlow - p.BaseFlow - made; math.Abs(d) > 1e-11*scale {
			t.Fatalf("flows %g and %g W/m² and %g made: %g missing", p.SurfaceFlow, p.BaseFlow, made, d)
		}
		// 1400 K across one layer of 5 km is 70 K a step: not yet round-off.
		if !(p.Residual < 1e-9) {
			t.Fatalf("residual %g", p.Residual)
		}
		last := p.Layers[len(ls)-1]
		if T, _, _ := last.At(last.Bottom); !close(T, base, 2e-13) {
			t.Fatalf("basal temperature %.16g, want %.16g", T, base)
		}
		// Continuity and rising pressure.
		var T, P float64
		for i, l := range p.Layers {
			if i > 0 && (l.Nodes[0].T != T || l.Nodes[0].P != P) {
				t.Fatalf("T or P jumps at %g m", l.Top)
			}
			for j, n := range l.Nodes[1:] {
				if n.P <= l.Nodes[j].P {
					t.Fatalf("pressure falls from %g to %g Pa", l.Nodes[j].P, n.P)
				}
			}
			T, P = l.Nodes[len(l.Nodes)-1].T, l.Nodes[len(l.Nodes)-1].P
		}
	})
}

func TestSteadyErrors(t *testing.T) {
	plain := layer("a", 100e3, constant(2.5), column.HeatProduction{})
	for _, c := range []struct {
		name string
		c    *column.Column
		want string
	}{
		{"falls below 0 K", heated(300, -0.02, plain), "heat: a: below"},
		{"conductivity turns negative", heated(300, 0.05, layer("a", 100e3, column.Conductivity{Reference: 2.5, PerPascal: -1e-9}, column.HeatProduction{})), "conductivity"},
		{"no root", cooled(300, 1500, layer("a", 100e3, column.Conductivity{Reference: 2.5, PerPascal: -5e-10}, column.HeatProduction{})), "heat: "},
	} {
		p, err := heat.Steady(c.c)
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %+v, %v; want %q", c.name, p, err, c.want)
		}
		var d *heat.DomainError
		if !errors.As(err, &d) {
			t.Errorf("%s: %v is not a DomainError", c.name, err)
		}
	}
}

// TestHardRoots: strong nonlinearity and strong heating, and a base as cold as the
// surface, all found.
func TestHardRoots(t *testing.T) {
	strong := column.Conductivity{Reference: 5, PerKelvin: 3e-3, At: 273.15}
	rising := column.Conductivity{Reference: 1.5, PerKelvin: -4e-4, At: 273.15}
	for _, c := range []struct {
		name string
		c    *column.Column
	}{
		{"isothermal", cooled(300, 300, layer("a", 50e3, strong, column.HeatProduction{}))},
		{"falling with T, heated", cooled(273.15, 1900, layer("a", 60e3, strong, column.HeatProduction{Top: 2e-6}), layer("b", 240e3, strong, column.HeatProduction{}))},
		{"rising with T", cooled(273.15, 2200, layer("a", 200e3, rising, column.HeatProduction{}))},
		{"hot inside, flow into the base", cooled(273.15, 500, layer("a", 60e3, constant(2), column.HeatProduction{Top: 3e-6}))},
		{"colder below", cooled(1000, 300, layer("a", 60e3, strong, column.HeatProduction{}))},
	} {
		p, err := heat.Steady(c.c)
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		l := p.Layers[len(p.Layers)-1]
		if T, _, _ := l.At(l.Bottom); !close(T, c.c.Base.Temperature, 1e-12) || !(p.Residual < 1e-9) || p.Iterations > 20 {
			t.Errorf("%s: T = %.15g, residual %g, %d shots", c.name, T, p.Residual, p.Iterations)
		}
	}
}
