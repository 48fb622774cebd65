package configs

import "keelfall/column"

func (d *densityReaction) check(w *walker) {
	for _, part := range []*density{d.Protolith, d.Product} {
		if r := part.Reaction; r != nil {
			w.addf(r.at, r.path, "is itself a reaction; needs the density of one rock, and the reacted share in extent")
		}
	}
	limit := 1.0
	if d.Cap.given() {
		limit = d.Cap.SI
	}
	if d.Extent.SI > limit {
		w.addf(d.Extent.n, d.path+".extent", "%s is above the cap, %s; the reacted share never passes that", d.Extent.n.show(), d.Cap.n.show())
	}
}

func (s *stability) check(w *walker) {
	if s.Slope.SI != 0 && !s.At.given() {
		w.addf(s.Slope.n, s.path+".at", "is missing; a slope needs the temperature at which above holds, for example 800 degC")
	}
}

// reaction is the density as column takes it; nil where a part has mistakes.
func (e *Experiment) reaction(w *walker, d *densityReaction) column.Density {
	r := column.Reaction{Protolith: e.density(w, d.Protolith), Product: e.density(w, d.Product), Extent: d.Extent.SI, Cap: 1}
	if r.Protolith == nil || r.Product == nil {
		return nil
	}
	if d.Cap.given() {
		r.Cap = d.Cap.SI
	}
	if s := d.Stable; s != nil {
		r.Field = &column.StabilityField{Above: s.Above.SI, Slope: s.Slope.SI, At: s.At.SI}
	}
	if k := d.Rate; k != nil {
		r.Kinetics = &column.Kinetics{Prefactor: k.Prefactor.SI, ActivationEnergy: k.ActivationEnergy.SI}
	}
	return r
}

func (m *melt) check(w *walker) {
	switch {
	case m.Fraction.given() && (m.Solidus != nil || m.Liquidus != nil):
		w.addf(m.at, m.path, "has a fraction and a solidus or liquidus; needs the one or the others")
	case !m.Fraction.given() && (m.Solidus == nil || m.Liquidus == nil):
		w.addf(m.at, m.path, "needs a fraction, or a solidus and a liquidus")
	case m.Fraction.given() && m.LatentHeat.given():
		w.addf(m.LatentHeat.n, m.path+".latent-heat", "belongs to a solidus and a liquidus; a given fraction does not change")
	case !m.Fraction.given():
		if s, l := m.Solidus.curve(), m.Liquidus.curve(); s.Surface >= l.Surface {
			w.addf(m.at.get("solidus"), m.path+".solidus", "%.6g degC at no pressure is not below the liquidus, %.6g degC", s.Surface-celsiusZero, l.Surface-celsiusZero)
		} else if l.Surface-s.Surface < leastMelting {
			w.addf(m.at.get("solidus"), m.path+".solidus", "is within %g K of the liquidus at no pressure; needs to lie further below it", leastMelting)
		}
	}
}

func (c *meltCurve) curve() column.Curve {
	if c.Line != nil {
		return column.Curve{Surface: c.Line.Surface.SI, Slope: c.Line.Slope.SI}
	}
	return column.Curve{Surface: c.Value.SI}
}

// leastMelting is the least melting interval in K: below it densities jump within what
// temperatures are good to.
const leastMelting = 0.1

// column is the melt as column takes it.
func (m *melt) column() *column.Melt {
	out := &column.Melt{Fraction: m.Fraction.SI, LatentHeat: m.LatentHeat.SI, Density: m.Density.SI, Weakening: m.Weakening.SI}
	if m.Solidus != nil {
		s, l := m.Solidus.curve(), m.Liquidus.curve()
		out.Solidus, out.Liquidus = &s, &l
	}
	return out
}
