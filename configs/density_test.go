package configs

import (
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"gonum.org/v1/gonum/floats/scalar"

	"keelfall/column"
)

const rootModes = "density: {modes: {diopside: 0.45, jadeite: 0.05, Prp: 0.28, almandine: 0.14, grossular: 0.08}}"

func TestModesDensity(t *testing.T) {
	e := mustRead(t, "s.yaml", swap("density: 3450 kg/m3", rootModes))
	p := mustProblem(t, e)
	// 3480.25394 kg/m³ at 900 °C and 1.5 GPa: the same equations, written apart.
	if got := p.Column.Layers[1].Density.At(1173.15, 1.5e9, 0); !scalar.EqualWithinRel(got, 3480.2539314457035, 1e-12) {
		t.Errorf("density %.16g", got)
	}
	if p.ThermalBuoyancy != "diffusive" {
		t.Errorf("thermal buoyancy %s; the density depends on temperature", p.ThermalBuoyancy)
	}
	byDefault := false
	for _, d := range p.Defaults {
		byDefault = byDefault || d.Key == "layers.root.density.by" && d.Value == "volume"
	}
	if !byDefault {
		t.Errorf("the default of by is not listed: %v", p.Defaults)
	}
	weight := mustProblem(t, mustRead(t, "s.yaml", swap("density: 3450 kg/m3", rootModes[:len(rootModes)-1]+", by: weight}")))
	if got := weight.Column.Layers[1].Density.At(1173.15, 1.5e9, 0); !scalar.EqualWithinRel(got, 3450.1542440700523, 1e-12) {
		t.Errorf("by weight %.16g", got)
	}
	b, err := json.Marshal(e.Resolved())
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{`"name":"pyrope"`, `"volume_status":"memory, high"`, `"density_tables":[]`, `"by":"volume"`} {
		if !strings.Contains(string(b), want) {
			t.Errorf("no %s in %s", want, b)
		}
	}
	if n := len(e.Resolved()["minerals"].([]any)); n != 5 {
		t.Errorf("%d minerals listed, want 5", n)
	}
	// A share can be swept; the sum stays within a hundredth.
	if _, err := e.Set("layers.root.density.modes.jadeite=0.045"); err != nil {
		t.Error(err)
	}
}

func TestModesMistakes(t *testing.T) {
	for modes, want := range map[string]string{
		"{pyrop: 0.5, diopside: 0.5}":               `.modes.pyrop: no mineral is called "pyrop"; did you mean pyrope?`,
		"{pyrope: 0.5, prp: 0.5}":                   ".modes.prp: pyrope stands twice among the modes",
		"{pyrope: 0.5, diopside: 0.4}":              ".modes: sum to 0.9; need 1 (within 0.01)",
		"{pyrope: -0.5, diopside: 1}":               ".modes.pyrope: -0.5 is out of range; needs a share of at least 0 and at most 1",
		"{pyrope: 50 %, diopside: 0.5}":             ".modes.pyrope: 50 %: shares are bare numbers; needs a bare number, for example 0.5",
		"{pyrope: 1}, by: moles":                    ".by: moles is not known; needs one of volume, weight",
		"{pyrope: 1}, interpolation: bilinear":      ".interpolation: unknown key",
		"{}":                                        ".modes: ",
		"{quartz: 0.3, albte: 0.3, anorthyte: 0.4}": ".modes.albte: no mineral is called \"albte\"; did you mean albite",
	} {
		_, err := Read("s.yaml", strings.NewReader(swap("density: 3450 kg/m3", "density: {modes: "+modes+"}")))
		if err == nil || !strings.HasPrefix(err.Error(), "s.yaml:7: layers[1] (root).density"+want) {
			t.Errorf("%s:\n got %v\nwant …%s", modes, err, want)
		}
	}
	cold := strings.Replace(strings.Replace(swap("density: 3450 kg/m3", rootModes), ", temperature: 1100 degC", "", 1), "creep: dry eclogite Zhang 2007", "viscosity: 1e21 Pa s", 1)
	if _, err := Read("s.yaml", strings.NewReader(cold)); err == nil || !strings.Contains(err.Error(), "(root).density: depends on temperature and the experiment has none; "+howWarm) {
		t.Error(err)
	}
}

