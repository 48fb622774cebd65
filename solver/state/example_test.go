package state_test

import (
	"fmt"
	"testing"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/state"
)

// rock is a rock of one law with a common equation of state; densities and thermal
// numbers are invented but ordinary.
func rock(t testing.TB, density, heat, decay float64, laws ...string) column.Rock {
	var c rheology.Creep
	for _, name := range laws {
		l, err := rheology.Find(name)
		if err != nil {
			t.Fatal(err)
		}
		c.Laws = append(c.Laws, l)
	}
	return column.Rock{
		Density:        column.EquationOfState{Reference: density, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15},
		Viscosity:      column.Viscosity{Creep: &c, Exponent: 1, Factor: 1},
		Conductivity:   column.Conductivity{Reference: 3, PerKelvin: 1e-3, PerPascal: 4e-11, At: 293.15},
		HeatProduction: column.HeatProduction{Top: heat, DecayLength: decay},
		HeatCapacity:   1000, GrainSize: 1e-3, Water: 3e8, WaterMeasure: rheology.WaterFugacity,
	}
}

// arc is an invented arc column of five creeping layers over wet olivine.
func arc(t testing.TB) *column.Column {
	const wetOlivine = "wet olivine dislocation Hirth 2003"
	return &column.Column{
		Gravity: 9.81,
		Surface: column.Surface{Boundary: column.Free, Temperature: 273.15},
		Layers: []column.Layer{
			{Name: "upper crust", Thickness: 15e3, Rock: rock(t, 2700, 1.5e-6, 10e3, "wet quartzite Hirth 2001")},
			{Name: "middle crust", Thickness: 15e3, Rock: rock(t, 2800, 0.5e-6, 0, "wet anorthite dislocation Rybacki 2006", "wet anorthite diffusion Rybacki 2006")},
			{Name: "lower crust", Thickness: 10e3, Rock: rock(t, 2950, 0.2e-6, 0, "mafic granulite Wilks 1990")},
			{Name: "root", Thickness: 12e3, Root: true, Rock: rock(t, 3500, 0.1e-6, 0, "dry eclogite Zhang 2007")},
			{Name: "mantle", Thickness: 50e3, Rock: rock(t, 3350, 0, 0, wetOlivine, "wet olivine diffusion Hirth 2003")},
		},
		Base: column.Base{Boundary: column.HalfSpace, Temperature: 1623.15, HasTemperature: true,
			Rock: rock(t, 3340, 0, 0, wetOlivine)},
		Limits: rheology.Limits{Lowest: 1e18, Highest: 1e24},
	}
}

func ExampleNew() { // two layers given by numbers, no temperature
	number := func(rho, eta float64) column.Rock {
		return column.Rock{Density: column.Uniform(rho), Viscosity: column.Viscosity{Top: eta, Bottom: eta, Exponent: 1}}
	}
	s, err := state.New(&column.Column{
		Gravity: 9.81,
		Surface: column.Surface{Boundary: column.Rigid},
		Layers: []column.Layer{
			{Name: "upper", Thickness: 10e3, Rock: number(3300, 1e21)},
			{Name: "lower", Thickness: 10e3, Rock: number(3200, 1e21)},
		},
		Base: column.Base{Boundary: column.Rigid},
	}, 1e-15)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("contact %.0f kg/m³, pressure at the base %.1f MPa, temperature: %v\n", s.Jumps[1], s.PressureAt(1, 20e3)/1e6, s.HasTemperature)
	// Output: contact -100 kg/m³, pressure at the base 637.6 MPa, temperature: false
}

func BenchmarkNew(b *testing.B) {
	c := arc(b)
	for b.Loop() {
		if _, err := state.New(c, 1e-15); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkViscosityAt(b *testing.B) {
	s, err := state.New(arc(b), 1e-15)
	if err != nil {
		b.Fatal(err)
	}
	for i, name := range []string{"one law", "two laws", "one law again", "root", "two laws of olivine"} {
		top, bottom := s.Span(i)
		z := top + 0.37*(bottom-top)
		b.Run(name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				s.ViscosityAt(i, z)
			}
		})
	}
}
