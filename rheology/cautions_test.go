package rheology_test

import (
	"bytes"
	"encoding/csv"
	"fmt"
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
		{"dry olivine dislocation Hirth 2003", 1.5e9, "a choice, 14 cm³/mol"},
		{"dry eclogite Zhang 2007", 3e9, ""},
		{"wet amphibolite Hacker 1990", 0.5e9, "low confidence"},
		{"wet quartzite Paterson 1990", 0.5e9, "recalled from memory, to be checked"},
		{"wet quartz below 560 MPa Lusk 2021", 0.3e9, "test geometry is assumed"},
	} {
		l := find(t, c.law)
		got := strings.Join(l.Cautions(rheology.Conditions{T: 1000, P: c.P}), "; ")
		if c.want == "" && got != "" || !strings.Contains(got, c.want) || got != "" && !strings.HasPrefix(got, c.law) {
			t.Errorf("%s at %g Pa: %q, want %q", c.law, c.P, got, c.want)
		}
	}
	twice := rheology.Creep{Laws: []rheology.Law{find(t, "dry anorthite dislocation Rybacki 2000"), find(t, "dry anorthite dislocation Rybacki 2006")}}
	if got := strings.Join(twice.Cautions(rheology.Conditions{T: 1000}), "; "); !strings.Contains(got, "counted twice") {
		t.Errorf("two laws of one mechanism: %q", got)
	}
}
