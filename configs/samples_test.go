package configs

import (
	"encoding/json"
	"errors"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// straight has constant conductivity and no heat production: its geotherm is a line.
const straight = `surface: {temperature: 0 degC}
base: {boundary: rigid}
geotherm: {fit: samples.csv}
layers:
  - {name: rock, thickness: 80 km, density: 3000 kg/m3, viscosity: 1e21 Pa s}
`

// Temperatures of 14 K/km, and a little: 1120 degC at 80 km.
const goodSamples = `# invented
name,depth_km,depth_error_km,temperature_degC,temperature_error_K,source,notes
A1,20,,285,20,invented,
A2,40,,555,20,invented,"rim, not core"
A3,60,,842,20,,
`

// The same with the bend that radiogenic heat gives.
const curved = `depth_km,temperature_degC,temperature_error_K
20,400,20
40,700,20
60,925,20
`

// TestFit: Σ z (T − T_s)/Σ z² × 80 km, by hand: (20·285 + 40·555 + 60·842)/(400 + 1600
// + 3600) = 14.003571 K/km, ± 20/√5600 K/km.
func TestFit(t *testing.T) {
	const slope = (20*285 + 40*555 + 60*842) / 5600.0
	want, sd := 80*slope+273.15, 80*20/math.Sqrt(5600)
	for name, c := range map[string]struct {
		samples string
		edits   []string
	}{
		"depths":    {goodSamples, nil},
		"a start":   {goodSamples, []string{"base.temperature=700 degC"}},
		"pressures": {"temperature_K,pressure_MPa,temperature_error_K\n558.15,588.6,20\n828.15,1177.2,20\n1115.15,1765.8,20\n", nil},
	} {
		e := mustOpen(t, inFolder(t, "s.yaml", straight, "samples.csv", c.samples), c.edits...)
		p := mustProblem(t, e)
		f := p.GeothermFit
		if f == nil || math.Abs(p.Column.Base.Temperature-want) > 1e-5 || !p.Column.Base.HasTemperature || math.Abs(f.Fitted[0].Error-sd) > 1e-4 || f.Fitted[0].Value != p.Column.Base.Temperature {
			t.Fatalf("%s: %+v; want %g ± %g K", name, f, want, sd)
		}
		if c.edits != nil && f.Fitted[0].Start != 700+273.15 {
			t.Errorf("%s: starts at %g", name, f.Fitted[0].Start)
		}
		b, err := json.Marshal(e.Resolved()["geotherm_fit"])
		for _, s := range []string{`"key":"base.temperature"`, `"sha256":"`, `"residual_K":`, `"file":"samples.csv"`, `"degrees_of_freedom":2`} {
			if err != nil || !strings.Contains(string(b), s) {
				t.Errorf("%s: %v: no %s in %s", name, err, s, b)
			}
		}
	}
	e := mustOpen(t, inFolder(t, "s.yaml", straight, "samples.csv", goodSamples))
	if r := mustProblem(t, e).GeothermFit.Residuals[1]; r.Name != "A2" || r.Source != "invented" || math.Abs(r.Residual-(555-40*slope)) > 1e-5 {
		t.Errorf("%+v", r)
	}
	// a heat flow, where the base has one: 2.5 W/m/K × the slope; and a factor on the heat
	// that is made, which a sweep may set
	e = mustOpen(t, inFolder(t, "s.yaml", straight, "samples.csv", goodSamples), "base.heat-flow=20 mW/m2")
	if p := mustProblem(t, e); math.Abs(p.Column.Base.HeatFlow-2.5e-3*slope) > 1e-9 || p.GeothermFit.Fitted[0].Key != "base.heat-flow" {
		t.Errorf("%+v", p.GeothermFit)
	}
	e = mustOpen(t, inFolder(t, "s.yaml", straight, "samples.csv", curved), "layers.rock.heat-production=0.5 uW/m3", "geotherm.heat-production=true")
	p := mustProblem(t, e)
	if f := p.GeothermFit; len(f.Fitted) != 2 || p.Column.Layers[0].HeatProduction.Top != f.Fitted[1].Value*0.5e-6 || f.Covariance[0][1] == 0 {
		t.Errorf("%+v", f)
	}
	g, err := e.Compile([]string{"layers.rock.conductivity"})
	if err != nil {
		t.Fatal(err)
	}
	if q, err := g([]float64{3}); err != nil || q.GeothermFit.Fitted[1].Value <= p.GeothermFit.Fitted[1].Value*1.1 {
		t.Errorf("a better conductor needs more heat: %+v, %v", q.GeothermFit, err)
	}
}

func TestFitMistakes(t *testing.T) {
	for _, c := range []struct{ name, samples, set, want string }{
		{"no file", "", "geotherm.fit=none.csv", "geotherm.fit: none.csv: no such file or directory; needs " + sampleNeeds},
		{"empty", "\n", "", "samples.csv: is empty; needs " + sampleNeeds},
		{"header alone", "depth_km,temperature_degC,temperature_error_K\n", "", "samples.csv:1: has no samples; needs " + sampleNeeds},
		{"unknown column", "depth_km,temperature_degC,tempera_error_K\n20,300,20\n", "", "samples.csv:1: tempera_error_K: is a column not known here; needs " + sampleNeeds},
		{"column twice", "depth_km,depth_m,temperature_degC\n20,300,20\n", "", "samples.csv:1: depth_m: stands twice; a column may stand once"},
		{"no position", "temperature_degC,temperature_error_K\n300,20\n", "", "samples.csv:1: has the columns temperature_degC, temperature_error_K; needs " + sampleNeeds},
		{"semicolons", "depth_km;temperature_degC\n20;300\n", "", "samples.csv:1: has columns that are not separated by commas; save the file with commas between cells and points in numbers"},
		{"not a number", "depth_km,temperature_degC,temperature_error_K\n20,300,20\n20,3oo,20\n", "", "samples.csv:3: temperature_degC: 3oo is not a number"},
		{"error in degC", "depth_km,temperature_degC,temperature_error_degC\n20,300,20\n", "", "samples.csv:2: temperature_error_degC: 20 degC: a difference or error of temperature is in K, degC has an offset; write 20 K"},
		{"no unit", "depth,temperature_degC,temperature_error_K\n20,300,20\n", "", "samples.csv:2: depth: 20 has no unit; needs a length, for example 12 km"},
		{"both", "depth_km,pressure_GPa,temperature_degC,temperature_error_K\n20,0.6,300,20\n", "", "samples.csv:2: gives a pressure and a depth; needs one of them, the one that was measured"},
		{"neither", "depth_km,temperature_degC,temperature_error_K\n,300,20\n", "", "samples.csv:2: gives neither a pressure nor a depth; needs one of them"},
		{"negative", "depth_km,temperature_degC,temperature_error_K\n20,300,-20\n", "", "samples.csv:2: temperature_error_K: -20 is out of range; needs a value of at least 0 K"},
		{"no error", "depth_km,temperature_degC\n20,300\n", "", "samples.csv:2: gives no error; needs one standard deviation of the temperature, the pressure or the depth, for example in a column temperature_error_K"},
		{"too deep", "depth_km,temperature_degC,temperature_error_K\n81,300,20\n", "", "samples.csv:2: depth: 81 km lies below the column, which is 80 km deep"},
		{"cells", "depth_km,temperature_degC,temperature_error_K\n20,300\n", "", "samples.csv:2: has 2 cells; the header has 3 columns"},
		{"two rows", "depth_km,temperature_degC,temperature_error_K\n81,300,20\n20,-300,20\n", "", "samples.csv:2: depth: 81 km lies below the column, which is 80 km deep\nsamples.csv:3: temperature_degC: -300 is out of range; needs a value of at least 0 K"},
		{"pressure below the base", "name,pressure_GPa,temperature_degC,temperature_error_K\nA1,3,900,20\n", "", "s.yaml:3: geotherm: cannot be fitted: at the values the fit begins with: sample A1: pressure 3 GPa is more than that at the column's base, 2.354 GPa"},
		{"no heat to multiply", goodSamples, "geotherm.heat-production=true", "s.yaml:3: geotherm: cannot be fitted: a factor on heat production is asked and no layer produces heat"},
	} {
		path := inFolder(t, "s.yaml", straight, "samples.csv", c.samples)
		var edits []string
		if c.set != "" {
			edits = []string{c.set}
		}
		_, err := Open(path, edits...)
		got := ""
		if err != nil {
			got = strings.ReplaceAll(err.Error(), filepath.Dir(path)+string(filepath.Separator), "")
		}
		want := c.want
		if c.name == "no file" {
			want = "--set " + c.set + ": " + want
		}
		if got != want {
			t.Errorf("%s:\n got %s\nwant %s", c.name, got, want)
		}
	}
	// in the file's folder, whatever the present one
	path := inFolder(t, "s.yaml", straight, "samples.csv", goodSamples)
	if err := os.Remove(filepath.Join(filepath.Dir(path), "samples.csv")); err != nil {
		t.Fatal(err)
	}
	var m Mistakes
	if _, err := Open(path); !errors.As(err, &m) || m[0].Line != 3 {
		t.Errorf("%v", err)
	}
}
