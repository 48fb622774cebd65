package rheology_test

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"math"
	"os"
	"slices"
	"strings"
	"testing"

	"keelfall/rheology"
)

// TestVolumesPrintAsPublished: V in cm³/mol prints as the number in the table.
func TestVolumesPrintAsPublished(t *testing.T) {
	b, err := os.ReadFile("laws.csv")
	if err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(bytes.NewReader(b)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	name, volume := slices.Index(rows[0], "name"), slices.Index(rows[0], "activation_volume_cm3_mol")
	checked := 0
	for _, row := range rows[1:] {
		if row[volume] == "" {
			continue
		}
		if l := find(t, row[name]); fmt.Sprintf("%g", l.V*1e6) != row[volume] {
			t.Errorf("%s: V = %g cm³/mol, published %s", l.Name, l.V*1e6, row[volume])
		}
		checked++
	}
	if checked < 10 {
		t.Errorf("only %d volumes", checked)
	}
	// and a number of the kind that a product with 1e-6 spoils
	laws, err := rheology.ReadLaws(strings.NewReader(strings.TrimSpace(head) + ",activation_volume_cm3_mol\na,invariant,1,3,100,0,none,27.2\n"))
	if err != nil || fmt.Sprintf("%g", laws[0].V*1e6) != "27.2" {
		t.Errorf("%+v, %v", laws, err)
	}
}

func TestCautions(t *testing.T) {
	for _, c := range []struct {
		law  string
		P    float64
		want string // "" for nothing to say
	}{
		{"dry Columbia diabase Mackwell 1998", 0.5e9, ""},
		{"dry Columbia diabase Mackwell 1998", 1.5e9, "used above 1 GPa"},
		{"dry olivine dislocation Hirth 2003", 0.5e9, ""},
		{"dry olivine dislocation Hirth 2003", 1.5e9, "a choice, 14 cm3/mol (6-27)"},
		{"dry eclogite Zhang 2007", 3e9, "used at 727 degC; its experiments were at 1027 to 1427 degC"},
		{"wet amphibolite Hacker 1990", 0.5e9, "low confidence"},
		{"wet quartzite Paterson 1990", 0.5e9, "recalled from memory, to be checked"},
		{"wet quartz below 560 MPa Lusk 2021", 0.3e9, "test geometry is assumed"},
	} {
		l := find(t, c.law)
		got := l.Caution([]rheology.Use{{T: 1000, P: c.P}})
		if c.want == "" && got != "" || !strings.Contains(got, c.want) || got != "" && !strings.HasPrefix(got, c.law) {
			t.Errorf("%s at %g Pa: %q, want %q", c.law, c.P, got, c.want)
		}
	}
	// of all the errors V's alone, and no brackets without one
	for law, want := range map[string]string{
		"dry olivine dislocation Hirth 2003":                            "a choice, 14 cm3/mol (6-27)",
		"dry olivine grain boundary sliding below 1250 degC Hirth 2003": "a choice, 14 cm3/mol",
	} {
		l := find(t, law)
		if got := l.Caution([]rheology.Use{{T: 1000, P: 1.5e9}}); !strings.HasSuffix(got, want) {
			t.Errorf("%s", got)
		}
	}
	// One line a law, with the range it was used over; stresses are differential, √3 τ_II.
	MPa := 1e6 / math.Sqrt(3)
	for _, c := range []struct {
		law  string
		used []rheology.Use
		want string
	}{
		{"dry anorthite dislocation Rybacki 2000", []rheology.Use{{T: 973.15, P: 4e8, Stress: 50 * MPa}, {T: 1173.15, P: 9e8, Stress: 10 * MPa}},
			"used at 700 to 900 degC, 0.4 to 0.9 GPa, 10 to 50 MPa of stress; its experiments were at 867 to 1207 degC, at 0.3 GPa, above 120 MPa of stress"},
		{"dry anorthite dislocation Rybacki 2000", []rheology.Use{{T: 1200, P: 4e8, Stress: 150 * MPa}}, ""},
		{"dry anorthite dislocation Rybacki 2000", []rheology.Use{{T: 1200, P: 4e8}}, ""},
		{"dry anorthite dislocation Rybacki 2000", nil, ""},
		{"wet quartz below 560 MPa Lusk 2021", []rheology.Use{{T: 900, P: 0}, {T: 900, P: 6e8}},
			"its test geometry is assumed to be axial compression; used at 0 to 0.6 GPa; its experiments were at 0 to 0.56 GPa"},
		{goetze, []rheology.Use{{T: 900, P: 5e8, Stress: 100 * MPa}}, "used at 100 MPa of stress; its experiments were above 200 MPa of stress (recalled from memory)"},
	} {
		l := find(t, c.law)
		if want := c.law + ": " + c.want; l.Caution(c.used) != want && (c.want != "" || l.Caution(c.used) != "") {
			t.Errorf("got  %s\nwant %s", l.Caution(c.used), want)
		}
	}
	both := rheology.Creep{Laws: []rheology.Law{find(t, goetze), find(t, "dry olivine dislocation Hirth 2003")}}
	if got := both.Cautions([]rheology.Use{{T: 1500, P: 9e8, Stress: 1e6}}); got != nil {
		t.Errorf("a law that is kept out of low stresses: %q", got)
	}
	twice := rheology.Creep{Laws: []rheology.Law{find(t, "dry anorthite dislocation Rybacki 2000"), find(t, "dry anorthite dislocation Rybacki 2006")}}
	if got := strings.Join(twice.Cautions(nil), "; "); !strings.Contains(got, "counted twice") {
		t.Errorf("two laws of one mechanism: %q", got)
	}
}
