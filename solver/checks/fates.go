package checks

import (
	"context"
	"math"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/drip"
	"keelfall/solver/excision"
	"keelfall/solver/growth"
	"keelfall/solver/heat"
	"keelfall/solver/state"
)

const myr = 1e6 * 365.25 * 86400 // s

// hangingColumn is HangingLayer as a column: one dense layer on a rigid top over
// fluid without viscosity.
func hangingColumn(h, drho, eta float64) *column.Column {
	rock := func(rho float64) column.Rock {
		return column.Rock{Density: column.Uniform(rho), Viscosity: column.Viscosity{Top: eta, Bottom: eta, Exponent: 1, Factor: 1}}
	}
	return &column.Column{Gravity: g, Surface: column.Surface{Boundary: column.Rigid},
		Layers: []column.Layer{{Name: "root", Thickness: h, Root: true, Rock: rock(3300 + drho)}},
		Base:   column.Base{Boundary: column.Inviscid, Rock: rock(3300)}}
}

func fateChecks() []Check {
	return []Check{
		{"critical thickness 4628.414 m: its drip time (rigid top, inviscid below, a₀ 0.1 h, Δρ 100 kg/m³, 1e20 Pa s)", "Myr", 10, 5e-7,
			"derived: h at which ln 10/q is 10 Myr, q the fastest rate of Houseman & Molnar 1997, GJI 128, geometry; seven digits of h", Derived,
			func(ctx context.Context) (float64, error) {
				const thick = 4628.414
				s, err := state.New(hangingColumn(thick, 100, 1e20), 0)
				if err != nil {
					return 0, err
				}
				r, err := drip.Solve(ctx, s, drip.Settings{Amplitude: 0.1 * thick, Criterion: 1, Window: 30 * myr, Removes: 0.3}, drip.Options{Workers: 1})
				if err != nil {
					return 0, err
				}
				return r.Time / myr, nil
			}},
		{"slip that cuts out 12 km across a 30° zone, flat layering: h/sin θ", "km", 24, 1e-12,
			"plane geometry of a fault, common practice", Common, cutThrough(30, 0, func(r *excision.Result) float64 { return r.CutThroughSlip / 1e3 })},
		{"heave of the same: h/tan θ", "km", 12 / math.Tan(math.Pi/6), 1e-12,
			"plane geometry of a fault, common practice", Common, cutThrough(30, 0, func(r *excision.Result) float64 { return r.CutThroughHeave / 1e3 })},
		{"the same with layering dipping 10° towards the zone: h cos δ/sin(θ − δ)", "km", 12 * math.Cos(math.Pi/18) / math.Sin(math.Pi/9), 1e-12,
			"plane geometry of a fault, common practice", Common, cutThrough(30, 10, func(r *excision.Result) float64 { return r.CutThroughSlip / 1e3 })},
		{"arc mean after a heave of 20 km in an arc of 100 km: h heave/(B + heave) of 12 km lost", "km", 12 * 20.0 / 120, 1e-12,
			"as uniform stretching by the same extension, derived", Derived, arcMean},
		{"growing modes of one composition, compressible, not expanding", "", 0, 1e-300,
			"a displaced parcel keeps its composition, so only the surface relaxes; derived", Derived, oneComposition},
		{"pressure under 20 km of 2800 kg/m³", "MPa", 2800 * g * 20e3 / 1e6, 1e-12,
			"hydrostatic balance P = ρgz", Published, func(context.Context) (float64, error) {
				c := hangingColumn(20e3, 0, 1e21)
				c.Layers[0].Density = column.Uniform(2800)
				s, err := state.New(c, 0)
				if err != nil {
					return 0, err
				}
				return s.PressureAt(0, 20e3) / 1e6, nil
			}},
	}
}

