// Package rheology gives the viscosity of rock: creep laws and their catalogue,
// the effective viscosity at a strain rate, and the tangent stress exponent.
//
// Every law is kept in invariant SI form,
//
//	ε_II = A τ_II^n d^-m f^r exp(-(E + P V)/(R T)),
//	ε_II = A τ_II^n d^-m f^r exp(-(E + P V)/(R T) (1 - (τ_II/τ_P)^p)^q)
//
// for low-temperature plasticity (Peierls), with ε_II² = ½ ε:ε in 1/s, τ_II² = ½ τ:τ in Pa, d the grain size in m, f the
// water fugacity in Pa or the water content in H per 10⁶ Si, P the lithostatic
// pressure in Pa. The secant viscosity is η = τ_II/(2 ε_II) in Pa s.
// Laws of one rock act in parallel: one stress, rates added. A published rate
// against differential stress becomes an invariant one through the geometry of the
// test, see Test.Factor. The laws of the catalogue keep the laboratory's numbers and,
// for each, whether it was read or recalled.
//
// Around the laws stand frictional yield (Friction), grain size that follows the stress
// (Piezometer) and rocks of several phases (Mixture).
//
// Not covered yet: low-temperature plasticity, melt.
package rheology

import "fmt"

// GasConstant is R in J/(mol K); exact since the 2019 SI definition.
const GasConstant = 8.31446261815324

// WaterMeasure says how a law counts water.
type WaterMeasure int

// A law needs no water value, a fugacity in Pa, or a content in H per 10⁶ Si.
// The two forms of one law have different constants and are never mixed.
const (
	NoWater WaterMeasure = iota
	WaterFugacity
	WaterContent
)

// String returns none, fugacity or content.
func (w WaterMeasure) String() string {
	switch w {
	case NoWater:
		return "none"
	case WaterFugacity:
		return "fugacity"
	case WaterContent:
		return "content"
	}
	return fmt.Sprintf("water measure %d", int(w))
}

// need words what a law of this measure asks of its rock.
func (w WaterMeasure) need() string {
	if w == WaterContent {
		return "a water content in H/10⁶ Si"
	}
	return "a water fugacity in Pa"
}

// Conditions are what a creep law is evaluated at.
type Conditions struct {
	T         float64 // temperature, K, > 0
	P         float64 // lithostatic pressure, Pa, >= 0
	GrainSize float64 // m; 0 where no law needs it
	Water     float64 // Pa or H/10⁶ Si, as WaterMeasure says; 0 where no law needs it

	WaterMeasure WaterMeasure // what Water counts; a law of the other measure is an error
	Sense        float64      // +1 extension, −1 shortening, 0 neither: for Friction
}

// Limits bound a creep viscosity, in Pa s. The highest acts as one more Newtonian
// mechanism at the same stress, the lowest as a dashpot at the same strain rate.
// Zero means no limit.
type Limits struct{ Lowest, Highest float64 }

// Response is how a rock answers one strain rate.
type Response struct {
	Stress    float64 // τ_II, Pa
	Viscosity float64 // τ_II/(2 ε_II), Pa s
	Exponent  float64 // tangent exponent n = d ln ε_II/d ln τ_II
	Slope     float64 // d ln τ_II/d ln ε_II of the law's own curve: 1/n but where n is limited or at a grain size held
	Capped    bool    // more than half the strain rate is taken by the upper limit
	Floored   bool    // more than half the stress is carried by the lower limit
	Yielding  bool    // friction decides: creep alone would bear more than the yield stress
	Limited   bool    // the exponent of yield is at MaxExponent, before the lower limit's part
	GrainSize float64 // m, where a Piezometer gives it, at the rock's creep stress; else 0
}
