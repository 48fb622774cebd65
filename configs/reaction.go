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
