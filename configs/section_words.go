package configs

import (
	"fmt"
	"slices"
	"strings"

	"keelfall/column"
)

// averaging is the kind of mean that a layer's rows have.
type averaging int

const (
	// arithmetic is exact for what adds up over thickness: mass, heat production, the
	// volumes of minerals. Heat capacity follows it too, its weight by density left out.
	arithmetic averaging = iota
	// harmonic is exact for conductivity: the thermal resistances h/κ of rows add up.
	harmonic
	// geometric is for viscosity and grain size, which spread over orders of magnitude.
	geometric
)

// sectionWord is what a column of a measured section may be called, without its unit.
type sectionWord struct {
	word string
	key  string     // of the layer that it gives; empty where it gives none by itself
	dim  *dimension // nil for texts
	rng  *interval
	eg   string // a whole column name
	mean averaging
}

// sectionWords are all columns but those of mineral modes, mode_MINERAL.
var sectionWords = func() []*sectionWord {
	layer := schema.key("layers").spec.item.forms[0].spec
	rock := func(word string, mean averaging, eg string) *sectionWord {
		key := strings.ReplaceAll(word, "_", "-")
		s := layer.key(key).spec
		for _, f := range s.forms {
			if f.spec.kind == quantitySpec {
				s = f.spec
			}
		}
		return &sectionWord{word, key, s.dim, s.rng, eg, mean}
	}
	other := func(word, dim, rng, eg string) *sectionWord {
		iv := parseInterval(rng, dimensions[dim])
		return &sectionWord{word, "", dimensions[dim], &iv, eg, arithmetic}
	}
	text := func(word string) *sectionWord { return &sectionWord{word: word, eg: word} }
	return []*sectionWord{
		text("name"), text("layer"), text("root"), text("creep"), text("source"), text("notes"),
		rock("thickness", arithmetic, "thickness_km"),
		other("top", "length", "[0 km,3000 km]", "top_km"),
		other("bottom", "length", "[0 km,3000 km]", "bottom_km"),
		other("top_pressure", "pressure", "[0 GPa,100 GPa]", "top_pressure_GPa"),
		other("bottom_pressure", "pressure", "[0 GPa,100 GPa]", "bottom_pressure_GPa"),
		rock("density", arithmetic, "density_kg_m3"),
		other("density_error", "density", "[0 kg/m3,20000 kg/m3]", "density_error_kg_m3"),
		other("density_sd", "density", "[0 kg/m3,20000 kg/m3]", "density_sd_kg_m3"),
		rock("viscosity", geometric, "viscosity_Pa_s"),
		rock("heat_production", arithmetic, "heat_production_uW_m3"),
		rock("conductivity", harmonic, "conductivity_W_m_K"),
		rock("heat_capacity", arithmetic, "heat_capacity_J_kg_K"),
		rock("grain_size", geometric, "grain_size_mm"),
		other("temperature", "temperature", "(0 K,5000 K]", "temperature_degC"),
		other("pressure", "pressure", "[0 GPa,100 GPa]", "pressure_GPa"),
	}
}()

// aliases are columns that mean the same; a file has one of them.
var sectionAliases = map[string]string{"layer": "name", "density_sd": "density_error"}

// sectionColumn is one column of a file.
type sectionColumn struct {
	*sectionWord
	head    string // as written
	unit    string
	mineral string // full name, of a column of modes
}

// modeWord is a column of mineral modes, volume shares.
var modeWord = func() *sectionWord {
	iv := parseInterval("[0,1]", dimensions["number"])
	return &sectionWord{word: "mode", dim: dimensions["number"], rng: &iv, eg: "mode_pyrope"}
}()

// columnOf reads a column's name: the word, then the unit, all joined by underscores.
func columnOf(head string) (*sectionColumn, error) {
	if mineral, ok := strings.CutPrefix(head, "mode_"); ok {
		m, err := column.FindMineral(mineral)
		if err != nil {
			return nil, err
		}
		return &sectionColumn{modeWord, head, "", m.Name}, nil
	}
	var word *sectionWord
	for _, w := range sectionWords {
		if (head == w.word || w.dim != nil && strings.HasPrefix(head, w.word+"_")) && (word == nil || len(w.word) > len(word.word)) {
			word = w
		}
	}
	if word == nil {
		var known []string
		for _, w := range sectionWords {
			known = append(known, w.eg)
		}
		return nil, fmt.Errorf("unknown column; %s", didYouMean(head, append(known, modeWord.eg)))
	}
	c := &sectionColumn{sectionWord: word, head: head}
	if word.dim == nil {
		return c, nil
	}
	rest := strings.TrimPrefix(strings.TrimPrefix(head, word.word), "_")
	if rest == "" {
		return nil, fmt.Errorf("has no unit; needs that of %s, for example %s", word.dim.words, word.eg)
	}
	// kg_m3 is kg/m3 and Pa_s is Pa s: whichever has the dimension.
	for _, joint := range []string{"/", " "} {
		c.unit = strings.ReplaceAll(rest, "_", joint)
		if u, err := parseUnit(c.unit); err == nil && u.vec.equal(word.dim.vec) {
			return c, nil
		}
	}
	return nil, fmt.Errorf("%s is no unit of %s; needs one, for example %s", shorten(rest), word.dim.words, word.eg)
}

// columns reads the header; nil stands for a column with a mistake.
func (r *sectionReader) columns(head []string, line int) {
	if len(head) == 1 && strings.ContainsAny(head[0], ";\t") {
		r.add(line, "", "has columns that are not separated by commas; save the file with commas between cells and points in numbers")
		return
	}
	first := map[string]string{}
	for _, h := range head {
		h = strings.TrimSpace(h)
		c, err := columnOf(h)
		if err != nil {
			r.add(line, shorten(h), err.Error())
			r.cols = append(r.cols, nil)
			continue
		}
		is := c.word + c.mineral
		if a, ok := sectionAliases[is]; ok {
			is = a
		}
		if before, ok := first[is]; ok {
			r.add(line, shorten(h), fmt.Sprintf("says the same as column %s; one of them may stand", before))
		}
		first[is] = h
		r.cols = append(r.cols, c)
	}
	if slices.Contains(r.cols, nil) {
		return // the missing one may be the misspelt one
	}
	if first["name"] == "" {
		r.add(line, "name", "is missing; needs a column name, the layer each row belongs to")
	}
	r.geometry(first, line)
}

// geometry finds out how the file says where its rows lie.
func (r *sectionReader) geometry(first map[string]string, line int) {
	const ways = "thickness; or top and bottom; or top_pressure and bottom_pressure"
	var have []string
	for _, pair := range [][]string{{"thickness"}, {"top", "bottom"}, {"top_pressure", "bottom_pressure"}} {
		var heads []string
		missing := ""
		for _, word := range pair {
			if h := first[word]; h != "" {
				heads = append(heads, h)
			} else {
				missing = word
			}
		}
		if heads == nil {
			continue
		}
		if missing != "" {
			r.add(line, heads[0], "needs the column "+missing+" too")
		}
		have = append(have, strings.Join(heads, " and "))
		r.top, r.bottom = pair[0], pair[len(pair)-1]
	}
	switch len(have) {
	case 0:
		r.add(line, "", "has no column that says how thick the rows are; needs one of "+ways)
	case 2, 3:
		r.add(line, "", "has "+strings.Join(have, " as well as ")+"; needs one of "+ways)
	}
}
