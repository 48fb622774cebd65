package column

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// ModesTolerance is how far from 1 the sum of mineral modes may be; they are
// normalised then.
const ModesTolerance = 0.01

// Modes is the density of a rock made of minerals. What stays the same when the rock
// is heated and compressed is its composition, so the modes become mass fractions w
// once (at 298 K and P = 0, where modes are counted) and stay:
//
//	1/ρ = Σ w_i/ρ_i(T, P),  which is ρ = Σ φ_i ρ_i with φ_i = w_i ρ/ρ_i
//
// and (∂ρ/∂T)_P = −ρ² Σ w_i α_i/ρ_i. The volume fractions φ_i change a little, as one
// mineral expands more than another; taking them as fixed would differ by some 0.1 %.
// Minerals do not react with one another here.
type Modes struct{ parts []Part }

// Part is one mineral of a rock.
type Part struct {
	Mineral Mineral
	Mass    float64 // share of the rock's mass
}

// Mode is one mineral and its share of a rock's volume or weight.
type Mode struct {
	Mineral string // a full name or an approved symbol
	Share   float64
}

// NewModes returns the density of a rock from its mineral modes, shares of the volume
// at 298 K and P = 0 or, with byWeight, of the weight. The order does not matter.
//
// Errors: no modes, an unknown mineral, a mineral twice, a negative share, and shares
// whose sum is more than ModesTolerance from 1.
func NewModes(modes []Mode, byWeight bool) (*Modes, error) {
	if len(modes) == 0 {
		return nil, fmt.Errorf("no mineral modes")
	}
	var m Modes
	var sum, mass float64
	for _, mode := range modes {
		mineral, err := FindMineral(mode.Mineral)
		if err != nil {
			return nil, err
		}
		if !(mode.Share >= 0) || math.IsInf(mode.Share, 1) {
			return nil, fmt.Errorf("%s: share %g, must be >= 0", mode.Mineral, mode.Share)
		}
		if slices.ContainsFunc(m.parts, func(p Part) bool { return p.Mineral.Name == mineral.Name }) {
			return nil, fmt.Errorf("%s stands twice among the modes", mineral.Name)
		}
		w := mode.Share
		if !byWeight {
			w *= mineral.Density(ReferenceKelvin, 0)
		}
		sum, mass = sum+mode.Share, mass+w
		m.parts = append(m.parts, Part{mineral, w})
	}
	if math.Abs(sum-1) > ModesTolerance*(1+1e-9) { // round-off of the sum
		return nil, fmt.Errorf("mineral modes sum to %.4g; need 1 (within %g)", sum, ModesTolerance)
	}
	m.parts = slices.DeleteFunc(m.parts, func(p Part) bool { return p.Mass == 0 })
	for i := range m.parts {
		m.parts[i].Mass /= mass
	}
	slices.SortFunc(m.parts, func(a, b Part) int { return strings.Compare(a.Mineral.Name, b.Mineral.Name) })
	return &m, nil
}

// Parts returns the minerals and their shares of the mass, sorted by name; the slice
// is the caller's.
func (m *Modes) Parts() []Part { return slices.Clone(m.parts) }

// At returns the density in kg/m³ at T in K and P in Pa.
func (m *Modes) At(T, P, _ float64) float64 {
	rho, _, _ := m.state(T, P)
	return rho
}

// PerKelvin returns (∂ρ/∂T)_P in kg/m³/K.
func (m *Modes) PerKelvin(T, P, _ float64) float64 {
	_, perKelvin, _ := m.state(T, P)
	return perKelvin
}

// PerPascal returns (∂ρ/∂P)_T = ρ² Σ w_i/(K_i ρ_i) in kg/m³/Pa.
func (m *Modes) PerPascal(T, P, _ float64) float64 {
	_, _, perPascal := m.state(T, P)
	return perPascal
}

func (m *Modes) state(T, P float64) (rho, perKelvin, perPascal float64) {
	var volume, grows, shrinks float64 // of a kilogram, with T and with P
	for i := range m.parts {
		p := &m.parts[i]
		v, a, k := p.Mineral.state(T, P)
		v *= p.Mass / p.Mineral.MolarMass
		volume += v
		grows += a * v
		shrinks += v / k
	}
	return 1 / volume, -grows / (volume * volume), shrinks / (volume * volume)
}

// Gradient is zero: one composition.
func (m *Modes) Gradient(_, _, _ float64) float64 { return 0 }

// NeedsTemperature is true.
func (m *Modes) NeedsTemperature() bool { return true }

// Validate refuses modes that NewModes did not make.
func (m *Modes) Validate() error {
	if m == nil || len(m.parts) == 0 {
		return fmt.Errorf("density: no mineral modes")
	}
	return nil
}

// Cautions says whether minerals rest on numbers that were recalled and not confirmed
// and, for quartz, on a choice.
func (m *Modes) Cautions() []string {
	var out []string
	recalled := false
	for _, p := range m.parts {
		recalled = recalled || p.Mineral.Status.FromMemory()
		if p.Mineral.Status.A0 == "choice" {
			out = append(out, p.Mineral.Name+": its thermal expansion, with the alpha-beta transition smeared out, is a choice; the mineral's density may be off by 2 % from 500 to 1000 degC, and by more above")
		}
	}
	if recalled {
		out = append(out, "densities from mineral modes rest on volumes and moduli of Holland & Powell 1998 recalled from memory, not confirmed in print")
	}
	return out
}

var _ Density = (*Modes)(nil)