func TestTableDensity(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "s.yaml")
	write := func(name, s string) {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(s), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	write("s.yaml", strings.Replace(small, "density: 3300 kg/m3", "density: {table: d.csv}", 1))
	write("d.csv", "# invented\ntemperature_degC, pressure_GPa,density_kg_m3\n400,0,3312\n400,3.0,3360\n1300,0,3250\n1300,3.0,3301\n")
	e, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	p := mustProblem(t, e)
	d := p.Column.Layers[2].Density
	// The middle of the table is the mean of its corners.
	if got := d.At(273.15+850, 1.5e9, 0); !scalar.EqualWithinRel(got, (3312+3360+3250+3301)/4.0, 1e-15) || d.Gradient(1123.15, 1.5e9, 0) != 0 {
		t.Errorf("density %.16g, gradient %g", got, d.Gradient(1123.15, 1.5e9, 0))
	}
	if err := column.Covered(d, 1600, 1e9); err == nil {
		t.Error("1600 K is outside the table")
	}
	if p.ThermalBuoyancy != "diffusive" {
		t.Errorf("thermal buoyancy %s", p.ThermalBuoyancy)
	}
	if n := len(e.Resolved()["density_tables"].([]any)); n != 1 { // of the mantle and the half-space
		t.Errorf("%d tables listed, want 1", n)
	}
	const needs = "needs a CSV file with the columns temperature_degC, pressure_GPa and density_kg_m3"
	const head = "temperature_degC,pressure_GPa,density_kg_m3\n"
	for csv, want := range map[string]string{
		"":                                "d.csv: is empty; " + needs,
		"T,P,rho\n1,2,3\n":                "d.csv:1: column T is unknown or stands twice; " + needs,
		"temperature_degC,pressure_GPa\n": "d.csv:1: has the columns temperature_degC, pressure_GPa; " + needs,
		"temperature_degC,pressure_m,density_kg_m3\n1,2,3\n":       "d.csv:2: pressure: 2 m",
		"temperature_degC,pressure_GPa,density\n1,2,3\n":           "d.csv:2: density: 3 has no unit",
		head + "400,0,3312\n400,x,3360\n":                          "d.csv:3: pressure: x is not a number",
		head + "400,0,3312\n400,1,3360\n900,0,3300\n":              "d.csv: is no grid: there is no density for T = 900 degC, P = 1 GPa; every temperature needs every pressure",
		head + "400,0,3312\n400,0,3360\n900,1,3300\n900,0,3300\n":  "d.csv:3: T = 400 degC, P = 0 GPa stands in an earlier row already",
		head + "400,0,3312\n400,1,3360\n900,0,0\n900,1,3300\n":     "d.csv:4: density 0 kg/m³, must be > 0",
		head + "400,0,3312\n400,1,3360\n-300,0,3300\n900,1,3300\n": "d.csv:4: temperature -26.85 K, must be > 0",
		head + "400,0\n": "d.csv: record on line 2: wrong number of fields",
	} {
		write("d.csv", csv)
		if _, err := Open(path); err == nil || !strings.HasPrefix(err.Error(), path+":8: layers[2] (mantle).density.table: "+want) {
			t.Errorf("got %v\nwant %s:8: layers[2] (mantle).density.table: %s", err, path, want)
		}
	}
	if err := os.Remove(filepath.Join(dir, "d.csv")); err != nil {
		t.Fatal(err)
	}
	if _, err := Open(path); err == nil || !strings.Contains(err.Error(), "no such file") {
		t.Error(err)
	}
}
