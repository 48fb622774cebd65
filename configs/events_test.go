package configs

import (
	"encoding/json"
	"math"
	"reflect"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"
)

const (
	sheet  = "intrude: {name: sheet, at: 1 Myr, below: crust, thickness: 1500 m, temperature: 1190 degC, density: 2950 kg/m3, creep: dry Columbia diabase Mackwell 1998, source: invented}"
	cover  = "bury: {from: 2 Myr, to: 4 Myr, rate: 0.1 mm/yr, name: cover, density: 2600 kg/m3, viscosity: 1e23 Pa s}"
	thrice = ", repeat: {times: 3, every: 0.5 Myr}}"
)

func withEvents(events ...string) string {
	return small + "events:\n  - " + strings.Join(events, "\n  - ") + "\n"
}

// TestEvents: every verb in SI; 1 Myr is 1e6 years of 365.25 days.
func TestEvents(t *testing.T) {
	const Myr = 3.15576e13
	e := mustRead(t, "s.yaml", withEvents(
		"accumulate: {layer: root, from: 0 Myr, to: 87 Ma, rate: 0.5 mm/yr, temperature: 1150 degC}",
		strings.TrimSuffix(sheet, "}")+", melt: {solidus: 1050 degC, liquidus: 1200 degC, latent-heat: 450 kJ/kg}"+thrice,
		"stretch: {from: 6 Myr, to: 16 Myr, rate: -1.5e-15 1/s}",
		"erode: {from: 6 Myr, to: 16 Myr, rate: 0.2 mm/yr}",
		cover,
		"change-base: {at: 8 Myr, temperature: 1250 degC}",
		"change-base: {at: 9 Myr, heat-flow: 30 mW/m2}",
		"remove: {at: 24 Myr, layer: sheet 2, share: 0.5}")+
		"markers: [{name: K7, depth: 40 km}, {name: root-base, base-of: root}]\n"+
		"clocks: [{name: hornblende Ar-Ar, marker: K7, activation-energy: 268 kJ/mol, diffusivity: 2.4e-6 m2/s, radius: 80 um, geometry: cylinder, source: from memory}]\n")
	p := mustProblem(t, e)
	const perYear = 1e-3 / 3.15576e7
	rocks := map[int]column.Rock{1: p.Events[1].Rock, 4: p.Events[4].Rock}
	for i := range rocks {
		p.Events[i].Rock = column.Rock{}
	}
	want := []heat.Event{
		{Verb: "accumulate", Layer: "root", To: 3 * Myr, Rate: 0.5 * perYear, Temperature: 1423.15},
		{Verb: "intrude", Name: "sheet", Layer: "crust", From: Myr, To: Myr, Thickness: 1500, Temperature: 1463.15, Times: 3, Every: Myr / 2},
		{Verb: "stretch", From: 6 * Myr, To: 16 * Myr, Rate: -1.5e-15},
		{Verb: "erode", From: 6 * Myr, To: 16 * Myr, Rate: 0.2 * perYear},
		{Verb: "bury", Name: "cover", From: 2 * Myr, To: 4 * Myr, Rate: 0.1 * perYear},
		{Verb: "change-base", From: 8 * Myr, To: 8 * Myr, Temperature: 1523.15},
		{Verb: "change-base", From: 9 * Myr, To: 9 * Myr, HeatFlow: 0.03, HasHeatFlow: true},
		{Verb: "remove", Layer: "sheet 2", From: 24 * Myr, To: 24 * Myr, Share: 0.5},
	}
	if len(p.Events) != len(want) {
		t.Fatalf("%d events", len(p.Events))
	}
	for i := range want {
		if !sameNumbers(reflect.ValueOf(p.Events[i]), reflect.ValueOf(want[i])) {
			t.Errorf("event %d:\n got %+v\nwant %+v", i, p.Events[i], want[i])
		}
	}
	r := rocks[1]
	if r.Conductivity.Reference != 2.5 || r.HeatCapacity != 1000 || r.Melt == nil || r.Melt.LatentHeat != 450e3 || r.Viscosity.Creep == nil || r.Density != column.Uniform(2950) || r.Source != "invented" {
		t.Errorf("the sheet's rock: %+v", r)
	}
	if r := rocks[4]; r.Viscosity.Top != 1e23 || r.Viscosity.Exponent != 1 || r.HeatCapacity != 1000 {
		t.Errorf("the cover's rock: %+v", r)
	}
	if want := []heat.Marker{{Name: "K7", Depth: 40e3}, {Name: "root-base", BaseOf: "root"}}; !reflect.DeepEqual(p.Markers, want) {
		t.Errorf("%+v", p.Markers)
	}
	if want := []heat.Clock{{Name: "hornblende Ar-Ar", Marker: "K7", ActivationEnergy: 268e3, Diffusivity: 2.4e-6, Radius: 80e-6, Geometry: "cylinder"}}; !sameNumbers(reflect.ValueOf(p.Clocks[0]), reflect.ValueOf(want[0])) {
		t.Errorf("%+v", p.Clocks)
	}
	var defaults []string
	for _, d := range p.Defaults {
		defaults = append(defaults, d.Key+" "+d.Value)
	}
	for _, d := range []string{"events.1.intrude.conductivity 2.5 W/m/K", "events.1.intrude.heat-capacity 1000 J/kg/K", "events.4.bury.stress-exponent 1"} {
		if !strings.Contains(strings.Join(defaults, "\n"), d) {
			t.Errorf("%s is not among the defaults", d)
		}
	}
	b, err := json.Marshal(e.Resolved())
	for _, s := range []string{`"thickness_m":1500`, `"name":"dry Columbia diabase Mackwell 1998"`, `"every_s":15778800000000`, `"geotherm_fit":null`, `"diffusivity_m2_s":0.0000024`} {
		if err != nil || !strings.Contains(string(b), s) {
			t.Errorf("%v: no %s in %s", err, s, b)
		}
	}
}