func cutThrough(dip, layering float64, pick func(*excision.Result) float64) func(context.Context) (float64, error) {
	return func(context.Context) (float64, error) {
		r, err := excision.Solve([]excision.Zone{{Name: "zone", Dip: dip * math.Pi / 180, LayeringDip: layering * math.Pi / 180,
			Cuts: []string{"root"}, To: 100 * myr, SlipRate: 1e-3 / (365.25 * 86400)}},
			excision.Setting{Layers: []excision.Layer{{Name: "root", Thickness: 12e3, Density: 3400, Root: true}}, Gravity: g, Share: 0.3, Window: 100 * myr})
		if err != nil {
			return 0, err
		}
		return pick(r), nil
	}
}

func arcMean(context.Context) (float64, error) {
	t := 20 * myr // 1 mm/yr of heave makes 20 km
	r, err := excision.Solve([]excision.Zone{{Name: "zone", Dip: math.Pi / 4, Cuts: []string{"root"}, To: t, SlipRate: 1e-3 / (365.25 * 86400) * math.Sqrt2}},
		excision.Setting{Layers: []excision.Layer{{Name: "root", Thickness: 40e3, Density: 3400, Root: true}}, Gravity: g, ArcWidth: 100e3, Share: 0.3, Window: t})
	if err != nil {
		return 0, err
	}
	last := len(r.History.ArcMeanShare) - 1
	return 12 * r.History.ArcMeanShare[last], nil
}

// heatColumn is layers of given thickness (km), conductivity and heat production over
// a basal condition; densities do not matter.
func heatColumn(h, k []float64, production []column.HeatProduction) *column.Column {
	c := &column.Column{Gravity: g, Surface: column.Surface{Boundary: column.Free, Temperature: 273.15}, Base: column.Base{Boundary: column.HalfSpace}}
	rock := func(k float64, p column.HeatProduction) column.Rock {
		return column.Rock{Density: column.Uniform(2800), Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1, Factor: 1},
			Conductivity: column.Conductivity{Reference: k}, HeatProduction: p, HeatCapacity: 1000}
	}
	for i := range h {
		c.Layers = append(c.Layers, column.Layer{Name: string(rune('a' + i)), Thickness: h[i] * 1e3, Rock: rock(k[i], production[i])})
	}
	c.Base.Rock = rock(k[len(k)-1], column.HeatProduction{})
	return c
}

