package configs

import (
	"errors"
	"strings"
	"testing"
)

// base experiment of the tables below; each line of a case replaces or joins it.
const small = `title: Small
time-zero: 90 Ma
surface: {boundary: free, temperature: 10 degC}
base: {boundary: half-space, temperature: 1100 degC}
layers:
  - {name: crust, thickness: 30 km, density: 2800 kg/m3, viscosity: 1e22 Pa s}
  - {name: root, root: true, thickness: 12 km, density: 3450 kg/m3, creep: dry eclogite Zhang 2007}
  - {name: mantle, thickness: 40 km, density: 3300 kg/m3, creep: wet olivine dislocation Hirth 2003, water: {fugacity: 100 MPa}}
`

// crust is line 6 of small, root line 7, mantle line 8.
const crustLine = "  - {name: crust, thickness: 30 km, density: 2800 kg/m3, viscosity: 1e22 Pa s}\n"

func swap(old, new string) string {
	if !strings.Contains(small, old) {
		panic("nothing to replace: " + old)
	}
	return strings.Replace(small, old, new, 1)
}

func TestMistakes(t *testing.T) {
	if _, err := Read("s.yaml", strings.NewReader(small)); err != nil {
		t.Fatalf("the experiment the cases start from has mistakes: %v", err)
	}
	for _, c := range []struct{ name, in, want string }{
		{"no unit", swap("thickness: 12 km", "thickness: 12"),
			"s.yaml:7: layers[1] (root).thickness: 12 has no unit; needs a length, for example 12 km"},
		{"unit on a bare number", small + "drip: {removes: 0.3 m}\n",
			"s.yaml:9: drip.removes: 0.3 m has a unit; needs a bare number, for example 0.3"},
		{"unknown key", swap("thickness: 12 km", "thicknes: 12 km"),
			"s.yaml:7: layers[1] (root).thicknes: unknown key; did you mean thickness?\n" +
				"s.yaml:7: layers[1] (root).thickness: is missing; needs a length, for example 12 km"},
		{"wrong case", swap("title: Small", "Title: Small"), "s.yaml:1: Title: unknown key; keys and words are in lower case here; write title"},
		{"underscore", small + "viscosity_limits: {lowest: 1e17 Pa s}\n", "s.yaml:9: viscosity_limits: unknown key; words are joined by hyphens; write viscosity-limits"},
		{"strange key", small + "drip: {colour: red}\n", "s.yaml:9: drip.colour: unknown key; known are source, notes, amplitude, criterion, window, spectrum, removes, softening"},
		{"out of range", swap("thickness: 12 km", "thickness: -12 km"),
			"s.yaml:7: layers[1] (root).thickness: -12 km is out of range; needs a value above 0 m and at most 3000 km"},
		{"dip", small + "excision: {zones: [{name: z, dip: 91 deg, cuts: [root], slip-rate: 1 mm/yr}]}\n",
			"s.yaml:9: excision.zones[0] (z).dip: 91 deg is out of range; needs a value above 0 deg and at most 90 deg"},
		{"dip of zero", small + "excision: {zones: [{name: z, dip: 0 deg, cuts: [root], slip-rate: 1 mm/yr}]}\n",
			"s.yaml:9: excision.zones[0] (z).dip: 0 deg is out of range; needs a value above 0 deg and at most 90 deg"},
		{"below absolute zero", swap("temperature: 10 degC", "temperature: -300 degC"),
			"s.yaml:3: surface.temperature: -300 degC is out of range; needs a value of at least 0 K and at most 5000 K"},
		{"boundary", swap("boundary: free", "boundary: half-space"),
			"s.yaml:3: surface.boundary: half-space is not known; needs one of free, free-slip, rigid"},
		{"boundary misspelt", swap("boundary: half-space", "boundary: halfspace"),
			"s.yaml:4: base.boundary: halfspace is not known; needs one of half-space, inviscid, free-slip, rigid; did you mean half-space?"},
		{"both viscosity and creep", swap("viscosity: 1e22 Pa s", "viscosity: 1e22 Pa s, creep: dry eclogite Zhang 2007"),
			"s.yaml:6: layers[0] (crust): has viscosity and creep; only one of them may be given"},
		{"neither viscosity nor creep", swap(", viscosity: 1e22 Pa s", ""), "s.yaml:6: layers[0] (crust): has none of viscosity, creep; needs one of them"},
		{"no density", swap(" density: 2800 kg/m3,", ""),
			"s.yaml:6: layers[0] (crust).density: is missing; needs a density, for example 3300 kg/m3; or a map with top, bottom; or a map with reference, expansivity, compressibility, at; or a map with modes, by; or a map with table, interpolation; or a map with protolith, product, extent, cap, stable, rate"},
		{"exponent of creep", swap("creep: dry eclogite Zhang 2007", "creep: dry eclogite Zhang 2007, stress-exponent: 3"),
			"s.yaml:7: layers[1] (root).stress-exponent: belongs to a viscosity given as a number; creep laws bring their own"},
		{"half a gradient", swap("density: 2800 kg/m3", "density: {top: 2800 kg/m3}"),
			"s.yaml:6: layers[0] (crust).density.bottom: is missing; needs a density, for example 3300 kg/m3"},
		{"list for a number", swap("thickness: 12 km", "thickness: [12 km]"),
			"s.yaml:7: layers[1] (root).thickness: is a list; needs a length, for example 12 km"},
		{"text for a map", small + "drip: 500 m\n", "s.yaml:9: drip: is 500 m; needs a map with amplitude, criterion, window, spectrum, removes, softening"},
		{"map for a list", "layers: {crust: {thickness: 1 km}}\n", "s.yaml:1: layers: is a map; needs a list"},
		{"no layers", "title: nothing\n", "s.yaml:1: layers: is missing; needs a list"},
		{"empty layers", "layers: []\n", "s.yaml:1: layers: is an empty list; needs at least one entry"},
		{"yes for true", swap("root: true", "root: yes"), "s.yaml:7: layers[1] (root).root: yes is neither true nor false; needs true or false"},
		{"name twice", swap("name: mantle", "name: root"), "s.yaml:8: layers[2] (root).name: root is the name of an earlier entry too (line 7); names are unique in their list"},
		{"name with a dot", swap("name: mantle", "name: man.tle"),
			"s.yaml:8: layers[2] (man.tle).name: man.tle cannot be a name; a name is no whole number and has no dot and no equals sign, so that keys can name it"},
		{"number for a title", swap("title: Small", "title: 5"), "s.yaml:1: title: 5 is not a text; put it in quotes if it is meant as one"},
		{"number in quotes", small + "drip: {removes: '0.3'}\n", "s.yaml:9: drip.removes: 0.3 is text in quotes; needs a bare number, without them"},
		{"roots not adjacent", strings.Replace(strings.Replace(swap("root: true, ", ""), "name: crust,", "name: crust, root: true,", 1), "name: mantle,", "name: mantle, root: true,", 1),
			"s.yaml:8: layers[2] (mantle).root: is not adjacent to the root layer crust; root layers follow one another"},
		{"both at the base", swap("temperature: 1100 degC", "temperature: 1100 degC, heat-flow: 30 mW/m2"),
			"s.yaml:4: base: has temperature and heat-flow; only one of them may be given"},
		{"no temperature", swap(", temperature: 1100 degC", ""),
			"s.yaml:7: layers[1] (root).creep: needs a temperature and the experiment has none; add base.temperature or base.heat-flow, or a geotherm\n" +
				"s.yaml:8: layers[2] (mantle).creep: needs a temperature and the experiment has none; add base.temperature or base.heat-flow, or a geotherm"},
		{"steady without a base", "title: Small\ngeotherm: steady\nlayers:\n" + crustLine,
			"s.yaml:2: geotherm: steady needs base.temperature or base.heat-flow, for example base: {temperature: 1200 degC}"},
		{"no water", swap(", water: {fugacity: 100 MPa}", ""),
			"s.yaml:8: layers[2] (mantle).water: is missing; wet olivine dislocation Hirth 2003 needs a fugacity, for example water: {fugacity: 250 MPa}"},
		{"other water", swap("water: {fugacity: 100 MPa}", "water: {content: 1000}"),
			"s.yaml:8: layers[2] (mantle).water: is given in the other measure; wet olivine dislocation Hirth 2003 needs a fugacity, for example water: {fugacity: 250 MPa}"},
		{"no grain size", swap("creep: dry eclogite Zhang 2007", "creep: [dry olivine dislocation Hirth 2003, dry olivine diffusion Hirth 2003]"),
			"s.yaml:7: layers[1] (root).grain-size: is missing; dry olivine diffusion Hirth 2003 needs one, for example grain-size: 2 mm"},
		{"zone cuts nothing", small + "excision: {zones: [{name: z, dip: 30 deg, cuts: [rot], slip-rate: 1 mm/yr}]}\n",
			"s.yaml:9: excision.zones[0] (z).cuts[0]: rot is not a layer; did you mean root?"},
		{"zone jumps", small + "excision: {zones: [{name: z, dip: 30 deg, cuts: [crust, mantle], slip-rate: 1 mm/yr}]}\n",
			"s.yaml:9: excision.zones[0] (z).cuts[1]: mantle does not lie directly below crust; a zone cuts adjacent layers, named from above"},
		{"zone upside down", small + "excision: {zones: [{name: z, dip: 30 deg, cuts: [root, crust], slip-rate: 1 mm/yr}]}\n",
			"s.yaml:9: excision.zones[0] (z).cuts[1]: crust does not lie directly below root; a zone cuts adjacent layers, named from above"},
		{"zone does not move", small + "excision: {zones: [{name: z, dip: 30 deg, cuts: [root]}]}\n",
			"s.yaml:9: excision.zones[0] (z): has none of slip-rate, share, pressure-gap, force; needs one of them"},
		{"zone backwards", small + "excision: {zones: [{name: z, dip: 30 deg, cuts: [root], slip-rate: 1 mm/yr, from: 80 Ma, to: 85 Ma}]}\n",
			"s.yaml:9: excision.zones[0] (z): from 80 Ma is not before to 85 Ma"},
		{"zone after the window", small + "excision: {zones: [{name: z, dip: 30 deg, cuts: [root], slip-rate: 1 mm/yr, from: 40 Myr}]}\n",
			"s.yaml:9: excision.zones[0] (z): from 40 Myr is not before to 30 Myr"},
		{"age without time-zero", swap("time-zero: 90 Ma\n", "") + "excision: {zones: [{name: z, dip: 30 deg, cuts: [root], slip-rate: 1 mm/yr, from: 80 Ma}]}\n",
			"s.yaml:8: excision.zones[0] (z).from: 80 Ma is an age and the experiment has no time-zero; add time-zero, for example 95 Ma, or write Myr since the start"},
		{"geotherm too short", swap(", temperature: 1100 degC", "") + "geotherm: [{depth: 0 km, temperature: 10 degC}, {depth: 50 km, temperature: 900 degC}]\n",
			"s.yaml:9: geotherm: ends at 50 km; needs to cover the column, 82 km"},
		{"geotherm begins below", swap(", temperature: 1100 degC", "") + "geotherm: [{depth: 1 km, temperature: 10 degC}, {depth: 90 km, temperature: 900 degC}]\n",
			"s.yaml:9: geotherm: begins at 1 km; needs a point at depth 0"},
		{"geotherm in disorder", swap(", temperature: 1100 degC", "") + "geotherm: [{depth: 0 km, temperature: 10 degC}, {depth: 90 km, temperature: 900 degC}, {depth: 80 km, temperature: 800 degC}]\n",
			"s.yaml:9: geotherm[2]: depth 80 km is not below the one before it, 90 km; depths increase"},
		{"geotherm and base", small + "geotherm: [{depth: 0 km, temperature: 10 degC}, {depth: 90 km, temperature: 900 degC}]\n",
			"s.yaml:4: base: 1100 degC has no use beside a given geotherm in this version; leave one of them out"},
		{"geotherm file", swap(", temperature: 1100 degC", "") + "geotherm: none.csv\n",
			"s.yaml:9: geotherm: none.csv: no such file or directory; needs steady, or a CSV file with the columns depth_km and temperature_degC (or depth_m, temperature_K)"},
		{"viscosity of nothing", swap("viscosity: 1e22 Pa s", "viscosity: 1e-300 Pa s"),
			"s.yaml:6: layers[0] (crust).viscosity: 1e-300 Pa s is out of range; needs a value of at least 1 Pa s and at most 1e40 Pa s"},
		{"viscosity of a gradient", swap("viscosity: 1e22 Pa s", "viscosity: {top: 1e41 Pa s, bottom: 0.1 Pa s}"),
			"s.yaml:6: layers[0] (crust).viscosity.bottom: 0.1 Pa s is out of range; needs a value of at least 1 Pa s and at most 1e40 Pa s\n" +
				"s.yaml:6: layers[0] (crust).viscosity.top: 1e41 Pa s is out of range; needs a value of at least 1 Pa s and at most 1e40 Pa s"},
		{"limit of nothing", small + "viscosity-limits: {lowest: 0.5 Pa s}\n",
			"s.yaml:9: viscosity-limits.lowest: 0.5 Pa s is out of range; needs a value of at least 1 Pa s and at most 1e40 Pa s"},
		{"undulation as high as the root", small + "drip: {amplitude: 12 km}\n",
			"s.yaml:9: drip.amplitude: 12 km is a drip already at the start; needs less than criterion × root thickness, 1.0 × 12 km = 12 km"},
		{"undulation and criterion", small + "drip: {amplitude: 4 km, criterion: 0.25}\n",
			"s.yaml:9: drip.amplitude: 4 km is a drip already at the start; needs less than criterion × root thickness, 0.25 × 12 km = 3 km"},
		{"thin root", swap("thickness: 12 km", "thickness: 400 m"),
			"s.yaml:7: drip.amplitude: 500 m (the default) is a drip already at the start; needs less than criterion × root thickness, 1.0 × 0.4 km = 0.4 km"},
		{"thin root of two layers", strings.Replace(swap("thickness: 12 km", "thickness: 200 m"), "name: mantle, thickness: 40 km", "name: mantle, root: true, thickness: 100 m", 1),
			"s.yaml:8: drip.amplitude: 500 m (the default) is a drip already at the start; needs less than criterion × root thickness, 1.0 × 0.3 km = 0.3 km"},
		{"time-zero without a unit", swap("time-zero: 90 Ma", "time-zero: 90") + "excision: {zones: [{name: z, dip: 30 deg, cuts: [root], slip-rate: 1 mm/yr, from: 80 Ma, to: 70 Ma}]}\n",
			"s.yaml:2: time-zero: 90 has no unit; needs an age in Ma, for example 95 Ma"},
		{"time-zero is a list", swap("time-zero: 90 Ma", "time-zero: [90 Ma]") + "excision: {zones: [{name: z, dip: 30 deg, cuts: [root], slip-rate: 1 mm/yr, from: 80, to: 70 Ma}]}\n",
			"s.yaml:2: time-zero: is a list; needs an age in Ma, for example 95 Ma\n" +
				"s.yaml:9: excision.zones[0] (z).from: 80 has no unit; needs a time since the start or an age, for example 6 Myr or 89 Ma"},
		{"buoyancy of a temperature there is not", "title: Small\nbuoyancy: {thermal: frozen}\nlayers:\n" + crustLine,
			"s.yaml:2: buoyancy.thermal: frozen needs a temperature and the experiment has none; add base.temperature or base.heat-flow, or a geotherm"},
		{"limits", small + "viscosity-limits: {lowest: 1e26 Pa s}\n", "s.yaml:9: viscosity-limits: lowest 1e26 Pa s is not below highest 1e25 Pa s"},
		{"prefactor", swap("creep: dry eclogite Zhang 2007", "creep: {prefactor: 1 MPa^-3 s^-1, stress-exponent: 3.5, activation-energy: 400 kJ/mol, test: axial}"),
			"s.yaml:7: layers[1] (root).creep.prefactor: 1 MPa^-3 s^-1 does not fit the exponents; needs the unit MPa^-3.5 s^-1, for example 1 MPa^-3.5 s^-1"},
		{"prefactor with grain size and water", swap("creep: dry eclogite Zhang 2007", "creep: {prefactor: 1 MPa^-3.5 s^-1, stress-exponent: 1, grain-exponent: 3, water-exponent: 0.5, water: fugacity, activation-energy: 400 kJ/mol, test: axial}"),
			"s.yaml:7: layers[1] (root).creep.prefactor: 1 MPa^-3.5 s^-1 does not fit the exponents; needs the unit MPa^-1.5 um^3 s^-1, for example 1 MPa^-1.5 um^3 s^-1"},
		{"water measure of a law", swap("creep: dry eclogite Zhang 2007", "creep: {prefactor: 1 MPa^-3 s^-1, stress-exponent: 3, water-exponent: 1, activation-energy: 400 kJ/mol, test: axial}"),
			"s.yaml:7: layers[1] (root).creep.water: is missing; a law with a water-exponent says whether it counts fugacity or content"},
		{"test geometry", swap("creep: dry eclogite Zhang 2007", "creep: {prefactor: 1 MPa^-3 s^-1, stress-exponent: 3, activation-energy: 400 kJ/mol}"),
			"s.yaml:7: layers[1] (root).creep.test: is missing; needs one of axial, plane-strain, shear"},
		{"sd in degC", small + "ensemble: {samples: 10, vary: [{key: base.temperature, normal: {mean: 1100 degC, sd: 50 degC}}], quantities: [verdict]}\n",
			"s.yaml:9: ensemble: not in this version of keelfall\n" +
				"s.yaml:9: ensemble.vary[0].normal.sd: 50 degC: a difference or error of temperature is in K, degC has an offset; write 50 K"},
		{"unknown sweep key", small + "race: {reversal: [{key: layers.rot.thickness, from: 1 km, to: 2 km}]}\n",
			"s.yaml:9: race.reversal: not in this version of keelfall\n" +
				"s.yaml:9: race.reversal[0].key: layers.rot.thickness is not a key that can be varied: layers.rot.thickness: rot is not an entry; did you mean root?"},
		{"several at once", "title: x\nsurface: {boundary: solid}\nlayers:\n  - {name: a, thickness: 1, density: 2800 kg/m3, viscosity: 1e21 Pa}\n",
			"s.yaml:2: surface.boundary: solid is not known; needs one of free, free-slip, rigid\n" +
				"s.yaml:4: layers[0] (a).thickness: 1 has no unit; needs a length, for example 12 km\n" +
				"s.yaml:4: layers[0] (a).viscosity: 1e21 Pa is a pressure; needs a viscosity, for example 1e21 Pa s"},
	} {
		for range 2 { // the same bytes give the same messages
			_, err := Read("s.yaml", strings.NewReader(c.in))
			if err == nil || err.Error() != c.want {
				t.Errorf("%s:\n got %v\nwant %s", c.name, err, c.want)
			}
		}
	}
}

