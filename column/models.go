package column

import (
	"math"

	"keelfall/rheology"
)

// Uniform is a density in kg/m³ that is what it is at depth: in-situ, no thermal
// buoyancy, no compositional gradient.
type Uniform float64

// Linear is a density that grades with composition from the layer's top to its
// base, kg/m³ in situ. All of its gradient is compositional: a displaced parcel
// keeps its density, so a downward increase is stable and a decrease drives flow.
type Linear struct{ Top, Bottom float64 }

// EquationOfState is the density of one composition,
//
//	ρ = Reference [1 − Expansivity (T − ReferenceTemperature)] (1 + Compressibility P),
//
// in kg/m³, with T in K and P in Pa. It has no compositional gradient: a displaced
// parcel compresses with its surroundings and only its temperature makes it buoyant.
// A common linearised form; typical expansivities are 2e-5 to 4e-5 1/K and
// compressibilities 6e-12 to 2e-11 1/Pa (from memory).
type EquationOfState struct {
	Reference            float64 // kg/m³ at the reference temperature and P = 0
	Expansivity          float64 // 1/K
	Compressibility      float64 // 1/Pa
	ReferenceTemperature float64 // K
}

var (
	_ Density = Uniform(0)
	_ Density = Linear{}
	_ Density = EquationOfState{}
)

// At returns the density in kg/m³.
func (u Uniform) At(_, _, _ float64) float64 { return float64(u) }

// PerKelvin is zero: a plain number has no thermal buoyancy.
func (u Uniform) PerKelvin(_, _, _ float64) float64 { return 0 }

// PerPascal is zero: a plain number is the density at depth.
func (u Uniform) PerPascal(_, _, _ float64) float64 { return 0 }

// Gradient is zero.
func (u Uniform) Gradient(_, _, _ float64) float64 { return 0 }

// NeedsTemperature is false.
func (u Uniform) NeedsTemperature() bool { return false }

// At returns the density in kg/m³ at the relative depth x.
func (l Linear) At(_, _, x float64) float64 { return l.Top + (l.Bottom-l.Top)*x }

// PerKelvin is zero.
func (l Linear) PerKelvin(_, _, _ float64) float64 { return 0 }

// PerPascal is zero.
func (l Linear) PerPascal(_, _, _ float64) float64 { return 0 }

// Gradient returns Bottom − Top, kg/m³ over the layer.
func (l Linear) Gradient(_, _, _ float64) float64 { return l.Bottom - l.Top }

// NeedsTemperature is false.
func (l Linear) NeedsTemperature() bool { return false }

// At returns the density in kg/m³ at T in K and P in Pa.
func (e EquationOfState) At(T, P, _ float64) float64 {
	return e.Reference * (1 - e.Expansivity*(T-e.ReferenceTemperature)) * (1 + e.Compressibility*P)
}

// PerKelvin returns (∂ρ/∂T)_P = −Reference Expansivity (1 + Compressibility P).
func (e EquationOfState) PerKelvin(_, P, _ float64) float64 {
	return -e.Reference * e.Expansivity * (1 + e.Compressibility*P)
}

// PerPascal returns (∂ρ/∂P)_T = Reference [1 − Expansivity (T − ReferenceTemperature)]
// Compressibility.
func (e EquationOfState) PerPascal(T, _, _ float64) float64 {
	return e.Reference * (1 - e.Expansivity*(T-e.ReferenceTemperature)) * e.Compressibility
}

// Gradient is zero: one composition.
func (e EquationOfState) Gradient(_, _, _ float64) float64 { return 0 }

// NeedsTemperature says whether the density depends on temperature at all.
func (e EquationOfState) NeedsTemperature() bool { return e.Expansivity != 0 }

// At returns the viscosity in Pa s of a viscosity given in Pa s at the relative depth
// x of its layer, and its stress exponent:
//
//	η = Factor Top (Bottom/Top)^x
//
// The column's viscosity limits do not touch a number the user typed. It is not for
// creep laws, which need a temperature and a strain rate.
func (v *Viscosity) At(x float64) (eta, n float64) {
	eta = v.Top * v.FactorOr1()
	if v.Bottom != v.Top {
		eta *= math.Exp(x * math.Log(v.Bottom/v.Top))
	}
	return eta, v.Exponent
}

// FactorOr1 returns the viscosity factor, 1 where none is set.
func (v *Viscosity) FactorOr1() float64 {
	if v.Factor == 0 {
		return 1
	}
	return v.Factor
}

// Value returns the conductivity in W/m/K at T in K and P in Pa. It is not positive
// where the linear forms are used too far; callers check.
func (k Conductivity) Value(T, P float64) float64 {
	return k.Reference * (1 + k.PerPascal*P) / (1 + k.PerKelvin*(T-k.At))
}

// Partials returns ∂κ_c/∂T in W/m/K² and ∂κ_c/∂P in W/m/K/Pa.
func (k Conductivity) Partials(T, P float64) (perKelvin, perPascal float64) {
	d := 1 + k.PerKelvin*(T-k.At)
	return -k.Reference * (1 + k.PerPascal*P) * k.PerKelvin / (d * d), k.Reference * k.PerPascal / d
}

// At returns the heat production in W/m³ at the depth below the layer's top, m.
func (h HeatProduction) At(below float64) float64 {
	if h.DecayLength == 0 {
		return h.Top
	}
	return h.Top * math.Exp(-below/h.DecayLength)
}

// Integral returns the heat made between the layer's top and the depth below it, in
// W/m²: Top D (1 − exp(−below/D)), exact. Source: Lachenbruch 1968, JGR 73.
func (h HeatProduction) Integral(below float64) float64 {
	if h.DecayLength == 0 {
		return h.Top * below
	}
	return -h.Top * h.DecayLength * math.Expm1(-below/h.DecayLength)
}

// Conditions returns what the rock's creep laws are evaluated at.
func (r *Rock) Conditions(T, P float64) rheology.Conditions {
	return rheology.Conditions{T: T, P: P, GrainSize: r.GrainSize, Water: r.Water, WaterMeasure: r.WaterMeasure}
}

// CreepWith returns the rock's creep laws with its own viscosity factor multiplied in,
// the column's limits in place of theirs, and its friction, piezometer and melt; nil where
// its viscosity is a number.
func (r *Rock) CreepWith(limits rheology.Limits) *rheology.Creep {
	if r.Viscosity.Creep == nil {
		return nil
	}
	c := *r.Viscosity.Creep
	if c.Factor == 0 {
		c.Factor = 1
	}
	c.Factor *= r.Viscosity.FactorOr1()
	c.Limits = limits
	if r.Friction != nil {
		c.Friction = r.Friction
	}
	if r.Piezometer != nil {
		c.Piezometer = r.Piezometer
	}
	if m := r.Melt; m != nil {
		c.Melt = func(T, P float64) float64 { phi, _ := m.At(T, P); return phi }
		c.Weakening = m.Weakening
	}
	return &c
}

// HasTemperature says whether the column has one: a given geotherm, or a basal
// temperature or heat flow to compute one from.
func (c *Column) HasTemperature() bool {
	return len(c.Geotherm) > 0 || c.Base.HasTemperature || c.Base.HasHeatFlow
}
