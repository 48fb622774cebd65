package column_test

import (
	"math"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/rheology"

	"pgregory.net/rapid"
)

func close(got, want, rtol float64) bool { return math.Abs(got-want) <= rtol*math.Abs(want) }

func TestDensities(t *testing.T) {
	eos := column.EquationOfState{Reference: 3300, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15}
	for _, c := range []struct {
		name                    string
		d                       column.Density
		T, P, x                 float64
		at, perKelvin, gradient float64
		needsTemperature        bool
	}{
		{name: "number", d: column.Uniform(2700), T: 900, P: 1e9, x: 0.3, at: 2700},
		{name: "graded", d: column.Linear{Top: 2800, Bottom: 3000}, T: 900, P: 1e9, x: 0.25, at: 2850, gradient: 200},
		// 3300 × (1 − 3e-5 × 1000) × (1 + 0.02), by hand.
		{name: "equation of state", d: eos, T: 1293.15, P: 2e9, x: 0.5, at: 3300 * 0.97 * 1.02, perKelvin: -3300 * 3e-5 * 1.02, needsTemperature: true},
		{name: "compressible only", d: column.EquationOfState{Reference: 3000, Compressibility: 1e-11}, P: 1e9, at: 3030},
	} {
		if got := c.d.At(c.T, c.P, c.x); !close(got, c.at, 1e-14) {
			t.Errorf("%s: ρ = %.16g, want %.16g", c.name, got, c.at)
		}
		if got := c.d.PerKelvin(c.T, c.P, c.x); !close(got, c.perKelvin, 1e-14) {
			t.Errorf("%s: ∂ρ/∂T = %g, want %g", c.name, got, c.perKelvin)
		}
		if got := c.d.Gradient(c.T, c.P, c.x); got != c.gradient {
			t.Errorf("%s: gradient %g, want %g", c.name, got, c.gradient)
		}
		if c.d.NeedsTemperature() != c.needsTemperature {
			t.Errorf("%s: needs temperature: %v", c.name, !c.needsTemperature)
		}
	}
}

// TestDerivatives compares every derivative and integral with differences.
func TestDerivatives(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		T := rapid.Float64Range(250, 2000).Draw(t, "T")
		P := rapid.Float64Range(0, 5e9).Draw(t, "P")
		k := column.Conductivity{Reference: 3, PerKelvin: rapid.Float64Range(-2e-4, 2e-3).Draw(t, "b"), PerPascal: 5e-11, At: 293.15}
		kT, kP := k.Partials(T, P)
		dT := (k.Value(T+0.01, P) - k.Value(T-0.01, P)) / 0.02
		dP := (k.Value(T, P+1e5) - k.Value(T, P-1e5)) / 2e5
		scale := k.Value(T, P) / T // differences of a number known to 1e-16 over 1e-5 of T
		if math.Abs(kT-dT) > 1e-8*scale || !close(kP, dP, 1e-8) {
			t.Fatalf("partials %g, %g; by differences %g, %g", kT, kP, dT, dP)
		}
		h := column.HeatProduction{Top: 2e-6, DecayLength: rapid.Float64Range(1e3, 1e6).Draw(t, "D")}
		z := rapid.Float64Range(100, 50e3).Draw(t, "z")
		var sum float64 // Simpson, 1000 intervals: error (z/1000 D)⁴/2880, below 1e-8 here
		for i := range 1000 {
			d := z / 1000
			sum += d * (h.At(d*float64(i)) + 4*h.At(d*(float64(i)+0.5)) + h.At(d*float64(i+1))) / 6
		}
		if !close(h.Integral(z), sum, 1e-8) {
			t.Fatalf("∫H = %g, by Simpson %g", h.Integral(z), sum)
		}
	})
	if h := (column.HeatProduction{Top: 2e-6}); h.Integral(3e3) != 6e-3 || h.At(1e4) != 2e-6 {
		t.Error("constant heat production")
	}
}

func TestGivenViscosity(t *testing.T) {
	v := column.Viscosity{Top: 1e23, Bottom: 1e19, Exponent: 3, Factor: 2}
	for _, c := range []struct{ x, want float64 }{{0, 2e23}, {0.5, 2e21}, {1, 2e19}} { // log-linear, by hand
		if eta, n := v.At(c.x); !close(eta, c.want, 1e-13) || n != 3 {
			t.Errorf("η(%g) = %g, n %g; want %g", c.x, eta, n, c.want)
		}
	}
	v = column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1}
	if eta, _ := v.At(0.7); eta != 1e21 {
		t.Errorf("η = %g: no factor is a factor of 1", eta)
	}
}

func TestCreepWith(t *testing.T) {
	var r column.Rock
	if r.CreepWith(rheology.Limits{}) != nil {
		t.Error("a number has no creep")
	}
	own := rheology.Creep{Factor: 3}
	r.Viscosity = column.Viscosity{Creep: &own, Factor: 2}
	got := r.CreepWith(rheology.Limits{Lowest: 1e18, Highest: 1e24})
	if got.Factor != 6 || got.Limits.Highest != 1e24 || own.Factor != 3 || own.Limits.Highest != 0 {
		t.Errorf("%+v from %+v", got, own)
	}
	r.Friction, r.Piezometer = &rheology.Friction{Cohesion: 1e6}, &rheology.Piezometer{B: 0.01, P: 1}
	if got = r.CreepWith(rheology.Limits{}); got.Friction != r.Friction || got.Piezometer != r.Piezometer || own.Friction != nil {
		t.Errorf("%+v from %+v", got, own)
	}
}

