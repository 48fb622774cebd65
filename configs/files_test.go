package configs

import (
	"encoding/json"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"keelfall/column"
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
		text, _ := Example(name)
		e := mustRead(t, name+".yaml", text, "drip.amplitude=1 km")
		b, err := json.Marshal(e.Resolved())
		if err != nil {
			t.Fatal(err)
		}
		again, _ := json.Marshal(e.Resolved())
		if string(b) != string(again) {
			t.Error("the same experiment resolves differently")
		}
		for _, part := range []string{`"thickness_m":10000`, `"amplitude_m":1000`, `"gravity_m_s2":9.81`, `"edits":["drip.amplitude=1 km"]`, `"key":"viscosity-limits.lowest"`} {
			if name != "tarnvik" && !strings.Contains(string(b), part) {
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
