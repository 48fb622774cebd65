package checks

import (
	"context"
	"fmt"
	"math"

	"keelfall/column"
	"keelfall/solver/heat"
)

const kappa = 1e-6 // m²/s, of the rock conducting, with k = 3 W/m/K

// conducting is a rock of diffusivity 1e-6 m²/s.
func conducting() column.Rock {
	return column.Rock{Density: column.Uniform(3000), HeatCapacity: 1000, Conductivity: column.Conductivity{Reference: 3},
		Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1}}
}

// slab is one layer of it with temperatures at points of depth and both ends kept there;
// rock of the base comes in below where open.
func slab(boundary column.Boundary, points ...column.Point) *column.Column {
	last := points[len(points)-1]
	return &column.Column{Gravity: g, Surface: column.Surface{Temperature: points[0].Temperature}, Geotherm: points,
		Layers: []column.Layer{{Name: "rock", Thickness: last.Depth, Rock: conducting()}},
		Base:   column.Base{Boundary: boundary, HasTemperature: true, Temperature: last.Temperature, Rock: conducting()}}
}

// run advances a plan and returns its profile.
func run(ctx context.Context, p heat.Plan, t float64) (*heat.Profile, error) {
	ev, err := heat.Begin(p)
	if err != nil {
		return nil, err
	}
	if err := ev.Advance(ctx, t); err != nil {
		return nil, err
	}
	if e := ev.Energy(); !(math.Abs(e.Missing) <= 1e-10*e.Moved) {
		return nil, fmt.Errorf("the energy balance is off by %g of %g J/m²", e.Missing, e.Moved)
	}
	_, prof, err := ev.Snapshot()
	return prof, err
}

// temperature is T at a depth.
func temperature(p *heat.Profile, z float64) float64 {
	for i := range p.Layers {
		if l := &p.Layers[i]; z <= l.Bottom {
			T, _, _ := l.At(z)
			return T
		}
	}
	return math.NaN()
}

const carslaw = "Carslaw & Jaeger 1959, Conduction of Heat in Solids"

func conductionChecks() []Check {
	return append([]Check{
		{"cooling half-space, share of the excess left at 40 km after 20 Myr", "", math.Erf(40e3 / math.Sqrt(4*kappa*20*myr)), 2e-4, carslaw + ", erf", Published, cooling},
		{"slab hot in its lower half, excess at a third of its depth after t = 0.05 L²/κ", "", fourierStep(1.0/3, 0.05), 2e-4, carslaw + ", Fourier series", Published, halfHot},
		{"surface temperature going up and down, swing at one skin depth", "", math.Exp(-1) * math.Sin(2*math.Pi*2.25-1), 1e-3, carslaw + ", periodic surface temperature", Published, periodic},
		{"dike of 2 km, excess in its middle after 1 Myr", "", math.Erf(1000 / math.Sqrt(4*kappa*myr)), 5e-4, carslaw + ", a pair of erf", Published, dike},
		{"sheet solidifying in cold rock, L/(cΔT) = 0.4: λ", "", 0.6066644119, 2e-3, "Neumann; " + carslaw + "; melting here spread over 2 K", Derived, solidifying},
		{"melt solidifying under a cold surface, L/(cΔT) = 1: λ", "", 0.6200626333, 2e-3, "Stefan; " + carslaw + "; melting here spread over 2 K", Derived, freezing},
		{"steady geotherm reached from a straight one, heat production exp(−z/D), at 20 km", "K", lachenbruch(20e3), 1e-5, "Lachenbruch 1968, JGR 73", Published, approach},
		{"erosion at 1 mm/yr for 10 Myr, T − T_s at 10 km", "K", eroded(10e3, 10*myr), 2e-4, carslaw + ", moving medium; Benfield 1949", Published, eroding},
	}, stretchingChecks()...)
}

func cooling(ctx context.Context) (float64, error) {
	c := slab(column.Rigid, column.Point{Temperature: 1573.15}, column.Point{Depth: 400e3, Temperature: 1573.15})
	c.Surface.Temperature = 273.15
	p, err := run(ctx, heat.Plan{Column: c, Tolerance: 0.02, Points: 600}, 20*myr)
	if err != nil {
		return 0, err
	}
	return (temperature(p, 40e3) - 273.15) / 1300, nil
}

// fourierStep is the excess in a slab that was hot (1) in its lower half, both ends at 0.
func fourierStep(x, t float64) float64 {
	var sum float64
	for n := 1; n < 60; n++ {
		k := float64(n) * math.Pi
		sum += 2 / k * (math.Cos(k/2) - math.Cos(k)) * math.Sin(k*x) * math.Exp(-k*k*t)
	}
	return sum
}

func halfHot(ctx context.Context) (float64, error) {
	const h = 50e3
	c := slab(column.Rigid, column.Point{Temperature: 300}, column.Point{Depth: h, Temperature: 300})
	hot := heat.Event{Verb: "intrude", Name: "hot", Layer: "rock", Thickness: h, Temperature: 1300, Rock: conducting()}
	p, err := run(ctx, heat.Plan{Column: c, Events: []heat.Event{hot}, Tolerance: 0.005, Points: 600}, 0.05*4*h*h/kappa)
	if err != nil {
		return 0, err
	}
	return (temperature(p, 2*h/3) - 300) / 1000, nil
}

