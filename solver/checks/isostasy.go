package checks

import (
	"context"

	"keelfall/column"
	"keelfall/solver/race"
)

// isostasyChecks float columns of constant densities; their answers are rational numbers.
func isostasyChecks() []Check {
	const km = 1e3
	crust := func(thickness, density float64) race.ReferenceLayer {
		return race.ReferenceLayer{Thickness: thickness * km, Density: density}
	}
	airy := floating(3300, []race.ReferenceLayer{crust(35, 2800)}, crust(50, 2800))
	basin := floating(3300, []race.ReferenceLayer{crust(35, 2800)}, crust(20, 2800))
	cut := floating(3250, []race.ReferenceLayer{crust(50, 2850), crust(12, 3450)}, crust(50, 2850), crust(100, 3250))
	height := func(f *column.Isostasy) float64 { return f.Elevation }
	force := func(f *column.Isostasy) float64 { return f.Force }
	const thick, wet, removed = "crust of 2800 kg/m³ 50 km thick beside 35 km, over 3300 kg/m³", "crust of 2800 kg/m³ 20 km thick beside 35 km, over 3300 kg/m³, under water",
		"12 km of 3450 kg/m³ cut from under 50 km of 2850 kg/m³, over 3250 kg/m³ to 150 km"
	const ts, exact = "Airy isostasy, Turcotte & Schubert, Geodynamics; digits exact, in rational arithmetic", "exact, in rational arithmetic"
	// −15 km × 500/(3300 − 1030); force −g∫zΔρ dz with Δρ −1770 in the water, 500 below the thin crust.
	const water = exact + "; sea water of 1030 kg/m³, common practice, counted in the force"
	return []Check{
		{"elevation of " + thick, "m", 25000.0 / 11, 1e-12, ts, Derived, airy(height)},
		{"force of " + thick, "N/m", 2653159090909.0909, 1e-11, ts, Derived, airy(force)},
		{"rise after " + removed, "m", 9600.0 / 13, 1e-11, exact, Derived, cut(height)},
		{"gain of force by " + removed, "N/m", 1182271015384.6155, 1e-10, exact, Derived, cut(force)},
		{"elevation of " + wet, "m", -7500000.0 / 2270, 1e-12, water, Derived, basin(height)},
		{"force of " + wet, "N/m", -1577648953744.4934, 1e-11, water, Derived, basin(force)},
	}
}

// floating is what a column of layers of one density each, over a half-space, has beside
// a reference column at sea level.
func floating(below float64, reference []race.ReferenceLayer, layers ...race.ReferenceLayer) func(func(*column.Isostasy) float64) func(context.Context) (float64, error) {
	rock := func(density float64) column.Rock {
		return column.Rock{Density: column.Uniform(density), Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1, Factor: 1}}
	}
	p := &race.Problem{Reference: &race.Reference{Layers: reference}, Column: column.Column{Gravity: 9.81, Base: column.Base{Boundary: column.HalfSpace, Rock: rock(below)}}}
	for i, l := range layers {
		p.Column.Layers = append(p.Column.Layers, column.Layer{Name: string(rune('a' + i)), Thickness: l.Thickness, Rock: rock(l.Density)})
	}
	return func(of func(*column.Isostasy) float64) func(context.Context) (float64, error) {
		return func(context.Context) (float64, error) {
			s, err := race.Prepare(p)
			if err != nil {
				return 0, err
			}
			f, err := race.Isostasy(p, s)
			if err != nil {
				return 0, err
			}
			return of(&f.Isostasy), nil
		}
	}
}
