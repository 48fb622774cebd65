package report

import (
	"context"
	"encoding/json"
	"math"
	"strings"
	"testing"

	"keelfall/solver/race"
)

// excised follows the zones of an example, changed.
func excised(t *testing.T, name string, set ...string) *race.Result {
	t.Helper()
	_, p := builtIn(t, name, set...)
	s, err := race.Prepare(&p)
	if err != nil {
		t.Fatal(err)
	}
	x, err := race.ExciseStudy(context.Background(), &p, s)
	if err != nil {
		t.Fatal(err)
	}
	return &race.Result{Problem: &p, State: s, Excision: x}
}

// The page says what became of each zone; it keeps to its width.
func TestExcisionPage(t *testing.T) {
	const force = "excision.zones.Brae zone.force.far-field="
	for _, c := range []struct {
		name      string
		set       []string
		say, deny []string
	}{
		{"osmund", nil, []string{"basal zone, dip 28 deg, cuts root, slip 1.5 mm/yr, 0 to 10 Myr, 400 m wide", "30 %* of the root gone", "omission, stratigraphic, km", "mean over the arc", "ZONE upper zone Myr 0 4 8 12 16 20"},
			[]string{"N/m", "strip without", "NaN"}},
		{"brannock", nil, []string{"driven by 2.6e12 N/m from outside", "strength at 1 mm/yr, 1e12 N/m", "shear heat, mW/m2"}, []string{"hardly", "runs away", "NaN"}},
		{"brannock", []string{"base.temperature=1100 degC"}, []string{"It hardly slips", "drive it", "Up to twice the window 30 %* of the root would not be gone"}, []string{"runs away"}},
		{"brannock", []string{force + "3e12 N/m"}, []string{"It runs away at", "held at 1 m/yr", "Its layers are used up in this column at", "strip without root, km", "It has cleared the arc"}, []string{"hardly"}},
		{"brannock", []string{force + "-5e12 N/m"}, []string{"It does not slip", "driven by -5e12 N/m"}, []string{"runs away", "hardly"}},
	} {
		r := excised(t, c.name, c.set...)
		page := ExcisionPage(r.Problem, r)
		flat := strings.Join(strings.Fields(page), " ")
		for _, s := range c.say {
			if !strings.Contains(flat, s) {
				t.Errorf("%s %v: does not say %q\n%s", c.name, c.set, s, page)
			}
		}
		for _, s := range c.deny {
			if strings.Contains(flat, s) {
				t.Errorf("%s %v: says %q\n%s", c.name, c.set, s, page)
			}
		}
		for _, l := range strings.Split(page, "\n") {
			if len([]rune(l)) > pageWidth {
				t.Errorf("%d characters: %s", len([]rune(l)), l)
			}
		}
	}
}

// JSON and tables are the solver's own numbers, and the contract's keys are there.
func TestExcisionData(t *testing.T) {
	r := excised(t, "brannock")
	b, err := json.Marshal(Excision(r.Problem, r.State, r.Excision))
	if err != nil {
		t.Fatal(err)
	}
	var j struct {
		Outcome *string  `json:"outcome"`
		Time    *float64 `json:"time_s"`
		Slip    *float64 `json:"slip_m"`
		Demand  *float64 `json:"extension_demanded"`
		History struct {
			Time []float64 `json:"time_s"`
			Root []float64 `json:"root_thickness_m"`
		} `json:"history"`
		Zones []struct {
			Drive    string    `json:"drive"`
			Dip      float64   `json:"dip_rad"`
			UsedUp   *float64  `json:"used_up_time_s"`
			Slip     []float64 `json:"slip_m"`
			Vertical []float64 `json:"vertical_omission_m"`
			Force    []float64 `json:"driving_force_N_m"`
			Strips   []struct {
				Layer string    `json:"layer"`
				Width []float64 `json:"width_m"`
			} `json:"strips"`
		} `json:"zones"`
		Layers []struct {
			Name      string    `json:"name"`
			Thickness []float64 `json:"thickness_m"`
			ArcMean   []float64 `json:"arc_mean_thickness_m"`
		} `json:"layers"`
	}
	if err := json.Unmarshal(b, &j); err != nil {
		t.Fatal(err)
	}
	if j.Outcome == nil || *j.Outcome != "excised" || j.Time == nil || *j.Time != r.Excision.Time || j.Slip == nil || j.Demand == nil || len(j.Zones) != 1 || len(j.Layers) != 1 {
		t.Fatalf("%.300s", b)
	}
	z := j.Zones[0]
	if z.Drive != "force" || z.UsedUp != nil || len(z.Strips) != 1 || z.Strips[0].Layer != "root" {
		t.Errorf("zone %+v", z)
	}
	tables := ExcisionTables(r)
	for i := range j.History.Time {
		// the zone takes s sin θ of vertical thickness (derived: layering is flat), and the
		// plate's own stretching thins what is left a little
		if want := z.Slip[i] * math.Sin(z.Dip); math.Abs(z.Vertical[i]-want) > 1e-9*want {
			t.Errorf("sample %d: vertical omission %g m, want %g", i, z.Vertical[i], want)
		}
		left := 11e3 - z.Vertical[i]
		if root := j.History.Root[i]; root > left*(1+1e-9) || root < 0.98*left || j.Layers[0].Thickness[i] != root {
			t.Errorf("sample %d: %g m of root after an omission of %g m", i, root, z.Vertical[i])
		}
		if got, want := tables[0].Rows[i][4], cell(z.Slip[i]/1e3); got != want {
			t.Errorf("sample %d: slip %s km in the table, %s in the JSON", i, got, want)
		}
	}
	for _, tb := range tables {
		for _, row := range tb.Rows {
			if len(row) != len(tb.Header) {
				t.Fatalf("%s: %d cells under %d headings", tb.Name, len(row), len(tb.Header))
			}
		}
	}
}

// The methods name what moved the zones and no more, and give its source.
func TestExcisionMethods(t *testing.T) {
	for name, force := range map[string]bool{"osmund": false, "brannock": true} {
		r := excised(t, name)
		var b strings.Builder
		excisionMethods(func(format string, a ...any) { b.WriteString(strings.ReplaceAll(format, "%s", forceMethods)) }, r.Problem)
		if strings.Contains(b.String(), "[zone-forces]") != force || !strings.Contains(b.String(), "[omission]") {
			t.Errorf("%s: %s", name, b.String())
		}
		found := false
		for _, s := range Sources(r.Problem) {
			found = found || s.ID == "zone-forces"
		}
		if found != force {
			t.Errorf("%s: source of the force balance: %v", name, found)
		}
	}
}
