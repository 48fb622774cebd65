package checks

import (
	"math"

	"keelfall/solver/growth"
)

// Uniform returns a constant viscosity for growth.Layer.
func Uniform(eta float64) func(float64) (float64, float64) {
	return func(float64) (float64, float64) { return eta, eta }
}

// PowerLaw returns constant viscosities of a rock with stress exponent n strained
// along the wavevector: η_S = η, η_N = η/n.
func PowerLaw(eta, n float64) func(float64) (float64, float64) {
	return func(float64) (float64, float64) { return eta, eta / n }
}

// Layered returns a Newtonian column of constant layers; jumps follow from the
// densities, air above, and below for a half-space or an inviscid base.
func Layered(top, base growth.Boundary, h, rho, eta []float64, rhoBelow, etaBelow, g float64) *growth.Column {
	c := &growth.Column{Gravity: g, Top: top, Base: base, EtaS: etaBelow, EtaN: etaBelow}
	prev := 0.0
	for i := range h {
		c.Layers = append(c.Layers, growth.Layer{Thickness: h[i], Viscosity: Uniform(eta[i])})
		c.Jumps = append(c.Jumps, rho[i]-prev)
		prev = rho[i]
	}
	c.Jumps = append(c.Jumps, rhoBelow-prev)
	return c
}

// TwoEqualLayers are two layers b thick between rigid walls, the upper one denser.
func TwoEqualLayers(b, drho, eta, g float64) *growth.Column {
	return Layered(growth.Rigid, growth.Rigid, []float64{b, b}, []float64{3300 + drho, 3300}, []float64{eta, eta}, 0, 0, g)
}

// HangingLayer is a dense layer h on a rigid top over fluid without viscosity.
func HangingLayer(h, drho, eta, g float64) *growth.Column {
	return Layered(growth.Rigid, growth.Inviscid, []float64{h}, []float64{3300 + drho}, []float64{eta}, 3300, 0, g)
}

// HangingRate is the closed form of HangingLayer's growth rate,
// q = (Δρgh/η)(sinh 2K − 2K)/{2K(cosh 2K + 1 + 2K²)}, K = kh
// (geometry of Houseman & Molnar 1997, GJI 128, 125; derived).
func HangingRate(h, drho, eta, g, k float64) float64 {
	K := k * h
	return drho * g * h / eta * (math.Sinh(2*K) - 2*K) / (2 * K * (math.Cosh(2*K) + 1 + 2*K*K))
}

// Reference returns the five-layer column that the speed and accuracy of the growth
// solver are stated on: exponential viscosities in a linear geotherm, jumps of density
// at every contact, a half-space of 3250 kg/m³ and 1e19 Pa s below 80 km. Its numbers
// are invented. The rates in ReferenceRates were computed in 50-digit arithmetic.
func Reference() *growth.Column {
	return ReferenceCapped(math.Inf(1))
}

// ReferenceCapped is Reference with viscosities capped, kinks where the cap bites.
func ReferenceCapped(limit float64) *growth.Column {
	type layer struct{ bottom, rho, top, b float64 }
	layers := []layer{
		{5e3, 2400, 1e25, 8000}, {20e3, 2750, math.Pow(10, 24.3), 9000},
		{35e3, 2900, math.Pow(10, 22.3), 10000}, {60e3, 3330, math.Pow(10, 22.2), 12000},
		{80e3, 3300, 1e21, 24000},
	}
	c := &growth.Column{Gravity: 9.81, Top: growth.Free, Base: growth.HalfSpace, EtaS: 1e19, EtaN: 1e19}
	temperature := func(z float64) float64 { return 283.15 + 990*z/80e3 }
	var z0, rho float64
	for _, l := range layers {
		t0 := temperature(z0)
		gl := growth.Layer{Thickness: l.bottom - z0, Viscosity: func(z float64) (float64, float64) {
			eta := math.Min(limit, l.top*math.Exp(l.b/temperature(z)-l.b/t0))
			return eta, eta
		}}
		if l.top > limit {
			t := l.b / (math.Log(limit/l.top) + l.b/t0) // where the cap stops biting
			gl.Kinks = []float64{(t - 283.15) * 80e3 / 990}
		}
		c.Layers = append(c.Layers, gl)
		c.Jumps = append(c.Jumps, l.rho-rho)
		z0, rho = l.bottom, l.rho
	}
	c.Jumps = append(c.Jumps, 3250-rho)
	return c
}

// ReferenceRates are Reference's leading growth rates in 1/s by wavelength in m
// (derived; 50-digit arithmetic).
var ReferenceRates = []struct{ Wavelength, Rate float64 }{
	{12e3, 1.673076217851e-14}, {60e3, 2.370949254543e-14},
	{250e3, 1.123536529145e-14}, {2000e3, 7.431533998011e-16},
}

// ReferenceHeated is Reference with diffusing temperature: expansivity 3e-5 1/K,
// conductivity 3 W/m/K, heat capacity 1000 J/kg/K, the same linear geotherm less an
// adiabat of 0.4 K/km.
func ReferenceHeated() *growth.Column {
	c := Reference()
	constant := func(v float64) func(float64) float64 { return func(float64) float64 { return v } }
	d := &growth.Diffusion{HalfSpace: growth.Thermal{PerKelvin: constant(-0.0975), Excess: constant(0), Conductivity: constant(3), Capacity: constant(3.25e6)}}
	rho := 0.0
	for i := range c.Layers {
		rho += c.Jumps[i]
		d.Layers = append(d.Layers, growth.Thermal{PerKelvin: constant(-3e-5 * rho), Excess: constant(990/80e3 - 4e-4),
			Conductivity: constant(3), Capacity: constant(1000 * rho)})
	}
	c.Diffusion = d
	return c
}
