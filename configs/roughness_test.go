package configs

import (
	"encoding/json"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"keelfall/solver/drip"
	"keelfall/solver/race"
)

// rough writes an experiment and a table of amplitudes and reads it with edits.
func rough(t *testing.T, table string, edits ...string) (*Experiment, error) {
	t.Helper()
	dir := t.TempDir()
	path := filepath.Join(dir, "s.yaml")
	for name, text := range map[string]string{"s.yaml": small, "rough.csv": table} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	return Open(path, edits...)
}

const roughTable = "wavelength_km,amplitude_m,source\n# invented\n20,100,\n60,400,seen\n150,900,\n"

func TestSpectra(t *testing.T) {
	problemOf := func(edits ...string) race.Problem {
		t.Helper()
		e, err := rough(t, roughTable, edits...)
		if err != nil {
			t.Fatal(err)
		}
		p, err := e.Problem()
		if err != nil {
			t.Fatal(err)
		}
		return p
	}
	starred := func(p race.Problem) (keys []string) {
		for _, d := range p.Defaults {
			if d.Starred && strings.HasPrefix(d.Key, "drip.") {
				keys = append(keys, d.Key+" "+d.Value)
			}
		}
		return keys
	}
	for _, c := range []struct {
		edit   string
		want   drip.Roughness
		name   string
		stars  []string
		metres float64 // at 60 km
	}{
		{"drip.spectrum=white", drip.Roughness{}, "white", []string{"drip.amplitude 500 m", "drip.criterion 1.0", "drip.removes 0.3"}, 500},
		{"drip.spectrum=red", drip.Roughness{Exponent: 1, At: 100e3}, "red",
			[]string{"drip.spectrum.red 1", "drip.spectrum.at 100 km", "drip.amplitude 500 m", "drip.criterion 1.0", "drip.removes 0.3"}, 300},
		{"drip.spectrum={red: 2}", drip.Roughness{Exponent: 2, At: 100e3}, "red", []string{"drip.spectrum.at 100 km", "drip.amplitude 500 m", "drip.criterion 1.0", "drip.removes 0.3"}, 180},
		{"drip.spectrum={red: 1.5, at: 60 km}", drip.Roughness{Exponent: 1.5, At: 60e3}, "red", []string{"drip.amplitude 500 m", "drip.criterion 1.0", "drip.removes 0.3"}, 500},
		{"drip.spectrum=rough.csv", drip.Roughness{Wavelength: []float64{20e3, 60e3, 150e3}, Amplitude: []float64{100, 400, 900}}, "rough.csv",
			[]string{"drip.criterion 1.0", "drip.removes 0.3"}, 400},
	} {
		p := problemOf(c.edit)
		r := p.Drip.Rough
		if p.Drip.Spectrum != c.name || r.Exponent != c.want.Exponent || r.At != c.want.At || !slices.Equal(r.Wavelength, c.want.Wavelength) || !slices.Equal(r.Amplitude, c.want.Amplitude) {
			t.Errorf("%s: %s, %+v", c.edit, p.Drip.Spectrum, r)
		}
		if got := starred(p); !slices.Equal(got, c.stars) {
			t.Errorf("%s: starred %q, want %q", c.edit, got, c.stars)
		}
		if a := p.Drip.AmplitudeAt(60e3); a < c.metres*(1-1e-12) || a > c.metres*(1+1e-12) {
			t.Errorf("%s: %g m at 60 km, want %g", c.edit, a, c.metres)
		}
	}
	e, err := rough(t, roughTable, "drip.spectrum=rough.csv")
	if err != nil {
		t.Fatal(err)
	}
	b, err := json.Marshal(e.Resolved())
	if err != nil || !strings.Contains(string(b), `"drip_spectrum_table":{"name":"rough.csv","sha256":"`) {
		t.Errorf("%v: the table is not in what was resolved", err)
	}
}

func TestSpectraMistakes(t *testing.T) {
	const edit = "drip.spectrum=rough.csv"
	for _, c := range []struct{ name, table, edit, want string }{
		{"one row", "wavelength_km,amplitude_m\n20,100\n", edit, "rough.csv:2: has one row; needs at least two"},
		{"no rows", "wavelength_km,amplitude_m\n", edit, "has no rows"},
		{"no amplitude", "wavelength_km,height_m\n20,100\n", edit, "rough.csv:1: height_m: is a column not known here"},
		{"no unit", "wavelength,amplitude_m\n20,100\n30,100\n", edit, "rough.csv:2: wavelength: "},
		{"zero", "wavelength_km,amplitude_m\n20,100\n30,0\n", edit, "rough.csv:3: amplitude_m: 0 is out of range; needs an amplitude above 0 m"},
		{"short", "wavelength_km,amplitude_m\n0.001,100\n30,10\n", edit, "rough.csv:2: wavelength_km: 0.001 is out of range"},
		{"text", "wavelength_km,amplitude_m\n20,high\n30,10\n", edit, "rough.csv:2: amplitude_m: high is not a number"},
		{"as high as the root", "wavelength_km,amplitude_km\n20,12\n30,1\n", edit, "rough.csv:2: amplitude: 12000 m is a drip already at the start; needs less than criterion × root thickness, 12000 m"},
		{"exponent", roughTable, "drip.spectrum={red: 9}", "drip.spectrum.red: 9 is out of range"},
		{"at", roughTable, "drip.spectrum={red: 1, at: 3 m}", "drip.spectrum.at: 3 m is out of range"},
		{"strange", roughTable, "drip.spectrum={pink: 1}", "drip.spectrum.pink: unknown key"},
		{"word", roughTable, "drip.spectrum=Red", "drip.spectrum: Red is not known"},
		{"list", roughTable, "drip.spectrum=[1 km]", "drip.spectrum: is a list; needs"},
	} {
		_, err := rough(t, c.table, c.edit)
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v; want %q", c.name, err, c.want)
		}
	}
	if _, err := rough(t, roughTable, edit, "drip.amplitude=1 km"); err == nil || !strings.Contains(err.Error(), "leave drip.amplitude out") {
		t.Errorf("an amplitude beside a table: %v", err)
	}
}
