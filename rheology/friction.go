package rheology

import (
	"fmt"
	"math"
)

// Friction is frictional (Mohr–Coulomb) yield under the lithostatic pressure P = −σ_zz,
// a principal stress:
//
//	τ_y = [C cos φ + (1 − λ_p) P sin φ]/(1 + s sin φ)
//
// s is +1 in extension, −1 in shortening, 0 where nothing strains the column
// (Conditions.Sense). Valid for Andersonian stress with one principal axis vertical; it
// has no healing and no rate dependence. Derived from the Mohr circle; the pore-fluid
// factor is that of Hubbert & Rubey 1959.
type Friction struct {
	Cohesion  float64 // C, Pa, >= 0
	Angle     float64 // φ, radians, 0 <= φ < π/2
	PoreFluid float64 // λ_p, pore pressure over lithostatic pressure, 0 to 1
}

// Yield returns τ_y in Pa at the pressure P in Pa; sense is the sign of the extension
// rate: +1, −1 or 0.
func (f *Friction) Yield(P, sense float64) float64 {
	c, perPa := f.line(sense)
	return c + perPa*P
}

// line returns τ_y = c + perPa P.
func (f *Friction) line(sense float64) (c, perPa float64) {
	sin, cos := math.Sincos(f.Angle)
	d := 1 + sense*sin
	return f.Cohesion * cos / d, (1 - f.PoreFluid) * sin / d
}

// Validate returns an error, with the numbers, for a friction that is out of range or
// leaves no strength at any pressure.
func (f *Friction) Validate() error {
	switch {
	case !(f.Cohesion >= 0) || math.IsInf(f.Cohesion, 1):
		return fmt.Errorf("rheology: friction: cohesion %g Pa, must be >= 0", f.Cohesion)
	case !(f.Angle >= 0 && f.Angle < math.Pi/2):
		return fmt.Errorf("rheology: friction: angle %g rad, must be >= 0 and below π/2", f.Angle)
	case !(f.PoreFluid >= 0 && f.PoreFluid <= 1):
		return fmt.Errorf("rheology: friction: pore-fluid factor %g, must be 0 to 1", f.PoreFluid)
	case f.Cohesion == 0 && (f.Angle == 0 || f.PoreFluid == 1):
		return fmt.Errorf("rheology: friction: cohesion 0 with angle %g rad and pore-fluid factor %g leaves no strength", f.Angle, f.PoreFluid)
	}
	return nil
}

// MaxExponent is the largest tangent exponent that yield gives: ideal plasticity has
// n = ∞, for which the growth of a perturbation is singular.
const MaxExponent = 100

// yieldAt caps the creep stress exp(x) at the yield stress exp(lnY), smoothly:
//
//	τ = (τ_c^−8 + τ_y^−8)^(−1/8),  gain = n/n_c = (τ_c/τ)^8
//
// gain is +Inf where τ_y is nothing beside τ_c.
func yieldAt(x, lnY float64) (tau, gain float64) {
	if d := x - lnY; d <= 0 {
		r := math.Exp(8 * d)
		return math.Exp(x) / root8(1+r), 1 + r
	}
	q := math.Exp(8 * (lnY - x))
	return math.Exp(lnY) / root8(1+q), 1 + 1/q
}

// unyield is the inverse: ln τ_c for a stress exp(x) below yield; +Inf at or above it.
func unyield(x, lnY float64) float64 {
	if x >= lnY {
		return math.Inf(1)
	}
	return x - math.Log1p(-math.Exp(8*(x-lnY)))/8
}

func root8(x float64) float64 { return math.Sqrt(math.Sqrt(math.Sqrt(x))) }
