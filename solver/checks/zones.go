package checks

import (
	"context"
	"math"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/excision"
	"keelfall/solver/heat"
)

// zoneChecks are shear zones in balance with a force, and through time.
func zoneChecks() []Check {
	const anderson = "derived: Coulomb friction on a plane that extension unloads (Anderson); recomputed by raising the tension depth by depth until the plane slides"
	dip := math.Pi / 3
	const e, myr15 = 1.5e-15, 15 * myr
	c := 1e-3 / (365.25 * 86400) / 2 // m/s, of a 30° zone that slips at 1 mm/yr
	return []Check{
		{"strength of a frictional zone: dip 60°, μ 0.6, λ_p 0.4, 15 km of 2700 kg/m³", "N/m", 1.214844925e12, 5e-10, anderson, Derived,
			func(context.Context) (float64, error) { return frictional(dip) }},
		{"dip of the weakest frictional zone, μ 0.6: 45° + φ/2", "°", 60.4818783, 1e-7, anderson, Derived, weakestDip},
		{"strength of a creeping zone: n 3, dip 40°, 500 m wide, slipping 1 mm/yr, 20 km at one temperature: (2/sin 2θ) ∫2ηε dz", "N/m",
			2 / math.Sin(80*math.Pi/180) * 2 * 1e21 * 1e-15 * math.Cbrt(excision.StandardSlip/1000/1e-15) * 20e3, 1e-12,
			"derived, ε half of the engineering rate", Derived, creeping},
		{"warming on a plane that makes 30 mW/m² for 2 Myr: (q/k) √(κt/π)", "K",
			0.03 / 3 * math.Sqrt(1e-6*2*myr/math.Pi), 5e-3, "plane source in an infinite solid, Carslaw & Jaeger 1959", Published, planeSource},
		{"a zone that runs away by its own heat without conduction, over its time ∫ρc dT/(2τε)", "", 1, 2e-3,
			"derived: a constant force is a constant stress τ on one law at one temperature, to the rate at which it is held", Derived, runaway},
		{"arc mean after 15 Myr at 1.5e-15 1/s, 40 % of it on a zone: 12 km exp(−Et), as by uniform stretching", "km", 12 * math.Exp(-e*myr15), 2e-5,
			"derived: volume of the layer over the arc's width", Derived, func(ctx context.Context) (float64, error) {
				r, err := excision.Run(ctx, cutPlan(e, excision.Zone{Drive: excision.ExtensionShare, Share: 0.4}), 1, myr15)
				if err != nil {
					return 0, err
				}
				return r.History.ArcMean[len(r.History.ArcMean)-1] / 1e3, nil
			}},
		{"12 km cut out at 0.5 mm/yr while they stretch at 1.5e-15 1/s: ln(1 + e h/c)/e", "Myr", math.Log1p(e*12e3/c) / e / myr, 5e-6,
			"derived: dh/dt = −e h − c", Derived, func(ctx context.Context) (float64, error) {
				r, err := excision.Run(ctx, cutPlan(e, excision.Zone{SlipRate: 2 * c}), 1, 30*myr)
				if err != nil {
					return 0, err
				}
				return r.CutThroughTime / myr, nil
			}},
	}
}

// plain is rock of one density and viscosity.
func plain(density, eta, n float64) column.Rock {
	return column.Rock{Density: column.Uniform(density), Conductivity: column.Conductivity{Reference: 3}, HeatCapacity: 3 / 1e-6 / density,
		Viscosity: column.Viscosity{Top: eta, Bottom: eta, Exponent: n, Factor: 1}}
}

// balancePlan is one layer, at one temperature, and a zone through it.
func balancePlan(thickness float64, r column.Rock, z excision.Zone) excision.Plan {
	z.Name, z.Cuts, z.To, z.Drive = "zone", []string{"crust"}, myr, excision.ForceBalance
	return excision.Plan{ArcWidth: 150e3, Reference: 1e-15, Zones: []excision.Zone{z}, Heat: heat.Plan{Column: &column.Column{Gravity: g, Surface: column.Surface{Temperature: 700},
		Layers: []column.Layer{{Name: "crust", Thickness: thickness, Rock: r}},
		Base:   column.Base{Boundary: column.HalfSpace, HasTemperature: true, Temperature: 700, Rock: plain(3300, 1e20, 1)}}}}
}

func bears(p excision.Plan) (float64, error) {
	ev, err := excision.Begin(p)
	if err != nil {
		return 0, err
	}
	return ev.StrengthOf("zone", excision.StandardSlip)
}

// frictional is the strength of a zone whose creep is too strong to matter.
func frictional(dip float64) (float64, error) {
	return bears(balancePlan(15e3, plain(2700, 1e40, 1), excision.Zone{Dip: dip, Width: 100, FarField: -1, Friction: &rheology.Friction{Angle: math.Atan(0.6), PoreFluid: 0.4}}))
}

