package configs

import (
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"gonum.org/v1/gonum/floats/scalar"

	"keelfall/column"
	"keelfall/solver/race"
)

// inFolder writes files to a folder of their own and returns the path of the first.
func inFolder(t *testing.T, files ...string) string {
	t.Helper()
	dir := t.TempDir()
	for i := 0; i < len(files); i += 2 {
		if err := os.WriteFile(filepath.Join(dir, files[i]), []byte(files[i+1]), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	return filepath.Join(dir, files[0])
}

func mustOpen(t *testing.T, path string, edits ...string) *Experiment {
	t.Helper()
	e, err := Open(path, edits...)
	if err != nil {
		t.Fatal(err)
	}
	return e
}

// sectioned is small with a section, line 7, in the place of its root.
const sectioned = `title: Small
time-zero: 90 Ma
surface: {boundary: free, temperature: 10 degC}
base: {boundary: half-space, temperature: 1100 degC}
layers:
  - {name: crust, thickness: 30 km, density: 2800 kg/m3, viscosity: 1e22 Pa s}
  - {section: s.csv, creep: dry eclogite Zhang 2007, heat-production: 0.2 uW/m3, source: the entry}
  - {name: mantle, thickness: 40 km, density: 3300 kg/m3, creep: wet olivine dislocation Hirth 2003, water: {fugacity: 100 MPa}}
`

// twoLayers: gabbro of two rows, 1 km and 3 km; root of one.
const twoLayers = `# invented
name, thickness_km, density_kg_m3, density_error_kg_m3, root, source, temperature_degC
gabbro, 1, 3000, 40, , "A, 1", 700
gabbro, 3, 3100, 20, , B, 800
root, 12, 3450, , TRUE, ,
`

func TestSectionMeans(t *testing.T) {
	e := mustOpen(t, inFolder(t, "s.yaml", sectioned, "s.csv",
		"name,thickness_km,density_g_cm3,density_sd_kg_m3,viscosity_Pa_s,conductivity_W_m_K,heat_production_uW_m3,heat_capacity_J_kg_K,grain_size_mm,root\n"+
			"a,1,3.0,40,1e20,2,1,1000,1,true\n"+
			"a,3,3.1,20,1e22,4,2,1100,16,true\n"))
	l := mustProblem(t, e).Column.Layers[1]
	// Weights 1/4 and 3/4; a spread of two values d apart is d √(1/4 · 3/4). By hand.
	spread := math.Sqrt(3) / 4
	for _, c := range []struct {
		what      string
		got, want float64
	}{
		{"thickness", l.Thickness, 4e3},
		{"density", l.Density.At(0, 0, 0), 3075},
		{"viscosity, geometric", l.Viscosity.Top, math.Pow(10, 21.5)},
		{"conductivity, harmonic: 4/(1/2 + 3/4)", l.Conductivity.Reference, 3.2},
		{"heat production", l.HeatProduction.Top, 1.75e-6},
		{"heat capacity", l.HeatCapacity, 1075},
		{"grain size, geometric", l.GrainSize, 8e-3},
	} {
		if !scalar.EqualWithinRel(c.got, c.want, 1e-14) { // round-off of logarithms
			t.Errorf("%s: %.17g, want %.17g", c.what, c.got, c.want)
		}
	}
	if !l.Root || l.Viscosity.Creep != nil {
		t.Errorf("the rows' viscosity takes the place of the entry's creep: %+v", l)
	}
	want := []Scatter{
		{Key: "layers.a.density", Mean: 3075, SD: 100 * spread, N: 2, RowError: math.Sqrt(700)}, // (40² + 3·20²)/4
		{Key: "layers.a.viscosity", Mean: math.Pow(10, 21.5), SD: math.Log(100) * spread, N: 2, Log: true},
		{Key: "layers.a.heat-production", Mean: 1.75e-6, SD: 1e-6 * spread, N: 2},
		{Key: "layers.a.conductivity", Mean: 3.2, SD: 2 * spread, N: 2},
		{Key: "layers.a.heat-capacity", Mean: 1075, SD: 100 * spread, N: 2},
		{Key: "layers.a.grain-size", Mean: 8e-3, SD: math.Log(16) * spread, N: 2, Log: true},
	}
	got := e.Scatter()
	if len(got) != len(want) {
		t.Fatalf("%+v", got)
	}
	for i, w := range want {
		g := got[i]
		if g.Key != w.Key || g.N != w.N || g.Log != w.Log || !scalar.EqualWithinRel(g.Mean, w.Mean, 1e-14) ||
			!scalar.EqualWithinRel(g.SD, w.SD, 1e-12) || !scalar.EqualWithinRel(g.RowError, w.RowError, 1e-14) { // 1e-12: differences of near numbers
			t.Errorf("got %+v\nwant %+v", g, w)
		}
	}
}

// TestSectionCreep: rows may name their creep laws; what they leave out is the entry's.
func TestSectionCreep(t *testing.T) {
	e := mustOpen(t, inFolder(t, "s.yaml", strings.Replace(sectioned, "creep: dry", "grain-size: 2 mm, water: {fugacity: 100 MPa}, creep: dry", 1), "s.csv",
		"name,thickness_km,density_kg_m3,creep\na,1,3000,wet anorthite dislocation Rybacki 2006; wet anorthite diffusion Rybacki 2006\na,1,3000,\nb,1,3000,\nc,1,3000,Wet Quartzite Gleason 1995\n"))
	var got []string
	for _, l := range mustProblem(t, e).Column.Layers[1:4] {
		for _, law := range l.Viscosity.Creep.Laws {
			got = append(got, l.Name+" "+law.Name)
		}
	}
	want := []string{"a wet anorthite dislocation Rybacki 2006", "a wet anorthite diffusion Rybacki 2006", "b dry eclogite Zhang 2007", "c wet quartzite Gleason 1995"}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("%q, want %q", got, want)
	}
}

func TestSectionModes(t *testing.T) {
	text := strings.Replace(sectioned, "s.csv,", "s.csv, root: true,", 1)
	e := mustOpen(t, inFolder(t, "s.yaml", text, "s.csv", "layer,thickness_km,mode_Prp,mode_diopside,mode_quartz\na,5,0.2,0.8,\na,15,0.6,0.4,\n"))
	// 0.2/4 + 0.6·3/4 = 0.5 and 0.8/4 + 0.4·3/4 = 0.5, by hand.
	want, err := column.NewModes([]column.Mode{{Mineral: "diopside", Share: 0.5}, {Mineral: "pyrope", Share: 0.5}}, false)
	if err != nil {
		t.Fatal(err)
	}
	l := mustProblem(t, e).Column.Layers[1]
	if got := l.Density.At(1000, 1e9, 0); !scalar.EqualWithinRel(got, want.At(1000, 1e9, 0), 1e-14) || !l.Root || l.Thickness != 20e3 {
		t.Errorf("density %.16g, %+v", got, l)
	}
	s := e.Scatter()
	if len(s) != 2 || s[0].Key != "layers.a.density.modes.pyrope" || !scalar.EqualWithinRel(s[0].SD, 0.4*math.Sqrt(3)/4, 1e-14) {
		t.Errorf("%+v", s)
	}
	mustOpen(t, e.Name, "layers.a.density.modes.pyrope=0.505")
}

// TestSectionGeometry: thicknesses, depths below the section's top and pressures.
func TestSectionGeometry(t *testing.T) {
	thickness := func(csv string, edits ...string) float64 {
		t.Helper()
		return mustProblem(t, mustOpen(t, inFolder(t, "s.yaml", sectioned, "s.csv", csv), edits...)).Column.Layers[1].Thickness
	}
	const byPressure = "name,top_pressure_GPa,bottom_pressure_kbar,density_kg_m3\na,1.0,12,3000\na,1.2,15.3,3300\n"
	// 0.2 GPa/3000 + 0.33 GPa/3300 = (66666.67 + 100000) m²/s²; over 9.81 m/s² by hand.
	const head = 500000.0 / 3
	for _, c := range []struct {
		what      string
		got, want float64
	}{
		{"depths", thickness("name,top_km,bottom_m,density_kg_m3\na,0,5300,3000\na,5.3,8100,3000\n"), 8100},
		{"pressures", thickness(byPressure), head / 9.81},
		{"gravity of the experiment", thickness(byPressure, "gravity=1.62 m/s2"), head / 1.62},
		{"a density that is edited leaves the thickness", thickness(byPressure, "layers.a.density=1000 kg/m3"), head / 9.81},
		{"a thickness that is edited stays", thickness(byPressure, "gravity=1.62 m/s2", "layers.a.thickness=7 km"), 7e3},
		// 3480.25394 kg/m³ at 900 °C and 1.5 GPa: the value of TestModesDensity.
		{"modes", thickness("name,top_pressure_GPa,bottom_pressure_GPa,temperature_degC,mode_diopside,mode_jadeite,mode_pyrope,mode_almandine,mode_grossular\n" +
			"a,1.4,1.6,900,0.45,0.05,0.28,0.14,0.08\n"), 0.2e9 / 9.81 / 3480.2539314457035},
	} {
		if !scalar.EqualWithinRel(c.got, c.want, 1e-12) {
			t.Errorf("%s: %.16g m, want %.16g", c.what, c.got, c.want)
		}
	}
	e := mustOpen(t, inFolder(t, "s.yaml", sectioned, "s.csv", byPressure))
	// Mass is kept: the mean density is ΔP/(g h).
	if got := e.Scatter()[0].Mean; !scalar.EqualWithinRel(got, 0.53e9/head, 1e-14) {
		t.Errorf("density %.16g", got)
	}
	f, err := e.Compile([]string{"gravity"})
	if err != nil {
		t.Fatal(err)
	}
	if p, err := f([]float64{4.905}); err != nil || !scalar.EqualWithinRel(p.Column.Layers[1].Thickness, 2*head/9.81, 1e-14) {
		t.Errorf("%v, %v", p.Column.Layers, err)
	}
}

// TestSectionReference: the section of the contract's reference file.
func TestSectionReference(t *testing.T) {
	csv, err := os.ReadFile(filepath.Join("..", "testdata", "configs", "keldra-section.csv"))
	if err != nil {
		t.Fatal(err)
	}
	text := strings.Replace(sectioned, "{section: s.csv, creep: dry eclogite Zhang 2007, heat-production: 0.2 uW/m3, source: the entry}",
		"{section: keldra-section.csv, creep: wet anorthite dislocation Rybacki 2006, water: {fugacity: 250 MPa}, grain-size: 2 mm, heat-production: 0.2 uW/m3}", 1)
	e := mustOpen(t, inFolder(t, "s.yaml", text, "keldra-section.csv", string(csv)))
	layers := mustProblem(t, e).Column.Layers
	if len(layers) != 4 || layers[1].Name != "granulite" || layers[2].Name != "gabbronorite" {
		t.Fatalf("%+v", layers)
	}
	for i, want := range []column.Layer{{Thickness: 5200, Rock: column.Rock{Density: column.Uniform(2980)}}, {Thickness: 6100, Rock: column.Rock{Density: column.Uniform(3040)}}} {
		l := layers[i+1]
		if l.Thickness != want.Thickness || l.Density != want.Density || l.Water != 250e6 || l.GrainSize != 2e-3 || l.HeatProduction.Top != 0.2e-6 || len(l.Viscosity.Creep.Laws) != 1 {
			t.Errorf("%+v", l)
		}
	}
	want := []Scatter{{Key: "layers.granulite.density", Mean: 2980, N: 1, RowError: 40}, {Key: "layers.gabbronorite.density", Mean: 3040, N: 1, RowError: 35}}
	if got := e.Scatter(); !reflect.DeepEqual(got, want) {
		t.Errorf("%+v", got)
	}
}

func TestSectionResolved(t *testing.T) {
	e := mustOpen(t, inFolder(t, "s.yaml", sectioned, "s.csv", twoLayers))
	b, err := json.Marshal(e.Resolved())
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		// sha256sum of twoLayers
		`"sections":[{"layers":[{"lines":[3,4],"measured_pressure_Pa":null,"measured_temperature_K":1048.15,"name":"gabbro"},{"lines":[5],"measured_pressure_Pa":null,"measured_temperature_K":null,"name":"root"}],"name":"s.csv","sha256":"` + twoLayersSum + `"}]`,
		`"section_scatter":[{"key":"layers.gabbro.density","mean_SI":3075,"of_logarithm":false,"row_error_SI":26.457513110645905,"rows":2,"sd_SI":43.30127018922193},{"key":"layers.root.density","mean_SI":3450,"of_logarithm":false,"row_error_SI":null,"rows":1,"sd_SI":0}]`,
		`"density_kg_m3":3075,`, `"name":"gabbro"`, `"source":"A, 1; B"`, `"source":"the entry"`, `"thickness_m":4000`,
	} {
		if !strings.Contains(string(b), want) {
			t.Errorf("no %s in\n%s", want, b)
		}
	}
	if strings.Contains(string(b), `"section":`) {
		t.Error("the entry itself is still there")
	}
	// An edited number is measured no more.
	if s := mustOpen(t, e.Name, "layers.gabbro.density=3000 kg/m3").Scatter(); len(s) != 1 || s[0].Key != "layers.root.density" {
		t.Errorf("%+v", s)
	}
}

