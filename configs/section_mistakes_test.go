package configs

import (
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestSectionMistakes(t *testing.T) {
	const head = "name,thickness_km,density_kg_m3\n"
	const depths = "name,top_km,bottom_km,density_kg_m3\n"
	const pressures = "name,top_pressure_GPa,bottom_pressure_GPa,density_kg_m3\n"
	const ways = "needs one of thickness; or top and bottom; or top_pressure and bottom_pressure"
	for csv, want := range map[string]string{
		"":                         "s.csv: is empty; needs " + sectionNeeds,
		"# nothing\n":              "s.csv: has no rows; needs " + sectionNeeds,
		head:                       "s.csv:1: has a header and no rows",
		"name;thickness_km\na;1\n": "s.csv:1: has columns that are not separated by commas; save the file with commas between cells and points in numbers",
		"name,thickness,density_kg_m3\na,1,3000\n":                    "s.csv:1: thickness: has no unit; needs that of a length, for example thickness_km",
		"name,thickness_GPa,density_kg_m3\na,1,3000\n":                "s.csv:1: thickness_GPa: GPa is no unit of a length; needs one, for example thickness_km",
		"name,thickness_km,density\na,1,3000\n":                       "s.csv:1: density: has no unit; needs that of a density, for example density_kg_m3",
		"name,thicknes_km,densty_kg_m3\na,1,3000\n":                   "s.csv:1: densty_kg_m3: unknown column; did you mean density_kg_m3?\ns.csv:1: thicknes_km: unknown column; did you mean thickness_km?",
		"name,thickness_km,density_kg_m3,depth-to-moho\na,1,3000,1\n": "s.csv:1: depth-to-moho: unknown column; known are name, layer, root, creep, source, notes, thickness_km, top_km, bottom_km, top_pressure_GPa, bottom_pressure_GPa, density_kg_m3, density_error_kg_m3, density_sd_kg_m3, viscosity_Pa_s, heat_production_uW_m3, conductivity_W_m_K, heat_capacity_J_kg_K, grain_size_mm, temperature_degC, pressure_GPa, mode_pyrope",
		"name,thickness_km,thickness_m\na,1,1000\n":                   "s.csv:1: thickness_m: says the same as column thickness_km; one of them may stand",
		"name,layer,thickness_km\na,a,1\n":                            "s.csv:1: layer: says the same as column name; one of them may stand",
		"name,thickness_km,mode_pyrope,mode_Prp\na,1,1,0\n":           "s.csv:1: mode_Prp: says the same as column mode_pyrope; one of them may stand",
		"name,thickness_km,mode_pyrop\na,1,1\n":                       "s.csv:1: mode_pyrop: no mineral is called \"pyrop\"; did you mean pyrope?",
		"thickness_km,density_kg_m3\n1,3000\n":                        "s.csv:1: name: is missing; needs a column name, the layer each row belongs to",
		"name,density_kg_m3\na,3000\n":                                "s.csv:1: has no column that says how thick the rows are; " + ways,
		"name,top_km,density_kg_m3\na,0,3000\n":                       "s.csv:1: top_km: needs the column bottom too",
		"name,thickness_km,top_km,bottom_km\na,1,0,1\n":               "s.csv:1: has thickness_km as well as top_km and bottom_km; " + ways,
		head + "a,1\n":                               "s.csv:2: has 2 cells; the header has 3 columns",
		head + "a,\"1,3000\n":                        "s.csv:2: is not valid CSV: extraneous or missing \" in quoted-field",
		head + "a,x,3000\n":                          "s.csv:2: thickness_km: x is not a number",
		head + "a,1,NaN\n":                           "s.csv:2: density_kg_m3: NaN is not a number",
		head + "a,0,3000\nb,-2,3000\n":               "s.csv:2: thickness_km: 0 km is out of range; needs a value above 0 m and at most 3000 km\ns.csv:3: thickness_km: -2 km is out of range; needs a value above 0 m and at most 3000 km",
		head + "a,1,3\n\nb,1,-3\n":                   "s.csv:4: density_kg_m3: -3 kg/m3 is out of range; needs a value above 0 kg/m3 and at most 20000 kg/m3",
		head + ",1,3000\n":                           "s.csv:2: name: is missing; every row names the layer it belongs to",
		head + "a,,3000\n":                           "s.csv:2: thickness: is missing; every row has one",
		head + "a,1,3000\na,1,\n":                    "s.csv:3: density: is missing, and line 2 of the same layer has one; needs one in every row of a layer or in none",
		head + "a,1,\n":                              "s.csv:2: layers[1] (a).density: is missing; needs a density, for example 3300 kg/m3; or a map with top, bottom",
		head + "a,1,3000\nb,1,3000\na,1,3000\n":      "s.csv:4: name: a stands in line 2 too, with another layer in between; rows of one layer follow one another, and layers have names of their own",
		head + "mantle,1,3000\n":                     "s.yaml:8: layers[2] (mantle).name: mantle is the name of an earlier entry too (DIR/s.csv:2); names are unique in their list",
		head + "crust,1,3000\n":                      "s.csv:2: layers[1] (crust).name: crust is the name of an earlier entry too (DIR/s.yaml:6); names are unique in their list",
		head + "a.b,1,3000\n":                        "s.csv:2: layers[1] (a.b).name: a.b cannot be a name; a name is no whole number and has no dot and no equals sign, so that keys can name it",
		depths + "a,0,2,3000\nb,1.5,3,3000\n":        "s.csv:3: top: 1.5 km overlaps with the row above, which ends at 2 km (line 2)",
		depths + "a,0,2,3000\nb,2.5,3,3000\n":        "s.csv:3: top: 2.5 km leaves a gap below the row above, which ends at 2 km (line 2)",
		depths + "a,2,2,3000\n":                      "s.csv:2: bottom: 2 km is not below the row's top, 2 km",
		depths + "a,30,32,3000\n":                    "s.csv:2: top: the first row begins at 30 km; depths are below the section's own top, so it needs 0",
		pressures + "a,1,1.2,3000\nb,1.1,1.3,3000\n": "s.csv:3: top_pressure: 1.1 GPa overlaps with the row above, which ends at 1.2 GPa (line 2)",
		pressures + "a,1,1.2,3000\nb,1.3,1.4,3000\n": "s.csv:3: top_pressure: 1.3 GPa leaves a gap below the row above, which ends at 1.2 GPa (line 2)",
		pressures + "a,1.3,1.2,3000\n":               "s.csv:2: bottom_pressure: 1.2 GPa is not below the row's top, 1.3 GPa",
		pressures + "a,1,1.2,\n":                     "s.csv:2: a difference of pressure becomes a thickness with the row's own density; needs a density, or mineral modes and a temperature",
		"name,top_pressure_GPa,bottom_pressure_GPa,mode_pyrope\na,1,1.2,1\n":                               "s.csv:2: a difference of pressure becomes a thickness with the row's own density; that of mineral modes needs a temperature, for example in a column temperature_degC",
		"name,thickness_km,mode_pyrope,mode_diopside\na,1,0.5,0.4\n":                                       "s.csv:2: mode: mineral modes sum to 0.9; need 1 (within 0.01)",
		"name,thickness_km,mode_pyrope,mode_diopside\na,1,50,50\n":                                         "s.csv:2: mode_diopside: 50 is out of range; needs a value of at least 0 and at most 1\ns.csv:2: mode_pyrope: 50 is out of range; needs a value of at least 0 and at most 1",
		"name,thickness_km,density_kg_m3,mode_pyrope\na,1,3000,1\n":                                        "s.csv:2: has a density and mineral modes; only one of them may be given",
		"name,thickness_km,density_kg_m3,density_error_kg_m3\na,1,,20\n":                                   "s.csv:2: density_error: belongs to a density, and the row has none",
		"name,thickness_km,density_kg_m3,root\na,1,3000,yes\n":                                             "s.csv:2: root: yes is neither true nor false; needs true or false",
		"name,thickness_km,density_kg_m3,root\na,1,3000,true\na,1,3000,false\n":                            "s.csv:3: root: is false and was true in line 2; the rows of one layer are all root or none is",
		"name,thickness_km,density_kg_m3,creep\na,1,3000,dry eclogite Zhang 2007\na,1,3000,dry eclogite\n": "s.csv:3: creep: is dry eclogite and was dry eclogite Zhang 2007 in line 2; the rows of one layer creep alike",
		"name,thickness_km,density_kg_m3,creep\na,1,3000,dry eclogite Zang 2007\n":                         "s.csv:2: layers[1] (a).creep: no creep law \"dry eclogite Zang 2007\"; the nearest: dry eclogite Zhang 2007, quartz eclogite Jin 2001, dry olivine diffusion Hirth 2003, dry olivine dislocation Hirth 2003",
		"name,thickness_km,density_kg_m3,root\na,1,3000,true\nb,1,3000,\nc,1,3000,true\n":                  "s.csv:4: layers[3] (c).root: is not adjacent to the root layer a; root layers follow one another",
		"\xff\xfe":                        "s.csv:1: is UTF-16 text; save it as UTF-8",
		head + "a,1,3000\nb\xe9,1,3000\n": "s.csv:3: holds the byte 0xE9, which is not UTF-8 (perhaps Latin-1); save the file as UTF-8",
	} {
		path := inFolder(t, "s.yaml", sectioned, "s.csv", csv)
		dir := filepath.Dir(path) + string(filepath.Separator)
		_, err := Open(path)
		got := "accepted"
		if err != nil {
			got = strings.ReplaceAll(err.Error(), dir, "")
		}
		want = strings.ReplaceAll(want, "DIR/", "")
		if strings.Contains(want, "or a map with top, bottom") { // the rest is the schema's own
			got = got[:min(len(got), len(want))]
		}
		if got != want {
			t.Errorf("%q:\n got %s\nwant %s", csv, got, want)
		}
	}
}

// TestSectionEntryMistakes: what is wrong with the entry stands in the experiment, once.
func TestSectionEntryMistakes(t *testing.T) {
	const entry = "{section: s.csv, creep: dry eclogite Zhang 2007, heat-production: 0.2 uW/m3, source: the entry}"
	for with, want := range map[string]string{
		"{section: none.csv}": "s.yaml:7: layers[1].section: DIRnone.csv: no such file or directory",
		"{section: s.csv, name: x, thickness: 3 km, creep: dry eclogite Zhang 2007}": "s.yaml:7: layers[1].name: has no place beside section; the rows of s.csv have their own\n" +
			"s.yaml:7: layers[1].thickness: has no place beside section; the rows of s.csv have their own",
		"{section: s.csv, creep: dry eclogyte Zhang 2007}":          "s.yaml:7: layers[1] (gabbro).creep: ",
		"{section: s.csv, viscosity: 1e21}":                         "s.yaml:7: layers[1] (gabbro).viscosity: 1e21 has no unit; needs a viscosity, for example 1e21 Pa s",
		"{section: s.csv, colour: red, viscosity: 1e21 Pa s}":       "s.yaml:7: layers[1] (gabbro).colour: unknown key; ",
		"{section: s.csv, creep: dry olivine diffusion Hirth 2003}": "s.yaml:7: layers[1] (gabbro).grain-size: is missing; dry olivine diffusion Hirth 2003 needs one, for example grain-size: 2 mm",
		"{section: s.csv}": "s.csv:3: layers[1] (gabbro): has none of viscosity, creep; needs one of them\ns.csv:5: layers[2] (root): has none of viscosity, creep; needs one of them",
		"{section: 5, creep: dry eclogite Zhang 2007}":       "s.yaml:7: layers[1].section: 5 is not a text; put it in quotes if it is meant as one",
		"{section: [s.csv], creep: dry eclogite Zhang 2007}": "s.yaml:7: layers[1].section: is a list; needs the name of a CSV file",
	} {
		path := inFolder(t, "s.yaml", strings.Replace(sectioned, entry, with, 1), "s.csv", twoLayers)
		dir := filepath.Dir(path) + string(filepath.Separator)
		_, err := Open(path)
		got := "accepted"
		if err != nil {
			got = strings.ReplaceAll(strings.ReplaceAll(err.Error(), "section: "+dir, "section: DIR"), dir, "")
		}
		if !strings.HasPrefix(got, want) || strings.Count(got, "\n") != strings.Count(want, "\n") {
			t.Errorf("%s:\n got %s\nwant %s", with, got, want)
		}
	}
	// Mistakes of the section and of the rest are told together; an unknown layer too.
	path := inFolder(t, "s.yaml", strings.Replace(sectioned, "thickness: 40 km", "thickness: 40", 1), "s.csv", "name,thickness_km\na,x\n")
	_, err := Open(path)
	if err == nil || !strings.Contains(err.Error(), "s.csv:2: thickness_km: x is not a number\n") || !strings.Contains(err.Error(), "s.yaml:8: layers[2] (mantle).thickness: 40 has no unit") {
		t.Error(err)
	}
	_, err = Open(path, "layers.a.root=true")
	if err == nil || !strings.Contains(err.Error(), "s.csv:2: thickness_km: x is not a number\n--set layers.a.root=true: layers: a is not an entry") {
		t.Error(err)
	}
	// The entry's creep serves the second layer only, and is told all the same.
	path = inFolder(t, "s.yaml", strings.Replace(sectioned, "eclogite Zhang", "eclogyte Zhang", 1), "s.csv", "name,thickness_km,density_kg_m3,viscosity_Pa_s\na,1,3000,1e21\nb,1,3000,\n")
	_, err = Open(path)
	if err == nil || !strings.Contains(err.Error(), "s.yaml:7: layers[2] (b).creep: ") || strings.Contains(err.Error(), "\n") {
		t.Error(err)
	}
	path = inFolder(t, "s.yaml", strings.Replace(sectioned, "eclogite Zhang 2007", "olivine diffusion Hirth 2003", 1), "s.csv", "name,thickness_km,density_kg_m3,grain_size_mm\na,1,3000,2\nb,1,3000,\n")
	_, err = Open(path)
	if err == nil || !strings.Contains(err.Error(), "s.yaml:7: layers[2] (b).grain-size: is missing; ") || strings.Contains(err.Error(), "\n") {
		t.Error(err)
	}
	// An edit may put another entry in the place of a section with mistakes.
	path = inFolder(t, "s.yaml", sectioned, "s.csv", "name,thickness_km\na,x\n", "t.csv", twoLayers)
	if n := len(mustProblem(t, mustOpen(t, path, "layers.1.section=t.csv")).Column.Layers); n != 4 {
		t.Errorf("%d layers", n)
	}
}

// TestSectionGarbage: whatever the file holds, an error in words or a valid column.
func TestSectionGarbage(t *testing.T) {
	words := []string{"name", "layer", "thickness_km", "thickness", "top_km", "bottom_km", "top_pressure_GPa", "bottom_pressure_GPa", "density_kg_m3", "density_error_kg_m3",
		"viscosity_Pa_s", "conductivity_W_m_K", "grain_size_mm", "temperature_degC", "mode_pyrope", "mode_diopside", "mode_", "root", "_", "a", "b", "0", "1", "0.5", "2", "3000", "1e-320", "1e308", "-1",
		"true", "NaN", "\"", "é", "#", ""}
	rng := rand.New(rand.NewPCG(20, 7))
	path := inFolder(t, "s.yaml", sectioned)
	accepted := 0
	for range 1500 {
		var b strings.Builder
		columns := 1 + rng.IntN(5)
		if rng.IntN(2) == 0 { // a header that is understood, so that rows are reached
			b.WriteString([]string{"name,thickness_km,density_kg_m3\n", "name,top_km,bottom_km,density_kg_m3\n", "name,top_pressure_GPa,bottom_pressure_GPa,density_kg_m3\n",
				"name,thickness_km,mode_pyrope,mode_diopside\n", "name,thickness_km,density_kg_m3,viscosity_Pa_s\n"}[rng.IntN(5)])
			columns = strings.Count(b.String(), ",") + 1
		}
		for range 1 + rng.IntN(4) {
			for c := range columns {
				if c > 0 {
					b.WriteByte(',')
				}
				b.WriteString(words[rng.IntN(len(words))])
			}
			b.WriteByte('\n')
		}
		if err := os.WriteFile(filepath.Join(filepath.Dir(path), "s.csv"), []byte(b.String()), 0o600); err != nil {
			t.Fatal(err)
		}
		e, err := Open(path)
		switch {
		case err != nil && err.Error() == "":
			t.Fatalf("%q: an error without a message", b.String())
		case err == nil:
			accepted++
			p := mustProblem(t, e)
			if err := p.Column.Validate(); err != nil {
				t.Fatalf("%q: %v", b.String(), err)
			}
			for _, s := range e.Scatter() {
				if !finite(s.Mean) || !finite(s.SD) || !finite(s.RowError) {
					t.Fatalf("%q: %+v", b.String(), s)
				}
			}
		}
	}
	if accepted == 0 {
		t.Error("nothing was accepted, so nothing was tested")
	}
}