// sameNumbers compares two structs; numbers to round-off.
func sameNumbers(a, b reflect.Value) bool {
	for i := range a.NumField() {
		x, y := a.Field(i), b.Field(i)
		if x.Kind() == reflect.Float64 {
			if math.Abs(x.Float()-y.Float()) > 1e-14*math.Abs(y.Float()) {
				return false
			}
		} else if !reflect.DeepEqual(x.Interface(), y.Interface()) {
			return false
		}
	}
	return true
}

// TestAtEvent: what a solver says of an event, by its index, is a mistake of the file.
func TestAtEvent(t *testing.T) {
	e := mustRead(t, "s.yaml", withEvents(sheet, "erode: {from: 1 Myr, to: 2 Myr, rate: 1 mm/yr}"))
	for i, want := range map[int]string{
		0:  "s.yaml:10: events[0].intrude: too much",
		1:  "s.yaml:11: events[1].erode: too much",
		-1: "s.yaml:1: too much",
	} {
		if got := e.AtEvent(i, "too much").Error(); got != want {
			t.Errorf("%d: %s, want %s", i, got, want)
		}
	}
}

func TestEventMistakes(t *testing.T) {
	const at = "s.yaml:10: events[0]."
	const cold = "layers:\n" + crustLine + "events:\n  - "
	for _, c := range []struct{ name, in, want string }{
		{"unknown layer", withEvents("accumulate: {layer: rot, from: 0 Myr, to: 3 Myr, rate: 0.5 mm/yr}"),
			at + "accumulate.layer: rot is not a layer; did you mean root?"},
		{"unknown layer below", withEvents(strings.Replace(sheet, "below: crust", "below: crus", 1)),
			at + "intrude.below: crus is not a layer; did you mean crust?"},
		{"not born yet", withEvents("remove: {at: 0.5 Myr, layer: sheet, share: 0.5}", sheet),
			at + "remove.layer: sheet is not there yet: it comes with events[1].intrude at 1 Myr"},
		{"born under a number", withEvents(strings.TrimSuffix(sheet, "}")+thrice, "remove: {at: 5 Myr, layer: sheet, share: 0.5}"),
			"s.yaml:11: events[1].remove.layer: sheet is not a layer; known are crust, root, mantle, sheet 1, sheet 2, sheet 3"},
		{"a later sheet not born yet", withEvents(strings.TrimSuffix(sheet, "}")+thrice, "remove: {at: 1.9 Myr, layer: sheet 3, share: 0.5}"),
			"s.yaml:11: events[1].remove.layer: sheet 3 is not there yet: it comes with events[0].intrude at 2 Myr"},
		{"gone", withEvents("remove: {at: 3 Myr, layer: root, share: 1}", "remove: {at: 5 Myr, layer: root, share: 0.5}"),
			"s.yaml:11: events[1].remove.layer: root is gone by then: events[0].remove takes all of it at 3 Myr"},
		{"name of a layer", withEvents(strings.Replace(sheet, "name: sheet", "name: root", 1)),
			at + "intrude.name: root is the name of another layer too; names of layers are unique"},
		{"name twice", withEvents(sheet, strings.Replace(cover, "cover", "sheet", 1)),
			"s.yaml:11: events[1].bury.name: sheet is the name of another layer too; names of layers are unique"},
		{"two stretches", withEvents("stretch: {from: 6 Myr, to: 16 Myr, rate: 1e-15 1/s}", "stretch: {from: 15 Myr, to: 20 Myr, rate: 1e-15 1/s}"),
			"s.yaml:11: events[1].stretch: from 15 Myr to 20 Myr overlaps events[0].stretch from 6 Myr to 16 Myr (line 10); the column stretches by one event at a time"},
		{"erode and bury", withEvents("erode: {from: 88 Ma, to: 80 Ma, rate: 1 mm/yr}", cover),
			"s.yaml:11: events[1].bury: from 2 Myr to 4 Myr overlaps events[0].erode from 88 Ma to 80 Ma (line 10); the surface erodes or is buried by one event at a time"},
		{"two accumulates", withEvents("accumulate: {layer: root, from: 0 Myr, to: 3 Myr, rate: 1 mm/yr}", "accumulate: {layer: root, from: 2 Myr, to: 4 Myr, rate: 1 mm/yr}"),
			"s.yaml:11: events[1].accumulate: from 2 Myr to 4 Myr overlaps events[0].accumulate from 0 Myr to 3 Myr (line 10); root grows by one event at a time"},
		{"reversed", withEvents("stretch: {from: 80 Ma, to: 85 Ma, rate: 1e-15 1/s}"), at + "stretch: from 80 Ma is not before to 85 Ma"},
		{"before the start", withEvents("change-base: {at: 91 Ma, temperature: 1200 degC}"),
			at + "change-base.at: 91 Ma lies before the start, 0 Myr; put what happened earlier into the column"},
		{"after the window", withEvents("remove: {at: 31 Myr, layer: root, share: 0.5}"),
			at + "remove.at: 31 Myr lies after the window's end, 30 Myr, and would never be seen; make drip.window longer, or leave the event out"},
		{"begins at the window's end", withEvents("erode: {from: 30 Myr, to: 31 Myr, rate: 1 mm/yr}"),
			at + "erode.from: 30 Myr lies after the window's end, 30 Myr, and would never be seen; make drip.window longer, or leave the event out"},
		{"sheets after the window", withEvents(strings.TrimSuffix(sheet, "}") + ", repeat: {times: 40, every: 1 Myr}}"),
			at + "intrude.repeat: the last of 40 sheets, at 40 Myr, lies after the window's end, 30 Myr, and would never be seen; make drip.window longer, or leave the event out"},
		{"a rock without density", withEvents(strings.Replace(sheet, "density: 2950 kg/m3, ", "", 1)),
			at + "intrude.density: is missing; needs a density, for example 3300 kg/m3; or a map with top, bottom; or a map with reference, expansivity, compressibility, at; or a map with modes, by; or a map with table, interpolation; or a map with protolith, product, extent, cap, stable, rate"},
		{"a rock without strength", withEvents(strings.Replace(cover, ", viscosity: 1e23 Pa s", "", 1)), at + "bury: has none of viscosity, creep; needs one of them"},
		{"a rock's law", withEvents(strings.Replace(sheet, "dry Columbia diabase Mackwell 1998", "wet olivine dislocation Hirth 2003", 1)),
			at + "intrude.water: is missing; wet olivine dislocation Hirth 2003 needs a fugacity, for example water: {fugacity: 250 MPa}"},
		{"no temperature", cold + "change-base: {at: 3 Myr, temperature: 1200 degC}\n",
			"s.yaml:4: events[0].change-base: 1200 degC has no meaning, because the experiment has no temperature; add base.temperature or base.heat-flow, or a geotherm"},
		{"root sheet apart", withEvents(strings.Replace(strings.Replace(sheet, "below: crust", "below: mantle", 1), "at: 1 Myr", "at: 1 Myr, root: true", 1)),
			at + "intrude.root: sheet comes in below mantle, apart from the root; root layers follow one another"},
		{"two verbs", withEvents("{erode: {from: 1 Myr, to: 2 Myr, rate: 1 mm/yr}, stretch: {from: 1 Myr, to: 2 Myr, rate: 1e-15 1/s}}"),
			"s.yaml:10: events[0]: has stretch and erode; only one of them may be given"},
		{"marker below", small + "markers: [{name: a, depth: 83 km}]\n", "s.yaml:9: markers[0] (a).depth: 83 km lies below the column, which is 82 km deep"},
		{"marker of no layer", small + "markers: [{name: a, base-of: rot}]\n", "s.yaml:9: markers[0] (a).base-of: rot is not a layer at the start; did you mean root?"},
		{"markers of one name", small + "markers: [{name: a, depth: 3 km}, {name: a, depth: 4 km}]\n",
			"s.yaml:9: markers[1] (a).name: a is the name of an earlier entry too (line 9); names are unique in their list"},
		{"clock without marker", small + "markers: [{name: K7, depth: 3 km}]\nclocks: [{name: c, marker: K8, activation-energy: 268 kJ/mol, diffusivity: 2.4e-6 m2/s, radius: 80 um, geometry: sphere}]\n",
			"s.yaml:10: clocks[0] (c).marker: K8 is not a marker; did you mean K7?"},
		{"clock without any marker", small + "clocks: [{name: c, marker: K8, activation-energy: 268 kJ/mol, diffusivity: 2.4e-6 m2/s, radius: 80 um, geometry: sphere}]\n",
			"s.yaml:9: clocks[0] (c).marker: K8 is not a marker; there are none: add markers, for example markers: [{name: K8, depth: 30 km}]"},
	} {
		for range 2 {
			_, err := Read("s.yaml", strings.NewReader(c.in))
			if err == nil || err.Error() != c.want {
				t.Errorf("%s:\n got %v\nwant %s", c.name, err, c.want)
			}
		}
	}
}