func heatChecks() []Check {
	// Lachenbruch: T = T₀ + q_m z/k + (H₀ hr²/k)(1 − exp(−z/hr)), q_s = q_m + H₀ hr
	lach := heatColumn([]float64{35}, []float64{3}, []column.HeatProduction{{Top: 2.6e-6, DecayLength: 11.7e3}})
	lach.Base.HeatFlow, lach.Base.HasHeatFlow = 30e-3, true
	// the flux that leaves the base is what the deeper sources would have added
	qm := 30e-3 - 2.6e-6*11.7e3*math.Exp(-35/11.7)
	lachenbruch := qm*35e3/3 + 2.6e-6*11.7e3*11.7e3/3*(1-math.Exp(-35/11.7))
	// layers: T falls by q/k·h + H h²/(2k) in each, q from below
	two := heatColumn([]float64{20, 40}, []float64{2.5, 3.5}, []column.HeatProduction{{Top: 1e-6}, {Top: 0.2e-6}})
	two.Base.Temperature, two.Base.HasTemperature = 1273.15, true
	// ΔT = q (h₁/k₁ + h₂/k₂) + H₂h₂²/(2k₂) + H₂h₂h₁/k₁ + H₁h₁²/(2k₁), q the basal flow
	h1, h2, k1, k2, H1, H2 := 20e3, 40e3, 2.5, 3.5, 1e-6, 0.2e-6
	basal := (1000 - H2*h2*h2/(2*k2) - H2*h2*h1/k1 - H1*h1*h1/(2*k1)) / (h1/k1 + h2/k2)
	return []Check{
		{"geotherm with heat production falling exponentially, 35 km", "K above the surface", lachenbruch, 1e-10,
			"Lachenbruch 1968, J. Geophys. Res. 73; closed form", Published, func(context.Context) (float64, error) {
				p, err := heat.Solve(lach)
				if err != nil {
					return 0, err
				}
				T, _, _ := p.Layers[0].At(35e3)
				return T - 273.15, nil
			}},
		{"basal heat flow of two layers with heat production", "mW/m²", basal * 1e3, 1e-10,
			"Carslaw & Jaeger 1959, steady conduction; closed form", Published, func(context.Context) (float64, error) {
				p, err := heat.Solve(two)
				if err != nil {
					return 0, err
				}
				return p.BaseFlow * 1e3, nil
			}},
		{"geotherm with conductivity 3/(1 + 0.001 (T − T_s)) W/m/K, 40 mW/m² over 30 km", "K above the surface", (math.Exp(1e-3*40e-3*30e3/3) - 1) / 1e-3, 1e-10,
			"Kirchhoff transform, Carslaw & Jaeger 1959; closed form", Published, func(context.Context) (float64, error) {
				c := heatColumn([]float64{30}, []float64{3}, []column.HeatProduction{{}})
				c.Base.HeatFlow, c.Base.HasHeatFlow = 40e-3, true
				c.Layers[0].Conductivity = column.Conductivity{Reference: 3, PerKelvin: 1e-3, At: 273.15}
				p, err := heat.Solve(c)
				if err != nil {
					return 0, err
				}
				T, _, _ := p.Layers[0].At(30e3)
				return T - 273.15, nil
			}},
		{"tangent exponent where n = 1 and n = 3.5 carry equal rates", "", 2.25, 1e-10, "Σ n ε/Σ ε, derived", Derived,
			func(context.Context) (float64, error) { return tangent(1, 1, 2) }},
		{"tangent exponent of 1 τ + 2 τ^3.5 at ε = 0.8", "", 1.777334739, 1e-9, "derived", Derived,
			func(context.Context) (float64, error) { return tangent(1, 2, 0.8) }},
	}
}

// tangent returns the exponent of a τ + b τ^3.5 at a strain rate.
func tangent(a, b, rate float64) (float64, error) {
	c := rheology.Creep{Laws: []rheology.Law{{Name: "linear", A: a, N: 1}, {Name: "power law", A: b, N: 3.5}}}
	r, err := c.Respond(rate, rheology.Conditions{T: 1000})
	return r.Exponent, err
}

// oneComposition counts the growing modes of 100 km of one compressible rock over a
// half-space of it, at ten wavelengths.
func oneComposition(context.Context) (float64, error) {
	rock := column.Rock{Density: column.EquationOfState{Reference: 3300, Compressibility: 1e-11, ReferenceTemperature: 293.15},
		Viscosity: column.Viscosity{Top: 1e22, Bottom: 1e20, Exponent: 1, Factor: 1}, Conductivity: column.Conductivity{Reference: 3}, HeatCapacity: 1000}
	c := &column.Column{Gravity: g, Surface: column.Surface{Boundary: column.Free, Temperature: 273.15},
		Layers: []column.Layer{{Name: "upper", Thickness: 50e3, Rock: rock}, {Name: "lower", Thickness: 50e3, Rock: rock}},
		Base:   column.Base{Boundary: column.HalfSpace, HasTemperature: true, Temperature: 1573.15, Rock: rock}}
	st, err := state.New(c, 0)
	if err != nil {
		return 0, err
	}
	s, err := growth.NewSolver(drip.Strained(st, drip.Background{}, "diffusive"), 0)
	if err != nil {
		return 0, err
	}
	var growing float64
	for i := range 10 {
		r, err := s.Rate(10e3 * math.Pow(2, float64(i)))
		if err != nil {
			return 0, err
		}
		if r.Growth > 0 {
			growing++
		}
	}
	return growing, nil
}
