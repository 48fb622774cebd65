package configs

import (
	"encoding/json"
	"math"
	"strings"
)

// quantityPattern is a number with something behind it; the unit's own rules are
// beyond a JSON Schema.
const quantityPattern = `^\s*[+-]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?\s*(1/)?[A-Za-z°µμ℃].*$`

// Schema returns the JSON Schema (draft 2020-12) of an experiment file, made from the
// schema that Open uses. Editors complete and check keys with it; what it cannot say
// (whether a unit fits, how keys hang together) Open says.
func Schema() ([]byte, error) {
	w := &schemaWriter{defs: map[string]any{}}
	root := w.record(schema)
	root["$schema"] = "https://json-schema.org/draft/2020-12/schema"
	root["title"] = "keelfall experiment"
	root["$defs"] = w.defs
	return json.MarshalIndent(root, "", "  ")
}

type schemaWriter struct{ defs map[string]any }

func (w *schemaWriter) value(s *spec) map[string]any {
	switch s.kind {
	case recordSpec, unionSpec:
		name := s.typ.Name()
		if _, ok := w.defs[name]; !ok {
			w.defs[name] = nil // creep contains creep
			if s.kind == recordSpec {
				w.defs[name] = w.record(s)
			} else {
				w.defs[name] = w.union(s)
			}
		}
		return map[string]any{"$ref": "#/$defs/" + name}
	case listSpec:
		return map[string]any{"type": "array", "items": w.value(s.item), "minItems": 1, "maxItems": maxLayers}
	case sharesSpec:
		return map[string]any{"type": "object", "additionalProperties": map[string]any{"type": "number", "minimum": 0, "maximum": 1}}
	case flagSpec:
		return map[string]any{"type": "boolean"}
	case countSpec:
		return bounds(map[string]any{"type": "integer"}, s.rng)
	case textSpec:
		m := map[string]any{"type": "string"}
		if s.words != nil {
			m["enum"] = s.words
		} else {
			m["minLength"] = 1
		}
		if s.eg != "" {
			m["examples"] = []string{s.eg}
		}
		return m
	}
	switch {
	case s.dim == nil:
		return map[string]any{"description": "a number with the unit of the key or quantity it belongs to",
			"anyOf": []any{map[string]any{"type": "number"}, map[string]any{"type": "string", "pattern": quantityPattern}}}
	case s.dim.kind == bareDim:
		return bounds(map[string]any{"type": "number"}, s.rng)
	}
	eg := s.dim.eg
	if s.eg != "" {
		eg = s.eg
	}
	return map[string]any{"type": "string", "pattern": quantityPattern, "examples": strings.Split(eg, " or ")}
}

func bounds(m map[string]any, iv *interval) map[string]any {
	if iv == nil {
		return m
	}
	set := func(x float64, open bool, key, openKey string) {
		switch {
		case math.IsInf(x, 0):
		case open:
			m[openKey] = x
		default:
			m[key] = x
		}
	}
	set(iv.lo, iv.loOpen, "minimum", "exclusiveMinimum")
	set(iv.hi, iv.hiOpen, "maximum", "exclusiveMaximum")
	return m
}

func (w *schemaWriter) union(s *spec) map[string]any {
	var forms []any
	for _, f := range s.forms {
		forms = append(forms, w.value(f.spec))
	}
	return map[string]any{"anyOf": forms}
}

func (w *schemaWriter) record(s *spec) map[string]any {
	properties := map[string]any{}
	for _, k := range s.keys {
		v := w.value(k.spec)
		doc := k.doc
		if d := k.spec.dim; d != nil && d.kind != bareDim {
			doc = strings.TrimPrefix(doc+"; "+d.words, "; ")
			if k.spec.rng != nil {
				doc += ", " + k.spec.rng.words()
			}
		}
		if doc != "" {
			v["description"] = doc
		}
		properties[k.name] = v
	}
	m := map[string]any{"type": "object", "properties": properties, "additionalProperties": false}
	if len(s.required) > 0 {
		m["required"] = s.required
	}
	var rules []any
	for _, g := range s.exactly {
		rules = append(rules, map[string]any{"oneOf": present(g)})
	}
	for _, g := range s.most {
		rules = append(rules, map[string]any{"not": map[string]any{"required": g}})
	}
	if rules != nil {
		m["allOf"] = rules
	}
	return m
}

func present(keys []string) []any {
	var out []any
	for _, k := range keys {
		out = append(out, map[string]any{"required": []string{k}})
	}
	return out
}