// What follows in time does not overlap, whatever its order in the file, and layers are
// known from when they are born.
func TestEventOrder(t *testing.T) {
	mustRead(t, "s.yaml", withEvents(
		"accumulate: {layer: sheet, from: 2 Myr, to: 3 Myr, rate: 1 mm/yr}",
		"stretch: {from: 6 Myr, to: 16 Myr, rate: 1e-15 1/s}", "stretch: {from: 2 Myr, to: 6 Myr, rate: 2e-15 1/s}",
		"erode: {from: 0 Myr, to: 2 Myr, rate: 1 mm/yr}", cover, "accumulate: {layer: root, from: 2 Myr, to: 3 Myr, rate: 1 mm/yr}",
		"stretch: {from: 20 Myr, to: 90 Myr, rate: 1e-15 1/s}", sheet))
	mustRead(t, "s.yaml", withEvents("accumulate: {layer: sheet, from: 1 Myr, to: 3 Myr, rate: 1 mm/yr}", sheet)) // what happens at once comes first
	root := strings.Replace(sheet, "at: 1 Myr", "at: 1 Myr, root: true", 1)
	mustRead(t, "s.yaml", withEvents(root)) // right above the root
	mustRead(t, "s.yaml", withEvents(strings.Replace(root, "below: crust", "below: root", 1)))
}

