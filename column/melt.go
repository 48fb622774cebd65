package column

import "fmt"

// MeltLimit is the volume fraction of melt beyond which a rock no longer is one with
// melt in it, but melt with crystals: common practice, no single source.
const MeltLimit = 0.25

// Melt is partial melt in a rock: a given fraction or, where Solidus and Liquidus are
// there, the equilibrium one. A nil Melt is no melt.
//
// LatentHeat counts wherever temperature changes: in time, and in a perturbation. The
// steady column itself has no use for it.
type Melt struct {
	Fraction          float64 // given volume fraction, 0 to 1; unused with the curves
	Solidus, Liquidus *Curve  // both or none
	LatentHeat        float64 // J/kg
	Density           float64 // of the melt, kg/m³; 0: melt leaves the rock's density as it is
	Weakening         float64 // α: creep rates times exp(αφ), >= 0
}

// At returns the volume fraction φ of melt at T in K and P in Pa, and (∂φ/∂T)_P in 1/K:
//
//	φ = (T − T_s)/(T_l − T_s)   between solidus and liquidus, 0 below, 1 above
//
// Linear melting is a common simplification; real rocks melt in steps. On a curve the
// derivative is that of the hotter side. Where the solidus is not below the liquidus
// (Covers refuses it) φ steps from 0 to 1; beyond the pressures of a table (Covers refuses
// them too) it is that of the table's end.
func (m *Melt) At(T, P float64) (phi, perKelvin float64) {
	phi, perKelvin, _ = m.state(T, P)
	return phi, perKelvin
}

func (m *Melt) state(T, P float64) (phi, perKelvin, perPascal float64) {
	if m == nil {
		return 0, 0, 0
	}
	if !m.NeedsTemperature() {
		return m.Fraction, 0, 0
	}
	solidus := m.Solidus.At(P)
	width := m.Liquidus.At(P) - solidus
	switch {
	case T < solidus:
		return 0, 0, 0
	case T >= solidus+width:
		return 1, 0, 0
	}
	phi = (T - solidus) / width
	a, b := m.Solidus.PerPascal(P), m.Liquidus.PerPascal(P)
	return phi, 1 / width, -(a + phi*(b-a)) / width
}

// NeedsTemperature says whether the fraction depends on temperature.
func (m *Melt) NeedsTemperature() bool { return m != nil && m.Solidus != nil }

// Covers returns an error with the numbers where P in Pa lies beyond the table of either
// curve (an *OutsideError, wrapped), or the solidus is not below the liquidus there.
func (m *Melt) Covers(P float64) error {
	if !m.NeedsTemperature() {
		return nil
	}
	if err := m.Solidus.covers(P); err != nil {
		return fmt.Errorf("melt: the solidus at %w", err)
	}
	if err := m.Liquidus.covers(P); err != nil {
		return fmt.Errorf("melt: the liquidus at %w", err)
	}
	if s, l := m.Solidus.At(P), m.Liquidus.At(P); !(s < l) {
		return fmt.Errorf("melt: the solidus, %.6g degC, is not below the liquidus, %.6g degC, at P = %.6g GPa", s-273.15, l-273.15, P/1e9)
	}
	return nil
}

// Common returns the pressures in Pa at which the solidus has to be below the liquidus for
// it to be so wherever both are known: the ends of what their tables share and every row
// between, increasing; 0 for two lines, of which Covers has to say more. An error where the
// tables share no range of pressures. Only for a melt with both curves.
func (m *Melt) Common() ([]float64, error) {
	s, l := m.Solidus, m.Liquidus
	if s.Table == nil && l.Table == nil {
		return []float64{0}, nil
	}
	a, b := s.Span()
	c, d := l.Span()
	from, to := max(a, c), min(b, d)
	if !(from < to) {
		return nil, fmt.Errorf("melt: the tables share no pressures: the solidus covers %.6g to %.6g GPa, the liquidus %.6g to %.6g GPa", a/1e9, b/1e9, c/1e9, d/1e9)
	}
	out := []float64{from, to}
	for _, t := range []*CurveTable{s.Table, l.Table} {
		if t != nil {
			out = append(out, t.within(from, to)...)
		}
	}
	return increasing(out), nil
}

// ApparentHeatCapacity returns c_p + L (∂φ/∂T)_P in J/kg/K at T in K and P in Pa: where
// rock melts, its latent heat is taken up with its temperature. The fraction by volume
// stands for that by mass, which differs by the ratio of densities.
func (r *Rock) ApparentHeatCapacity(T, P float64) float64 {
	if r.Melt == nil {
		return r.HeatCapacity
	}
	_, perKelvin := r.Melt.At(T, P)
	return r.HeatCapacity + r.Melt.LatentHeat*perKelvin
}

// Adiabat returns dT/dP in K/Pa of rock that moves without exchanging heat, at T in K, P
// in Pa and the relative depth x of its layer:
//
//	(c_p + L ∂φ/∂T) dT = (α T/ρ − L ∂φ/∂P) dP,   α of the rock without the melting
//
// The first law with the latent heat of what melts or freezes; αT/(ρc_p) where none does.
func (r *Rock) Adiabat(T, P, x float64) float64 {
	solid := r.Density
	if m, ok := solid.(Molten); ok {
		solid = m.Solid
	}
	v := 1 / solid.At(T, P, x)
	work := -solid.PerKelvin(T, P, x) * v * v * T
	if r.Melt == nil {
		return work / r.HeatCapacity
	}
	_, perKelvin, perPascal := r.Melt.state(T, P)
	return (work - r.Melt.LatentHeat*perPascal) / (r.HeatCapacity + r.Melt.LatentHeat*perKelvin)
}