func TestUnknownLaw(t *testing.T) {
	_, err := Read("s.yaml", strings.NewReader(swap("dry eclogite Zhang 2007", "dry eclogite Chang 2007")))
	if err == nil || !strings.HasPrefix(err.Error(), "s.yaml:7: layers[1] (root).creep: ") || !strings.Contains(err.Error(), "dry eclogite Zhang 2007") {
		t.Errorf("%v; want the place and the nearest name", err)
	}
	if _, err := Read("s.yaml", strings.NewReader(swap("dry eclogite Zhang 2007", "Dry ECLOGITE zhang 2007"))); err != nil {
		t.Errorf("case should not matter: %v", err)
	}
}

func TestManyMistakes(t *testing.T) {
	_, err := Read("s.yaml", strings.NewReader("layers:\n"+strings.Repeat("  - {thickness: 1}\n", 9999)))
	m, ok := err.(Mistakes)
	if !ok || len(m) != maxMistakes+1 || !strings.Contains(m[maxMistakes].What, "more than 200 mistakes") {
		t.Fatalf("%d mistakes of type %T", len(m), err)
	}
}

// A law that does not exist is reported with the file's other mistakes, not after them.
func TestLawNamesWithOtherMistakes(t *testing.T) {
	_, err := Read("a.yaml", strings.NewReader("surface: {boundary: rigid}\nbase: {boundary: rigid, temperature: 600 degC}\nlayers:\n  - {name: a, thickness: 10, density: 3300 kg/m3, creep: dry eclogyte Zhang 2007}\n"))
	var m Mistakes
	if !errors.As(err, &m) || len(m) != 2 || !strings.Contains(err.Error(), "has no unit") || !strings.Contains(err.Error(), "dry eclogite Zhang 2007") {
		t.Errorf("%v", err)
	}
}