// good is a valid column of creep and numbers; each case of TestValidate spoils it.
func good(t *testing.T) *column.Column {
	l, err := rheology.Find("wet olivine diffusion Hirth 2003")
	if err != nil {
		t.Fatal(err)
	}
	k := column.Conductivity{Reference: 2.5}
	number := column.Rock{Density: column.Uniform(2800), Viscosity: column.Viscosity{Top: 1e22, Bottom: 1e21, Exponent: 1}, Conductivity: k}
	creep := column.Rock{
		Density:   column.EquationOfState{Reference: 3300, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293},
		Viscosity: column.Viscosity{Creep: &rheology.Creep{Laws: []rheology.Law{l}}}, Conductivity: k,
		GrainSize: 1e-3, Water: 1e8, WaterMeasure: rheology.WaterFugacity,
	}
	return &column.Column{
		Gravity: 9.81, Surface: column.Surface{Temperature: 273.15},
		Layers: []column.Layer{
			{Name: "crust", Thickness: 30e3, Rock: number},
			{Name: "root", Thickness: 10e3, Root: true, Rock: number},
			{Name: "mantle", Thickness: 60e3, Rock: creep},
		},
		Base:   column.Base{Boundary: column.HalfSpace, Temperature: 1600, HasTemperature: true, Rock: creep},
		Limits: rheology.Limits{Lowest: 1e18, Highest: 1e25},
	}
}

func TestValidate(t *testing.T) {
	if err := good(t).Validate(); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		name  string
		spoil func(c *column.Column)
		want  string
	}{
		{"gravity", func(c *column.Column) { c.Gravity = -1 }, "gravity -1"},
		{"no layers", func(c *column.Column) { c.Layers = nil }, "no layers"},
		{"surface half-space", func(c *column.Column) { c.Surface.Boundary = column.HalfSpace }, "surface boundary half-space"},
		{"free base", func(c *column.Column) { c.Base.Boundary = column.Free }, "base boundary free"},
		{"limits", func(c *column.Column) { c.Limits.Lowest = 1e26 }, "lowest viscosity 1e+26"},
		{"limit not a number", func(c *column.Column) { c.Limits.Lowest = math.NaN() }, "viscosity limits NaN"},
		{"no name", func(c *column.Column) { c.Layers[1].Name = "" }, "layer 2 has no name"},
		{"same name", func(c *column.Column) { c.Layers[1].Name = "crust" }, `two layers are called "crust"`},
		{"thickness", func(c *column.Column) { c.Layers[1].Thickness = 0 }, "root: thickness 0 m"},
		{"roots apart", func(c *column.Column) { c.Layers[1].Root, c.Layers[0].Root, c.Layers[2].Root = false, true, true }, "root lies between root layers"},
		{"no density", func(c *column.Column) { c.Layers[0].Density = nil }, "crust: no density"},
		{"density", func(c *column.Column) { c.Layers[0].Density = column.Uniform(-5) }, "density -5"},
		{"graded density", func(c *column.Column) { c.Layers[0].Density = column.Linear{Top: 3000} }, "density 3000 to 0"},
		{"compressibility", func(c *column.Column) {
			c.Layers[0].Density = column.EquationOfState{Reference: 3000, Compressibility: -1}
		}, "compressibility -1"},
		{"viscosity", func(c *column.Column) { c.Layers[0].Viscosity.Bottom = 0 }, "viscosity 1e+22 to 0 Pa s"},
		{"exponent", func(c *column.Column) { c.Layers[0].Viscosity.Exponent = 0.5 }, "stress exponent 0.5"},
		{"factor", func(c *column.Column) { c.Layers[0].Viscosity.Factor = -2 }, "viscosity factor -2"},
		{"no temperature", func(c *column.Column) { c.Base.HasTemperature = false }, "mantle: its density depends on temperature"},
		{"creep without temperature", func(c *column.Column) {
			c.Base.HasTemperature = false
			c.Layers[2].Density = column.Uniform(3300)
		}, "mantle: creep laws need a temperature"},
		{"grain size", func(c *column.Column) { c.Layers[2].GrainSize = 0 }, "wet olivine diffusion Hirth 2003 needs a grain size"},
		{"water measure", func(c *column.Column) { c.Base.WaterMeasure = rheology.NoWater }, "base: rheology: wet olivine diffusion Hirth 2003 needs a water fugacity"},
		{"law", func(c *column.Column) { c.Layers[2].Viscosity.Creep.Laws[0].A = 0 }, "prefactor 0"},
		{"surface temperature", func(c *column.Column) { c.Surface.Temperature = 0 }, "surface temperature 0 K"},
		{"conductivity", func(c *column.Column) { c.Layers[0].Conductivity.Reference = 0 }, "crust: conductivity 0"},
		{"heat production", func(c *column.Column) { c.Layers[0].HeatProduction.DecayLength = -1 }, "decay length -1"},
		{"two basal conditions", func(c *column.Column) { c.Base.HasHeatFlow = true }, "a temperature (1600 K) and a heat flow"},
		{"basal temperature", func(c *column.Column) { c.Base.Temperature = -4 }, "basal temperature -4"},
		{"geotherm short", func(c *column.Column) {
			c.Geotherm = []column.Point{{Depth: 0, Temperature: 300}, {Depth: 99e3, Temperature: 900}}
		}, "2 points from 0 to 99000 m do not cover the column, 0 to 100000 m"},
		{"geotherm unsorted", func(c *column.Column) {
			c.Geotherm = []column.Point{{Depth: 0, Temperature: 300}, {Depth: 0, Temperature: 900}}
		}, "point 2 at 0 m is not below point 1"},
		{"geotherm cold", func(c *column.Column) { c.Geotherm = []column.Point{{Depth: 0, Temperature: 0}} }, "point 1: 0 K"},
	} {
		col := good(t)
		c.spoil(col)
		if err := col.Validate(); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v, want %q", c.name, err, c.want)
		}
	}
}
