package column

import (
	"fmt"
	"math"
	"slices"

	"keelfall/rheology"
)

// Reaction is the density of a rock part of which has reacted: a protolith and its
// product, mixed by the reacted share X of the mass, so that mass is conserved:
//
//	1/ρ = (1 − X)/ρ_A + X/ρ_B
//
// At a given X the rock is one composition as far as its parts are: Gradient mixes
// theirs. X is the same throughout the layer here; AtExtent gives the density at any
// other X without a copy of the rock.
//
// With time X grows towards Cap where the product is stable, and never shrinks: see
// Stable and Rate.
type Reaction struct {
	Protolith, Product Density
	Extent             float64         // X, share of the mass, 0 to Cap
	Cap                float64         // X never passes this; 0 to 1
	Field              *StabilityField // where the product is stable; nil: everywhere
	Kinetics           *Kinetics       // how fast it reacts; nil: not at all
}

// StabilityField is where a product is stable: P >= Above + Slope (T − At).
type StabilityField struct {
	Above float64 // Pa
	Slope float64 // Pa/K
	At    float64 // K
}

// Kinetics is the rate law r₀ exp(−E/RT), first order in what is left to react.
type Kinetics struct {
	Prefactor        float64 // r₀, 1/s
	ActivationEnergy float64 // E, J/mol
}

// Stable says whether the product is stable at T in K and P in Pa.
func (r Reaction) Stable(T, P float64) bool {
	f := r.Field
	return f == nil || P >= f.Above+f.Slope*(T-f.At)
}

// Rate returns dX/dt = r₀ exp(−E/RT)(Cap − X) in 1/s at T in K, where the product is
// stable; 0 from Cap on, as nothing reacts back.
func (r Reaction) Rate(T, X float64) float64 {
	if r.Kinetics == nil || X >= r.Cap {
		return 0
	}
	return r.Kinetics.Prefactor * math.Exp(-r.Kinetics.ActivationEnergy/(rheology.GasConstant*T)) * (r.Cap - X)
}

// WithExtent returns the same rock at the reacted share X of its mass, 0 to 1.
func (r Reaction) WithExtent(X float64) Reaction {
	r.Extent = X
	return r
}

// AtExtent returns the density in kg/m³ at the reacted share X of the mass in place of
// Extent.
func (r Reaction) AtExtent(T, P, x, X float64) float64 {
	a, b := r.Protolith.At(T, P, x), r.Product.At(T, P, x)
	return a / (1 + X*(a/b-1))
}

// At returns the density in kg/m³ at T in K and P in Pa, x of the way down the layer.
func (r Reaction) At(T, P, x float64) float64 { return r.AtExtent(T, P, x, r.Extent) }

// mixed returns the derivative of ρ whose parts have the derivatives a and b:
// ρ² [(1 − X) a/ρ_A² + X b/ρ_B²].
func (r Reaction) mixed(T, P, x, a, b float64) float64 {
	rho := r.At(T, P, x)
	pa, pb := rho/r.Protolith.At(T, P, x), rho/r.Product.At(T, P, x)
	return (1-r.Extent)*pa*pa*a + r.Extent*pb*pb*b
}

// PerKelvin returns (∂ρ/∂T)_P in kg/m³/K, X held.
func (r Reaction) PerKelvin(T, P, x float64) float64 {
	return r.mixed(T, P, x, r.Protolith.PerKelvin(T, P, x), r.Product.PerKelvin(T, P, x))
}

// PerPascal returns (∂ρ/∂P)_T in kg/m³/Pa, X held.
func (r Reaction) PerPascal(T, P, x float64) float64 {
	return r.mixed(T, P, x, r.Protolith.PerPascal(T, P, x), r.Product.PerPascal(T, P, x))
}

// Gradient returns the compositional gradient of the parts, mixed; 0 where each of them
// is one composition.
func (r Reaction) Gradient(T, P, x float64) float64 {
	return r.mixed(T, P, x, r.Protolith.Gradient(T, P, x), r.Product.Gradient(T, P, x))
}

// NeedsTemperature says whether the density of a part depends on temperature.
func (r Reaction) NeedsTemperature() bool {
	return r.Protolith.NeedsTemperature() || r.Product.NeedsTemperature()
}

// Covers returns the error of a part that is there and asked outside its range.
func (r Reaction) Covers(T, P float64) error {
	if r.Extent < 1 {
		if err := Covered(r.Protolith, T, P); err != nil {
			return fmt.Errorf("protolith: %w", err)
		}
	}
	if r.Extent > 0 {
		if err := Covered(r.Product, T, P); err != nil {
			return fmt.Errorf("product: %w", err)
		}
	}
	return nil
}

// Kinks are those of the parts.
func (r Reaction) Kinks() []Kink { return append(Kinks(r.Protolith), Kinks(r.Product)...) }

// Validate returns what makes the reaction unusable: a part without a density or with a
// wrong one, a cap outside 0 to 1, an extent outside 0 to the cap, a rate that is
// negative.
func (r Reaction) Validate() error {
	for _, part := range []struct {
		name string
		d    Density
	}{{"protolith", r.Protolith}, {"product", r.Product}} {
		if err := validDensity(part.d); err != nil {
			return fmt.Errorf("%s: %w", part.name, err)
		}
	}
	if !(r.Cap >= 0 && r.Cap <= 1) || !(r.Extent >= 0 && r.Extent <= r.Cap) {
		return fmt.Errorf("reaction: extent %g, cap %g; needs 0 <= extent <= cap <= 1", r.Extent, r.Cap)
	}
	if f := r.Field; f != nil && !finite(f.Above, f.Slope, f.At) {
		return fmt.Errorf("reaction: product stable above %g Pa at %g K, slope %g Pa/K", f.Above, f.At, f.Slope)
	}
	if k := r.Kinetics; k != nil && !(finite(k.Prefactor, k.ActivationEnergy) && k.Prefactor >= 0 && k.ActivationEnergy >= 0) {
		return fmt.Errorf("reaction: prefactor %g 1/s, activation energy %g J/mol; must be >= 0", k.Prefactor, k.ActivationEnergy)
	}
	return nil
}

// Cautions are those of the parts, and where the reacted share stays as it is.
func (r Reaction) Cautions() []string {
	return r.cautions(fmt.Sprintf("%g of the mass throughout the layer", r.Extent))
}

// cautions names the reacted share in words.
func (r Reaction) cautions(share string) []string {
	out := densityCautions(r.Protolith)
	for _, c := range densityCautions(r.Product) {
		if !slices.Contains(out, c) {
			out = append(out, c)
		}
	}
	switch {
	case r.Kinetics != nil:
		out = append(out, "the reacted share, "+share+", stays as it is in spectrum, mode and column; history, the drip and excise follow it, by where the product is stable and how fast it forms")
	case r.Field != nil:
		out = append(out, "the reacted share, "+share+", stays as it is: where the product is stable has no effect without a rate")
	}
	return out
}

var _ Ranged = Reaction{}
