package report

import (
	"context"
	"encoding/csv"
	"encoding/json"
	"math"
	"regexp"
	"strconv"
	"strings"
	"testing"
	"unicode/utf8"

	"keelfall/configs"
	"keelfall/rheology"
	"keelfall/solver/race"
)

// builtIn reads a built-in experiment with changes.
func builtIn(t *testing.T, name string, set ...string) (*configs.Experiment, race.Problem) {
	t.Helper()
	text, err := configs.Example(name)
	if err != nil {
		t.Fatal(err)
	}
	e, err := configs.Reader{}.Read(name+".yaml", strings.NewReader(text), set...)
	if err != nil {
		t.Fatal(err)
	}
	p, err := e.Problem()
	if err != nil {
		t.Fatal(err)
	}
	return e, p
}

// result runs a built-in experiment with changes, quickly: without softening by the drip
// itself unless the changes ask for it.
func result(t *testing.T, name string, set ...string) (*race.Result, ProvenanceJSON) {
	t.Helper()
	set = append([]string{"drip.softening=none"}, set...)
	e, p := builtIn(t, name, set...)
	r, err := race.Run(context.Background(), &p)
	if err != nil {
		t.Fatal(err)
	}
	return r, Provenance(e.SHA256, e.Resolved(), &p, r.Limits)
}

// The page keeps to its width, numbers to their units, and says what each margin and
// each change leads to.
func TestPage(t *testing.T) {
	for _, c := range []struct {
		name      string
		set       []string
		say, deny []string
	}{
		{"tarnvik", nil, []string{"the Elvik zone would need", "the window ends", "excision would come", "log units stiffer", "verdict then", "preserved",
			"If that spacing holds along strike, 4 drips fit", "not expected by Bird's criterion", "from memory, to be checked: wet quartzite Gleason 1995 (high"},
			[]string{"Shear zones cut", "no value does"}},
		{"tarnvik", []string{"excision.zones.Elvik zone.layering-dip=50 deg"}, []string{"would never be gone", "repeated"}, []string{"at never", " -0."}},
		{"tarnvik", []string{"excision.zones.Elvik zone.dip=90 deg"}, []string{"heave 0 km"}, []string{"e-16 km", "e-17 km"}},
		{"tarnvik", []string{"arc.width=300 m"}, []string{"the arc's width, 0.3 km"}, []string{"0 km drips"}},
		{"tarnvik", []string{"strain.wavevector=strike"}, []string{"4 drips of it fit along the arc's"}, []string{"If that spacing"}},
		{"tarnvik", []string{"layers.mantle.density=3470 kg/m3"}, []string{"as dense as what lies below it"}, []string{"-0 kg"}},
		{"osmund", nil, []string{"The shear zones cut the root out first", "Acting together in mantle and the half-space: dry olivine dislocation and dry olivine diffusion", "none within × 1000"},
			[]string{"dry olivine + dry olivine"}},
	} {
		r, _ := result(t, c.name, c.set...)
		page := Page(r)
		flat := strings.Join(strings.Fields(page), " ")
		for _, s := range c.say {
			if !strings.Contains(flat, s) {
				t.Errorf("%s %v: does not say %q\n%s", c.name, c.set, s, page)
			}
		}
		for _, s := range c.deny {
			if strings.Contains(flat, s) {
				t.Errorf("%s %v: says %q", c.name, c.set, s)
			}
		}
		if n := strings.Count(page, "delamination"); n != 1 {
			t.Errorf("%s %v: speaks %d times of delamination", c.name, c.set, n)
		}
		for _, l := range strings.Split(page, "\n") {
			if utf8.RuneCountInString(l) > pageWidth {
				t.Errorf("%s: %d characters: %s", c.name, utf8.RuneCountInString(l), l)
			}
			if f := strings.Fields(l); len(f) > 0 && strings.HasPrefix(f[0], "%") {
				t.Errorf("%s: a line begins with %%: %s", c.name, l)
			}
		}
	}
}

// Every key in brackets of the methods has an entry, and entries are good BibTeX.
func TestSources(t *testing.T) {
	for _, set := range [][]string{nil, {"excision="}} {
		r, prov := result(t, "tarnvik", set...)
		methods, bib := Methods(r, prov), Bibliography(prov.Sources)
		keys := regexp.MustCompile(`\[([a-z][a-z0-9-]+)\]`).FindAllStringSubmatch(methods, -1)
		if len(keys) < 8 {
			t.Fatalf("only %d keys in the methods", len(keys))
		}
		for _, k := range keys {
			if !strings.Contains(bib, "@misc{"+k[1]+",") {
				t.Errorf("%v: no entry for [%s]", set, k[1])
			}
		}
		if regexp.MustCompile(`[^\\]&`).MatchString(bib) || strings.Contains(bib, "et al.},\n  year") || !strings.Contains(bib, "author = {Rybacki and others}") {
			t.Errorf("%v: %s", set, bib)
		}
		if strings.Count(bib, "{") != strings.Count(bib, "}") {
			t.Error("braces are not closed")
		}
	}
}

