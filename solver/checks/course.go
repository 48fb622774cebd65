package checks

import (
	"context"
	"math"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/state"
)

// courseChecks are drips of columns that change with time.
func courseChecks() []Check {
	return []Check{
		{"growth while stretching, half-spaces, q₀ 2e-14 1/s, e 3e-15 1/s: time until ln(ξ/ξ₀) = 1.2003778905880707", "Myr", 2, 1e-5,
			"ln(ξ/ξ₀) = (q₀/e)(exp(et) − 1) − et with k falling as exp(−et), derived", Derived, stretchedDrip},
		{"a root followed through time in a column where nothing changes, against its exact solution: ratio of the drip times", "", 1, 2e-6,
			"exact solution of dξ/dt = Aξ for a constant A, derived", Derived, stillDrip},
	}
}

// stretchedDrip is the drip time of a thick layer between walls far away whose criterion
// is the amplitude after 2 Myr, in Myr.
func stretchedDrip(ctx context.Context) (float64, error) {
	const q0, e, lambda, drho, thick, a0 = 2e-14, 3e-15, 10e3, 100.0, 2000e3, 500.0
	eta := drho * g / (4 * q0 * 2 * math.Pi / lambda) // q = Δρ g/(4ηk) of two half-spaces
	rock := func(rho float64) column.Rock {
		return column.Rock{Density: column.Uniform(rho), Viscosity: column.Viscosity{Top: eta, Bottom: eta, Exponent: 1, Factor: 1}}
	}
	c := &column.Column{Gravity: g, Surface: column.Surface{Boundary: column.Rigid},
		Layers: []column.Layer{{Name: "root", Root: true, Thickness: thick, Rock: rock(3300 + drho)}},
		Base:   column.Base{Boundary: column.HalfSpace, Rock: rock(3300)}}
	set := drip.Settings{Amplitude: a0, Window: 3 * myr, Removes: 1,
		Criterion: a0 * math.Exp(1.2003778905880707) / (thick * math.Exp(-e*2*myr))} // of the thickness then
	plan := drip.Plan{Begin: func() (drip.Motion, error) { return drip.NewCold(c, e), nil }}
	// the longest wavelength is the fastest: the one asked for
	r, err := drip.Through(ctx, plan, set, drip.Options{From: 0.9 * lambda, To: lambda, Workers: 1})
	if err != nil {
		return 0, err
	}
	return r.Time / myr, nil
}

// stillDrip is the ratio of a root's drip time by steps to the exact one.
func stillDrip(ctx context.Context) (float64, error) {
	rock := func(rho, eta float64) column.Rock {
		return column.Rock{Density: column.Uniform(rho), Viscosity: column.Viscosity{Top: eta, Bottom: eta, Exponent: 1, Factor: 1}}
	}
	c := &column.Column{Gravity: g, Surface: column.Surface{Boundary: column.Free},
		Layers: []column.Layer{
			{Name: "upper crust", Thickness: 10e3, Rock: rock(2700, 1e18)},
			{Name: "crust", Thickness: 30e3, Rock: rock(2850, 1e21)},
			{Name: "root", Thickness: 12e3, Root: true, Rock: rock(3450, 2e20)},
		},
		Base: column.Base{Boundary: column.HalfSpace, Rock: rock(3270, 1e20)}}
	set := drip.Settings{Amplitude: 500, Criterion: 1, Window: 30 * myr, Removes: 1}
	s, err := state.New(c, 0)
	if err != nil {
		return 0, err
	}
	exact, err := drip.Time(ctx, s, set, drip.Options{Workers: 1})
	if err != nil {
		return 0, err
	}
	plan := drip.Plan{Begin: func() (drip.Motion, error) { return drip.NewCold(c, 0), nil }}
	r, err := drip.Through(ctx, plan, set, drip.Options{Workers: 1})
	if err != nil {
		return 0, err
	}
	return r.Time / exact, nil
}
