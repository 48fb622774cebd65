package drip

import (
	"fmt"

	"keelfall/solver/state"
)

// RateDependent says whether any viscosity of s depends on strain rate: a stress
// exponent above 1 in a layer or in the half-space.
func RateDependent(s *state.State) bool {
	const newtonian = 1 + 1e-6
	for _, l := range s.Layers {
		for _, p := range l.Points {
			if p.Exponent > newtonian {
				return true
			}
		}
	}
	return s.Base.Exponent > newtonian
}

// rateCaution holds the drip's own strain rate against the one the viscosities are for, and
// says where they are more than a factor of 3 apart in rock that is not Newtonian.
func rateCaution(s *state.State, r *Result) string {
	start, end, ref := r.StrainRate, r.StrainRateEnd, s.StrainRate
	if !RateDependent(s) || end <= 3*ref && end >= ref/3 && start <= 3*ref && start >= ref/3 {
		return ""
	}
	return fmt.Sprintf("the drip's own strain rate in the root goes from %.1e to %.1e 1/s, the viscosities are for %.1e 1/s: more than a factor of 3 apart, and the rock is not Newtonian",
		start, end, ref)
}
