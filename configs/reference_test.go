package configs

import (
	"reflect"
	"strings"
	"testing"

	"keelfall/solver/race"
)

// TestReferenceColumn: what is given, what is taken, and when that is starred.
func TestReferenceColumn(t *testing.T) {
	given := mustProblem(t, mustRead(t, "s.yaml", small+"reference: {elevation: -2 km, asthenosphere: 3250 kg/m3, layers: [{thickness: 7 km, density: 2900 kg/m3}, {thickness: 60 km, density: 3300 kg/m3}]}\n"))
	want := &race.Reference{Elevation: -2000, Asthenosphere: 3250, Layers: []race.ReferenceLayer{{Thickness: 7000, Density: 2900}, {Thickness: 60e3, Density: 3300}}}
	if !reflect.DeepEqual(given.Reference, want) {
		t.Errorf("got %+v, want %+v", given.Reference, want)
	}
	p := mustProblem(t, mustRead(t, "s.yaml", small))
	if want := (&race.Reference{Elevation: -2600, Layers: []race.ReferenceLayer{{Thickness: 7000, Density: 2900}}}); !reflect.DeepEqual(p.Reference, want) {
		t.Errorf("default: %+v", p.Reference)
	}
	if got := list(p.Defaults); !strings.Contains(got, "reference a mid-ocean ridge: elevation -2.6 km, 7 km of 2900 kg/m3, asthenosphere below\n") {
		t.Errorf("the default is not listed: %s", got)
	}
	const own = "reference: {layers: [{thickness: 35 km, density: 2800 kg/m3}]}\n"
	p = mustProblem(t, mustRead(t, "s.yaml", small+own))
	if got := list(p.Defaults); p.Reference.Elevation != 0 || !strings.Contains(got, "reference.elevation 0 m\n") {
		t.Errorf("without an elevation: %+v, %s", p.Reference, got)
	}
	if got := mustProblem(t, mustRead(t, "s.yaml", small+own, "reference.elevation=300 m")).Reference.Elevation; got != 300 {
		t.Errorf("--set: %g m", got)
	}
	for text, want := range map[string]string{
		"reference: {elevation: 1 km}\n":                                                "s.yaml:9: reference.layers: is missing",
		"reference: {elevation: 0, layers: [{thickness: 3 km, density: 2800 kg/m3}]}\n": "s.yaml:9: reference.elevation: 0 has no unit",
		"reference: {layers: []}\n":                                                     "s.yaml:9: reference.layers: ",
		"reference: {depth: 3 km}\n":                                                    "s.yaml:9: reference.depth: ",
		"reference: none\n":                                                             "s.yaml:9: reference: ",
		"reference: {layers: [{thickness: 3 km}]}\n":                                    "s.yaml:9: reference.layers[0].density: is missing",
		"reference: {asthenosphere: 900 kg/m3}\n":                                       "s.yaml:9: reference.asthenosphere: ",
	} {
		if _, err := Read("s.yaml", strings.NewReader(small+text)); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v; want %s", text, err, want)
		}
	}
}

func list(ds []race.Default) string {
	var b strings.Builder
	for _, d := range ds {
		b.WriteString(d.Key + " " + d.Value + "\n")
	}
	return b.String()
}
