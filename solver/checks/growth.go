package checks

import (
	"context"
	"math"

	"keelfall/solver/growth"
)

// rate returns the leading growth rate of c at wavenumber k (rad/m).
func rate(c *growth.Column, k float64) (float64, error) {
	s, err := growth.NewSolver(c, 0)
	if err != nil {
		return 0, err
	}
	r, err := s.Rate(2 * math.Pi / k)
	return r.Growth, err
}

// at makes a check's computation from a column, a wavenumber and a scaling of the rate.
func at(c *growth.Column, k float64, scale func(q float64) float64) func(context.Context) (float64, error) {
	return func(context.Context) (float64, error) {
		q, err := rate(c, k)
		return scale(q), err
	}
}

// peakOf makes a computation from the fastest mode of c between two wavelengths.
func peakOf(c *growth.Column, from, to float64, pick func(growth.Peak) float64) func(context.Context) (float64, error) {
	return func(ctx context.Context) (float64, error) {
		sp, err := growth.Compute(ctx, c, growth.Options{From: from, To: to, Workers: 1})
		if err != nil {
			return 0, err
		}
		return pick(sp.Fastest), nil
	}
}

const (
	g    = 9.81
	h    = 10e3  // m, a layer
	eta  = 1e21  // Pa s
	drho = 100.0 // kg/m³
	opaq = 600.0 // kh at which a layer is a half-space to double precision
)

// scaleOf is Δρgh/η, 1/s.
const scaleOf = drho * g * h / eta

func growthChecks() []Check {
	list := []Check{}
	add := func(name, unit string, want, tol float64, st Status, source string, f func(context.Context) (float64, error)) {
		list = append(list, Check{name, unit, want, tol, source, st, f})
	}
	ident := func(q float64) float64 { return q }

	// two half-spaces: a layer opaq/k thick stands for the upper one
	k := 2 * math.Pi / 200e3
	c := Layered(growth.Rigid, growth.HalfSpace, []float64{opaq / k}, []float64{3350}, []float64{1e21}, 3300, 3e20, g)
	add("two half-spaces", "1/s", 50*g/(2*k*(1e21+3e20)), 1e-10, Published,
		"Chandrasekhar 1961, Hydrodynamic and Hydromagnetic Stability, viscous limit", at(c, k, ident))
	c = Layered(growth.Rigid, growth.HalfSpace, []float64{opaq * 2 / k}, []float64{3350}, []float64{1e21}, 3300, 3e20, g)
	c.Layers[0].Viscosity = PowerLaw(1e21, 3)
	c.EtaN = 3e20 / 2
	add("two power-law half-spaces, n = 3 over n = 2", "1/s", 50*g/(2*k*(1e21/math.Sqrt(3)+3e20/math.Sqrt2)), 1e-9, Derived,
		"decay exp(−kz/√n), derived", at(c, k, ident))

	two := TwoEqualLayers(h, drho, eta, g)
	add("two equal layers, rigid walls: fastest wavelength", "b", 2.567269042, 1e-8, Published,
		"Turcotte & Schubert, Geodynamics (2.568, rounded); digits derived",
		peakOf(two, 5e3, 200e3, func(p growth.Peak) float64 { return p.Wavelength / h }))
	add("two equal layers, rigid walls: e-folding time", "η/(Δρgb)", 13.03944259, 1e-9, Published,
		"Turcotte & Schubert, Geodynamics (13.04); digits derived",
		peakOf(two, 5e3, 200e3, func(p growth.Peak) float64 { return scaleOf / p.Growth }))
	add("two unequal layers, rigid walls", "1/s", ramberg(8e3, 21e3, 4e20, 3e21, drho, 2*math.Pi/45e3), 1e-10, Published,
		"Ramberg 1968, Phys. Earth Planet. Inter. 1; closed form derived",
		at(Layered(growth.Rigid, growth.Rigid, []float64{8e3, 21e3}, []float64{3400, 3300}, []float64{4e20, 3e21}, 0, 0, g), 2*math.Pi/45e3, ident))

	hang := HangingLayer(h, drho, eta, g)
	add("hanging layer, inviscid below: kh of the peak", "", 2.119542017, 1e-8, Published,
		"geometry of Houseman & Molnar 1997, GJI 128, 125; digits derived",
		peakOf(hang, 5e3, 200e3, func(p growth.Peak) float64 { return 2 * math.Pi * h / p.Wavelength }))
	add("hanging layer, inviscid below: peak rate", "Δρgh/η", 0.1606980019, 1e-9, Published,
		"geometry of Houseman & Molnar 1997, GJI 128, 125; digits derived",
		peakOf(hang, 5e3, 200e3, func(p growth.Peak) float64 { return p.Growth / scaleOf }))

	weak := Layered(growth.Rigid, growth.HalfSpace, []float64{h}, []float64{3300 + drho}, []float64{eta}, 3300, 100*eta, g)
	add("weak layer on a wall, half-space 100 times stiffer: kh of the peak", "", 0.4857888182, 1e-8, Derived,
		"derived; limit kh → (12/m)^(1/3)", peakOf(weak, 20e3, 1000e3, func(p growth.Peak) float64 { return 2 * math.Pi * h / p.Wavelength }))
	add("weak layer on a wall, half-space 100 times stiffer: peak rate", "Δρgh/η", 0.006707879243, 1e-9, Derived,
		"derived", peakOf(weak, 20e3, 1000e3, func(p growth.Peak) float64 { return p.Growth / scaleOf }))

	for _, v := range []struct{ ratio, k, q float64 }{{2, 2.663233, 0.49014386}, {5, 5.079118, 4.21873038}} {
		c := HangingLayer(h, drho, eta, g)
		c.Layers[0].Viscosity = exponential(v.ratio)
		name := "viscosity e^(−z/L), h/L = " + map[float64]string{2: "2", 5: "5"}[v.ratio]
		add(name+": kh of the peak", "", v.k, 5e-7, Derived, "problem of Conrad & Molnar 1997, GJI 129, 95; derived",
			peakOf(c, 5e3, 100e3, func(p growth.Peak) float64 { return 2 * math.Pi * h / p.Wavelength }))
		add(name+": peak rate", "Δρgh/η₀", v.q, 1e-8, Derived, "problem of Conrad & Molnar 1997, GJI 129, 95; derived",
			peakOf(c, 5e3, 100e3, func(p growth.Peak) float64 { return p.Growth / scaleOf }))
	}
	lin := linearDensity(growth.Rigid, Uniform(eta))
	add("density falling linearly to the base: kh of the peak", "", 2.567802, 5e-7, Derived, "derived",
		peakOf(lin, 5e3, 100e3, func(p growth.Peak) float64 { return 2 * math.Pi * h / p.Wavelength }))
	add("density falling linearly to the base: peak rate", "Δρ_top gh/η", 0.05940284, 2e-7, Derived, "derived",
		peakOf(lin, 5e3, 100e3, func(p growth.Peak) float64 { return p.Growth / scaleOf }))
	add("the same on a free-slip top, kh = π/2", "Δρ_top gh/η", 1/(math.Pi*math.Pi), 1e-10, Derived, "derived",
		at(linearDensity(growth.FreeSlip, Uniform(eta)), math.Pi/2/h, func(q float64) float64 { return q / scaleOf }))
	le := linearDensity(growth.Rigid, exponential(2))
	add("density linear, viscosity e^(−2z/h): kh of the peak", "", 2.898416, 5e-7, Derived, "problem of Conrad & Molnar 1997; derived",
		peakOf(le, 5e3, 100e3, func(p growth.Peak) float64 { return 2 * math.Pi * h / p.Wavelength }))
	add("density linear, viscosity e^(−2z/h): peak rate", "Δρ_top gh/η₀", 0.12863923, 1e-7, Derived, "problem of Conrad & Molnar 1997; derived",
		peakOf(le, 5e3, 100e3, func(p growth.Peak) float64 { return p.Growth / scaleOf }))

	list = append(list, reboundChecks()...)
	list = append(list, strainChecks()...)
	for _, r := range ReferenceRates {
		add("five layers, exponential viscosities, λ = "+km(r.Wavelength), "1/s", r.Rate, 1e-8, Derived,
			"50-digit arithmetic, derived", at(Reference(), 2*math.Pi/r.Wavelength, ident))
	}
	return list
}