// Keys of events go by index, in --set and in sweeps.
func TestEventKeys(t *testing.T) {
	e := mustRead(t, "s.yaml", withEvents(sheet, "stretch: {from: 6 Myr, to: 16 Myr, rate: 1e-15 1/s}"), "events.0.intrude.thickness=2 km")
	if p := mustProblem(t, e); p.Events[0].Thickness != 2000 {
		t.Errorf("%+v", p.Events[0])
	}
	f, err := e.Compile([]string{"events.1.stretch.rate", "events.0.intrude.at", "events.0.intrude.temperature", "events.0.intrude.conductivity", "events.0.intrude.density"})
	if err != nil {
		t.Fatal(err)
	}
	p, err := f([]float64{2e-15, 1e14, 1500, 3.25, 3000})
	if err != nil || p.Events[1].Rate != 2e-15 || p.Events[0].From != 1e14 || p.Events[0].To != 1e14 || p.Events[0].Temperature != 1500 || p.Events[0].Rock.Conductivity.Reference != 3.25 || p.Events[0].Rock.Density != column.Uniform(3000) {
		t.Errorf("%+v, %v", p.Events, err)
	}
	if _, err := f([]float64{2e-15, 1e17, 1500, 3, 3000}); err == nil || !strings.Contains(err.Error(), "after the window's end") {
		t.Errorf("%v", err)
	}
	for key, want := range map[string]string{
		"events.2.stretch.rate":  "there is no entry 2",
		"events.sheet.thickness": "these entries have no names and are counted from 0",
		"events.1.stretch.rat":   "did you mean rate?",
	} {
		if _, err := e.Compile([]string{key}); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v", key, err)
		}
	}
}
