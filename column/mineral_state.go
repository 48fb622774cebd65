package column

import (
	"fmt"
	"math"
)

// ReferenceKelvin is the temperature at which the minerals' volumes and moduli stand.
const ReferenceKelvin = 298.0

// Validate returns what makes a mineral unusable: a molar mass, volume or modulus that
// is not positive, or a number that is not finite.
func (m *Mineral) Validate() error {
	if m.Name == "" {
		return fmt.Errorf("a mineral without a name")
	}
	if !positive(m.MolarMass) || !positive(m.V0) || !positive(m.K0) || !positive(m.BulkModulusDerivative) || math.IsNaN(m.A0+m.BulkModulusSlope) || math.IsInf(m.A0+m.BulkModulusSlope, 0) {
		return fmt.Errorf("%s: molar mass %g kg/mol, volume %g m³/mol, a0 %g 1/K, bulk modulus %g Pa with derivative %g and slope %g 1/K", m.Name, m.MolarMass, m.V0, m.A0, m.K0, m.BulkModulusDerivative, m.BulkModulusSlope)
	}
	return nil
}

// Volume returns the molar volume in m³/mol at T in K and P in Pa:
//
//	V_T = V0 [1 + a0 (T − T0) − 20 a0 (√T − √T0)],  K_T = K0 [1 + s (T − T0)],  T0 = 298 K
//	V   = V_T (1 + K' P/K_T)^(−1/K')                                (Murnaghan 1944)
//	P   = (3/2) K_T (x⁷ − x⁵) [1 + ¾ (K' − 4)(x² − 1)], x³ = V_T/V  (Birch 1947; BirchMurnaghan)
//
// with K' = 4 and s = −1.5e-4 1/K for every mineral of the set. Source: Holland &
// Powell 1998, J. metamorphic Geol. 16, 309, the equations from memory (high). The
// bar of the reference is neglected: 1e-6 of the volume. NaN where T or K_T is not
// positive.
func (m *Mineral) Volume(T, P float64) float64 {
	v, _, _ := m.state(T, P)
	return v
}

// Density returns the density in kg/m³ at T in K and P in Pa.
func (m *Mineral) Density(T, P float64) float64 { return m.MolarMass / m.Volume(T, P) }

// Expansivity returns (1/V)(∂V/∂T)_P in 1/K, the exact derivative of Volume. At
// 298 K and P = 0 it is a0 (1 − 10/√298) = 0.4207 a0.
func (m *Mineral) Expansivity(T, P float64) float64 {
	_, a, _ := m.state(T, P)
	return a
}

// BulkModulus returns −V (∂P/∂V)_T in Pa, the exact derivative of Volume.
func (m *Mineral) BulkModulus(T, P float64) float64 {
	_, _, k := m.state(T, P)
	return k
}

// state returns volume, expansivity and bulk modulus.
func (m *Mineral) state(T, P float64) (v, expansivity, modulus float64) {
	root := math.Sqrt(T)
	grown := 1 + m.A0*(T-ReferenceKelvin) - 20*m.A0*(root-math.Sqrt(ReferenceKelvin))
	thermal := m.A0 * (1 - 10/root) / grown
	k, kT := m.K0*(1+m.BulkModulusSlope*(T-ReferenceKelvin)), m.K0*m.BulkModulusSlope
	if !(T > 0) || !(grown > 0) || !(k > 0) {
		return math.NaN(), math.NaN(), math.NaN()
	}
	d := m.BulkModulusDerivative
	if !m.BirchMurnaghan {
		// ln V = ln V_T − ln(1 + K'P/K_T)/K'
		modulus = k + d*P
		return m.V0 * grown * math.Pow(modulus/k, -1/d), thermal + P*kT/(k*modulus), modulus
	}
	x, f, slope := birch(P/k, d)
	// P = K_T f(x) and V = V_T/x³ at constant P: dx/dT = −(dK_T/dT) f/(K_T f').
	return m.V0 * grown / (x * x * x), thermal + 3*kT*f/(k*x*slope), k * slope * x / 3
}

// birch solves f(x) = p for the third-order Birch–Murnaghan f, by Newton's method from
// Murnaghan's x, and returns f and f' there. The start is within a few per cent, where
// f is smooth and steep, so that a few steps reach round-off; NaN where there is no x.
func birch(p, derivative float64) (x, f, slope float64) {
	b := 0.75 * (derivative - 4)
	x = math.Pow(1+derivative*p, 1/(3*derivative))
	for range 50 {
		x2 := x * x
		x4 := x2 * x2
		c := 1 + b*(x2-1)
		f = 1.5 * x4 * x * (x2 - 1) * c
		slope = 1.5 * (x4*(7*x2-5)*c + x4*x*(x2-1)*2*b*x)
		step := (p - f) / slope
		x += step
		if math.Abs(step) <= 4e-16*x {
			return x, f, slope
		}
		if !(x > 0) || math.IsInf(x, 1) {
			break
		}
	}
	if math.Abs(p-f) <= 1e-14*(1+math.Abs(p)) { // round-off may keep it from standing still
		return x, f, slope
	}
	return math.NaN(), math.NaN(), math.NaN()
}