const twoLayersSum = "acbe4136f41b3c77ac9b4061c692e039be32dee54189ec197ab9df9d0a1e6116"

// TestSectionEdits: a layer that rows made is edited, swept and cut as a written one.
func TestSectionEdits(t *testing.T) {
	text := sectioned + "excision: {zones: [{name: z, dip: 30 deg, cuts: [gabbro, root], slip-rate: 1 mm/yr}]}\n"
	path := inFolder(t, "s.yaml", text, "s.csv", twoLayers)
	for _, c := range []struct {
		set  string
		got  func(race.Problem) any
		want any
	}{
		{"layers.gabbro.thickness=12km", func(p race.Problem) any { return p.Column.Layers[1].Thickness }, 12e3},
		{"layers.2.thickness=11 km", func(p race.Problem) any { return p.Column.Layers[2].Thickness }, 11e3},
		{"layers.gabbro.root=true", func(p race.Problem) any { return p.Column.Layers[1].Root }, true},
		{"layers.s.viscosity-factor=0.1", func(p race.Problem) any {
			return [2]float64{p.Column.Layers[1].Viscosity.Factor, p.Column.Layers[2].Viscosity.Factor}
		}, [2]float64{0.1, 0.1}},
		{"layers.s.source=", func(p race.Problem) any { return p.Column.Layers[1].Source + p.Column.Layers[2].Source }, "A, 1; B"},
		{"layers.s.source=x", func(p race.Problem) any { return p.Column.Layers[1].Source + p.Column.Layers[2].Source }, "A, 1; Bx"},
		{"layers.mantle=", func(p race.Problem) any { return p.Column.Base.Density }, column.Uniform(3450)},
		{"layers.0={section: s.csv, creep: dry eclogite Zhang 2007}", nil, nil},
	} {
		e, err := Open(path, c.set)
		if c.got == nil {
			if err == nil || !strings.Contains(err.Error(), "s.csv:3: layers[2] (gabbro).name: gabbro is the name of an earlier entry too (line 3); names are unique in their list") {
				t.Errorf("%s: %v", c.set, err)
			}
			continue
		}
		if err != nil {
			t.Errorf("%s: %v", c.set, err)
			continue
		}
		if got := c.got(mustProblem(t, e)); got != c.want {
			t.Errorf("%s: %v, want %v", c.set, got, c.want)
		}
		later, err := mustOpen(t, path).Set(c.set)
		if err != nil || !reflect.DeepEqual(later.Resolved(), e.Resolved()) {
			t.Errorf("%s: before and after reading differ (%v)", c.set, err)
		}
	}
	for set, want := range map[string]string{
		"layers.s.density=3000 kg/m3":  "layers: the rows of s.csv give density themselves; name a layer, for example layers.gabbro.density",
		"layers.s=":                    "layers: s is a measured section of 2 layers; name a key of it, or one of its layers",
		"layers.s.section=t.csv":       "layers: s.csv has become layers; name another file in the experiment itself",
		"layers.gabro.thickness=1 km":  "layers: gabro is not an entry; did you mean gabbro?",
		"layers.gabbro.thickness=1 kg": "layers[1] (gabbro).thickness: 1 kg has the wrong unit; needs a length, for example 12 km",
	} {
		_, err := Open(path, set)
		if err == nil || err.Error() != "--set "+set+": "+want {
			t.Errorf("%s:\n got %v\nwant %s", set, err, want)
		}
	}
	e := mustOpen(t, path)
	f, err := e.Compile([]string{"layers.gabbro.thickness", "layers.s.viscosity-factor", "layers.root.density"})
	if err != nil {
		t.Fatal(err)
	}
	p, err := f([]float64{9e3, 3, 3500})
	if err != nil || p.Column.Layers[1].Thickness != 9e3 || p.Column.Layers[1].Viscosity.Factor != 3 || p.Column.Layers[2].Viscosity.Factor != 3 || p.Column.Layers[2].Density != column.Uniform(3500) {
		t.Errorf("%+v, %v", p.Column.Layers, err)
	}
	if _, err := e.Compile([]string{"layers.s.thickness"}); err == nil || !strings.Contains(err.Error(), "name a layer, for example layers.gabbro.thickness") {
		t.Error(err)
	}
}