func km(m float64) string {
	return map[float64]string{12e3: "12 km", 60e3: "60 km", 250e3: "250 km", 2000e3: "2000 km"}[m]
}

// exponential is η e^(−z ratio/h) over a layer h.
func exponential(ratio float64) func(float64) (float64, float64) {
	return func(z float64) (float64, float64) { e := eta * math.Exp(-ratio*z/h); return e, e }
}

// linearDensity is a layer whose excess density falls from Δρ at its top to 0 at its
// base, over fluid without viscosity: no jump at the base.
func linearDensity(top growth.Boundary, visc func(float64) (float64, float64)) *growth.Column {
	return &growth.Column{Gravity: g, Top: top, Base: growth.Inviscid, Jumps: []float64{0, 0},
		Layers: []growth.Layer{{Thickness: h, Viscosity: visc, Gradient: func(float64) float64 { return -drho / h }}}}
}

// ramberg is the growth rate of a dense layer h1, η1 over h2, η2 between rigid walls:
// q = Δρ g C_WW with C the inverse of the sum of the layers' impedances
// Z = 2ηk/(s² − x²) ((sc + x, ∓x²), (∓x², sc − x)), x = kh, s = sinh x, c = cosh x.
func ramberg(h1, h2, eta1, eta2, drho, k float64) float64 {
	var ww, wu, uu float64
	for i, l := range [2]struct{ h, eta float64 }{{h1, eta1}, {h2, eta2}} {
		x := k * l.h
		s, c := math.Sinh(x), math.Cosh(x)
		f := 2 * l.eta * k / (s*s - x*x)
		ww += f * (s*c + x)
		uu += f * (s*c - x)
		wu += f * x * x * float64(1-2*i)
	}
	return drho * g * uu / (ww*uu - wu*wu)
}

func reboundChecks() []Check {
	k := 2 * math.Pi / 3000e3
	half := Layered(growth.Free, growth.HalfSpace, []float64{100e3}, []float64{3300}, []float64{eta}, 3300, eta, g)
	channel := func(base growth.Boundary) *growth.Column {
		return Layered(growth.Free, base, []float64{h}, []float64{3300}, []float64{eta}, 0, 0, g)
	}
	unit := func(q float64) float64 { return -q * 2 * eta / h / (3300 * g) } // at kh = 1
	return []Check{
		{"rebound of a half-space", "1/s", -3300 * g / (2 * eta * k), 1e-10,
			"Haskell 1935, Physics 6, 265", Published, at(half, k, func(q float64) float64 { return q })},
		{"rebound of a channel on a rigid base, kD = 1", "ρg/(2ηk)", 0.240581681183, 1e-10,
			"Haskell 1935 problem; derived", Derived, at(channel(growth.Rigid), 1/h, unit)},
		{"rebound of a channel on a free-slip base, kD = 1", "ρg/(2ηk)", 0.490894653657, 1e-10,
			"Haskell 1935 problem; derived", Derived, at(channel(growth.FreeSlip), 1/h, unit)},
	}
}
