package report

import (
	"fmt"
	"slices"
	"strings"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/race"
)

// densities says what makes each density: end-members by mass, reactions, melt.
func densities(w func(string, ...any), p *race.Problem) {
	for i := range p.Column.Layers {
		l := &p.Column.Layers[i]
		if r, ok := reaction(l); ok {
			w("%s has reacted to X = %s of its mass; protolith and product conserve mass, 1/ρ = (1 − X)/ρ_A + X/ρ_B. X %s.\n", upper(l.Name), extent(l), stays(&r))
		}
		meltMethods(w, l.Name, l.Melt)
		modesMethods(w, l.Name, l.Density)
	}
	base := &p.Column.Base
	meltMethods(w, "the half-space", base.Melt)
	if base.Density != nil {
		modesMethods(w, "the half-space", base.Density)
	}
}

// stays says where the reacted share stays as it is.
func stays(r *column.Reaction) string {
	if r.Kinetics == nil {
		return "stays as it is"
	}
	return "stays as it is in spectrum, mode and column; history, the drip and excise follow it"
}

// meltMethods says how much melt a rock has and what it does.
func meltMethods(w func(string, ...any), name string, m *column.Melt) {
	if m == nil {
		return
	}
	s := fmt.Sprintf("Melt in %s: φ = %s of the volume", name, share(m.Fraction))
	if m.NeedsTemperature() {
		s = fmt.Sprintf("Melt in %s: φ = (T − T_s)/(T_l − T_s) of the volume between the solidus T_s %s and the liquidus T_l %s", name, curve(m.Solidus), curve(m.Liquidus))
	}
	if m.Density > 0 {
		s += fmt.Sprintf("; ρ = (1 − φ) ρ_s + φ ρ_m with ρ_m = %.4g kg/m³", m.Density)
	} else {
		s += "; the melt has no density and leaves the rock's as it is"
	}
	if m.Weakening > 0 {
		s += fmt.Sprintf("; creep rates times exp(%g φ)", m.Weakening)
	}
	if m.LatentHeat > 0 {
		s += fmt.Sprintf("; latent heat %.4g kJ/kg, which counts where temperature changes and not in the steady column", m.LatentHeat/1e3)
	}
	w("%s [melt].\n", s)
}

// curve writes a temperature that depends on pressure.
func curve(c *column.Curve) string {
	if t := c.Table; t != nil {
		least, most := c.Span()
		return fmt.Sprintf("of the table %s (%d rows, %.4g to %.4g GPa, straight between them, nothing beyond)", t.Name, t.Rows(), least/1e9, most/1e9)
	}
	if c.Slope == 0 {
		return fmt.Sprintf("= %.4g °C", c.Surface-zero)
	}
	return fmt.Sprintf("= %.4g °C + %.4g K/GPa × P", c.Surface-zero, c.Slope*1e9)
}

// modesMethods says which end-members make a density, of which part of the rock.
func modesMethods(w func(string, ...any), name string, d column.Density) {
	switch d := d.(type) {
	case column.Reaction:
		modesMethods(w, "the protolith of "+name, d.Protolith)
		modesMethods(w, "the product of "+name, d.Product)
	case column.Molten:
		modesMethods(w, name, d.Solid)
	case column.Varying:
		modesMethods(w, name, d.Of)
	case *column.Modes:
		var words, ids []string
		for _, part := range d.Parts() {
			words = append(words, fmt.Sprintf("%.1f %% %s", 100*part.Mass, part.Mineral.Name))
			for _, id := range mineralIDs(&part.Mineral) {
				if !slices.Contains(ids, id) {
					ids = append(ids, id)
				}
			}
		}
		w("Density of %s from its modes, by mass %s: volumes of the end-members add up at each pressure and temperature [%s].\n", name, join(words), strings.Join(ids, ", "))
	}
}

// creepMethods says the form of the creep laws, how phases mix, and lists the laws.
func creepMethods(w func(string, ...any), p *race.Problem) {
	laws := lawsOf(p)
	if len(laws) == 0 {
		return
	}
	w("Creep: ε_II = A τ_II^n d^−m f^r exp[−(E + PV)/RT], laws of one rock acting at one stress, at a strain rate of %.3g 1/s (second invariant).", p.StrainRate())
	for i := range laws {
		if laws[i].Plastic() {
			w("%s", plasticMethods(&laws[i]))
		}
	}
	for i := range p.Column.Layers {
		mixtureMethods(w, p.Column.Layers[i].Name, p.Column.Layers[i].Viscosity.Creep)
	}
	mixtureMethods(w, "the half-space", p.Column.Base.Viscosity.Creep)
	w("The upper viscosity limit acts as one more Newtonian mechanism at the same stress, the lower as a dashpot at the same strain rate.\n")
	w("| law | n | m | r | E kJ/mol | V cm³/mol | test | numbers |")
	w("|---|---|---|---|---|---|---|---|")
	for _, l := range laws {
		w("| %s [creep-%s] | %g | %g | %g | %.4g | %.4g | %s | %s |", l.Name, slug(l.Name), l.N, l.M, l.R, l.E/1e3, l.V*1e6, l.Test, lawStatus(&l))
	}
	w("")
}

// plasticMethods says the form of a law of low-temperature plasticity.
func plasticMethods(l *rheology.Law) string {
	b := l.Peierls
	s := fmt.Sprintf("%s: in place of E + PV stands (E + PV)(1 − (τ_II/τ_P)^p)^q with τ_P = %.4g GPa", upper(l.Name), b.Stress/1e9)
	if b.PerPa > 0 {
		s += fmt.Sprintf(" × (1 + %.3g P/GPa)", b.PerPa*1e9)
	}
	s += fmt.Sprintf(", p = %g, q = %g [kocks1975]", b.P, b.Q)
	if b.Least > 0 {
		s += fmt.Sprintf("; its rate is multiplied by 1 − exp(−(τ_II/τ₀)^8) with τ₀ = %.4g MPa, our own choice, which keeps it out of the low stresses it was not made for", b.Least/1e6)
	}
	return s + "."
}

// mixtureMethods says how the phases of a rock share stress and strain rate.
func mixtureMethods(w func(string, ...any), name string, c *rheology.Creep) {
	if c == nil {
		return
	}
	forms := map[rheology.Mixing]string{
		rheology.IsoStress:     "one stress, ε = Σ φ_i ε_i(τ)",
		rheology.Geometric:     "one strain rate with a geometric mean of stresses, ln τ = Σ φ_i ln τ_i(ε)",
		rheology.IsoStrainRate: "one strain rate, τ = Σ φ_i τ_i(ε)",
	}
	var say func(name string, all []rheology.Mixture)
	say = func(name string, all []rheology.Mixture) {
		for i := range all {
			m := &all[i]
			var total float64
			for j := range m.Phases {
				total += m.Phases[j].Fraction
			}
			var words []string
			for j := range m.Phases {
				ph := &m.Phases[j]
				var of []string
				for k := range ph.Laws {
					of = append(of, ph.Laws[k].Name)
				}
				for k := range ph.Mixtures {
					of = append(of, "a mixture ("+ph.Mixtures[k].Rule.String()+")")
				}
				words = append(words, fmt.Sprintf("%.4g of %s", ph.Fraction/total, strings.Join(of, " with ")))
			}
			w("%s is a mixture by volume, %s: %s [mixture-%s].", upper(name), join(words), forms[m.Rule], m.Rule)
			for j := range m.Phases {
				say("the mixture within "+name, m.Phases[j].Mixtures)
			}
		}
	}
	say(name, c.Mixtures)
}
