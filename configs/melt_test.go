package configs

import (
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"gonum.org/v1/gonum/floats/scalar"
)

const (
	wetSolidus = "# invented\npressure_GPa,temperature_degC,source\n0,900,a\n0.5,700,\n1.5,680,\n4,820,\n"
	tabulated  = "density: 3450 kg/m3, melt: {solidus: {table: s.csv, source: invented}, liquidus: {surface: 1260 degC, slope: 80 K/GPa}, latent-heat: 450 kJ/kg, density: 2750 kg/m3, weakening: 30}"
)

// TestSolidusTable: halfway between rows is halfway between their temperatures; other
// units are the same table; the file is listed with its sum; a path goes through --set.
func TestSolidusTable(t *testing.T) {
	file := inFolder(t, "e.yaml", swap("density: 3450 kg/m3", tabulated), "s.csv", wetSolidus,
		"k.csv", "temperature_K,pressure_kbar\n1173.15,0\n973.15,5\n953.15,15\n1093.15,40\n\n,\n")
	e := mustOpen(t, file)
	m := mustProblem(t, e).Column.Layers[1].Melt
	for P, want := range map[float64]float64{0: 900, 0.25e9: 800, 1e9: 690, 2.75e9: 750, 4e9: 820} {
		if got := m.Solidus.At(P); !scalar.EqualWithinRel(got, want+273.15, 1e-15) {
			t.Errorf("solidus %.16g K at %g Pa, want %g degC", got, P, want)
		}
	}
	if !scalar.EqualWithinRel(m.Liquidus.At(1e9), 1613.15, 1e-15) || m.LatentHeat != 450e3 || m.Covers(4.1e9) == nil {
		t.Errorf("%+v", m)
	}
	other := mustProblem(t, mustOpen(t, file, "layers.root.melt.solidus.table=k.csv")).Column.Layers[1].Melt
	for _, P := range []float64{0, 0.3e9, 2e9, 3.7e9} {
		if got, want := other.Solidus.At(P), m.Solidus.At(P); !scalar.EqualWithinRel(got, want, 1e-15) {
			t.Errorf("in K and kbar %.16g K at %g Pa, want %.16g", got, P, want)
		}
	}
	if n := mustProblem(t, mustOpen(t, file, "layers.root.melt.solidus=1000 degC")).Column.Layers[1].Melt.Solidus; n.Table != nil || n.Surface != 1273.15 {
		t.Errorf("%+v", n)
	}
	b, err := json.Marshal(e.Resolved())
	for _, want := range []string{`"melt_tables":[{"name":"s.csv","sha256":"`, `"solidus":{"source":"invented","table":"s.csv"}`} {
		if err != nil || strings.Count(string(b), want) != 1 {
			t.Errorf("no %s in %s, %v", want, b, err)
		}
	}
	if len(e.Remarks) != 1 || e.Remarks[0].Source != "invented" {
		t.Errorf("%+v", e.Remarks)
	}
}

