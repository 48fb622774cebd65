package configs

import (
	"math"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"gonum.org/v1/gonum/floats/scalar"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/race"
)

func mustRead(t *testing.T, name, text string, edits ...string) *Experiment {
	t.Helper()
	e, err := Read(name, strings.NewReader(text), edits...)
	if err != nil {
		t.Fatalf("%s:\n%v", name, err)
	}
	return e
}

func mustProblem(t *testing.T, e *Experiment) race.Problem {
	t.Helper()
	p, err := e.Problem()
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func TestExamples(t *testing.T) {
	if len(ExampleNames()) != 7 {
		t.Fatal(ExampleNames())
	}
	for _, name := range ExampleNames() {
		text, err := Example(name)
		if err != nil {
			t.Fatal(err)
		}
		if !strings.Contains(strings.ToLower(text), "invented") {
			t.Errorf("%s does not say that it is invented", name)
		}
		p := mustProblem(t, builtIn(t, name))
		if _, _, ok := p.Column.RootSpan(); !ok {
			t.Errorf("%s has no root", name)
		}
		if err := p.Column.Validate(); err != nil {
			t.Error(err)
		}
	}
	if text, err := Example("morvane-section.csv"); err != nil || !strings.Contains(text, "INVENTED") || len(ExampleReads("Morvane arc")) != 1 || ExampleReads("tarnvik") != nil {
		t.Error(text, err)
	}
	for _, name := range []string{"Tarnvik arc", " OSMUND ", "equal-layers.yaml", ""} {
		if _, err := Example(name); err != nil {
			t.Error(err)
		}
	}
	if _, err := Example("tarnvick"); err == nil || !strings.Contains(err.Error(), "did you mean tarnvik?") {
		t.Error(err)
	}
}

// builtIn opens a built-in experiment, with the files it reads beside it.
func builtIn(t *testing.T, name string, edits ...string) *Experiment {
	t.Helper()
	var files []string
	for _, file := range append([]string{name + ".yaml"}, ExampleReads(name)...) {
		text, err := Example(file)
		if err != nil {
			t.Fatal(err)
		}
		files = append(files, file, text)
	}
	return mustOpen(t, inFolder(t, files...), edits...)
}

// TestFormats: one experiment in three formats is one problem.
func TestFormats(t *testing.T) {
	want := mustProblem(t, mustRead(t, "two.yaml", yamlTwo))
	if want.Drip.Removes != 0.25 || !want.Column.Layers[0].Root || want.Column.Layers[1].Density != (column.Linear{Top: 3200, Bottom: 3250}) {
		t.Fatalf("%+v", want)
	}
	for name, text := range map[string]string{"two.json": jsonTwo, "two.toml": tomlTwo, "json": jsonTwo, "toml": tomlTwo, "yaml": yamlTwo} {
		if got := mustProblem(t, mustRead(t, name, text)); !reflect.DeepEqual(got, want) {
			t.Errorf("%s:\n got %+v\nwant %+v", name, got, want)
		}
	}
	// and one mistake has its line in each
	for name, c := range map[string]struct{ text, want string }{
		"two.yaml": {yamlTwo, "two.yaml:7: layers[1] (lower).thickness: 11 has no unit; needs a length, for example 12 km"},
		"two.json": {jsonTwo, "two.json:5: layers[1] (lower).thickness: 11 has no unit; needs a length, for example 12 km"},
		"two.toml": {tomlTwo, "two.toml:18: layers[1] (lower).thickness: 11 has no unit; needs a length, for example 12 km"},
	} {
		i := strings.LastIndex(c.text, "10 km")
		_, err := Read(name, strings.NewReader(c.text[:i]+"11"+c.text[i+5:]))
		if err == nil || err.Error() != c.want {
			t.Errorf("got %v\nwant %s", err, c.want)
		}
	}
}

// TestReference: every section of the contract passes the schema, and what has no
// solver yet is refused, with its line, and nothing else is said.
func TestReference(t *testing.T) {
	const no = ": not in this version of keelfall"
	want := []string{
		":94: race.reversal" + no,
		":99: budget" + no,
		":101: observations" + no,
		":108: maps" + no,
		":113: thresholds" + no,
		":116: ensemble" + no,
	}
	path := filepath.Join("..", "testdata", "configs", "keldra.yaml")
	_, err := Open(path)
	if err == nil {
		t.Fatal("accepted")
	}
	got := strings.Split(err.Error(), "\n")
	for i := range max(len(got), len(want)) {
		switch {
		case i >= len(got):
			t.Errorf("missing %s", want[i])
		case i >= len(want):
			t.Errorf("unexpected %s", got[i])
		case got[i] != path+want[i]:
			t.Errorf("got %s\nwant %s%s", got[i], path, want[i])
		}
	}
	// Every line of notYet is a key of the schema.
	for key := range notYet {
		if !known(schema, strings.Split(key, ".")) {
			t.Errorf("%s is refused but is no key", key)
		}
	}
}

func known(s *spec, path []string) bool {
	if len(path) == 0 {
		return true
	}
	switch s.kind {
	case unionSpec:
		for _, f := range s.forms {
			if known(f.spec, path) {
				return true
			}
		}
	case listSpec:
		return path[0] == "*" && known(s.item, path[1:])
	case recordSpec:
		return s.key(path[0]) != nil && known(s.key(path[0]).spec, path[1:])
	}
	return false
}

func TestNotInThisVersionIsStillChecked(t *testing.T) {
	_, err := Read("s.yaml", strings.NewReader(small+"budget: {evolved-crust: 22}\n"))
	want := "s.yaml:9: budget: not in this version of keelfall\n" +
		"s.yaml:9: budget.evolved-crust: 22 has no unit; needs a length, for example 12 km\n" +
		"s.yaml:9: budget.residue-share: is missing; needs a bare number, for example 0.5"
	if err == nil || err.Error() != want {
		t.Errorf("got %v\nwant %s", err, want)
	}
	for _, fine := range []string{"buoyancy: {thermal: frozen}\n", "strain: {extension-rate: -2e-16 1/s, wavevector: strike}\n", "drip: {softening: none, spectrum: white}\n"} {
		mustRead(t, "s.yaml", small+fine)
	}
}

func TestDefaults(t *testing.T) {
	starred := func(e *Experiment) string {
		var keys []string
		for _, d := range mustProblem(t, e).Defaults {
			if d.Starred {
				keys = append(keys, d.Key+" "+d.Value)
			}
		}
		return strings.Join(keys, ", ")
	}
	const drip = "drip.amplitude 500 m, drip.criterion 1.0, drip.removes 0.3"
	if got := starred(mustRead(t, "two.yaml", strings.ReplaceAll(yamlTwo, "removes: 0.25, ", ""))); got != drip {
		t.Errorf("plain viscosities: starred %s", got)
	}
	if got := starred(mustRead(t, "two.yaml", strings.ReplaceAll(yamlTwo, "root: true", "stress-exponent: 3"))); !strings.Contains(got, "strain.reference-rate 1e-15 1/s") {
		t.Errorf("stress exponent: starred %s", got)
	}
	if got := starred(mustRead(t, "s.yaml", small)); got != "strain.reference-rate 1e-15 1/s, "+drip {
		t.Errorf("creep: starred %s", got)
	}
	if got := starred(mustRead(t, "s.yaml", small+"drip: {amplitude: 1 km, criterion: 1, removes: 0.3}\nstrain: {reference-rate: 1e-15 1/s}\n")); got != "" {
		t.Errorf("all given: starred %s", got)
	}
	p := mustProblem(t, mustRead(t, "s.yaml", "layers:\n"+crustLine+"surface: {boundary: free}\nexcision: {zones: [{name: z, dip: 90 deg, cuts: [crust], slip-rate: 1 mm/yr}]}\n"))
	const myr = 1e6 * 365.25 * 86400
	for _, c := range []struct {
		what      string
		got, want float64
	}{
		{"gravity", p.Column.Gravity, 9.81}, {"surface", p.Column.Surface.Temperature, 273.15}, {"removed", p.Removed, 0.5},
		{"amplitude", p.Drip.Amplitude, 500}, {"criterion", p.Drip.Criterion, 1}, {"window", p.Drip.Window, 30 * myr}, {"removes", p.Drip.Removes, 0.3},
		{"reference rate", p.Strain.ReferenceRate, 1e-15}, {"lowest", p.Column.Limits.Lowest, 1e16}, {"highest", p.Column.Limits.Highest, 1e25},
		{"zone's start", p.Zones[0].From, 0}, {"zone's end", p.Zones[0].To, math.Inf(1)}, {"dip", p.Zones[0].Dip, math.Pi / 2},
		{"exponent", p.Column.Layers[0].Viscosity.Exponent, 1}, {"factor", p.Column.Layers[0].Viscosity.Factor, 1},
	} {
		if !scalar.EqualWithinRel(c.got, c.want, 1e-15) {
			t.Errorf("%s: %v, want %v", c.what, c.got, c.want)
		}
	}
	if p.Drip.Spectrum != "white" || p.Drip.Softening != "self" || p.ThermalBuoyancy != "none" || p.Column.Base.Boundary != column.HalfSpace || p.Column.Surface.Boundary != column.Free {
		t.Errorf("%+v", p)
	}
	if p.Column.HasTemperature() {
		t.Error("plain numbers need no temperature")
	}
	warm := mustProblem(t, mustRead(t, "s.yaml", small)).Column
	if k := warm.Layers[0]; k.Conductivity.Reference != 2.5 || k.HeatCapacity != 1000 || k.HeatProduction.Top != 0 {
		t.Errorf("%+v", k)
	}
}

// TestBaseRock: what the base leaves out is the last layer's rock at its bottom.
func TestBaseRock(t *testing.T) {
	last := "layers:\n  - {name: a, thickness: 1 km, density: {top: 3000 kg/m3, bottom: 3100 kg/m3}, viscosity: {top: 1e22 Pa s, bottom: 1e21 Pa s}, stress-exponent: 3}\n"
	b := mustProblem(t, mustRead(t, "x.yaml", last)).Column.Base
	if b.Density != column.Uniform(3100) || b.Viscosity.Top != 1e21 || b.Viscosity.Bottom != 1e21 || b.Viscosity.Exponent != 3 {
		t.Errorf("%+v", b)
	}
	b = mustProblem(t, mustRead(t, "x.yaml", last+"base: {viscosity: 1e19 Pa s}\n")).Column.Base
	if b.Density != column.Uniform(3100) || b.Viscosity.Top != 1e19 || b.Viscosity.Exponent != 1 {
		t.Errorf("own viscosity: %+v", b)
	}
	b = mustProblem(t, mustRead(t, "x.yaml", small)).Column.Base
	if len(b.Viscosity.Creep.Laws) != 1 || b.Water != 100e6 || b.WaterMeasure != rheology.WaterFugacity {
		t.Errorf("creep: %+v", b)
	}
	eos := strings.Replace(last, "{top: 3000 kg/m3, bottom: 3100 kg/m3}", "{reference: 3000 kg/m3, compressibility: 1e-11 1/Pa}", 1)
	for _, boundary := range []string{"half-space", "inviscid", "rigid", "free-slip"} {
		b = mustProblem(t, mustRead(t, "x.yaml", eos+"base: {boundary: "+boundary+"}\n")).Column.Base
		if b.Density != (column.EquationOfState{Reference: 3000, Compressibility: 1e-11, ReferenceTemperature: 293.15}) {
			t.Errorf("%s: %+v", boundary, b.Density)
		}
	}
}