func periodic(ctx context.Context) (float64, error) {
	const period, swing, mean = 1 * myr, 50.0, 400.0
	const omega = 2 * math.Pi / period
	skin := math.Sqrt(2 * kappa / omega)
	var points []column.Point
	for i := range 2001 {
		z := 12 * skin * float64(i) / 2000
		points = append(points, column.Point{Depth: z, Temperature: mean + swing*math.Exp(-z/skin)*math.Sin(-z/skin)})
	}
	c := slab(column.Rigid, points...)
	p, err := run(ctx, heat.Plan{Column: c, Tolerance: 0.005, SurfaceTemperature: func(t float64) float64 { return mean + swing*math.Sin(omega*t) }}, 2.25*period)
	if err != nil {
		return 0, err
	}
	return (temperature(p, skin) - mean) / swing, nil
}

func dike(ctx context.Context) (float64, error) {
	const h = 50e3
	c := slab(column.Rigid, column.Point{Temperature: 600}, column.Point{Depth: h, Temperature: 600})
	below := c.Layers[0]
	below.Name = "below"
	c.Layers = append(c.Layers, below)
	c.Geotherm[1].Depth = 2 * h
	hot := heat.Event{Verb: "intrude", Name: "dike", Layer: "rock", Thickness: 2e3, Temperature: 1400, Rock: conducting()}
	p, err := run(ctx, heat.Plan{Column: c, Events: []heat.Event{hot}, Tolerance: 0.02, Points: 600}, myr)
	if err != nil {
		return 0, err
	}
	return (temperature(p, h+1e3) - 600) / 800, nil
}

const mushy = 2.0 // K between solidus and liquidus, for what melts at one temperature

// melting is the rock with the latent heat L in J/kg, molten at 1200 K.
func melting(latent float64) column.Rock {
	r := conducting()
	r.Melt = &column.Melt{Solidus: &column.Curve{Surface: 1200 - mushy}, Liquidus: &column.Curve{Surface: 1200}, LatentHeat: latent}
	return r
}

// solidifying gives λ through the temperature of the contact, T₀ + ΔT/(1 + erf λ), which
// does not change with time.
func solidifying(ctx context.Context) (float64, error) {
	const cold, dT, h = 700.0, 500.0, 20e3
	c := slab(column.Rigid, column.Point{Temperature: cold}, column.Point{Depth: h, Temperature: cold})
	sheet := heat.Event{Verb: "intrude", Name: "sheet", Layer: "rock", Thickness: h, Temperature: cold + dT, Rock: melting(0.4 * 1000 * dT)}
	p, err := run(ctx, heat.Plan{Column: c, Events: []heat.Event{sheet}, Tolerance: 0.2}, 0.2*myr)
	if err != nil {
		return 0, err
	}
	return math.Erfinv(dT/(temperature(p, h)-cold) - 1), nil
}

// freezing gives λ through the surface heat flow k ΔT/(erf λ √(πκt)).
func freezing(ctx context.Context) (float64, error) {
	const hot, dT, h, t = 1200.0, 500.0, 20e3, 0.5 * myr
	c := slab(column.Rigid, column.Point{Temperature: hot}, column.Point{Depth: h, Temperature: hot})
	c.Surface.Temperature = hot - dT
	c.Layers[0].Rock = melting(1000 * dT)
	p, err := run(ctx, heat.Plan{Column: c, Tolerance: 0.2}, t)
	if err != nil {
		return 0, err
	}
	return math.Erfinv(3 * dT / (p.SurfaceFlow * math.Sqrt(math.Pi*kappa*t))), nil
}

const (
	produced = 2e-6 // W/m³ at the surface
	decay    = 10e3 // m
	reduced  = 0.03 // W/m²
)

func lachenbruch(z float64) float64 {
	return 283.15 + reduced*z/3 - produced*decay*decay/3*math.Expm1(-z/decay)
}

func approach(ctx context.Context) (float64, error) {
	const h = 60e3
	c := slab(column.Rigid, column.Point{Temperature: 283.15}, column.Point{Depth: h, Temperature: 1200})
	c.Layers[0].HeatProduction = column.HeatProduction{Top: produced, DecayLength: decay}
	c.Base.HasTemperature, c.Base.HasHeatFlow = false, true
	c.Base.HeatFlow = reduced + produced*decay*math.Exp(-h/decay)
	p, err := run(ctx, heat.Plan{Column: c, Tolerance: 0.01, Points: 1000}, 3000*myr)
	if err != nil {
		return 0, err
	}
	return temperature(p, 20e3), nil
}

const (
	gradient = 0.015                   // K/m
	lowering = 1e-3 / (365.25 * 86400) // m/s
)

// eroded is T − T_s of a half-space with a gradient of old that is eroded: with v t the
// rock gone, G (z + vt) + G/2 [(z − vt) exp(−vz/κ) erfc((z − vt)/2√κt) − (z + vt) erfc((z + vt)/2√κt)].
func eroded(z, t float64) float64 {
	v, s := lowering*t, math.Sqrt(4*kappa*t)
	return gradient*(z+v) + gradient/2*((z-v)*math.Exp(-lowering*z/kappa)*math.Erfc((z-v)/s)-(z+v)*math.Erfc((z+v)/s))
}

func eroding(ctx context.Context) (float64, error) {
	const h = 150e3
	c := slab(column.Rigid, column.Point{Temperature: 280}, column.Point{Depth: h, Temperature: 280 + gradient*h})
	c.Base.HasTemperature, c.Base.HasHeatFlow, c.Base.HeatFlow = false, true, 3*gradient
	p, err := run(ctx, heat.Plan{Column: c, Events: []heat.Event{{Verb: "erode", To: 10 * myr, Rate: lowering}}}, 10*myr)
	if err != nil {
		return 0, err
	}
	return temperature(p, 10e3) - 280, nil
}