// TestSolidusTableMistakes: each with the line of the CSV file where it has one, and what
// was expected.
func TestSolidusTableMistakes(t *testing.T) {
	const head = "pressure_GPa,temperature_degC\n"
	dir := filepath.Dir(inFolder(t, "e.yaml", swap("density: 3450 kg/m3", tabulated)))
	file, csv := filepath.Join(dir, "e.yaml"), filepath.Join(dir, "s.csv")
	at := func(what string) string { return csv + ":" + what }
	for _, c := range []struct{ in, want string }{
		{"", csv + ": is empty; needs " + curveNeeds},
		{"# nothing\n", csv + ": has no rows; needs " + curveNeeds},
		{head, at("1: has no rows; needs " + curveNeeds)},
		{"P,T\n0,900\n", at("1: P: is a column not known here; needs " + curveNeeds)},
		{"pressure_GPa,source\n0,900\n", at("1: has the columns pressure_GPa, source; needs " + curveNeeds)},
		{"pressure_GPa,temperature_K,temperature_degC\n0,900,1\n", at("1: temperature_degC: stands twice; a column may stand once")},
		{"pressure_GPa;temperature_degC\n0;900\n", at("1: has columns that are not separated by commas")},
		{head + "0,900\n", at("2: rows: 1; needs two at least")},
		{head + "0,900\n1\n", at("3: has 1 cells; the header has 2 columns")},
		{head + "0,900\n1,\"700\n", at("")},
		{head + "0,900\n1,x\n", at("3: temperature_degC: x is not a number")},
		{head + "0,900\n1,\n", at("3: temperature_degC: ")},
		{head + "0,900\nNaN,800\n", at("3: pressure_GPa: NaN is not a number")},
		{head + "0,900\n1e999,800\n", at("3: pressure_GPa: 1e999 is not a number")},
		{"pressure,temperature_degC\n0,900\n1,800\n", at("2: pressure: 0 has no unit; needs a pressure, for example")},
		{"pressure_degC,temperature_degC\n0,900\n1,800\n", at("2: pressure_degC: 0 degC")},
		{head + "-0.1,900\n1,800\n", at("2: pressure_GPa: -0.1 is out of range; needs a pressure of at least 0 and at most 100 GPa")},
		{head + "0,900\n101,800\n", at("3: pressure_GPa: 101 is out of range; needs a pressure of at least 0 and at most 100 GPa")},
		{head + "0,900\n1,-300\n", at("3: temperature_degC: -300 is out of range; needs a temperature above absolute zero and at most 5000 K")},
		{head + "0,900\n1,6000\n", at("3: temperature_degC: 6000 is out of range; needs a temperature above absolute zero and at most 5000 K")},
		{head + "0,900\n1,800\n1,810\n", at("4: pressure 1 GPa does not lie above that of the row before it, 1 GPa; pressures increase from row to row")},
		{head + "2,900\n1,800\n", at("3: pressure 1 GPa does not lie above that of the row before it, 2 GPa; pressures increase from row to row")},
		{head + "0,900\n1,1340\n2,1200\n", at("3: temperature: a solidus of 1340 degC at 1 GPa is not below the liquidus, 1340 degC")},
		{head + "0,900\n# so\n1,1400\n2,1500\n", at("4: temperature: a solidus of 1400 degC at 1 GPa is not below the liquidus, 1340 degC")},
		{head + "0,1259.95\n1,1200\n", at("2: temperature: the solidus is within 0.1 K of the liquidus at no pressure; needs to lie further below it")},
		{"\xff\xfe\n", at("1: ")},
	} {
		if err := os.WriteFile(csv, []byte(c.in), 0o600); err != nil {
			t.Fatal(err)
		}
		if _, err := Open(file); err == nil || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("%q:\n got %v\nwant %s", c.in, err, c.want)
		}
	}
	if err := os.Remove(csv); err != nil {
		t.Fatal(err)
	}
	if _, err := Open(file); err == nil || !strings.HasPrefix(err.Error(), file+":7: layers[1] (root).melt.solidus.table: ") || !strings.Contains(err.Error(), "no such file") {
		t.Error(err)
	}
}

// TestTwoTables: where a liquidus' row is what crosses, it is named; two tables without a
// pressure in common, or a key that is almost table, are mistakes of the experiment.
func TestTwoTables(t *testing.T) {
	both := strings.Replace(tabulated, "{surface: 1260 degC, slope: 80 K/GPa}", "{table: l.csv}", 1)
	const head = "pressure_GPa,temperature_degC\n"
	for liquidus, want := range map[string]string{
		head + "0,1300\n0.3,770\n4,1400\n": "l.csv:3: temperature: a solidus of 780 degC at 0.3 GPa is not below the liquidus, 770 degC",
		head + "5,1300\n6,1400\n":          "e.yaml:7: layers[1] (root).melt.solidus: the tables share no pressures: the solidus covers 0 to 4 GPa, the liquidus 5 to 6 GPa",
	} {
		file := inFolder(t, "e.yaml", swap("density: 3450 kg/m3", both), "s.csv", wetSolidus, "l.csv", liquidus)
		if _, err := Open(file); err == nil || err.Error() != filepath.Join(filepath.Dir(file), want) {
			t.Errorf("%v, want %s", err, want)
		}
	}
	_, err := Open(inFolder(t, "e.yaml", swap("density: 3450 kg/m3", strings.Replace(tabulated, "table:", "tabel:", 1)), "s.csv", wetSolidus))
	if err == nil || !strings.Contains(err.Error(), "melt.solidus.tabel: unknown key; did you mean table?") {
		t.Error(err)
	}
}
