package configs

import (
	"encoding/json"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"gonum.org/v1/gonum/floats/scalar"

	"keelfall/column"
	"keelfall/rheology"
)

func TestGeothermFile(t *testing.T) {
	dir := t.TempDir()
	text := swap(", temperature: 1100 degC", "") + "geotherm: g.csv\n"
	path := filepath.Join(dir, "s.yaml")
	write := func(name, s string) {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(s), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	write("s.yaml", text)
	write("g.csv", "# invented\ndepth_km,temperature_degC\n0,10\n40,700\n90, 1200\n")
	e, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	want := []column.Point{{Depth: 0, Temperature: 283.15}, {Depth: 40e3, Temperature: 973.15}, {Depth: 90e3, Temperature: 1473.15}}
	if got := mustProblem(t, e).Column.Geotherm; !reflect.DeepEqual(got, want) {
		t.Errorf("%v, want %v", got, want)
	}
	for csv, want := range map[string]string{
		"depth,temperature_K\n0,280\n90,1200\n":       "g.csv:2: depth: 0 has no unit; needs a length, for example 12 km",
		"depth_km,temperature_K\n0,280\n90,NaN\n":     "g.csv:3: temperature: NaN is not a number",
		"depth_km,temperature_degC\n0,-400\n90,9\n":   "g.csv:2: temperature: -400 degC is below absolute zero",
		"depth_km,pressure_GPa\n0,280\n":              "g.csv: has the columns depth_km, pressure_GPa; needs a CSV file with the columns depth_km and temperature_degC (or depth_m, temperature_K)",
		"depth_km,temperature_K\n0,280\n90,1200,17\n": "g.csv: record on line 3: wrong number of fields",
		"depth_km,temperature_K\n0,280\n":             "g.csv: has 1 rows; needs at least two",
	} {
		write("g.csv", csv)
		if _, err := Open(path); err == nil || err.Error() != path+":9: geotherm: "+want {
			t.Errorf("got %v\nwant %s:9: geotherm: %s", err, path, want)
		}
	}
}

func TestResolved(t *testing.T) {
	for _, name := range ExampleNames() {
		e := builtIn(t, name, "drip.amplitude=1 km")
		b, err := json.Marshal(e.Resolved())
		if err != nil {
			t.Fatal(err)
		}
		again, _ := json.Marshal(e.Resolved())
		if string(b) != string(again) {
			t.Error("the same experiment resolves differently")
		}
		for _, part := range []string{`"thickness_m":10000`, `"amplitude_m":1000`, `"gravity_m_s2":9.81`, `"edits":["drip.amplitude=1 km"]`, `"key":"viscosity-limits.lowest"`} {
			if (name == "osmund" || name == "equal-layers" || !strings.Contains(part, "thickness")) && name != "tarnvik" && !strings.Contains(string(b), part) {
				t.Errorf("%s: %s is not in %s", name, part, b)
			}
		}
	}
	text, _ := Example("tarnvik")
	e := mustRead(t, "t.yaml", text)
	if e.SHA256 != mustRead(t, "u.yaml", text, "title=other").SHA256 || len(e.SHA256) != 64 {
		t.Error("the sum is of the file's bytes")
	}
	laws, _ := e.Resolved()["creep_laws"].([]any)
	if len(laws) != 4 {
		t.Errorf("%d laws, want the 4 in use", len(laws))
	}
	if len(e.Remarks) != 2 || e.Remarks[0].Path != "excision.zones[0] (Elvik zone)" {
		t.Errorf("%+v", e.Remarks)
	}
}

// TestInlineLaw: a catalogue law written out as in its table is the catalogue's law.
func TestInlineLaw(t *testing.T) {
	for name, inline := range map[string]string{
		"dry olivine dislocation Hirth 2003": "prefactor: %s MPa^-3.5 s^-1, stress-exponent: 3.5",
		"dry olivine diffusion Hirth 2003":   "prefactor: %s MPa^-1 um^3 s^-1, stress-exponent: 1, grain-exponent: 3",
		"wet olivine dislocation Hirth 2003": "prefactor: %s MPa^-4.7 s^-1, stress-exponent: 3.5, water-exponent: 1.2, water: fugacity",
	} {
		want, err := rheology.Find(name)
		if err != nil {
			t.Fatal(err)
		}
		published, _ := json.Marshal(want.LaboratoryA)
		text := swap("creep: dry eclogite Zhang 2007", "grain-size: 1 mm, water: {fugacity: 1 MPa}, creep: {"+strings.Replace(inline, "%s", string(published), 1)+", activation-energy: 530 kJ/mol, test: axial}")
		got := mustProblem(t, mustRead(t, "s.yaml", text)).Column.Layers[1].Viscosity.Creep.Laws[0]
		// 1e-12: powers of 10^6 and of the micrometre, rounded in another order
		if !scalar.EqualWithinRel(got.A, want.A, 1e-12) || !scalar.EqualWithinRel(got.LaboratoryA, want.LaboratoryA, 1e-12) || got.Water != want.Water || got.E != 530e3 {
			t.Errorf("%s: A %v, want %v; published %v, want %v", name, got.A, want.A, got.LaboratoryA, want.LaboratoryA)
		}
	}
	// ε_II = F A τ_II^n: derived from the definitions of the invariants.
	for test, factor := range map[string]float64{"axial": 4.5, "plane-strain": 8, "shear": 0.5} {
		text := swap("creep: dry eclogite Zhang 2007", "creep: {prefactor: 2 Pa^-3/s, stress-exponent: 3, activation-energy: 0 J/mol, test: "+test+"}")
		got := mustProblem(t, mustRead(t, "s.yaml", text)).Column.Layers[1].Viscosity.Creep.Laws[0]
		if !scalar.EqualWithinRel(got.A, 2*factor, 1e-15) {
			t.Errorf("%s: A %v, want %v", test, got.A, 2*factor)
		}
	}
}