// Kinks are the solidus and the liquidus, at which ∂φ/∂T jumps, and the pressures of a
// table at which its slope does.
func (m *Melt) Kinks() []Kink {
	if !m.NeedsTemperature() {
		return nil
	}
	out := []Kink{
		func(T, P float64) float64 { return T - m.Solidus.At(P) },
		func(T, P float64) float64 { return T - m.Liquidus.At(P) },
	}
	var corners []float64
	for _, c := range []*Curve{m.Solidus, m.Liquidus} {
		if c.Table != nil {
			corners = append(corners, c.Table.corners()...)
		}
	}
	for _, at := range increasing(corners) {
		out = append(out, func(_, P float64) float64 { return P - at })
	}
	return out
}

// Validate returns what makes the melt unusable: one curve without the other, a solidus
// that is not below the liquidus (of two lines at P = 0), a number out of range.
func (m *Melt) Validate() error {
	switch {
	case (m.Solidus == nil) != (m.Liquidus == nil):
		return fmt.Errorf("melt: a solidus and a liquidus belong together")
	case m.Solidus == nil && !(m.Fraction >= 0 && m.Fraction <= 1):
		return fmt.Errorf("melt: fraction %g, must be 0 to 1", m.Fraction)
	case !finite(m.LatentHeat, m.Density, m.Weakening) || m.LatentHeat < 0 || m.Density < 0 || m.Weakening < 0:
		return fmt.Errorf("melt: latent heat %g J/kg, density %g kg/m³, weakening %g; must be >= 0", m.LatentHeat, m.Density, m.Weakening)
	case m.Solidus == nil:
		return nil
	}
	if err := m.Solidus.validate("solidus"); err != nil {
		return err
	}
	if err := m.Liquidus.validate("liquidus"); err != nil {
		return err
	}
	all, err := m.Common()
	for i := 0; err == nil && i < len(all); i++ {
		err = m.Covers(all[i])
	}
	return err
}

// Molten is the density of a rock with melt in it,
//
//	ρ = (1 − φ) ρ_s + φ ρ_m,
//
// φ the volume fraction of Melt.At and ρ_m a number. Its derivatives by T and P hold at
// equilibrium: they count the melt that forms. Where the melt has no density of its own,
// ρ = ρ_s.
type Molten struct {
	Solid Density
	Melt  *Melt
}

// AtFraction returns the density in kg/m³ at the volume fraction phi of melt in place of
// Melt's own.
func (m Molten) AtFraction(T, P, x, phi float64) float64 {
	solid := m.Solid.At(T, P, x)
	if m.Melt == nil || m.Melt.Density == 0 {
		return solid
	}
	return solid + phi*(m.Melt.Density-solid)
}

// At returns the density in kg/m³ at T in K and P in Pa, x of the way down the layer.
func (m Molten) At(T, P, x float64) float64 {
	phi, _ := m.Melt.At(T, P)
	return m.AtFraction(T, P, x, phi)
}

// PerKelvin returns (∂ρ/∂T)_P = (1 − φ) ∂ρ_s/∂T + (ρ_m − ρ_s) ∂φ/∂T, kg/m³/K.
func (m Molten) PerKelvin(T, P, x float64) float64 {
	d := m.Solid.PerKelvin(T, P, x)
	if m.Melt == nil || m.Melt.Density == 0 {
		return d
	}
	phi, perKelvin, _ := m.Melt.state(T, P)
	return (1-phi)*d + (m.Melt.Density-m.Solid.At(T, P, x))*perKelvin
}

// PerPascal returns (∂ρ/∂P)_T = (1 − φ) ∂ρ_s/∂P + (ρ_m − ρ_s) ∂φ/∂P, kg/m³/Pa.
func (m Molten) PerPascal(T, P, x float64) float64 {
	d := m.Solid.PerPascal(T, P, x)
	if m.Melt == nil || m.Melt.Density == 0 {
		return d
	}
	phi, _, perPascal := m.Melt.state(T, P)
	return (1-phi)*d + (m.Melt.Density-m.Solid.At(T, P, x))*perPascal
}

// Gradient returns the solid's compositional gradient times 1 − φ.
func (m Molten) Gradient(T, P, x float64) float64 {
	d := m.Solid.Gradient(T, P, x)
	if m.Melt == nil || m.Melt.Density == 0 {
		return d
	}
	phi, _ := m.Melt.At(T, P)
	return (1 - phi) * d
}

// NeedsTemperature says whether the solid's density or the melt fraction does.
func (m Molten) NeedsTemperature() bool {
	return m.Solid.NeedsTemperature() || m.Melt.NeedsTemperature()
}

// Covers returns the error of a solid or a melt asked outside its range, and of a solidus
// that is not below the liquidus.
func (m Molten) Covers(T, P float64) error {
	if err := Covered(m.Solid, T, P); err != nil {
		return err
	}
	return m.Melt.Covers(P)
}

// Kinks are those of the solid and of the melt.
func (m Molten) Kinks() []Kink { return append(Kinks(m.Solid), m.Melt.Kinks()...) }

// Validate returns what makes solid or melt unusable.
func (m Molten) Validate() error {
	if m.Melt != nil {
		if err := m.Melt.Validate(); err != nil {
			return err
		}
	}
	return validDensity(m.Solid)
}

// Cautions are those of the solid.
func (m Molten) Cautions() []string { return densityCautions(m.Solid) }

var _ Ranged = Molten{}
