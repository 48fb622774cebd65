package configs

import (
	"crypto/sha256"
	"encoding/hex"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"keelfall/rheology"
)

const lawsHead = "name,test,prefactor_MPa_um,stress_exponent,activation_energy_kJ_mol\n"

// catalogueFile writes a catalogue of invented laws.
func catalogueFile(t *testing.T, name, rows string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), name)
	if err := os.WriteFile(path, []byte(lawsHead+rows), 0o600); err != nil {
		t.Fatal(err)
	}
	return path
}

// TestCatalogue: a law of the user's own is found, and its file stands in the result.
func TestCatalogue(t *testing.T) {
	path := catalogueFile(t, "mine.csv", "my eclogite,axial compression,1e3,3,400\n")
	c, err := ReadCatalogue(path)
	if err != nil {
		t.Fatal(err)
	}
	text := swap("dry eclogite Zhang 2007", "My  eclogite")
	e, err := Reader{Catalogues: []Catalogue{c}}.Read("s.yaml", strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	if l := mustProblem(t, e).Column.Layers[1].Viscosity.Creep.Laws[0]; l.Name != "my eclogite" || l.E != 400e3 {
		t.Errorf("%+v", l)
	}
	b, _ := os.ReadFile(path)
	sum := sha256.Sum256(b)
	want := []any{map[string]any{"name": path, "sha256": hex.EncodeToString(sum[:])}}
	if got := e.Resolved()["catalogues"]; !reflect.DeepEqual(got, want) {
		t.Errorf("catalogues %v, want %v", got, want)
	}
	if got, ok := mustRead(t, "s.yaml", small).Resolved()["catalogues"].([]any); !ok || len(got) != 0 {
		t.Errorf("no catalogue: %v", got)
	}
	if _, err := (Reader{Laws: c.Laws}).Read("s.yaml", strings.NewReader(text)); err != nil {
		t.Errorf("laws without a file: %v", err)
	}
}

// TestLawsOfOneName: a name means one law.
func TestLawsOfOneName(t *testing.T) {
	taken := catalogueFile(t, "taken.csv", "Dry  ECLOGITE Zhang 2007,axial compression,1e3,3,400\n")
	want := taken + ": Dry ECLOGITE Zhang 2007 is the name of a built-in creep law; give yours another"
	if _, err := ReadCatalogue(taken); err == nil || err.Error() != want {
		t.Errorf("got %v\nwant %s", err, want)
	}
	law, err := rheology.Find("dry eclogite Zhang 2007")
	if err != nil {
		t.Fatal(err)
	}
	law.E = 1
	if _, err := (Reader{Laws: []rheology.Law{law}}).Read("s.yaml", strings.NewReader(small)); err == nil || !strings.Contains(err.Error(), "dry eclogite Zhang 2007 is the name of a built-in") {
		t.Error(err)
	}
	one, two := catalogueFile(t, "one.csv", "a,axial compression,1e3,3,400\n"), catalogueFile(t, "two.csv", "A,axial compression,1e3,3,500\n")
	var rd Reader
	for _, path := range []string{one, two} {
		c, err := ReadCatalogue(path)
		if err != nil {
			t.Fatal(err)
		}
		rd.Catalogues = append(rd.Catalogues, c)
	}
	want = two + ": A is the name of a creep law of " + one + " too; names are unique"
	if _, err := rd.Read("s.yaml", strings.NewReader(small)); err == nil || err.Error() != want {
		t.Errorf("got %v\nwant %s", err, want)
	}
	for rows, want := range map[string]string{
		"a,axial compression,x,3,400\n":      `laws, line 2: prefactor_MPa_um: "x" is not a number`,
		"a\x1bb,axial compression,1,3,400\n": ":2: is binary data (byte 0x1B); needs a CSV file of creep laws",
		"a\u202eb,invariant,1,3,400\n":       "aU+202Eb has the control character U+202E, which is not allowed in a name; leave it out",
	} {
		path := catalogueFile(t, "wrong.csv", rows)
		if _, err := ReadCatalogue(path); err == nil || !strings.HasPrefix(err.Error(), path+":") || !strings.Contains(err.Error(), want) {
			t.Errorf("%q: %v", rows, err)
		}
	}
}

// TestThermalBuoyancyDefault: heat moves where it makes a density and is there.
func TestThermalBuoyancyDefault(t *testing.T) {
	const expands, still = "density: {reference: 3300 kg/m3, expansivity: 3e-5 1/K}", "density: {reference: 3300 kg/m3, expansivity: 0 1/K, compressibility: 1e-11 1/Pa}"
	cold := "layers:\n" + crustLine
	for _, c := range []struct{ name, in, want string }{
		{"plain densities", small, "none"},
		{"a layer", swap("density: 3450 kg/m3", expands), "diffusive"},
		{"the last layer, and so the base", swap("density: 3300 kg/m3", expands), "diffusive"},
		{"the base alone", swap("temperature: 1100 degC", "temperature: 1100 degC, "+expands), "diffusive"},
		{"the base is a wall", strings.Replace(swap("temperature: 1100 degC", "temperature: 1100 degC, "+expands), "half-space", "rigid", 1), "none"},
		{"no expansion", swap("density: 3450 kg/m3", still), "none"},
		{"no temperature", cold, "none"},
		{"written none", swap("density: 3450 kg/m3", expands) + "buoyancy: {thermal: none}\n", "none"},
		{"written frozen", swap("density: 3450 kg/m3", expands) + "buoyancy: {thermal: frozen}\n", "frozen"},
		{"written diffusive", small + "buoyancy: {thermal: diffusive}\n", "diffusive"},
	} {
		p := mustProblem(t, mustRead(t, "s.yaml", c.in))
		if p.ThermalBuoyancy != c.want {
			t.Errorf("%s: %s, want %s", c.name, p.ThermalBuoyancy, c.want)
		}
		listed := ""
		for _, d := range p.Defaults {
			if d.Key == "buoyancy.thermal" {
				listed = d.Value
			}
		}
		if written := strings.HasPrefix(c.name, "written"); written && listed != "" || !written && listed != c.want {
			t.Errorf("%s: listed as the default %q", c.name, listed)
		}
	}
}

// TestReferenceRateStar: the reference rate bears on the verdict where nothing moves.
func TestReferenceRateStar(t *testing.T) {
	for strain, want := range map[string]bool{"": true, "strain: {extension-rate: 0 1/s}\n": true, "strain: {extension-rate: 2e-16 1/s}\n": false} {
		p := mustProblem(t, mustRead(t, "s.yaml", small+strain))
		for _, d := range p.Defaults {
			if d.Key == "strain.reference-rate" && d.Starred != want {
				t.Errorf("%q: starred %v", strain, d.Starred)
			}
		}
		if strain != "" && strings.Contains(strain, "2e-16") && p.Strain.ExtensionRate != 2e-16 {
			t.Errorf("extension %g 1/s", p.Strain.ExtensionRate)
		}
	}
}
