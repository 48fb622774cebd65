package race_test

import (
	"context"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/excision"
	"keelfall/solver/race"
)

// set changes a problem as a key of the experiment does.
func set(t *testing.T, p *race.Problem, key string, to float64) {
	t.Helper()
	part := strings.Split(key, ".")
	if part[0] == "layers" {
		i := slices.IndexFunc(p.Column.Layers, func(l column.Layer) bool { return l.Name == part[1] })
		switch part[2] {
		case "density":
			p.Column.Layers[i].Density = column.Uniform(to)
			return
		case "viscosity-factor":
			p.Column.Layers[i].Viscosity.Factor = to
			return
		}
	}
	switch {
	case key == "drip.amplitude":
		p.Drip.Amplitude = to
	case key == "base.temperature":
		p.Column.Base.Temperature = to
	case key == "base.heat-flow":
		p.Column.Base.HeatFlow = to
	case part[0] == "excision":
		i := slices.IndexFunc(p.Zones, func(z excision.Zone) bool { return z.Name == part[2] })
		p.Zones[i].SlipRate = to
	default:
		t.Fatalf("no way to set %s", key)
	}
}

// confirm checks that a run with a flip's keys set has the outcome it names, and one a
// little before it has the old one.
func confirm(t *testing.T, make func() *race.Problem, old string, f race.Flip) {
	t.Helper()
	if f.Outcome == old || len(f.Keys) == 0 {
		t.Errorf("%s: becomes %q, keys %v", f.Key, f.Outcome, f.Keys)
	}
	before, at := make(), make()
	for _, c := range f.Keys {
		set(t, at, c.Key, c.To)
		set(t, before, c.Key, c.From+0.97*(c.To-c.From))
	}
	if got := run(t, at).Verdict.Outcome; got != f.Outcome {
		t.Errorf("%s at %g: %s, want %s", f.Key, f.To, got, f.Outcome)
	}
	if got := run(t, before).Verdict.Outcome; got != old {
		t.Errorf("%s before %g: %s, want %s", f.Key, f.To, got, old)
	}
}

func flip(t *testing.T, r *race.Result, label string) race.Flip {
	t.Helper()
	i := slices.IndexFunc(r.Verdict.Flips, func(f race.Flip) bool { return f.Label == label })
	if i < 0 {
		t.Fatalf("no flip called %s in %+v", label, r.Verdict.Flips)
	}
	return r.Verdict.Flips[i]
}

// A flip that was found is one: its keys, set in the experiment, give its outcome.
func TestFlipsAreConfirmed(t *testing.T) {
	for name, slip := range map[string]float64{"dripped": 0.05, "excised": 8} {
		r := run(t, problem(slip))
		if r.Verdict.Outcome != name {
			t.Fatalf("%s, want %s", r.Verdict.Outcome, name)
		}
		confirmed := 0
		for _, f := range r.Verdict.Flips {
			if f.Found {
				confirm(t, func() *race.Problem { return problem(slip) }, name, f)
				confirmed++
			}
		}
		if confirmed < 2 {
			t.Errorf("%s: only %d flips found", name, confirmed)
		}
		if d, ok := r.Verdict.Decider(); !ok || d.Distance > r.Verdict.Flips[1].Distance && r.Verdict.Flips[1].Found {
			t.Errorf("%s: the decider %+v is not the nearest", name, d)
		}
		if f := flip(t, r, "root density"); f.From != 3450 || math.Abs(f.ContrastFrom-180) > 1e-9 || f.Found && math.Abs(f.ContrastTo-(f.To-3270)) > 1e-9 {
			t.Errorf("%s: density %+v, want from 3450 with a contrast of 180 kg/m³", name, f)
		}
	}
}

// A light root has a denser one that drips; a zone that does not slip a rate that cuts.
func TestFlipsFromZero(t *testing.T) {
	light := func() *race.Problem {
		p := problem(0)
		p.Column.Layers[1].Density = column.Uniform(3250)
		return p
	}
	r := run(t, light())
	if r.Verdict.Outcome != "preserved" {
		t.Fatalf("light root: %s", r.Verdict.Outcome)
	}
	density := flip(t, r, "root density")
	if !density.Found || density.Outcome != "dripped" || density.ContrastTo <= 0 {
		t.Fatalf("density: %+v", density)
	}
	confirm(t, light, "preserved", density)
	if got, want := density.Distance, (density.To-density.From)/100; math.Abs(got/want-1) > 1e-9 {
		t.Errorf("distance %g, want %g", got, want)
	}
	idle := light() // a zone in the crust has no say
	idle.Zones = append(idle.Zones, excision.Zone{Name: "crustal", Dip: 1, Cuts: []string{"crust"}, To: 30 * myr, SlipRate: 1e-3 / year})
	if f := flip(t, run(t, idle), "slip rate"); f.Key != "excision.zones.zone.slip-rate" || !f.Found {
		t.Errorf("with a zone that does not cut the root: %+v", f)
	}
	slip := flip(t, r, "slip rate")
	// 30 % of 12 km by a 30° zone within 30 Myr: 0.24 mm/yr (by hand)
	if !slip.Found || slip.From != 0 || slip.Outcome != "excised" || math.Abs(slip.To/(0.24e-3/year)-1) > 0.005 {
		t.Fatalf("slip rate: %+v", slip)
	}
	confirm(t, light, "preserved", slip)
}

