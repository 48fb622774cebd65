package rheology

import (
	"fmt"
	"math"
)

// Mixing is how the phases of a mixture share stress and strain rate.
type Mixing int

// The phases share their stress (Sachs 1928, Reuss 1929: the weak bound), their strain
// rate (Taylor 1938, Voigt 1889: the strong bound), or their strain rate with a geometric
// mean of stresses between the two, which is a common choice and no theory.
const (
	IsoStress Mixing = iota
	Geometric
	IsoStrainRate
)

var mixingNames = [...]string{"iso-stress", "geometric", "iso-strain-rate"}

// String returns iso-stress, geometric or iso-strain-rate.
func (m Mixing) String() string {
	if m < 0 || int(m) >= len(mixingNames) {
		return fmt.Sprintf("mixing %d", int(m))
	}
	return mixingNames[m]
}

// ParseMixing reads what String writes.
func ParseMixing(s string) (Mixing, error) {
	for i, n := range mixingNames {
		if s == n {
			return Mixing(i), nil
		}
	}
	return 0, fmt.Errorf("rheology: mixing rule %q; known are iso-stress, geometric, iso-strain-rate", s)
}

// Mixture is a rock of several phases,
//
//	iso-stress        ε = Σ φ_i ε_i(τ)        n = Σ n_i φ_i ε_i/Σ φ_i ε_i
//	geometric         ln τ = Σ φ_i ln τ_i(ε)  1/n = Σ φ_i/n_i
//	iso-strain-rate   τ = Σ φ_i τ_i(ε)        1/n = Σ (φ_i τ_i/n_i)/Σ φ_i τ_i
//
// in invariants, for isotropic phases; n by differentiating. The first and the last
// bound the dissipation potential ∫ τ dε of every well-bonded mixture (Hill 1956). Where
// the phases have one exponent the stresses stand in the order above too; where they
// differ in n and little in strength, that order of the stresses may turn round by a few
// per cent. Layering, a connected weak phase and reaction are not described.
type Mixture struct {
	Rule   Mixing
	Phases []Phase // two or more
}

// Phase is one constituent: laws (and mixtures) in parallel, as in Creep.
type Phase struct {
	Fraction float64 // volume share; the shares sum to 1 within FractionSlack and are normalised
	Laws     []Law
	Mixtures []Mixture
}

// FractionSlack is how far from 1 the fractions of a mixture may sum.
const FractionSlack = 0.01

// total checks the mixture and returns the sum of its fractions.
func (m *Mixture) total() (float64, error) {
	if len(m.Phases) < 2 {
		return 0, fmt.Errorf("rheology: a mixture of %d phases, needs two or more", len(m.Phases))
	}
	if m.Rule < IsoStress || m.Rule > IsoStrainRate {
		return 0, fmt.Errorf("rheology: unknown mixing rule %d", int(m.Rule))
	}
	var sum float64
	for i := range m.Phases {
		p := &m.Phases[i]
		if len(p.Laws) == 0 && len(p.Mixtures) == 0 {
			return 0, fmt.Errorf("rheology: phase %d of a mixture has no creep law", i+1)
		}
		f := p.Fraction
		if !(f >= 0 && f <= 1) {
			return 0, fmt.Errorf("rheology: fraction %g of phase %d, must be 0 to 1", f, i+1)
		}
		sum += f
	}
	// The last digits of fractions written in decimals do not count.
	if math.Abs(sum-1) > FractionSlack*(1+1e-9) {
		return 0, fmt.Errorf("rheology: the fractions of a mixture sum to %.4g, must be 1 (within %g)", sum, FractionSlack)
	}
	return sum, nil
}

// AllLaws returns every law of c, those inside mixtures too, in the order they are
// written; a law that stands twice comes twice.
func (c *Creep) AllLaws() []Law { return allLaws(nil, c.Laws, c.Mixtures) }

func allLaws(to, laws []Law, mixtures []Mixture) []Law {
	to = append(to, laws...)
	for i := range mixtures {
		for j := range mixtures[i].Phases {
			p := &mixtures[i].Phases[j]
			to = allLaws(to, p.Laws, p.Mixtures)
		}
	}
	return to
}
