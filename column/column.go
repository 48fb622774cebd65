// Package column describes a lithospheric column: layers from the surface down,
// what they are made of, and the boundaries above and below.
//
// SI throughout; depth z in m, positive downward; temperature in K; pressure in Pa.
package column

import "keelfall/rheology"

// Boundary is a mechanical boundary condition.
type Boundary int

// The surface may be free, free-slip or rigid; the base half-space, inviscid,
// free-slip or rigid.
const (
	Free Boundary = iota
	FreeSlip
	Rigid
	HalfSpace
	Inviscid
)

// Density gives a rock's density and the derivatives that buoyancy needs.
// T is in K, P in Pa; x is the relative depth in the rock's layer, 0 at its top
// and 1 at its base (0 in the half-space).
type Density interface {
	At(T, P, x float64) float64        // ρ, kg/m³
	PerKelvin(T, P, x float64) float64 // (∂ρ/∂T)_P, kg/m³/K
	PerPascal(T, P, x float64) float64 // (∂ρ/∂P)_T, kg/m³/Pa
	Gradient(T, P, x float64) float64  // compositional (∂ρ/∂x) at fixed P and T, kg/m³
	NeedsTemperature() bool            // whether At depends on T
}

// Viscosity says how a rock flows: given in Pa s, log-linear with depth from Top to
// Bottom, with a stress exponent; or, where Creep is not nil, by creep laws.
type Viscosity struct {
	Top, Bottom float64         // Pa s, > 0; equal for a single number; unused with Creep
	Exponent    float64         // stress exponent of a given viscosity, >= 1
	Creep       *rheology.Creep // laws acting in parallel
	Factor      float64         // multiplies the result; 1 unless the user says otherwise
}

// Conductivity is κ_c = Reference (1 + PerPascal P)/(1 + PerKelvin (T − At)), W/m/K.
// A common form; Chapman 1986 and McKenzie et al. 2005 use it (both from memory).
type Conductivity struct {
	Reference float64 // W/m/K, > 0
	PerKelvin float64 // 1/K
	PerPascal float64 // 1/Pa
	At        float64 // K
}

// HeatProduction is Top exp(−(z − z_top)/DecayLength) W/m³, z_top the layer's top;
// constant where DecayLength is 0.
type HeatProduction struct {
	Top         float64 // W/m³
	DecayLength float64 // m
}

// Rock is what a layer or the half-space is made of.
type Rock struct {
	Density        Density
	Viscosity      Viscosity
	Conductivity   Conductivity
	HeatProduction HeatProduction
	HeatCapacity   float64 // J/kg/K
	GrainSize      float64 // m; 0 where not given
	Water          float64 // Pa or H/10⁶ Si, as WaterMeasure says
	WaterMeasure   rheology.WaterMeasure
	Friction       *rheology.Friction   // of creep laws only; nil: no yield
	Piezometer     *rheology.Piezometer // grain size from the stress in place of GrainSize; nil: none
	Melt           *Melt                // weakens creep; its effect on Density is there already (Molten); nil: none
	Source, Notes  string
}

// Layer is one layer of the column.
type Layer struct {
	Name      string
	Thickness float64 // m, > 0
	Root      bool    // part of the root whose fate is asked
	Rock
}

// Surface is the top of the column.
type Surface struct {
	Boundary    Boundary // Free, FreeSlip or Rigid
	Temperature float64  // K
}

// Base is what lies below the last layer.
type Base struct {
	Boundary       Boundary // HalfSpace, Inviscid, FreeSlip or Rigid
	Temperature    float64  // K; used where HasTemperature
	HeatFlow       float64  // W/m² upward into the column; used where HasHeatFlow
	HasTemperature bool
	HasHeatFlow    bool
	Rock           // meaning for HalfSpace and, its density, Inviscid
}

// Point is one depth and temperature of a given geotherm.
type Point struct{ Depth, Temperature float64 } // m, K

// Column is a whole column at one time.
type Column struct {
	Gravity  float64 // m/s²
	Surface  Surface
	Layers   []Layer // from the surface down
	Base     Base
	Limits   rheology.Limits // of creep viscosities
	Sense    float64         // sign of the extension rate, for friction: 1, -1, or 0 where nothing strains the column
	Geotherm []Point         // a given geotherm; nil: steady conduction, or none where neither Base temperature nor heat flow is given
}

// Depth returns the column's thickness in m.
func (c *Column) Depth() float64 {
	var z float64
	for i := range c.Layers {
		z += c.Layers[i].Thickness
	}
	return z
}

// RootSpan returns the indices [first, last] of the root layers; ok is false where
// no layer is marked as root. Root layers are adjacent (checked by Validate).
func (c *Column) RootSpan() (first, last int, ok bool) {
	first = -1
	for i := range c.Layers {
		if c.Layers[i].Root {
			if first < 0 {
				first = i
			}
			last = i
		}
	}
	return first, last, first >= 0
}

// RootThickness returns the sum of the root layers' thicknesses in m; 0 where no
// layer is marked as root.
func (c *Column) RootThickness() float64 {
	var h float64
	for i := range c.Layers {
		if c.Layers[i].Root {
			h += c.Layers[i].Thickness
		}
	}
	return h
}
