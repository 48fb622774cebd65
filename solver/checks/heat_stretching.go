package checks

import (
	"context"
	"math"

	"keelfall/column"
	"keelfall/solver/heat"
)

func stretchingChecks() []Check {
	list := []Check{
		{"stretching half-space, steady gradient at the surface", "K/km", 32.800723, 2e-4, "derived: T_s + ΔT erf(z √(e/2κ))", Derived,
			stretched(func(p *heat.Profile) float64 { return p.SurfaceFlow / 3 * 1e3 })},
		{"stretching half-space, steady T − T_s at 30 km", "K", 854.3838, 1e-4, "derived: T_s + ΔT erf(z √(e/2κ))", Derived,
			stretched(func(p *heat.Profile) float64 { return temperature(p, 30e3) - 273.15 })},
	}
	for _, v := range []struct {
		name              string
		beta, after, want float64
	}{
		{"lithosphere stretched by 2, heat flow after half a time constant", 2, 0.5, 1.767544965},
		{"lithosphere stretched by 4, heat flow after a time constant", 4, 1, 1.685809994},
	} {
		list = append(list, Check{v.name, "", v.want, 3e-4, "McKenzie 1978, EPSL 40; digits derived", Published,
			func(ctx context.Context) (float64, error) { return relaxed(ctx, v.beta, v.after) }})
	}
	return list
}

// stretched takes a hot column to the steady state of stretching at 1e-15 1/s.
func stretched(read func(*heat.Profile) float64) func(context.Context) (float64, error) {
	return func(ctx context.Context) (float64, error) {
		const h = 300e3
		c := slab(column.HalfSpace, column.Point{Temperature: 273.15}, column.Point{Depth: 100e3, Temperature: 1573.15}, column.Point{Depth: h, Temperature: 1573.15})
		p, err := run(ctx, heat.Plan{Column: c, ExtensionRate: 1e-15, Tolerance: 0.05, Points: 400}, 250*myr)
		if err != nil {
			return 0, err
		}
		return read(p), nil
	}
}

// relaxed is the surface heat flow, relative to that before, of a plate stretched at once
// by beta, after so many thermal time constants L²/(π²κ).
func relaxed(ctx context.Context, beta, after float64) (float64, error) {
	const h, dT, at = 125e3, 1300.0, 1e-4 * myr
	c := slab(column.HalfSpace, column.Point{Temperature: 273.15}, column.Point{Depth: h, Temperature: 273.15 + dT})
	p, err := run(ctx, heat.Plan{Column: c, Tolerance: 0.02, Points: 600, Events: []heat.Event{{Verb: "stretch", To: at, Rate: math.Log(beta) / at}}}, at+after*h*h/(math.Pi*math.Pi*kappa))
	if err != nil {
		return 0, err
	}
	return p.SurfaceFlow / (3 * dT / h), nil
}