// Several root layers change together, and the flip names the key of each.
func TestFlipsOfSeveralLayers(t *testing.T) {
	two := func() *race.Problem {
		p := problem(0.05)
		lower := p.Column.Layers[1]
		lower.Name, lower.Thickness, lower.Density = "lower root", 5e3, column.Uniform(3480)
		p.Column.Layers[1].Thickness = 7e3
		p.Column.Layers = append(p.Column.Layers, lower)
		p.Zones[0].Cuts = []string{"root", "lower root"}
		second := p.Zones[0]
		second.Name, second.SlipRate = "second", 2*second.SlipRate
		p.Zones = append(p.Zones, second)
		return p
	}
	r := run(t, two())
	for label, keys := range map[string][]string{
		"root viscosity":         {"layers.root.viscosity-factor", "layers.lower root.viscosity-factor"},
		"density contrast":       {"layers.root.density", "layers.lower root.density"},
		"slip rate of the zones": {"excision.zones.zone.slip-rate", "excision.zones.second.slip-rate"},
	} {
		f := flip(t, r, label)
		if len(f.Keys) != len(keys) {
			t.Fatalf("%s: keys %+v", label, f.Keys)
		}
		for i, k := range keys {
			if f.Keys[i].Key != k {
				t.Errorf("%s: key %s, want %s", label, f.Keys[i].Key, k)
			}
		}
		if !f.Found {
			t.Errorf("%s: not found", label)
			continue
		}
		confirm(t, two, r.Verdict.Outcome, f)
	}
	if k := flip(t, r, "root viscosity").Key; k != "layers.root+lower root.viscosity-factor" {
		t.Errorf("key %s", k)
	}
}

// A graded density has no number to set: the flip is of the contrast and says so.
func TestFlipOfAGradedDensity(t *testing.T) {
	p := problem(0.05)
	p.Column.Layers[1].Density = column.Linear{Top: 3400, Bottom: 3450}
	f := flip(t, run(t, p), "density contrast")
	if f.Key != "contrast of root" || len(f.Keys) != 0 || math.Abs(f.From-180) > 1e-6 || !f.Found || f.To >= 180 {
		t.Errorf("%+v", f)
	}
}

// A half-space right below the root takes what is not said of it from the root: the
// flip's keys hold it where it is.
func TestFlipHoldsTheBase(t *testing.T) {
	p := problem(0.05)
	p.Defaults = append(p.Defaults, race.Default{Key: "base.viscosity", Value: "as the root"})
	f := flip(t, run(t, p), "root viscosity")
	last := f.Keys[len(f.Keys)-1]
	if last.Key != "base.viscosity-factor" || last.From != 1 || last.To != 1 {
		t.Errorf("keys %+v", f.Keys)
	}
}

// The undulation is scaled up to half the way to a drip, no further.
func TestUndulationBound(t *testing.T) {
	p := problem(0)
	p.Drip.Window = 0.01 * myr
	p.Zones = nil
	f := flip(t, run(t, p), "initial undulation")
	if f.Found || f.Searched != "× 12" { // 12 km/2/500 m
		t.Errorf("%+v", f)
	}
}

// A base with a heat flow is varied by it.
func TestFlipOfHeatFlow(t *testing.T) {
	warm := func() *race.Problem {
		p := problem(0.05)
		for i := range p.Column.Layers {
			l := &p.Column.Layers[i]
			l.Conductivity.Reference, l.HeatCapacity = 3, 1000
		}
		// expansivity makes the contrast depend on temperature
		p.Column.Layers[1].Density = column.EquationOfState{Reference: 3480, Expansivity: 3e-4, ReferenceTemperature: 273}
		p.Column.Surface.Temperature = 283
		p.Column.Base.HasHeatFlow, p.Column.Base.HeatFlow = true, 5e-3
		return p
	}
	r := run(t, warm())
	f := flip(t, r, "basal heat flow")
	if f.Key != "base.heat-flow" || f.From != 5e-3 || f.Unit != "W/m2" {
		t.Fatalf("%+v", f)
	}
	if f.Found {
		confirm(t, warm, r.Verdict.Outcome, f)
	}
}

// With very many layers the search is left out, and the result says so.
func TestManyLayers(t *testing.T) {
	p := problem(0.05)
	crust := p.Column.Layers[0]
	var layers []column.Layer
	for i := range 60 {
		l := crust
		l.Name, l.Thickness = "crust "+strconv.Itoa(i), crust.Thickness/60
		layers = append(layers, l)
	}
	p.Column.Layers = append(layers, p.Column.Layers[1])
	r, err := race.Run(context.Background(), p)
	if err != nil {
		t.Fatal(err)
	}
	if len(r.Verdict.Flips) != 0 || !slices.ContainsFunc(r.Warnings, func(w string) bool { return strings.Contains(w, "61 layers") }) {
		t.Errorf("%d flips, %q", len(r.Verdict.Flips), r.Warnings)
	}
}
