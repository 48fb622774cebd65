package column

import (
	"fmt"
	"math"
)

// Expansivity returns −(1/ρ)(∂ρ/∂T)_P in 1/K of a density at T in K and P in Pa, x of the
// way down the layer.
func Expansivity(d Density, T, P, x float64) float64 { return -d.PerKelvin(T, P, x) / d.At(T, P, x) }

// BulkModulus returns ρ (∂P/∂ρ)_T in Pa; +Inf where the density does not depend on
// pressure, as a number in situ. Of a rock that melts, both count the melt that forms.
func BulkModulus(d Density, T, P, x float64) float64 {
	slope := d.PerPascal(T, P, x)
	if slope == 0 {
		return math.Inf(1)
	}
	return d.At(T, P, x) / slope
}

// Kink is a function of T in K and P in Pa whose zeros are where a slope jumps: of a
// density, of its derivative by temperature, or of a melt fraction.
type Kink func(T, P float64) float64

// Kinks returns the kinks of a density, none where it is smooth.
func Kinks(d Density) []Kink {
	if k, ok := d.(interface{ Kinks() []Kink }); ok {
		return k.Kinks()
	}
	return nil
}

// Parts returns the densities a density is made of: protolith and product of a Reaction,
// the solid of a Molten, the rock of a Varying, and theirs; itself where it is of one piece.
func Parts(d Density) []Density {
	switch d := d.(type) {
	case Reaction:
		return append(Parts(d.Protolith), Parts(d.Product)...)
	case Molten:
		return Parts(d.Solid)
	case Varying:
		return Parts(d.Of)
	}
	return []Density{d}
}

// densityCautions returns what a density rests on; the slice is the caller's.
func densityCautions(d Density) []string {
	if k, ok := d.(interface{ Cautions() []string }); ok {
		return k.Cautions()
	}
	return nil
}

// validDensity returns what makes a density unusable.
func validDensity(d Density) error {
	switch d := d.(type) {
	case Uniform:
		if !positive(float64(d)) {
			return fmt.Errorf("density %g kg/m³, must be > 0", float64(d))
		}
	case Linear:
		if !positive(d.Top) || !positive(d.Bottom) {
			return fmt.Errorf("density %g to %g kg/m³, must be > 0", d.Top, d.Bottom)
		}
	case EquationOfState:
		if !positive(d.Reference) || !(d.Compressibility >= 0) || math.IsNaN(d.Expansivity+d.ReferenceTemperature) {
			return fmt.Errorf("density: reference %g kg/m³, expansivity %g 1/K, compressibility %g 1/Pa, at %g K", d.Reference, d.Expansivity, d.Compressibility, d.ReferenceTemperature)
		}
	case interface{ Validate() error }:
		return d.Validate()
	case nil:
		return fmt.Errorf("no density")
	}
	return nil
}

func finite(xs ...float64) bool {
	for _, x := range xs {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			return false
		}
	}
	return true
}