// weakestDip is where the strength's derivative to the dip changes sign, in degrees.
func weakestDip(context.Context) (float64, error) {
	lo, hi := math.Pi/4, 80*math.Pi/180
	const d = 1e-3
	for range 40 {
		mid := (lo + hi) / 2
		a, err := frictional(mid - d)
		if err != nil {
			return 0, err
		}
		b, err := frictional(mid + d)
		if err != nil {
			return 0, err
		}
		if b > a {
			hi = mid
		} else {
			lo = mid
		}
	}
	return lo * 180 / math.Pi, nil
}

func creeping(context.Context) (float64, error) {
	return bears(balancePlan(20e3, plain(2800, 1e21, 3), excision.Zone{Dip: 40 * math.Pi / 180, Width: 500, FarField: -1}))
}

// planeSource is the warming at the contact of two layers in which heat is made.
func planeSource(ctx context.Context) (float64, error) {
	c := &column.Column{Gravity: g, Surface: column.Surface{Temperature: 700}, Base: column.Base{Boundary: column.HalfSpace, HasTemperature: true, Temperature: 700, Rock: plain(3000, 1e21, 1)},
		Layers: []column.Layer{{Name: "above", Thickness: 50e3, Rock: plain(3000, 1e21, 1)}, {Name: "below", Thickness: 50e3, Rock: plain(3000, 1e21, 1)}}}
	ev, err := heat.Begin(heat.Plan{Column: c, Tolerance: 0.01})
	if err != nil {
		return 0, err
	}
	if err := ev.Heat(heat.Source{BaseOf: "above", Power: 0.03}); err != nil {
		return 0, err
	}
	if err := ev.Advance(ctx, 2*myr); err != nil {
		return 0, err
	}
	_, p, err := ev.Snapshot()
	if err != nil {
		return 0, err
	}
	T, _, _ := p.Layers[0].At(50e3)
	return T - 700, nil
}

// cutPlan is a root of 12 km under a crust without a temperature, stretched at e and cut by
// a 30° zone.
func cutPlan(e float64, z excision.Zone) excision.Plan {
	z.Name, z.Cuts, z.Dip, z.To = "zone", []string{"root"}, math.Pi/6, math.Inf(1)
	return excision.Plan{ArcWidth: 150e3, Zones: []excision.Zone{z}, Heat: heat.Plan{ExtensionRate: e, Column: &column.Column{Gravity: g,
		Layers: []column.Layer{{Name: "crust", Thickness: 40e3, Rock: plain(2800, 1e21, 1)}, {Name: "root", Root: true, Thickness: 12e3, Rock: plain(3400, 1e21, 1)}},
		Base:   column.Base{Boundary: column.HalfSpace, Rock: plain(3250, 1e21, 1)}}}}
}

// runaway is the time at which a zone in wet quartzite runs away over that by quadrature.
// Heat is spread over twice the thickness of the quartzite above its base and below; all
// other rock is soft. The zone is weaker than its rock by factor, so that the plate stays.
func runaway(ctx context.Context) (float64, error) {
	const T0, tau, factor, dip, thick, density = 570.0, 1e8, 0.03, math.Pi / 4, 2e3, 2800.0
	law, err := rheology.Find("wet quartzite Hirth 2001")
	if err != nil {
		return 0, err
	}
	creep := &rheology.Creep{Laws: []rheology.Law{law}}
	width := 4 * thick * math.Cos(dip)
	quartzite := plain(density, 0, 1)
	quartzite.Viscosity = column.Viscosity{Creep: creep}
	quartzite.Water, quartzite.WaterMeasure = 1e8, rheology.WaterFugacity
	p := balancePlan(thick, quartzite, excision.Zone{Dip: dip, LayeringDip: dip, Width: width, FarField: 2 * factor * tau * thick, StrengthFactor: factor})
	c := p.Heat.Column
	c.Surface.Temperature, c.Base.Temperature = T0, T0
	c.Layers[0].Root = true
	c.Layers = []column.Layer{{Name: "cover", Thickness: 10e3, Rock: plain(density, 1e10, 1)}, c.Layers[0], {Name: "below", Thickness: 20e3, Rock: plain(density, 1e10, 1)}}
	for i := range c.Layers {
		c.Layers[i].Conductivity.Reference = 1e-5
	}
	p.ArcWidth, p.Zones[0].To = 1e9, 100*myr
	r, err := excision.Run(ctx, p, 1, 10*myr)
	if err != nil {
		return 0, err
	}
	var want float64
	const dT = 0.1
	for T := T0 + dT/2; ; T += dT {
		rate, err := creep.StrainRate(tau, rheology.Conditions{T: T, Water: 1e8, WaterMeasure: rheology.WaterFugacity})
		if err != nil {
			return 0, err
		}
		if 2*width*rate > excision.FastestSlip {
			break
		}
		want += dT * density * c.Layers[0].HeatCapacity / (2 * factor * tau * rate)
	}
	return r.Zones[0].Runaway / want, nil
}