// reversal.csv is in a spreadsheet's units.
func TestReversalUnits(t *testing.T) {
	r, _ := result(t, "tarnvik")
	table := ReversalTable(r)
	rows, err := csv.NewReader(strings.NewReader(string(table.Encode()))).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	want := map[string][2]string{"basal temperature": {"degC", "1400"}, "initial undulation": {"km", "0.5"}, "slip rate": {"mm/yr", "0.15"}, "root density": {"kg/m3", "3470"}}
	seen := 0
	for _, row := range rows[1:] {
		if w, ok := want[row[0]]; ok {
			seen++
			if row[2] != w[0] || row[3] != w[1] {
				t.Errorf("%v, want %v", row, w)
			}
		}
	}
	if seen != len(want) {
		t.Errorf("%d rows of %d seen", seen, len(want))
	}
}

// The keys of a change, set in the experiment as a user would, give its outcome.
func TestReversalKeys(t *testing.T) {
	for _, name := range []string{"tarnvik", "osmund"} {
		r, _ := result(t, name)
		found := 0
		for _, f := range r.Verdict.Flips {
			if !f.Found {
				continue
			}
			found++
			var set []string
			for _, c := range f.Keys {
				unit := " " + c.Unit
				if c.Unit == "x" {
					unit = ""
				}
				set = append(set, c.Key+"="+strconv.FormatFloat(c.To, 'g', -1, 64)+unit)
			}
			if got, _ := result(t, name, set...); got.Verdict.Outcome != f.Outcome {
				t.Errorf("%s --set %q: %s, want %s", name, set, got.Verdict.Outcome, f.Outcome)
			}
		}
		if found == 0 {
			t.Errorf("%s: no change to confirm", name)
		}
	}
}

// JSON carries the warnings that the commands print, and no number without a value.
func TestJSON(t *testing.T) {
	r, prov := result(t, "tarnvik", "base.temperature=1300 degC")
	b, err := Encode(Result(r, prov))
	if err != nil {
		t.Fatal(err)
	}
	var all struct {
		Column, Spectrum, Drip, Excision struct{ Warnings []string }
		Verdict                          struct {
			Reversal []struct {
				Key, Outcome string
				Keys         []struct {
					Key  string
					From float64
				}
				ContrastFrom *float64 `json:"contrast_from_kg_m3"`
			}
		}
	}
	if err := json.Unmarshal(b, &all); err != nil {
		t.Fatal(err)
	}
	for name, w := range map[string][]string{"column": all.Column.Warnings, "spectrum": all.Spectrum.Warnings, "drip": all.Drip.Warnings, "excision": all.Excision.Warnings} {
		if !strings.Contains(strings.Join(w, "\n"), "isotropic") || !strings.Contains(strings.Join(w, "\n"), "Rybacki") {
			t.Errorf("%s: warnings %q", name, w)
		}
	}
	if !strings.Contains(strings.Join(all.Drip.Warnings, "\n"), "more than a factor of 3 apart") {
		t.Errorf("drip: warnings %q", all.Drip.Warnings)
	}
	for _, f := range all.Verdict.Reversal {
		if f.Outcome == "" || len(f.Keys) == 0 {
			t.Errorf("%+v", f)
		}
		if f.Key == "layers.root.density" && (f.Keys[0].From != 3470 || f.ContrastFrom == nil || math.Abs(*f.ContrastFrom-191) > 1) {
			t.Errorf("%+v", f)
		}
	}
}

// Laws are in SI with one style of keys, and the prefactor says its unit.
func TestLaws(t *testing.T) {
	for name, want := range map[string]string{"wet quartzite Gleason 1995": "Pa^-4 s^-1", "dry olivine diffusion Hirth 2003": "Pa^-1 s^-1 m^3", "wet olivine dislocation Hirth 2003": "Pa^-4.7 s^-1"} {
		l, err := rheology.Find(name)
		if err != nil {
			t.Fatal(err)
		}
		b, err := Encode(Laws([]rheology.Law{l}))
		if err != nil {
			t.Fatal(err)
		}
		if !strings.Contains(string(b), `"prefactor_unit": "`+want+`"`) {
			t.Errorf("%s: want unit %s in %s", name, want, b)
		}
		for _, k := range regexp.MustCompile(`"([^"]+)":`).FindAllStringSubmatch(string(b), -1) {
			if !regexp.MustCompile(`^[a-z][a-z0-9_]*(_J_mol|_m3_mol|_K|_Pa)?$`).MatchString(k[1]) {
				t.Errorf("%s: key %s", name, k[1])
			}
		}
		if page := LawPage(&l); regexp.MustCompile(`\d\.\d{7,}`).MatchString(page) {
			t.Errorf("digits that say nothing:\n%s", page)
		}
	}
}
