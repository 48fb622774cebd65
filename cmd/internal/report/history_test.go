package report

import (
	"math"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"
	"keelfall/solver/race"
)

// pastOf is a made-up history of 10 Myr of which only the marker's cooling is physics:
// T falls by 20 K/Myr from 800 °C.
func pastOf() *Past {
	h := &heat.History{Energy: heat.Energy{Stored: -3e14, Surface: 3e14, Missing: -30, Moved: 6e14}, Steps: 11, Warnings: []string{"made up"}}
	m := heat.Path{Name: "deep", Layer: "root"}
	for i := range 11 {
		t := float64(i) * Myr
		h.Time, h.SurfaceFlow, h.RootBase = append(h.Time, t), append(h.SurfaceFlow, 0.06), append(h.RootBase, 1000+float64(i))
		h.RootThickness, h.Depth = append(h.RootThickness, 10e3-1e3*float64(i)), append(h.Depth, 60e3)
		h.MeltFraction, h.Reacted = append(h.MeltFraction, 0.01*float64(i)), append(h.Reacted, 0)
		m.Time, m.Depth, m.T, m.P = append(m.Time, t), append(m.Depth, 30e3), append(m.T, 1073.15-20*float64(i)), append(m.P, 1e9)
	}
	h.Paths = []heat.Path{m, {Name: "gone", Layer: "crust", Ended: true, Reason: "eroded"}}
	p := &race.Problem{Title: "made up", HasTimeZero: true, TimeZero: 50 * Myr, Column: column.Column{Layers: []column.Layer{{Name: "root", Root: true, Thickness: 10e3}}},
		Clocks: []heat.Clock{
			{Name: "slow", Marker: "deep", ActivationEnergy: 600e3, Diffusivity: 1e8, Radius: 1e-4, Geometry: "sphere"},
			{Name: "lost", Marker: "gone", ActivationEnergy: 400e3, Diffusivity: 1e-4, Radius: 1e-4, Geometry: "sphere"}}}
	return &Past{Problem: p, History: h, Shown: []float64{0, 10 * Myr}, Rows: []float64{0, 5 * Myr, 10 * Myr}}
}

// Every kind of event is a sentence with its numbers.
func TestEventWords(t *testing.T) {
	const mmYear = 1e-3 / Year
	for _, c := range []struct {
		e    heat.Event
		want string
	}{
		{heat.Event{Verb: "intrude", Name: "sheet", Layer: "crust", Thickness: 1500, Temperature: 1463.15}, "sheet comes in: 1.5 km at 1190 degC, below crust"},
		{heat.Event{Verb: "intrude", Name: "sheet", Layer: "crust", Thickness: 1500, Temperature: 1463.15, Times: 4, Every: Myr / 2}, "sheet, 4 times, every 0.5 Myr: 1.5 km at 1190 degC each, below crust"},
		{heat.Event{Verb: "accumulate", Layer: "root", To: 3 * Myr, Rate: 0.5 * mmYear}, "root grows at its base by 0.5 mm/yr, 1.5 km in all, at the temperature there"},
		{heat.Event{Verb: "stretch", To: 10 * Myr, Rate: math.Ln2 / (10 * Myr)}, "the column stretches at 2.2e-15 1/s, by a factor of 2"},
		{heat.Event{Verb: "stretch", To: 10 * Myr, Rate: -math.Ln2 / (10 * Myr)}, "the column shortens at 2.2e-15 1/s and thickens by a factor of 2"},
		{heat.Event{Verb: "erode", From: Myr, To: 11 * Myr, Rate: 0.2 * mmYear}, "the surface is eroded by 0.2 mm/yr, 2 km in all"},
		{heat.Event{Verb: "bury", Name: "lavas", To: 2 * Myr, Rate: 0.1 * mmYear}, "lavas covers the surface by 0.1 mm/yr, 0.2 km in all, at the surface's temperature"},
		{heat.Event{Verb: "change-base", Temperature: 1523.15}, "the base changes to 1250 degC"},
		{heat.Event{Verb: "change-base", HeatFlow: 0.03, HasHeatFlow: true}, "the heat flow at the base changes to 30 mW/m2"},
		{heat.Event{Verb: "remove", Layer: "mantle", Share: 0.5}, "50 % of mantle goes, from its base; rock of the base takes its place"},
	} {
		if got := eventWords(&c.e); got != c.want {
			t.Errorf("%q, want %q", got, c.want)
		}
	}
}

// The page and the JSON say the same; what is missing is null and a dash, never 0.
func TestHistory(t *testing.T) {
	p := pastOf()
	if err := p.ReadClocks(); err != nil {
		t.Fatal(err)
	}
	c := p.Closures[0]
	if k := p.Problem.Clocks[0]; !c.Found || math.Abs(c.CoolingRate*Myr-20) > 1e-6 || math.Abs(k.ClosureTemperature(c.CoolingRate)-c.Temperature) > 1e-6 ||
		math.Abs(c.Temperature-(1073.15-20*c.Time/Myr)) > 1e-6 {
		t.Errorf("closure %+v: must lie on the path, at the closure temperature of 20 K/Myr", c)
	}
	b, err := Encode(History(p))
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{`"age_s": null`, `"reason": "its marker has no path: it is gone at the start"`, `"energy_missing_share": 5e-14`, `"mass_missing_share": null`,
		`"geotherm_fit": null`, `"events": []`, `"snapshots": []`, `"warnings": [`} {
		if !strings.Contains(string(b), want) {
			t.Errorf("JSON without %s", want)
		}
	}
	page := HistoryPage(p)
	for _, want := range []string{
		"     10    40.0      60.00          -         -      60.00", // no root is left
		"      5    45.0      60.00      731.9      5.00      60.00", // 1005 K
		"lost at gone tells no age: its marker has no path", "closed to 5e-14 of the heat", "in 11 steps", "WARNINGS  - made up",
		"Hottest: 800.0 degC at 50.0 Ma (0 Myr)", "No path: eroded.", "stored -300, through the surface -300"} {
		if !strings.Contains(page, want) {
			t.Errorf("page without %q:\n%s", want, page)
		}
	}
	if strings.Contains(page, "melt") || strings.Contains(page, "reacted") {
		t.Errorf("nothing melts or reacts:\n%s", page)
	}
	rows := HistoryTable(p).Rows
	if last := rows[len(rows)-1]; last[3] != "" || last[7] != "" || last[1] != "40" {
		t.Errorf("last row %q", last)
	}
}
