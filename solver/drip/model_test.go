package drip_test

import (
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// Power-law rock strained along the wavevector resists normal strain by η/n; across
// strike, with d = e/2 and ε₀ = |e|, by η (1 + (1/n − 1)/4) (Fletcher 1974; derived).
func TestStrained(t *testing.T) {
	c := arc(3450)
	c.Layers[0].Viscosity.Exponent = 3
	s, err := state.New(c, 2e-15)
	if err != nil {
		t.Fatal(err)
	}
	for _, v := range []struct {
		b           drip.Background
		ratio, d, z float64
	}{
		{drip.Background{}, 1, 0, 0},
		{drip.Background{ExtensionRate: 2e-15}, 1.0 / 3, 2e-15, -2e-15},
		{drip.Background{ExtensionRate: -2e-15}, 1.0 / 3, -2e-15, 2e-15},
		{drip.Background{ExtensionRate: 2e-15, AlongStrike: true}, 1 - 2.0/3/4, 1e-15, -2e-15},
	} {
		m := drip.Strained(s, v.b, "none")
		es, en := m.Layers[0].Viscosity(10e3)
		if math.Abs(en/es/v.ratio-1) > 1e-14 || m.ShearRate != v.d || m.VerticalStrain != v.z {
			t.Errorf("%+v: η_N/η_S %g (want %g), d %g, e_z %g", v.b, en/es, v.ratio, m.ShearRate, m.VerticalStrain)
		}
	}
}

// warm is a column of one composition that expands with heat, in a given geotherm of 10 K/km.
func warm(thermal string) (*growth.Column, error) {
	rock := column.Rock{Density: column.EquationOfState{Reference: 3300, Expansivity: 3e-5, ReferenceTemperature: 273.15},
		Viscosity:    column.Viscosity{Top: 1e20, Bottom: 1e20, Exponent: 1, Factor: 1},
		Conductivity: column.Conductivity{Reference: 3}, HeatCapacity: 1000}
	c := &column.Column{Gravity: 9.81, Surface: column.Surface{Boundary: column.Rigid, Temperature: 273.15},
		Layers: []column.Layer{{Name: "a", Thickness: 100e3, Rock: rock}, {Name: "b", Thickness: 100e3, Rock: rock}},
		Base:   column.Base{Boundary: column.Rigid, HasTemperature: true, Temperature: 2273.15, Rock: rock}}
	s, err := state.New(c, 0)
	if err != nil {
		return nil, err
	}
	return drip.Strained(s, drip.Background{}, thermal), nil
}

// Frozen heat is the density gradient (∂ρ/∂T)(dT₀/dz − α g T₀/c_p), computed here by
// hand at 50 km where T is 773.15 K: −ρ₀α (0.01 − 3.0e-5·9.81·773.15/1000·ρ₀/ρ) kg/m⁴.
func TestFrozenHeat(t *testing.T) {
	m, err := warm("frozen")
	if err != nil {
		t.Fatal(err)
	}
	rho := 3300 * (1 - 3e-5*500)
	want := -3300 * 3e-5 * (0.01 - 3300*3e-5/rho*9.81*773.15/1000)
	if got := m.Layers[0].Gradient(50e3); math.Abs(got/want-1) > 1e-9 {
		t.Errorf("gradient %g kg/m⁴, want %g", got, want)
	}
}

// Diffusion can only slow convection, and without heat nothing grows.
func TestThermalBuoyancy(t *testing.T) {
	rate := func(thermal string) float64 {
		m, err := warm(thermal)
		if err != nil {
			t.Fatal(err)
		}
		s, err := growth.NewSolver(m, 0)
		if err != nil {
			t.Fatal(err)
		}
		r, err := s.Rate(400e3)
		if err != nil {
			t.Fatal(err)
		}
		return r.Growth
	}
	none, frozen, diffusive := rate("none"), rate("frozen"), rate("diffusive")
	if none > 0 || !(frozen > diffusive && diffusive > 0) {
		t.Errorf("none %g, frozen %g, diffusive %g 1/s", none, frozen, diffusive)
	}
}