// TestSectionFormats: the same in YAML, TOML and JSON, with the file beside each.
func TestSectionFormats(t *testing.T) {
	files := []string{"s.yaml", "layers:\n  - {name: a, thickness: 30 km, density: 2800 kg/m3, viscosity: 1e22 Pa s}\n  - {section: s.csv, viscosity: 1e21 Pa s}\n",
		"s.json", `{"layers": [{"name": "a", "thickness": "30 km", "density": "2800 kg/m3", "viscosity": "1e22 Pa s"}, {"section": "s.csv", "viscosity": "1e21 Pa s"}]}`,
		"s.toml", "[[layers]]\nname = \"a\"\nthickness = \"30 km\"\ndensity = \"2800 kg/m3\"\nviscosity = \"1e22 Pa s\"\n[[layers]]\nsection = \"s.csv\"\nviscosity = \"1e21 Pa s\"\n",
		"s.csv", twoLayers}
	path := inFolder(t, files...)
	want := mustProblem(t, mustOpen(t, path))
	if len(want.Column.Layers) != 3 || want.Column.Base.Density != column.Uniform(3450) {
		t.Fatalf("%+v", want.Column)
	}
	for _, name := range []string{"s.json", "s.toml"} {
		if got := mustProblem(t, mustOpen(t, filepath.Join(filepath.Dir(path), name))); !reflect.DeepEqual(got, want) {
			t.Errorf("%s:\n got %+v\nwant %+v", name, got, want)
		}
	}
}
