// Package state makes a column at one time consistent: temperature, pressure,
// density and viscosity agree with one another.
package state

import (
	"keelfall/column"
)

// Point is the state of one rock at one depth.
type Point struct {
	Depth, T, P     float64 // m, K, Pa
	Density         float64 // kg/m³
	Viscosity       float64 // secant, Pa s
	Exponent        float64 // tangent stress exponent
	Stress          float64 // τ_II at the strain rate, Pa
	Capped, Floored bool    // a viscosity limit carries more than half
}

// State is a consistent column. T is NaN-free: HasTemperature is false and T zero
// where the column has no temperature.
type State struct {
	Column         *column.Column
	StrainRate     float64 // at which creep viscosities were evaluated, 1/s
	HasTemperature bool
	Layers         []Profile // one a layer, from the surface down
	Base           Point     // the half-space's rock just below the last layer
	Jumps          []float64 // [ρ] below minus above, kg/m³: surface, contacts, base
	SurfaceFlow    float64   // heat flow at the surface, W/m²
	BaseFlow       float64   // heat flow at the base, W/m²
	HeatResidual   float64   // largest relative residual of the steady heat equation
	Iterations     int
	Warnings       []string
}

// Profile is one layer's state on its own grid, top to bottom, ends included.
type Profile struct{ Points []Point }
