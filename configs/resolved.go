package configs

import (
	"slices"
	"strings"

	"keelfall/rheology"
)

// Resolved returns the whole experiment for a result's provenance: every key with
// its default, in SI with the unit in the key's name (thickness_m, temperature_K;
// times in s since the start), the creep laws and minerals it uses with their
// constants and how those are known, the defaults taken, the edits, name and SHA-256 of
// every table of densities and of a solidus or liquidus, measured section and extra catalogue, and how the rows of the
// sections scatter, and the fit of the geotherm to samples (null where there is none). It is ready for JSON and holds no NaN or infinity.
func (e *Experiment) Resolved() map[string]any {
	_, tree := e.resolved(e.filled, schema)
	out, _ := tree.(map[string]any)
	out["file"] = e.Name
	out["edits"] = slices.Clone(e.Edits)
	defaults := []any{}
	for _, d := range e.taken {
		defaults = append(defaults, map[string]any{"key": d.Key, "value": d.Value, "starred": d.Starred})
	}
	out["defaults"] = defaults
	out["creep_laws"] = e.creepLaws()
	out["minerals"], out["density_tables"] = e.densitySources()
	out["melt_tables"] = e.meltSources()
	out["drip_spectrum_table"] = e.spectrumSource()
	out["geotherm_fit"] = e.fitResult()
	out["sections"], out["section_scatter"] = e.sectionSources()
	catalogues := []any{}
	for _, c := range e.reader.Catalogues {
		catalogues = append(catalogues, map[string]any{"name": c.Name, "sha256": c.SHA256})
	}
	out["catalogues"] = catalogues
	return out
}

// resolved returns a value in SI and what its unit adds to the key.
func (e *Experiment) resolved(n *node, s *spec) (suffix string, value any) {
	switch s.kind {
	case unionSpec:
		f := s.pick(n)
		return e.resolved(n, f.spec)
	case recordSpec:
		m := map[string]any{}
		for i, key := range n.keys {
			unit, v := e.resolved(n.items[i], s.key(key).spec)
			m[strings.ReplaceAll(key, "-", "_")+unit] = v
		}
		return "", m
	case listSpec:
		list := make([]any, len(n.items))
		for i, item := range n.items {
			suffix, list[i] = e.resolved(item, s.item)
		}
		return suffix, list
	case sharesSpec:
		m := map[string]any{}
		for i, key := range n.keys {
			m[key], _ = parseQuantity(n.items[i], dimensions["number"], 0)
		}
		return "", m
	case quantitySpec, countSpec:
		d := s.dim
		if d == nil { // a sweep's bound, whose dimension its key decides
			return "", n.text
		}
		x, _ := parseQuantity(n, d, e.walk.timeZero)
		if d.suffix != "" {
			suffix = "_" + d.suffix
		}
		return suffix, x
	case flagSpec:
		return "", n.text == "true"
	}
	return "", strings.TrimSpace(n.text)
}

// creepLaws lists the laws in use, each once, in the order of the layers.
func (e *Experiment) creepLaws() []any {
	w := *e.walk
	c := e.column(&w)
	out := []any{}
	seen := map[string]bool{}
	add := func(k *rheology.Creep) {
		if k == nil {
			return
		}
		for _, l := range k.AllLaws() {
			if seen[l.Name] {
				continue
			}
			seen[l.Name] = true
			out = append(out, map[string]any{
				"name": l.Name, "mechanism": l.Mechanism, "A_invariant_SI": l.A, "n": l.N, "m": l.M, "r": l.R,
				"E_J_mol": l.E, "V_m3_mol": l.V, "V_determined": l.VolumeDetermined, "water": l.Water.String(),
				"test": l.Test.String(), "source": l.Source, "notes": l.Notes,
			})
		}
	}
	for i := range c.Layers {
		add(c.Layers[i].Viscosity.Creep)
	}
	add(c.Base.Viscosity.Creep)
	for _, h := range e.events(&w) {
		add(h.Rock.Viscosity.Creep)
	}
	for _, z := range e.zoneProblems(&w) {
		add(z.Creep)
	}
	return out
}
