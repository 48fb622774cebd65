package checks

import (
	"context"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/state"
)

// heatTyped is the ratio of two drip times at 90 km: of a root in a linear geotherm, whose
// perturbation of temperature is followed with next to no diffusion, and of one without
// temperature whose layers grade by as much. The heat capacity is so large that the adiabat
// does not count.
func heatTyped(ctx context.Context) (float64, error) {
	const top, base, depth, expansivity = 300.0, 1600.0, 107e3, 3e-5
	layers := []struct {
		name                     string
		thickness, density, visc float64
	}{{"crust", 35e3, 2850, 1e22}, {"root", 12e3, 3450, 2e20}, {"mantle", 60e3, 3330, 5e19}}
	at := func(rho, z float64) float64 { return rho * (1 - expansivity*(base-top)*z/depth) }
	time := func(hot bool) (float64, error) {
		rock := func(visc float64, d column.Density) column.Rock {
			return column.Rock{Density: d, Viscosity: column.Viscosity{Top: visc, Bottom: visc, Exponent: 1, Factor: 1},
				Conductivity: column.Conductivity{Reference: 1e-3}, HeatCapacity: 1e9}
		}
		expanding := func(rho float64) column.Density {
			return column.EquationOfState{Reference: rho, Expansivity: expansivity, ReferenceTemperature: top}
		}
		c := &column.Column{Gravity: g, Surface: column.Surface{Boundary: column.Free},
			Base: column.Base{Boundary: column.HalfSpace, Rock: rock(2e19, column.Uniform(at(3330, depth)))}}
		if hot {
			c.Surface.Temperature, c.Base.HasTemperature, c.Base.Temperature = top, true, base
			c.Base.Density = expanding(3330)
		}
		z := 0.0
		for _, l := range layers {
			var d column.Density = column.Linear{Top: at(l.density, z), Bottom: at(l.density, z+l.thickness)}
			if hot {
				d = expanding(l.density)
			}
			c.Layers = append(c.Layers, column.Layer{Name: l.name, Thickness: l.thickness, Root: l.name == "root", Rock: rock(l.visc, d)})
			z += l.thickness
		}
		s, err := state.New(c, 0)
		if err != nil {
			return 0, err
		}
		set := drip.Settings{Amplitude: 500, Criterion: 1, Window: 30 * myr, Removes: 1, Thermal: "diffusive"}
		return drip.TimeAt(ctx, s, set, 90e3)
	}
	hot, err := time(true)
	if err != nil {
		return 0, err
	}
	typed, err := time(false)
	return hot / typed, err
}
